/** The job in a real window: the offset, the layers, the files. */
import { readdirSync, readFileSync, statSync } from 'node:fs';
import { dirname, join, relative } from 'node:path';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import type { Project } from '../../src/core/project/schema.ts';
import { runCli } from '../helpers/cli.ts';
import {
  choose,
  domeFolder,
  type OpenWindow,
  openWindow,
  planned,
  poll,
  step,
  stubDialogs,
  type Tally,
  tally,
} from './open-window.ts';

let w: OpenWindow;
let file: string;

beforeAll(async () => {
  file = domeFolder();
  w = await openWindow(file);
  await planned(w.page);
});
afterAll(() => w?.close());

/** Pixel of a bench height along the strip. */
async function stripX(z: number): Promise<number> {
  const svg = w.page.locator('.strip-plot svg');
  const box = (await svg.boundingBox())!;
  const [from, to] = [Number(await svg.getAttribute('data-from')), Number(await svg.getAttribute('data-to'))];
  return box.x + ((z - from) / (to - from)) * box.width;
}

async function dragMarkerTo(z: number): Promise<void> {
  const box = (await w.page.locator('.strip-plot svg').boundingBox())!;
  const y = box.y + 10;
  const marker = (await w.page.getByTestId('marker').locator('.tag').boundingBox())!;
  await w.page.mouse.move(marker.x + marker.width / 2, y);
  await w.page.mouse.down();
  await w.page.mouse.move(await stripX(z), y, { steps: 6 });
  await w.page.mouse.up();
  await w.page.waitForTimeout(400);
}

/** Waits until the picture shows it: words may come a frame before the colours they speak of. */
const seen = (as: (t: Tally) => boolean) =>
  poll(async () => {
    const now = await tally(w.page);
    return (
      as(now) || {
        ...now,
        strip: await w.page.locator('.strip-foot').textContent(),
        rows: await w.page.locator('table.layers tbody tr').allTextContents(),
      }
    );
  }).toBe(true);

const count = async (look: string): Promise<number> =>
  Number(/([\d.]+) mm²/.exec((await w.page.locator(`[data-look=${look}] .count`).textContent())!)![1]);

describe('the height strip', () => {
  test('as planned nothing is red; far off everything is, in the pixels', async () => {
    await seen(({ copper, red }) => copper > 800 && red < copper / 50);
    await dragMarkerTo(-20);
    await seen(({ copper, red }) => red > 800 && copper < red / 50);
  });

  test('dragging the marker repaints what is out of focus at that offset, and says how much', async () => {
    await dragMarkerTo(4);
    await seen(({ copper, red }) => red > 300 && copper > 100);
    const offset = Number(await w.page.getByTestId('marker').getAttribute('aria-valuenow'));
    expect(Math.abs(offset + 4)).toBeLessThan(0.1);
    const [red, good] = [await count('focus'), await count('reached')];
    expect(red).toBeGreaterThan(5);
    expect(good).toBeGreaterThan(5);
    // Lopsided: at the same distance on the other side of zero another share is in focus.
    await dragMarkerTo(-4);
    expect(Math.abs((await count('reached')) - good)).toBeGreaterThan(5);
  });

  test('the words say which axis moves and which way is positive, and follow the project', async () => {
    const words = () => w.page.locator('.strip-head').textContent();
    expect(await words()).toContain('the stage moves, + lifts the part');
    await step(w.page, 'heights');
    await w.page.getByLabel('What moves in Z').selectOption('head');
    expect(await words()).toContain('the head moves, + lifts the head');
    await w.page.getByTestId('view').focus();
    await w.page.keyboard.press('Control+z');
    expect(await words()).toContain('the stage moves');
    await planned(w.page);
  });

  test('a click on a band shows its layer alone, and again shows all', async () => {
    const band = w.page.getByTestId('band-1');
    const box = (await band.boundingBox())!;
    const click = async (alone: boolean) => {
      await w.page.mouse.click(box.x + 6, box.y + 60);
      const said = poll(() => band.getAttribute('aria-valuetext'));
      await (alone ? said : said.not).toContain('shown alone');
      // The picture follows; a click while it is still drawn comes late.
      await planned(w.page);
    };
    await click(true);
    await click(false);
    await seen(({ copper, red }) => copper > 800 && red < copper / 50);
    const all = await tally(w.page);
    await click(true);
    await seen(({ copper }) => copper > 50 && copper < 0.8 * all.copper);
    await click(false);
    await seen(({ copper }) => copper > 0.97 * all.copper);
  });

  test('a layer dragged away leaves copper unreached and says so; "Fewest" puts the plan back', async () => {
    const rows = () => w.page.locator('table.layers tbody tr').allTextContents();
    const fewest = await rows();
    const band = w.page.getByTestId('band-1');
    const box = (await band.boundingBox())!;
    await w.page.mouse.move(box.x + 8, box.y + 60);
    await w.page.mouse.down();
    await w.page.mouse.move(box.x + 8 - 60, box.y + 60, { steps: 6 });
    await w.page.mouse.up();
    await poll(() => w.page.locator('.strip-foot').textContent(), { timeout: 30_000 }).toMatch(
      /mm² of copper is not reached/,
    );
    await seen(({ red }) => red > 30);
    await w.page.getByRole('button', { name: 'Fewest', exact: true }).click();
    await poll(rows, { timeout: 30_000 }).toEqual(fewest);
    await planned(w.page);
  });

  test('arrow keys move the marker', async () => {
    const marker = w.page.getByTestId('marker');
    await marker.focus();
    const before = Number(await marker.getAttribute('aria-valuenow'));
    await w.page.keyboard.press('ArrowRight');
    // To the right is a higher focus: the stage goes down.
    await poll(async () => Number(await marker.getAttribute('aria-valuenow'))).toBeCloseTo(before - 0.1, 6);
  });
});

describe('the other reasons', () => {
  test('a limit on incidence makes copper too oblique; its legend row selects what it counts', async () => {
    await step(w.page, 'reach');
    const field = w.page.getByRole('textbox', { name: 'Steepest incidence' });
    await field.fill('0.5rad');
    await field.press('Enter');
    await poll(() => field.inputValue()).toBe('28.648');
    await poll(() => w.page.locator('[data-look=incidence]').count(), { timeout: 60_000 }).toBe(1);
    await w.page.locator('[data-look=incidence]').click();
    await poll(() => w.page.locator('.facts h2').textContent()).toMatch(/elements|Trace|Pad/);
    await w.page.getByTestId('view').focus();
    await w.page.keyboard.press('Control+z');
    await poll(() => w.page.locator('[data-look=incidence]').count(), { timeout: 60_000 }).toBe(0);
    await planned(w.page);
  });
});

describe('the files', () => {
  test('are those of the command line, byte for byte', async () => {
    const folder = dirname(file);
    await stubDialogs(w.app, { open: folder });
    await w.page.getByTestId('view').focus();
    await choose(w.app, 'export');
    await poll(() => w.page.locator('[data-step=files]').textContent(), { timeout: 150_000 }).toMatch(
      /files written/,
    );
    const run = await runCli(['run', file, '--out', join(folder, 'cli'), '--no-timing']);
    expect(run.stderr).not.toMatch(/fault/);
    const ours = filesIn(join(folder, 'lumpy-dome-scan'));
    const theirs = filesIn(join(folder, 'cli'));
    expect([...ours.keys()]).toEqual([...theirs.keys()]);
    expect([...ours.keys()].some((k) => k.endsWith('layer-02.csv'))).toBe(true);
    for (const [name, bytes] of ours) expect(bytes.equals(theirs.get(name)!), name).toBe(true);
  }, 240_000);

  test('the Files step gives each layer the Z to set, with the cautions', async () => {
    const report = JSON.parse(
      readFileSync(join(dirname(file), 'lumpy-dome-scan', 'report.json'), 'utf8'),
    ) as { setups: { layers: { zOffset: number }[] }[] };
    const shown = await w.page
      .locator('[aria-label="What was written"] tbody td:first-of-type')
      .allTextContents();
    expect(shown.map((t) => Number(t.replace('−', '-').replace(' mm', '')))).toEqual(
      report.setups[0]!.layers.map((l) => Number(l.zOffset.toFixed(2))),
    );
    const words = (await w.page.locator('.caution').textContent())!;
    for (const part of [
      'class 4',
      'IEC 60825-1',
      'laser safety officer',
      'caustic',
      'formaldehyde',
      'No number here is a safety limit',
    ])
      expect(words).toContain(part);
  });

  test('another folder with other things in it is not overwritten', async () => {
    const project = JSON.parse(readFileSync(file, 'utf8')) as Project;
    expect(project.circuit.elements).toHaveLength(5);
    const before = statSync(file).mtimeMs;
    const { mkdirSync, writeFileSync } = await import('node:fs');
    const other = join(dirname(file), 'other');
    mkdirSync(join(other, 'lumpy-dome-scan'), { recursive: true });
    writeFileSync(join(other, 'lumpy-dome-scan', 'thesis.txt'), 'mine');
    await stubDialogs(w.app, { open: other });
    await choose(w.app, 'export');
    await poll(() => w.page.locator('.notice').allTextContents(), { timeout: 150_000 }).toContainEqual(
      expect.stringContaining('holds other things'),
    );
    expect(readdirSync(join(other, 'lumpy-dome-scan'))).toEqual(['thesis.txt']);
    expect(statSync(file).mtimeMs).toBe(before);
  }, 200_000);

  test('the page told of no fault', () => {
    expect(w.faults).toEqual([]);
  });
});

function filesIn(folder: string): Map<string, Buffer> {
  const all: [string, Buffer][] = [];
  const walk = (dir: string) => {
    for (const name of readdirSync(dir)) {
      const path = join(dir, name);
      if (statSync(path).isDirectory()) walk(path);
      else all.push([relative(folder, path).replaceAll('\\', '/'), readFileSync(path)]);
    }
  };
  walk(folder);
  return new Map(all.sort(([a], [b]) => (a < b ? -1 : 1)));
}
