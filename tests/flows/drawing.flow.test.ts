/** Drawing in a real window: trace, pad, points, undo and redo, save and open. */
import { readFileSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { quiet } from '../../src/core/base/run-context.ts';
import { shortestPath } from '../../src/core/geodesic/shortest.ts';
import { barycentric } from '../../src/core/mesh/surface-point.ts';
import { loadPart } from '../../src/core/part/part.ts';
import type { Project } from '../../src/core/project/schema.ts';
import { domeHeight, domeStl } from './dome.ts';
import {
  choose,
  domeFolder,
  freshFolder,
  menuLabel,
  type OpenWindow,
  openWindow,
  planned,
  poll,
  step,
  stubDialogs,
} from './open-window.ts';

let w: OpenWindow;
let file: string;
let box: { x: number; y: number; width: number; height: number };

beforeAll(async () => {
  file = domeFolder();
  w = await openWindow(file);
  await planned(w.page);
  await w.page.keyboard.press('b');
  await w.page.waitForTimeout(500);
  box = (await w.page.getByTestId('view').boundingBox())!;
});
afterAll(() => w?.close());

const at = (dx: number, dy: number): [number, number] => [
  box.x + box.width / 2 + dx,
  box.y + box.height / 2 + dy,
];
const listed = () => w.page.locator('.elements .id').allTextContents();
const saved = async (): Promise<Project> => {
  await choose(w.app, 'save');
  await w.page.waitForFunction(() => !document.querySelector('h1')?.textContent?.startsWith('•'));
  await w.page.waitForTimeout(300);
  return JSON.parse(readFileSync(file, 'utf8')) as Project;
};
const traceIn = (p: Project, id: string) => {
  const e = p.circuit.elements.find((x) => x.id === id);
  if (e?.kind !== 'trace') throw new Error(`${id} is no trace`);
  return e;
};

async function clickAt(dx: number, dy: number): Promise<void> {
  await w.page.mouse.move(...at(dx, dy), { steps: 4 });
  await w.page.mouse.click(...at(dx, dy));
  await w.page.waitForTimeout(250);
}

describe('drawing with the mouse', () => {
  test('three clicks and Enter draw a trace that runs over the surface the shortest way', async () => {
    await step(w.page, 'circuit');
    expect(await listed()).toEqual(['p1', 'p2', 't1', 't2', 't3']);
    await w.page.keyboard.press('Escape');
    await w.page.getByTestId('view').focus();
    await w.page.keyboard.press('t');
    // Right of the middle and above it, then left and above: in the beam's eye +X is right and +Y up.
    await clickAt(70, -95);
    await clickAt(-40, -70);
    await w.page.mouse.move(...at(-90, 20), { steps: 6 });
    await poll(() => w.page.locator('.tool-help').textContent()).toMatch(/mm to the pointer/);
    await clickAt(-90, 20);
    await w.page.keyboard.press('Enter');
    await poll(listed).toEqual(['p1', 'p2', 't1', 't2', 't3', 't4']);
    await planned(w.page);

    const t4 = traceIn(await saved(), 't4');
    expect(t4.route).toHaveLength(3);
    for (const { at: p } of t4.route) expect(Math.abs(p[2] - domeHeight(p[0], p[1]))).toBeLessThan(0.05);
    const [a, b, c] = t4.route.map((r) => r.at);
    expect(a![0]).toBeGreaterThan(2);
    expect(a![1]).toBeGreaterThan(2);
    expect(b![0]).toBeLessThan(-1);
    expect(b![1]).toBeGreaterThan(2);
    expect(c![0]).toBeLessThan(-2);
    expect(c![1]).toBeLessThan(-0.5);

    // The length that the window shows is the one of the core on the same part.
    const part = loadPart(domeStl(), 'dome.stl', 'mm', quiet);
    const surface = (p: readonly [number, number, number]) => {
      const hit = part.queries.nearest(p)!;
      return { face: hit.face, bary: barycentric(part.mesh, hit.face, hit.point) };
    };
    const length =
      shortestPath(part.mesh, surface(a!), surface(b!))!.length +
      shortestPath(part.mesh, surface(b!), surface(c!))!.length;
    const shown = Number(
      (await w.page.locator('.elements button', { hasText: 't4' }).locator('.count').textContent())!.replace(
        ' mm',
        '',
      ),
    );
    expect(Math.abs(shown - length)).toBeLessThan(0.06);
  });

  test('undo names the act, takes the trace back, and redo brings the same one', async () => {
    const before = await saved();
    expect(await menuLabel(w.app, 'undo')).toBe('Undo draw trace t4');
    await w.page.keyboard.press('Escape');
    await w.page.keyboard.press('Control+z');
    await poll(listed).not.toContain('t4');
    expect(await menuLabel(w.app, 'redo')).toBe('Redo draw trace t4');
    await w.page.keyboard.press('Control+Shift+Z');
    await poll(listed).toContain('t4');
    expect(await saved()).toEqual(before);
  });

  test('Backspace takes the last point back and Escape drops the trace', async () => {
    await w.page.getByTestId('view').focus();
    await w.page.keyboard.press('t');
    await clickAt(30, 60);
    await clickAt(60, 30);
    await poll(() => w.page.locator('.overlay .handle:not([hidden])').count()).toBe(2);
    await w.page.keyboard.press('Backspace');
    await poll(() => w.page.locator('.overlay .handle:not([hidden])').count()).toBe(1);
    await w.page.keyboard.press('Escape');
    await poll(() => w.page.locator('.overlay .handle:not([hidden])').count()).toBe(0);
    await w.page.keyboard.press('Escape');
    expect(await listed()).toHaveLength(6);
  });

  test('the pad tool places a pad where the click falls, and Delete takes it away', async () => {
    await w.page.getByTestId('view').focus();
    await w.page.keyboard.press('p');
    await clickAt(-30, 110);
    await poll(listed).toContain('p3');
    await planned(w.page);
    const pad = (await saved()).circuit.elements.find((e) => e.id === 'p3');
    if (pad?.kind !== 'pad') throw new Error('no pad');
    expect(pad.at[0]).toBeLessThan(-0.5);
    expect(pad.at[1]).toBeLessThan(-3);
    expect(Math.abs(pad.at[2] - domeHeight(pad.at[0], pad.at[1]))).toBeLessThan(0.05);
    await w.page.keyboard.press('Escape');
    await w.page.locator('.elements button', { hasText: 'p3' }).click();
    await w.page.keyboard.press('Delete');
    await poll(listed).not.toContain('p3');
  });

  test('dragging a point is one step of undo', async () => {
    await w.page.keyboard.press('Escape');
    await w.page.locator('.elements button', { hasText: 't4' }).click();
    await planned(w.page);
    const before = traceIn(await saved(), 't4').route[0]!.at;
    await w.page.mouse.move(...at(70, -95));
    await w.page.mouse.down();
    for (let i = 1; i <= 8; i++) {
      await w.page.mouse.move(...at(70 - 3 * i, -95 - 2 * i));
      await w.page.waitForTimeout(60);
    }
    await w.page.mouse.up();
    await planned(w.page);
    const after = traceIn(await saved(), 't4').route[0]!.at;
    expect(after[0]).toBeLessThan(before[0] - 0.5);
    expect(after[1]).toBeGreaterThan(before[1] + 0.3);
    await w.page.getByTestId('view').focus();
    await w.page.keyboard.press('Control+z');
    await planned(w.page);
    expect(traceIn(await saved(), 't4').route[0]!.at).toEqual(before);
  });

  test('with the keyboard alone a trace can be drawn', async () => {
    await w.page.keyboard.press('Escape');
    await w.page.getByTestId('view').focus();
    await w.page.keyboard.press('t');
    await w.page.keyboard.press('ArrowDown');
    for (let i = 0; i < 2; i++) await w.page.keyboard.press('Shift+ArrowDown');
    await w.page.keyboard.press('Space');
    await w.page.waitForTimeout(300);
    for (let i = 0; i < 3; i++) await w.page.keyboard.press('Shift+ArrowRight');
    await w.page.keyboard.press('Space');
    await w.page.waitForTimeout(600);
    await w.page.keyboard.press('Enter');
    await poll(listed).toContain('t5');
    await planned(w.page);
    const t5 = traceIn(await saved(), 't5');
    expect(t5.route[1]!.at[0]).toBeGreaterThan(t5.route[0]!.at[0] + 2);
  });
});

describe('files', () => {
  test('saved elsewhere and opened again, the project is the same, with fields that this version does not know', async () => {
    const odd = JSON.parse(readFileSync(file, 'utf8')) as Record<string, unknown>;
    odd['shopNote'] = { bin: 7 };
    const source = join(dirname(file), 'odd.drape.json');
    writeFileSync(source, JSON.stringify(odd));
    await stubDialogs(w.app, { open: source, save: join(dirname(file), 'again.drape.json') });
    await w.page.keyboard.press('Control+o');
    await poll(() => w.page.locator('.notice').allTextContents()).toContainEqual(
      expect.stringContaining('$.shopNote'),
    );
    await planned(w.page);
    await w.page.keyboard.press('Control+Shift+S');
    await w.page.waitForTimeout(800);
    expect(JSON.parse(readFileSync(join(dirname(file), 'again.drape.json'), 'utf8'))).toEqual(odd);
  });

  test('saved in another folder, the project still finds its part', async () => {
    const other = freshFolder();
    await stubDialogs(w.app, { save: join(other, 'far.drape.json') });
    await w.page.keyboard.press('Control+Shift+S');
    await w.page.waitForTimeout(800);
    const p = JSON.parse(readFileSync(join(other, 'far.drape.json'), 'utf8')) as Project;
    expect(readFileSync(join(other, p.part.file)).equals(Buffer.from(domeStl()))).toBe(true);
  });

  test('a dropped part makes a new project on it', async () => {
    const part = join(dirname(file), 'dome.stl');
    await w.page.evaluate(() => {
      const input = document.createElement('input');
      input.type = 'file';
      input.id = 'drop-source';
      document.body.append(input);
    });
    await w.page.locator('#drop-source').setInputFiles(part);
    await w.page.evaluate(() => {
      const input = document.querySelector<HTMLInputElement>('#drop-source')!;
      const data = new DataTransfer();
      data.items.add(input.files![0]!);
      input.remove();
      window.dispatchEvent(new DragEvent('drop', { dataTransfer: data, bubbles: true, cancelable: true }));
    });
    await step(w.page, 'circuit');
    await poll(listed).toEqual([]);
    await poll(() => w.page.locator('[data-step=part]').textContent()).toContain('40 × 40 × 17.9');
  });

  test('the page told of no fault', () => {
    expect(w.faults).toEqual([]);
  });
});
