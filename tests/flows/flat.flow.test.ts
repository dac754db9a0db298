/** The flat drawing beside the part in a real window: what is selected in one is selected in the other. */
import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { writeProject } from '../../src/core/project/read.ts';
import type { Project } from '../../src/core/project/schema.ts';
import { domeHeight, domeProject, domeStl } from './dome.ts';
import { board } from './drawings.ts';
import {
  accessibility,
  choose,
  freshFolder,
  menuLabel,
  type OpenWindow,
  openWindow,
  planned,
  poll,
  step,
  tally,
} from './open-window.ts';

let w: OpenWindow;
const folder = freshFolder();
const file = join(folder, 'dome.drape.json');

beforeAll(async () => {
  writeFileSync(join(folder, 'dome.stl'), domeStl());
  writeFileSync(join(folder, 'board.svg'), board);
  const p = domeProject();
  p.circuit.elements = p.circuit.elements.slice(0, 3);
  p.limits.safeStretch = 0.03;
  p.limits.maxStretch = 0.08;
  p.circuit.drapes = [
    {
      id: 'd1',
      drawing: 'board.svg',
      anchor: [2, 1, domeHeight(2, 1)],
      origin: [12, -9],
      turn: 15,
      mirror: false,
      evenLengths: true,
      drawingLayers: { notes: 'skip' },
      nets: { spine: 'SIG', meander: 'GND', far: 'GND' },
    },
  ];
  writeFileSync(file, writeProject(p));
  w = await openWindow(file);
  await planned(w.page);
});
afterAll(() => w?.close());

const sheet = () => w.page.getByTestId('flat');
const option = (name: string) => w.page.locator('.option', { hasText: name });
const heading = () => w.page.locator('.facts h2').textContent();
const scale = async () => Number(await sheet().getAttribute('data-scale'));
/** Pixels over the part in the colour of what is pointed at. The whole page is taken: a clipped picture takes the pointer away. */
async function pointedPixels(): Promise<number> {
  const box = (await w.page.getByTestId('view').boundingBox())!;
  const shot = (await w.page.screenshot()).toString('base64');
  return w.page.evaluate(
    async ([png, x, y, width, height]) => {
      const bytes = Uint8Array.from(atob(png), (c) => c.charCodeAt(0));
      const bitmap = await createImageBitmap(new Blob([bytes], { type: 'image/png' }));
      const context = new OffscreenCanvas(bitmap.width, bitmap.height).getContext('2d')!;
      context.drawImage(bitmap, 0, 0);
      const { data } = context.getImageData(x, y, width, height);
      let n = 0;
      for (let i = 0; i < data.length; i += 4)
        if (data[i]! < 12 && Math.abs(data[i + 1]! - 72) < 8 && Math.abs(data[i + 2]! - 109) < 8) n++;
      return n;
    },
    [shot, box.x, box.y, box.width, box.height] as const,
  );
}

/** Where a place of the drawing is on the page, by its distance from the origin's mark. */
async function placeOf(u: number, v: number): Promise<[number, number]> {
  const mark = (await w.page.getByTestId('flat-anchor').locator('circle').last().boundingBox())!;
  const k = await scale();
  return [mark.x + mark.width / 2 + (u - 12) * k, mark.y + mark.height / 2 - (v + 9) * k];
}
async function clickAt(u: number, v: number): Promise<void> {
  await w.page.mouse.click(...(await placeOf(u, v)));
}
/** Whether all that is marked as selected lies within the sheet. */
const chosenInSight = () =>
  w.page.evaluate(() => {
    const box = document.querySelector('[data-testid=flat]')!.getBoundingClientRect();
    const marks = [...document.querySelectorAll('.flat-chosen path')].map((p) => p.getBoundingClientRect());
    return (
      marks.length > 0 &&
      marks.every(
        (m) =>
          m.left >= box.left - 3 &&
          m.right <= box.right + 3 &&
          m.top >= box.top - 3 &&
          m.bottom <= box.bottom + 3,
      )
    );
  });

describe('the flat drawing', () => {
  test('is put beside the part by a key, true in shape and size', async () => {
    await w.page.getByTestId('view').focus();
    await w.page.keyboard.press('d');
    await sheet().waitFor();
    const k = await scale();
    // Rims of 0.8 px go around: the ring is 4 by 4 mm.
    const [left, top] = await placeOf(13, -8);
    const [right, bottom] = await placeOf(17, -12);
    expect(right - left).toBeCloseTo(4 * k, 1);
    expect(bottom - top).toBeCloseTo(4 * k, 1);
    const bar = w.page.getByTestId('flat-scale');
    const [, mm] = /^([\d.]+) mm$/.exec((await bar.locator('text').textContent())!)!;
    const { width } = (await bar.locator('path').last().boundingBox())!;
    // The line that it is drawn with adds 1.6 px.
    expect(Math.abs(width - 1.6 - Number(mm) * k)).toBeLessThan(1);
    expect(await w.page.locator('[data-mark=left-out]').textContent()).toMatch(/layer left out1$/);
  });

  test('clicked, an element is selected on the part, and with Shift one more', async () => {
    const before = await tally(w.page);
    await clickAt(4, -6);
    await poll(heading).toBe('Trace d1/meander');
    expect(await option('meander').getAttribute('aria-selected')).toBe('true');
    // What is selected is drawn over in another colour.
    await poll(async () => (await tally(w.page)).copper).toBeLessThan(before.copper - 100);
    await w.page.keyboard.down('Shift');
    await clickAt(13.5, -10);
    await w.page.keyboard.up('Shift');
    await poll(heading).toBe('2 elements');
    // The hole of the ring is no copper: nothing is there.
    await clickAt(15, -10);
    await poll(heading).toBe('lumpy dome');
  });

  test('an element under the pointer there is marked on the part', async () => {
    const [x, y] = await placeOf(20, -14);
    const { x: left, y: top } = (await sheet().boundingBox())!;
    await w.page.mouse.move(left + 4, top + 4);
    await poll(pointedPixels).toBe(0);
    await w.page.mouse.move(x, y);
    await poll(() => w.page.locator('.flat-words').textContent()).toMatch(/^d1\/spine, net SIG, [\d.]+ mm$/);
    await poll(pointedPixels).toBeGreaterThan(200);
    await w.page.mouse.move(left + 4, top + 4);
    await poll(pointedPixels).toBe(0);
  });

  test('what is selected elsewhere comes into its sight', async () => {
    for (let i = 0; i < 6; i++) await w.page.getByRole('button', { name: 'Closer' }).click();
    const near = await scale();
    await option('far').click();
    await poll(heading).toMatch(/d1\/far$/);
    await poll(chosenInSight).toBe(true);
    expect(await scale()).toBeCloseTo(near, 3);
    await option('spine').click();
    await poll(chosenInSight).toBe(true);
    // Longer than the sheet was wide: it had to be looked at from farther away.
    expect(await scale()).toBeLessThan(near);
    await w.page.getByRole('button', { name: 'All of the flat drawing' }).click();
  });

  test('selected as a whole, all of it is marked there', async () => {
    await step(w.page, 'circuit');
    await w.page.locator('[aria-label=Drawings] button').first().click();
    await poll(heading).toBe('Drawing d1');
    const options = w.page.locator('.flat-list [role=option]');
    await poll(() => options.count()).toBe(6);
    expect(await w.page.locator('.flat-list [aria-selected=true]').count()).toBe(6);
    await poll(chosenInSight).toBe(true);
  });

  test('goes by the keyboard: arrows select, Shift selects a run, Ctrl and Space one more or less', async () => {
    const list = w.page.getByRole('listbox', { name: 'Elements of d1' });
    await list.focus();
    await w.page.keyboard.press('Home');
    await poll(heading).toBe('Trace d1/spine');
    await w.page.keyboard.press('ArrowDown');
    await poll(heading).toBe('Trace d1/meander');
    await w.page.keyboard.press('Shift+ArrowDown');
    await poll(heading).toBe('2 elements');
    await w.page.keyboard.press('Control+End');
    await w.page.keyboard.press('Control+ ');
    await poll(() => w.page.locator('.facts .ids').textContent()).toBe('d1/meander, d1/slant, d1/far');
    await w.page.keyboard.press('Control+ ');
    await poll(heading).toBe('2 elements');
    expect(await list.locator('[aria-selected=true]').count()).toBe(2);
    await w.page.keyboard.press('Escape');
    await poll(heading).toBe('lumpy dome');
  });

  test('has the colours and patterns of the stretch picture, and without it marks only what is beyond the limit', async () => {
    const looks = () =>
      w.page.evaluate(() =>
        [
          ...new Set(
            [...document.querySelectorAll<SVGElement>('.flat [data-flat]')].map((e) => e.dataset['flat']),
          ),
        ].sort(),
      );
    await poll(looks).toEqual(['copper', 'left-out', 'too-much']);
    await w.page.getByTestId('view').focus();
    await w.page.keyboard.press('s');
    await poll(looks).toContain('much');
    expect(await looks()).not.toContain('copper');
    const counts = await w.page.evaluate(() =>
      ['little', 'some', 'much', 'too-much'].map((look) => ({
        look,
        legend: Number.parseInt(document.querySelector(`[data-stretch=${look}] .count`)!.textContent!, 10),
        paths: [
          ...document.querySelectorAll(
            `.flat g:not([class]) > [data-flat=${look}], .flat g[class=""] > [data-flat=${look}]`,
          ),
        ].reduce((n, p) => n + (p.getAttribute('d')!.match(/M/g) ?? []).length, 0),
      })),
    );
    // The ring alone has two rings in its path.
    const extra = (look: string) => counts.find((c) => c.look === look)!;
    expect(counts.reduce((n, c) => n + c.legend, 0)).toBe(6);
    expect(counts.reduce((n, c) => n + c.paths, 0)).toBe(7);
    for (const { look, legend, paths } of counts) expect([0, 1], look).toContain(paths - legend);
    expect(extra('too-much').legend).toBeGreaterThan(0);
    expect(await accessibility(w.page)).toEqual([]);
    await w.page.keyboard.press('s');
  });
});

describe('nets', () => {
  const net = (name: string) => w.page.locator(`[data-net=${name}]`);
  const state = () => w.page.locator('.nets-state').textContent();

  test('are listed with lengths, and with resistances once they are worked out; a click selects one', async () => {
    await step(w.page, 'circuit');
    await poll(state, { timeout: 60_000 }).toBe('');
    await poll(() => net('SIG').textContent()).toMatch(/1 element · (28|29)(\.\d)? mm · [\d.]+ mm²/);
    expect(await net('SIG').textContent()).not.toMatch(/pieces/);
    expect(await net('A').textContent()).toMatch(/no two pads.*2 elements/);
    await net('GND').click();
    await poll(() => w.page.locator('.facts .ids').textContent()).toBe('d1/meander, d1/far');
    expect(await net('GND').textContent()).toMatch(/In 2 pieces that do not touch/);
    expect(await net('GND').getAttribute('aria-pressed')).toBe('true');
    await w.page.keyboard.down('Shift');
    await net('SIG').click();
    await w.page.keyboard.up('Shift');
    await poll(heading).toBe('3 elements');
  });

  test('in pieces are said to be, and what is changed is worked out anew', async () => {
    await option('dot').waitFor({ state: 'detached' });
    await option('slant').click();
    const field = w.page.getByLabel('Net', { exact: true }).last();
    await poll(heading).toBe('Trace d1/slant');
    await field.fill('SIG');
    await field.press('Enter');
    await poll(() => menuLabel(w.app, 'undo')).toBe('Undo change net of slant of d1');
    await poll(() => net('SIG').textContent(), { timeout: 60_000 }).toMatch(
      /2 elements.*In 2 pieces that do not touch/,
    );
    await choose(w.app, 'undo');
    await poll(() => net('SIG').textContent(), { timeout: 60_000 }).toMatch(/1 element · .* mm²/);
    expect(await net('SIG').textContent()).not.toMatch(/pieces/);
    await planned(w.page);
  }, 150_000);
});

describe('how a drawing is read', () => {
  const drape = async () => {
    await choose(w.app, 'save');
    await w.page.waitForFunction(() => !document.querySelector('h1')?.textContent?.startsWith('•'));
    await w.page.waitForTimeout(400);
    return (JSON.parse(readFileSync(file, 'utf8')) as Project).circuit.drapes[0]!;
  };

  test('its unit, the width of its lines and its nets are changed in its facts, each a step of undo with its name', async () => {
    await step(w.page, 'circuit');
    await w.page.locator('[aria-label=Drawings] button').first().click();
    await poll(heading).toBe('Drawing d1');
    await w.page.getByLabel('Unit', { exact: true }).selectOption('inch');
    await poll(() => menuLabel(w.app, 'undo')).toBe('Undo change unit of d1');
    const width = w.page.getByLabel('Lines without width');
    expect(await width.inputValue()).toBe('0.5');
    await width.fill('0.01in');
    await width.press('Enter');
    await poll(() => menuLabel(w.app, 'undo')).toBe('Undo change width of lines without one of d1');
    await w.page.locator('.nets-of summary').click();
    const ring = w.page.getByLabel('ring', { exact: true });
    expect(await ring.getAttribute('placeholder')).toBe('no net');
    await ring.fill('RF');
    await ring.press('Enter');
    await poll(() => menuLabel(w.app, 'undo')).toBe('Undo change net of ring of d1');
    await planned(w.page);
    expect(await accessibility(w.page)).toEqual([]);
    expect(await drape()).toMatchObject({
      units: 'inch',
      lineWidth: 0.254,
      nets: { spine: 'SIG', meander: 'GND', far: 'GND', ring: 'RF' },
    });
    for (let i = 0; i < 3; i++) await choose(w.app, 'undo');
    await planned(w.page);
    const back = await drape();
    expect('units' in back || 'lineWidth' in back).toBe(false);
    expect(back.nets).toEqual({ spine: 'SIG', meander: 'GND', far: 'GND' });
  }, 150_000);
});

test('the page told of no fault', () => {
  expect(w.faults).toEqual([]);
});
