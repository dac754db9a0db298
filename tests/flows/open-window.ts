/** A real window for the flows: own settings folder, errors collected, closed without a question. */
import { existsSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { _electron, type ElectronApplication, type Page } from 'playwright-core';
import { expect } from 'vitest';
import { writeProject } from '../../src/core/project/read.ts';
import { domeProject, domeStl } from './dome.ts';

export const ROOT = fileURLToPath(new URL('../..', import.meta.url));

export interface OpenWindow {
  app: ElectronApplication;
  page: Page;
  /** Faults that the page told of. A flow ends with none. */
  faults: string[];
  close(): Promise<void>;
}

/** Asks again and again until it holds: windows are slow where two cores are shared. */
export const poll = <T>(
  ask: () => T | Promise<T>,
  options: { timeout?: number } = {},
): ReturnType<typeof expect.poll<T>> => expect.poll(ask, { timeout: 20_000, ...options });

export const freshFolder = (): string => mkdtempSync(join(tmpdir(), 'beamdrape-flow-'));

/** A folder with the lumpy dome and a project on it. @returns the project's path */
export function domeFolder(): string {
  const folder = freshFolder();
  writeFileSync(join(folder, 'dome.stl'), domeStl());
  writeFileSync(join(folder, 'dome.drape.json'), writeProject(domeProject()));
  return join(folder, 'dome.drape.json');
}

/** @param user  settings folder; a fresh one is a first start */
export async function openWindow(file: string | null, user = freshFolder()): Promise<OpenWindow> {
  const app = await _electron.launch({
    executablePath: process.env['ELECTRON_EXE']!,
    // No sandbox of the system: tests may run as root. The page's own sandbox stays on.
    args: ['--no-sandbox', `--user-data-dir=${user}`, ROOT, ...(file ? [file] : [])],
    timeout: 30_000,
  });
  const page = await app.firstWindow();
  const faults: string[] = [];
  page.on('pageerror', (e) => faults.push(e.message));
  page.on('console', (m) => {
    if (m.type() === 'error' && !/GPU stall|GL Driver/.test(m.text())) faults.push(m.text());
  });
  await page.waitForSelector('[data-testid=view]');
  return {
    app,
    page,
    faults,
    async close() {
      await app.evaluate(({ app: a }) => a.exit(0)).catch(() => {});
      await app.close().catch(() => {});
    },
  };
}

/** Waits until layers are planned for the document as it is. */
export async function planned(page: Page): Promise<void> {
  await page.waitForFunction(
    () =>
      /\d layer/.test(document.querySelector('[data-step=heights]')?.textContent ?? '') &&
      !document.querySelector('.busy'),
    null,
    { timeout: 90_000 },
  );
}

export async function step(page: Page, name: string): Promise<void> {
  const button = page.locator(`[data-step=${name}]`);
  if ((await button.getAttribute('aria-expanded')) !== 'true') await button.click();
}

/** Answers the system's dialogs of the window's process. */
export async function stubDialogs(
  app: ElectronApplication,
  answers: { open?: string; save?: string },
): Promise<void> {
  await app.evaluate(({ dialog }, a) => {
    dialog.showOpenDialog = (async () => ({
      canceled: a.open === undefined,
      filePaths: a.open === undefined ? [] : [a.open],
    })) as typeof dialog.showOpenDialog;
    dialog.showSaveDialog = (async () => ({
      canceled: a.save === undefined,
      filePath: a.save ?? '',
    })) as typeof dialog.showSaveDialog;
  }, answers);
}

/** Chooses an entry of the window's own menu, as the person does. */
export async function choose(app: ElectronApplication, id: string): Promise<void> {
  await app.evaluate(({ Menu }, entry) => Menu.getApplicationMenu()?.getMenuItemById(entry)?.click(), id);
}

/** Labels of the menu's entries by id. */
export const menuLabel = (app: ElectronApplication, id: string): Promise<string | undefined> =>
  app.evaluate(({ Menu }, entry) => Menu.getApplicationMenu()?.getMenuItemById(entry)?.label, id);

export interface Tally {
  red: number;
  copper: number;
}

/** Counts pixels of the viewport by what their colour says. */
export async function tally(page: Page): Promise<Tally> {
  // What lies over the viewport has the same colours.
  const over = (visibility: string) =>
    page.evaluate((v) => {
      for (const e of document.querySelectorAll<HTMLElement>('.stage > :not(.viewport)'))
        e.style.visibility = v;
    }, visibility);
  await over('hidden');
  const shot = (await page.getByTestId('view').screenshot()).toString('base64');
  await over('');
  return page.evaluate(async (png) => {
    const bytes = Uint8Array.from(atob(png), (c) => c.charCodeAt(0));
    const bitmap = await createImageBitmap(new Blob([bytes], { type: 'image/png' }));
    const canvas = new OffscreenCanvas(bitmap.width, bitmap.height);
    const context = canvas.getContext('2d')!;
    context.drawImage(bitmap, 0, 0);
    const { data } = context.getImageData(0, 0, bitmap.width, bitmap.height);
    let [red, copper] = [0, 0];
    for (let i = 0; i < data.length; i += 4) {
      const [r, g, b] = [data[i]!, data[i + 1]!, data[i + 2]!];
      if (r > 60 && r > 4 * g && r > 3.5 * b) red++;
      else if (r > 150 && g > 90 && g < 0.8 * r && b < 0.75 * g) copper++;
    }
    return { red, copper };
  }, shot);
}

export const remove = (folder: string): void => {
  if (existsSync(folder)) rmSync(folder, { recursive: true, force: true });
};

/** What axe finds wrong with the page, a line each. */
export async function accessibility(page: Page): Promise<string[]> {
  await page.evaluate(readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8'));
  return page.evaluate(async () => {
    const { axe } = globalThis as unknown as {
      axe: { run(o: unknown): Promise<{ violations: { id: string; nodes: { html: string }[] }[] }> };
    };
    const { violations } = await axe.run({ runOnly: ['wcag2a', 'wcag2aa', 'wcag22aa', 'best-practice'] });
    return violations.map((v) => `${v.id}: ${v.nodes.map((n) => n.html.slice(0, 200)).join(' | ')}`);
  });
}
