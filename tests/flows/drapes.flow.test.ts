/** Drawings on the part in a real window: opened with their project, and written. */
import { spawnSync } from 'node:child_process';
import { mkdirSync, readdirSync, readFileSync, statSync, writeFileSync } from 'node:fs';
import { join, relative } from 'node:path';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { writeProject } from '../../src/core/project/read.ts';
import type { Project } from '../../src/core/project/schema.ts';
import { domeHeight, domeProject, domeStl } from './dome.ts';
import { comb } from './drawings.ts';
import {
  choose,
  freshFolder,
  type OpenWindow,
  openWindow,
  planned,
  poll,
  ROOT,
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

describe('a project with a drawing', () => {
  test('opens with its copper, in the pixels', async () => {
    const seen = await tally(w.page);
    expect(seen.copper).toBeGreaterThan(100);
    expect(await w.page.locator('.notice').allTextContents()).toEqual([]);
    await shot('open');
  });

  test('writes the files of the command line, byte for byte, with the drawing among them', async () => {
    await stubDialogs(w.app, { open: folder });
    await choose(w.app, 'export');
    await poll(() => w.page.locator('[data-step=files]').textContent(), { timeout: 150_000 }).toMatch(
      /files written/,
    );
    // On the window's own engine: sine and cosine are not the same to the last bit on each (ECMA-262 leaves them open).
    spawnSync(
      process.env['ELECTRON_EXE']!,
      [join(ROOT, 'out/cli/cli.mjs'), 'run', file, '--out', join(folder, 'cli'), '--no-timing'],
      { env: { ...process.env, ELECTRON_RUN_AS_NODE: '1' }, stdio: 'ignore' },
    );
    const ours = filesIn(join(folder, 'lumpy-dome-scan'));
    const theirs = filesIn(join(folder, 'cli'));
    expect([...ours.keys()]).toEqual([...theirs.keys()]);
    expect(ours.get('source/comb.svg')!.toString()).toBe(comb);
    for (const [name, bytes] of ours) expect(bytes.equals(theirs.get(name)!), name).toBe(true);
  }, 240_000);

  test('saved in another folder, it still finds its drawing', async () => {
    const other = freshFolder();
    await stubDialogs(w.app, { save: join(other, 'far.drape.json') });
    await choose(w.app, 'save-as');
    const far = join(other, 'far.drape.json');
    await poll(() => readdirSync(other)).toContain('far.drape.json');
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
