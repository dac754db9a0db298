import { describe, expect, test } from 'vitest';
import { quiet } from '../../src/core/base/run-context.ts';
import { DEFAULTS, type Drawing, type Shape } from '../../src/core/drawing/drawing.ts';
import { readSvg } from '../../src/core/drawing/svg.ts';
import type { Drape } from '../../src/core/project/schema.ts';
import { boxAround, flatRows, shapeAt, shapeBoxes } from '../../src/store/flat.ts';
import { figuresOf, holesPath } from '../../src/store/flat-paths.ts';
import { flatPicture } from '../../src/worker/flat-picture.ts';
import type { CopperPicture, ElementPicture, FlatPicture } from '../../src/worker/pictures.ts';
import { flatForTests } from '../core/helpers/flat.ts';

const drape = (more: Partial<Drape> = {}): Drape => ({
  id: 'd1',
  drawing: 'a.svg',
  anchor: [0, 0, 0],
  origin: [0, 0],
  turn: 0,
  mirror: false,
  evenLengths: true,
  drawingLayers: {},
  nets: {},
  ...more,
});
const flat = await flatForTests();
const read = (body: string): Drawing =>
  readSvg(
    `<svg xmlns="http://www.w3.org/2000/svg" width="40mm" height="20mm" viewBox="0 0 40 20">${body}</svg>`,
    'a.svg',
    DEFAULTS,
    flat,
    quiet,
  );
/** v is up: y 4 is v -4. */
const lopsided = read(`
  <path id="line" d="M2 4 H12 V8" fill="none" stroke="black" stroke-width="1"/>
  <path id="ring" fill-rule="evenodd" d="M20 2 h8 v6 h-8 z M22 3 h3 v2 h-3 z"/>
  <g id="notes"><circle cx="35" cy="15" r="1.5"/></g>`);
const stroke = (id: string, points: number[], width = 0.5): Shape => ({
  id,
  layer: '',
  net: null,
  role: 'trace',
  pin: null,
  figure: {
    kind: 'stroke',
    points: Float64Array.from(points),
    closed: false,
    width,
    ends: 'round',
    bends: 'round',
  },
  place: '',
});
const drawing = (shapes: Shape[], holes: Drawing['holes'] = []): Drawing => ({
  file: 'a',
  shapes,
  holes,
  layers: [''],
  notes: [],
});
const pointsOf = (f: FlatPicture, shape: number): number[][] => {
  const { first, count } = f.shapes[shape]!;
  const from = first === 0 ? 0 : f.ends[first - 1]!;
  const to = f.ends[first + count - 1]!;
  return Array.from({ length: to - from }, (_, i) => [
    ...f.points.subarray(2 * (from + i), 2 * (from + i) + 2),
  ]);
};

describe('a flat picture', () => {
  test('holds the drawing as drawn, v up, with the ids that its elements have on the part', () => {
    const f = flatPicture(lopsided, drape({ drawingLayers: { notes: 'skip' } }), 'k');
    expect(f.ids).toEqual(['d1/line', 'd1/ring', null]);
    expect(pointsOf(f, 0)).toEqual([
      [2, -4],
      [12, -4],
      [12, -8],
    ]);
    expect(f.shapes[0]).toMatchObject({ width: 1, closed: false });
    expect(f.shapes[1]).toMatchObject({ width: 0, count: 2 });
    const [lo, hi] = f.box!;
    expect([lo[0], hi[0], hi[1]]).toEqual([1.5, 36.5, -2]);
    expect(lo[1]).toBeCloseTo(-16.5, 2);
  });

  test('made twice it shares no memory: what is handed over may be taken away', () => {
    const [a, b] = [flatPicture(lopsided, drape(), 'k'), flatPicture(lopsided, drape(), 'k')];
    expect(a.key).toBe(b.key);
    expect(a.points.buffer).not.toBe(b.points.buffer);
    expect(flatPicture(lopsided, drape({ drawingLayers: { notes: 'skip' } }), 'k').key).not.toBe(a.key);
  });

  test('of a drawing of a million points has few of them, none off by more than is asked', () => {
    const n = 1_000_000;
    const points = Array.from({ length: 2 * n }, (_, i) =>
      i % 2 === 0 ? i / 2000 : 30 * Math.sin(i / 40_000) + (i % 4 === 1 ? 0.002 : 0),
    );
    const f = flatPicture(drawing([stroke('s', points)]), drape(), 'k');
    expect(f.points.length / 2).toBeLessThan(20_000);
    const box = shapeBoxes(f);
    for (let i = 0; i < n; i += 9973)
      expect(shapeAt(f, box, [points[2 * i]!, points[2 * i + 1]!], 0.25, () => true)).toBe(0);
  });

  test('of a line on which every point stands out ends soon', () => {
    const n = 400_000;
    const points = Array.from({ length: 2 * n }, (_, i) =>
      i % 2 === 0 ? i / 2 : 1000 * (i % 4 === 1 ? i : -i),
    );
    const f = flatPicture(drawing([stroke('s', points)]), drape(), 'k');
    expect(f.points.length / 2).toBeLessThanOrEqual(120_000);
  });
});

describe('at a place of the flat drawing', () => {
  const f = flatPicture(lopsided, drape(), 'k');
  const boxes = shapeBoxes(f);
  const at = (u: number, v: number, within = 0) => shapeAt(f, boxes, [u, v], within, () => true);

  test('a line is hit within its width, an area inside its rings but not in its holes', () => {
    expect(at(6, -4.4)).toBe(0);
    expect(at(6, -4.6)).toBe(-1);
    expect(at(6, -4.6, 0.2)).toBe(0);
    expect(at(21, -7)).toBe(1);
    expect(at(23, -4)).toBe(-1);
    expect(at(30, -12)).toBe(-1);
    expect(at(35, -15)).toBe(2);
  });

  test('a line does not go back to where it began', () => {
    // The chord from its end to its start.
    expect(at(7, -6)).toBe(-1);
  });

  test('what is drawn last is on top, and what may not be chosen is passed over', () => {
    const over = flatPicture(
      drawing([stroke('a', [0, 0, 10, 0], 2), stroke('b', [5, -5, 5, 5], 2)]),
      drape(),
      'k',
    );
    const own = shapeBoxes(over);
    expect(shapeAt(over, own, [5, 0], 0, () => true)).toBe(1);
    expect(shapeAt(over, own, [5, 0], 0, (i) => i !== 1)).toBe(0);
  });

  test('the box of some shapes is around those alone', () => {
    expect(boxAround(boxes, [0])).toEqual([
      [1.5, -8.5],
      [12.5, -3.5],
    ]);
    expect(boxAround(boxes, [])).toBeNull();
  });
});

const element = (id: string, stretch: number): ElementPicture =>
  ({ id, drape: 'd1', stretch }) as Partial<ElementPicture> as ElementPicture;
const limits = { safeStretch: 0.05, maxStretch: 0.15 } as Parameters<typeof flatRows>[2];
const copper = (elements: ElementPicture[], more: Partial<CopperPicture> = {}): CopperPicture =>
  ({ elements, findings: [], pending: 0, ...more }) as Partial<CopperPicture> as CopperPicture;

describe('the look of a shape', () => {
  const row = (c: CopperPicture, stretchShown: boolean) =>
    flatRows(
      {
        drape: 'd1',
        shapes: 3,
        holes: 0,
        layers: [],
        notes: [],
        rims: [],
        flat: flatPicture(lopsided, drape({ drawingLayers: { notes: 'skip' } }), 'k'),
      },
      c,
      limits,
      stretchShown,
    ).map((r) => r.look);

  test('says what is not laid, what is left out, and lengths beyond the limit even without the stretch picture', () => {
    const c = copper([element('d1/line', 0.06)]);
    expect(row(c, false)).toEqual(['copper', 'not-laid', 'left-out']);
    expect(row(c, true)).toEqual(['much', 'not-laid', 'left-out']);
    expect(row(copper([element('d1/line', 0.16), element('d1/ring', 0)]), false)).toEqual([
      'too-much',
      'copper',
      'left-out',
    ]);
  });

  test('what is still to be laid is not called lost, and what was laid in part is', () => {
    expect(row(copper([element('d1/line', 0)], { pending: 1 }), true)).toEqual([
      'little',
      'pending',
      'left-out',
    ]);
    const findings = [{ rule: 'left-map' as const, element: 'd1/line', at: [0, 0, 0] as const, text: '' }];
    expect(row(copper([element('d1/line', 0)], { findings: findings as never }), true)[0]).toBe('not-laid');
  });

  test('elements of another drawing count for nothing', () => {
    const other = { ...element('d1/line', 0), drape: 'd2' };
    expect(row(copper([other]), false)[0]).toBe('not-laid');
  });
});

describe('the paths of the page', () => {
  test('are few, whatever the number of shapes and widths', () => {
    const shapes = Array.from({ length: 5000 }, (_, i) =>
      stroke(`s${i}`, [i % 70, Math.floor(i / 70), (i % 70) + 0.5, Math.floor(i / 70)], 0.1 + i * 1e-4),
    );
    const f = flatPicture(drawing(shapes), drape(), 'k');
    const rows = f.ids.map(() => ({ look: 'copper' as const, laid: null }));
    const figures = figuresOf(
      f,
      rows,
      f.ids.map((_, i) => i),
    );
    expect(figures.length).toBeLessThanOrEqual(400);
    expect(figures.reduce((n, p) => n + p.d.split('M').length - 1, 0)).toBe(5000);
    // Widths are kept to what 400 kinds allow: 0.5 mm over 400.
    for (const p of figures) expect(p.width).toBeGreaterThan(0);
    expect(Math.max(...figures.map((p) => p.width))).toBeCloseTo(0.6, 2);
  });

  test('an area has all of its rings in one path', () => {
    const f = flatPicture(lopsided, drape(), 'k');
    const rows = f.ids.map(() => ({ look: 'copper' as const, laid: null }));
    const [ring] = figuresOf(f, rows, [1]);
    expect(ring!.d.match(/Z/g)).toHaveLength(2);
    expect(figuresOf(f, rows, [0])[0]!.d).toBe('M2 -4L12 -4L12 -8');
  });

  test('a hole is a ring about its middle, a slot runs from end to end and bulges beyond both', () => {
    // Read back as an SVG path, whose y is down: v turned over.
    const areaOf = (...holes: number[]) => {
      const d = holesPath(Float32Array.from(holes));
      const { figure } = read(`<path transform="translate(0 20) scale(1 -1)" d="${d}"/>`).shapes[0]!;
      const [ring] = figure.kind === 'area' ? figure.rings : [];
      let sum = 0;
      for (let i = 0; i < ring!.length; i += 2) {
        const j = (i + 2) % ring!.length;
        sum += (ring![i]! * ring![j + 1]! - ring![j]! * ring![i + 1]!) / 2;
      }
      return { sum, left: Math.min(...ring!.filter((_, i) => i % 2 === 0)) };
    };
    const round = areaOf(3, 4, 3, 4, 2);
    expect(round.sum).toBeCloseTo(Math.PI, 1);
    expect(round.left).toBeCloseTo(2, 2);
    // A slot from (4, 4) to (10, 12), 10 mm long and 2 wide.
    const slot = areaOf(4, 4, 10, 12, 2);
    expect(Math.abs(slot.sum - (20 + Math.PI))).toBeLessThan(0.05);
    expect(slot.left).toBeCloseTo(3, 1);
  });
});
