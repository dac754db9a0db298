/** The same window in a browser, served by the program itself. */
import { type ChildProcess, spawn } from 'node:child_process';
import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { request } from 'node:http';
import { dirname, join } from 'node:path';
import { type Browser, chromium, type Page } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { comb } from './drawings.ts';
import { domeFolder, freshFolder, planned, poll, ROOT, step, tally } from './open-window.ts';

const BROWSER = ['/usr/bin/chromium', '/usr/bin/chromium-browser', '/usr/bin/google-chrome'].find((f) =>
  existsSync(f),
);

let server: ChildProcess;
let url: string;
let browser: Browser;
let page: Page;
let file: string;
const said: string[] = [];
const faults: string[] = [];

beforeAll(async () => {
  if (!BROWSER) throw new Error('no browser for this test: install chromium');
  file = domeFolder();
  const home = freshFolder();
  server = spawn(
    process.execPath,
    [join(ROOT, 'out/cli/cli.mjs'), 'window', file, '--browser', '--no-open'],
    {
      env: { ...process.env, HOME: home, XDG_CONFIG_HOME: home },
      stdio: ['ignore', 'pipe', 'pipe'],
    },
  );
  server.stderr!.on('data', (d) => said.push(String(d)));
  url = await new Promise<string>((found, failed) => {
    server.stdout!.on('data', (d) => {
      const m = /http:\/\/127\.0\.0\.1:\d+\/\S+/.exec(String(d));
      if (m) found(m[0]);
    });
    server.once('exit', (code) => failed(new Error(`ended with ${code}: ${said.join('')}`)));
  });
  browser = await chromium.launch({
    executablePath: BROWSER,
    args: ['--no-sandbox', '--use-angle=swiftshader', '--enable-unsafe-swiftshader'],
  });
  page = await browser.newPage({ viewport: { width: 1280, height: 860 } });
  page.on('pageerror', (e) => faults.push(e.message));
  await page.goto(url);
  await planned(page);
});
afterAll(async () => {
  await browser?.close();
  server?.kill('SIGINT');
});

test('the program says that it opens in a browser, and why', () => {
  expect(said.join('')).toMatch(/Opening in a browser, because a browser was asked for/);
});

test('the page is isolated and draws the copper', async () => {
  expect(await page.evaluate(() => crossOriginIsolated)).toBe(true);
  await poll(async () => (await tally(page)).copper).toBeGreaterThan(500);
});

test('without the key, from another site or under another name the server refuses', async () => {
  const { port } = new URL(url);
  const ask = (path: string, headers: Record<string, string>, method = 'GET') =>
    new Promise<number>((done) => {
      const r = request({ host: '127.0.0.1', port, path, method, headers }, (answer) => {
        answer.resume();
        done(answer.statusCode!);
      });
      r.end();
    });
  const key = new URL(url).searchParams.get('key')!;
  expect(await ask('/', {})).toBe(403);
  expect(await ask('/?key=guess', {})).toBe(403);
  expect(await ask('/index.html', { cookie: `beamdrape=${key}` })).toBe(200);
  expect(await ask('/index.html', { cookie: `beamdrape=${key}`, host: 'evil.example' })).toBe(403);
  expect(await ask('/..%2f..%2fpackage.json', { cookie: `beamdrape=${key}` })).toBe(403);
  expect(await ask('/ask', { cookie: `beamdrape=${key}`, origin: 'https://evil.example' }, 'POST')).toBe(403);
});

test('menus stand in the window; an act is named there; the save lands in the folder', async () => {
  await step(page, 'circuit');
  await page.locator('.elements button').first().click();
  const net = page.locator('.facts').getByRole('textbox', { name: 'Net' });
  await net.fill('BROWSER');
  await net.press('Enter');
  await page.getByRole('button', { name: 'Edit', exact: true }).click();
  await poll(() => page.getByRole('menuitem').first().textContent()).toContain('Undo change net of p1');
  await page.keyboard.press('Escape');
  await page.getByRole('button', { name: 'File', exact: true }).click();
  await page.getByRole('menuitem', { name: 'Save Ctrl+S', exact: true }).click();
  await poll(() => JSON.parse(readFileSync(file, 'utf8')).circuit.elements[0].net).toBe('BROWSER');
});

test('a dropped drawing, of which a browser gives only the bytes, is laid and saved beside the project', async () => {
  await page.evaluate((text) => {
    const dataTransfer = new DataTransfer();
    dataTransfer.items.add(new File([text], 'comb.svg', { type: 'image/svg+xml' }));
    const box = document.querySelector('[data-testid=view]')!.getBoundingClientRect();
    const [clientX, clientY] = [box.x + box.width / 2, box.y + box.height / 2];
    window.dispatchEvent(
      new DragEvent('drop', { dataTransfer, bubbles: true, cancelable: true, clientX, clientY }),
    );
  }, comb);
  await poll(() => page.locator('[aria-label=Drawings] > li').textContent()).toMatch(/d1comb\.svg.*3 · /);
  await page.keyboard.press('Control+s');
  await poll(() => JSON.parse(readFileSync(file, 'utf8')).circuit.drapes[0]?.drawing).toBe('comb.svg');
  expect(readFileSync(join(dirname(file), 'comb.svg'), 'utf8')).toBe(comb);
  await page.keyboard.press('Control+z');
  await poll(() => page.locator('[aria-label=Drawings]').count()).toBe(0);
});

test('a name that leaves the folder is refused, and "Save as" with a plain one is kept', async () => {
  await page.keyboard.press('Control+Shift+S');
  const entry = page.getByRole('textbox', { name: 'File name' });
  await entry.fill('../out.drape.json');
  await entry.press('Enter');
  await poll(() => page.locator('.notice').allTextContents()).toContainEqual(
    expect.stringContaining('not a plain file name'),
  );
  await page.keyboard.press('Control+Shift+S');
  await entry.fill('second.drape.json');
  await entry.press('Enter');
  await poll(() => readdirSync(dirname(file))).toContain('second.drape.json');
});

test('the page told of no fault', () => {
  expect(faults).toEqual([]);
});
