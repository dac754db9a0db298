/** Drawings on the part in a real window: opened with their project, and written. */
import { mkdirSync, readdirSync, readFileSync, statSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { join, relative } from 'node:path';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { writeProject } from '../../src/core/project/read.ts';
import type { Project } from '../../src/core/project/schema.ts';
import { runCli } from '../helpers/cli.ts';
import { domeHeight, domeProject, domeStl } from './dome.ts';
import { comb } from './drawings.ts';
import {
  choose,
  freshFolder,
  menuLabel,
  type OpenWindow,
  openWindow,
  planned,
  poll,
  step,
  stubDialogs,
  tally,
} from './open-window.ts';

let w: OpenWindow;
let folder: string;
let file: string;

beforeAll(async () => {
  folder = freshFolder();
  file = join(folder, 'dome.drape.json');
  mkdirSync(join(folder, 'art'));
  writeFileSync(join(folder, 'dome.stl'), domeStl());
  writeFileSync(join(folder, 'art', 'comb.svg'), comb);
  const p = domeProject();
  p.circuit.elements = [];
  // The bump under the first drawing stretches it more than the open dome does the second.
  p.limits.safeStretch = 0.01;
  p.limits.maxStretch = 0.04;
  p.circuit.drapes = [
    {
      id: 'd1',
      drawing: 'art/comb.svg',
      anchor: [4, 5, domeHeight(4, 5)],
      origin: [4, -2],
      turn: 25,
      mirror: false,
      evenLengths: true,
      drawingLayers: {},
      nets: {},
    },
  ];
  writeFileSync(file, writeProject(p));
  w = await openWindow(file);
  await planned(w.page);
});
afterAll(() => w?.close());

/** For a look at it by eye: SHOTS names a folder. */
async function shot(name: string): Promise<void> {
  const to = process.env['SHOTS'];
  if (to) await w.page.screenshot({ path: join(to, `${name}.png`) });
}

/** Drops files on a place of the viewport, from its middle, as from a file manager. */
async function drop(dx: number, dy: number, ...names: string[]): Promise<void> {
  const box = (await w.page.getByTestId('view').boundingBox())!;
  await w.page.evaluate(() => {
    const input = document.createElement('input');
    Object.assign(input, { type: 'file', id: 'drop-source', multiple: true });
    document.body.append(input);
  });
  await w.page.locator('#drop-source').setInputFiles(names.map((n) => join(folder, n)));
  await w.page.evaluate(
    ([clientX, clientY]) => {
      const input = document.querySelector<HTMLInputElement>('#drop-source')!;
      const dataTransfer = new DataTransfer();
      for (const f of input.files!) dataTransfer.items.add(f);
      input.remove();
      const init = { dataTransfer, bubbles: true, cancelable: true, clientX, clientY };
      window.dispatchEvent(new DragEvent('drop', init));
    },
    [box.x + box.width / 2 + dx, box.y + box.height / 2 + dy] as const,
  );
}
const saved = async (): Promise<Project> => {
  await choose(w.app, 'save');
  await w.page.waitForFunction(() => !document.querySelector('h1')?.textContent?.startsWith('•'));
  await w.page.waitForTimeout(400);
  return JSON.parse(readFileSync(file, 'utf8')) as Project;
};

test('a project with a drawing opens with its copper, in the pixels', async () => {
  await poll(async () => (await tally(w.page)).copper).toBeGreaterThan(100);
  await shot('open');
});

describe('a drawing dropped on the part', () => {
  test('is laid where the pointer is, seen in the pixels, and named in the Edit menu', async () => {
    await w.page.getByTestId('view').focus();
    await w.page.keyboard.press('b');
    await w.page.waitForTimeout(500);
    const before = await tally(w.page);
    writeFileSync(join(folder, 'ring.svg'), comb);
    await drop(-90, 60, 'ring.svg');
    await poll(() => menuLabel(w.app, 'undo')).toBe('Undo lay drawing ring.svg');
    // What is selected is drawn over in another colour.
    await w.page.keyboard.press('Escape');
    await poll(async () => (await tally(w.page)).copper).toBeGreaterThan(before.copper + 300);
    await planned(w.page);
    await shot('dropped');
    const [, d2] = (await saved()).circuit.drapes;
    expect(d2).toMatchObject({ id: 'd2', drawing: 'ring.svg', turn: 0 });
    // The box of the comb with its line widths: u from 1 to 9, v from -4.3 to -0.5.
    expect(d2!.origin).toEqual([5, -2.4]);
    const [x, y, z] = d2!.anchor;
    expect(x).toBeLessThan(-3);
    expect(y).toBeLessThan(-2);
    expect(Math.abs(z - domeHeight(x, y))).toBeLessThan(0.05);
  });

  test('is listed with what its reader left out; its facts show the stretch and where', async () => {
    const row = w.page.locator('[aria-label=Drawings] > li').nth(1);
    await poll(() => row.textContent()).toMatch(/d2ring\.svg.*3 · [\d.]+ mm².*text/i);
    await row.locator('button').click();
    await poll(() => w.page.locator('.facts h2').textContent()).toBe('Drawing d2');
    await poll(() => w.page.locator('.facts [aria-label=Stretch]').textContent()).toMatch(
      /Most, in d2\/\w+[\d.]+ of 4 %/,
    );
    await shot('facts');
  });

  test('dragged by its copper it goes along, one step of undo; the wheel over it turns it', async () => {
    const before = (await saved()).circuit.drapes[1]!;
    const dot = (await w.page.locator('.overlay .handle:not([hidden])').boundingBox())!;
    const [x, y] = [dot.x + dot.width / 2, dot.y + dot.height / 2];
    await w.page.mouse.move(x, y);
    await w.page.mouse.down();
    for (let i = 1; i <= 8; i++) {
      await w.page.mouse.move(x + 8 * i, y + 5 * i);
      await w.page.waitForTimeout(50);
    }
    await shot('dragging');
    await w.page.mouse.up();
    await poll(() => menuLabel(w.app, 'undo')).toBe('Undo move drawing d2');
    await w.page.mouse.wheel(0, -120);
    await w.page.mouse.wheel(0, -120);
    await poll(() => menuLabel(w.app, 'undo')).toBe('Undo change turn of d2');
    await w.page.waitForTimeout(600);
    await planned(w.page);
    const after = (await saved()).circuit.drapes[1]!;
    expect(after.anchor[0]).toBeGreaterThan(before.anchor[0] + 3);
    expect(after.anchor[1]).toBeLessThan(before.anchor[1] - 1.5);
    expect(after.turn).toBe(10);
    await choose(w.app, 'undo');
    await poll(() => menuLabel(w.app, 'undo')).toBe('Undo move drawing d2');
    await choose(w.app, 'undo');
    await poll(() => menuLabel(w.app, 'undo')).toBe('Undo lay drawing ring.svg');
    await poll(async () => (await saved()).circuit.drapes[1]).toEqual(before);
    await w.page.getByTestId('view').focus();
    await w.page.keyboard.press('Escape');
    await planned(w.page);
  });

  test('coloured by stretch, the copper and the legend say the same without colour alone', async () => {
    const count = (look: string) => w.page.locator(`[data-stretch=${look}] .count`).textContent();
    const plain = await tally(w.page);
    await w.page.getByTestId('view').focus();
    await w.page.keyboard.press('s');
    await poll(() => count('little')).toMatch(/^[1-6] /);
    expect(await w.page.locator('.legend').textContent()).toMatch(/0\.5 to 1 %, safe.*more than 4 %/);
    // What is stretched a little more than little has a yellow that is counted as copper.
    await poll(async () => (await tally(w.page)).copper).toBeLessThan(0.6 * plain.copper);
    await shot('stretch');
    await w.page.locator('[aria-label=Drawings] button').first().click();
    await w.page.evaluate(
      readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8'),
    );
    const found = await w.page.evaluate(async () => {
      const { axe } = globalThis as unknown as {
        axe: { run(o: unknown): Promise<{ violations: { id: string; nodes: { html: string }[] }[] }> };
      };
      const { violations } = await axe.run({ runOnly: ['wcag2a', 'wcag2aa', 'wcag22aa', 'best-practice'] });
      return violations.map((v) => `${v.id}: ${v.nodes.map((n) => n.html.slice(0, 200)).join(' | ')}`);
    });
    expect(found).toEqual([]);
    await w.page.getByTestId('view').focus();
    await w.page.keyboard.press('Escape');
    await w.page.keyboard.press('s');
    await poll(async () => (await tally(w.page)).copper).toBeGreaterThan(300);
  });

  test('undone, its copper is gone; redone, it is there again', async () => {
    const there = await tally(w.page);
    await choose(w.app, 'undo');
    await planned(w.page);
    await poll(async () => (await tally(w.page)).copper).toBeLessThan(there.copper - 300);
    await choose(w.app, 'redo');
    await poll(async () => (await tally(w.page)).copper).toBeGreaterThan(there.copper - 60);
    await planned(w.page);
  });

  test('that cannot be read gets the words of its reader, and nothing changes', async () => {
    const before = await menuLabel(w.app, 'undo');
    writeFileSync(join(folder, 'bad.svg'), '<svg xmlns="http://www.w3.org/2000/svg" width="8mm"><path');
    await drop(0, 0, 'bad.svg');
    await poll(() => w.page.locator('.notice.problem').allTextContents()).toContainEqual(
      expect.stringMatching(/^bad\.svg/),
    );
    expect(await menuLabel(w.app, 'undo')).toBe(before);
    await w.page.locator('.notice button').first().click();
  });

  test('without a unit is asked for one', async () => {
    writeFileSync(
      join(folder, 'bare.gbr'),
      '%FSLAX24Y24*%\n%ADD10C,0.8*%\nD10*\nX0Y0D02*\nX30000Y0D01*\nM02*\n',
    );
    await drop(60, 60, 'bare.gbr');
    await w.page.getByRole('button', { name: 'millimetre' }).click();
    await poll(() => menuLabel(w.app, 'undo')).toBe('Undo lay drawing bare.gbr');
    await planned(w.page);
    await choose(w.app, 'undo');
    await planned(w.page);
  });
});

describe('a project with a drawing', () => {
  test('writes the files of the command line, byte for byte, with the drawing among them', async () => {
    await stubDialogs(w.app, { open: folder });
    await choose(w.app, 'export');
    await poll(() => w.page.locator('[data-step=files]').textContent(), { timeout: 150_000 }).toMatch(
      /files written/,
    );
    await runCli(['run', file, '--out', join(folder, 'cli'), '--no-timing']);
    const ours = filesIn(join(folder, 'lumpy-dome-scan'));
    const theirs = filesIn(join(folder, 'cli'));
    expect([...ours.keys()]).toEqual([...theirs.keys()]);
    for (const own of ['source/comb.svg', 'source/ring.svg']) expect(ours.get(own)!.toString()).toBe(comb);
    for (const [name, bytes] of ours) expect(bytes.equals(theirs.get(name)!), name).toBe(true);
  }, 240_000);

  test('saved in another folder, it still finds its drawing', async () => {
    const other = freshFolder();
    await stubDialogs(w.app, { save: join(other, 'far.drape.json') });
    await choose(w.app, 'save-as');
    const far = join(other, 'far.drape.json');
    await poll(() => readdirSync(other)).toContain('far.drape.json');
    await poll(() =>
      w.app.evaluate(({ BrowserWindow }) => BrowserWindow.getAllWindows()[0]!.getTitle()),
    ).toBe('far.drape.json – Beamdrape');
    const p = JSON.parse(readFileSync(far, 'utf8')) as Project;
    expect(readFileSync(join(other, p.circuit.drapes[0]!.drawing), 'utf8')).toBe(comb);
    await planned(w.page);
  });

  test('without its drawing it opens all the same, and says which file is missing, where, and what mends it', async () => {
    const p = JSON.parse(readFileSync(file, 'utf8')) as Project;
    p.circuit.drapes[0]!.drawing = 'art/gone.svg';
    p.circuit.elements = domeProject().circuit.elements.slice(0, 1);
    writeFileSync(join(folder, 'gone.drape.json'), writeProject(p));
    await stubDialogs(w.app, { open: join(folder, 'gone.drape.json') });
    await choose(w.app, 'open');
    await poll(() => w.page.locator('.notice').allTextContents()).toContainEqual(
      expect.stringMatching(/gone\.drape\.json: the drawing art\/gone\.svg is missing.*Put the file back/),
    );
    await planned(w.page);
    await step(w.page, 'circuit');
    await poll(() => w.page.locator('.wrong').allTextContents()).toContainEqual(
      '$.circuit.drapes[0].drawing: art/gone.svg is not there; put the file back and open the project again.',
    );
  });

  test('the page told of no fault', () => {
    expect(w.faults).toEqual([]);
  });
});

function filesIn(dir: string): Map<string, Buffer> {
  const all: [string, Buffer][] = [];
  const walk = (at: string) => {
    for (const name of readdirSync(at)) {
      const path = join(at, name);
      if (statSync(path).isDirectory()) walk(path);
      else all.push([relative(dir, path).replaceAll('\\', '/'), readFileSync(path)]);
    }
  };
  walk(dir);
  return new Map(all.sort(([a], [b]) => (a < b ? -1 : 1)));
}
