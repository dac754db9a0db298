import { beforeAll, describe, expect, it } from 'vitest';
import { InputError, type InputProblem } from '../../../src/core/base/news.ts';
import { quiet } from '../../../src/core/base/run-context.ts';
import { type Area, DEFAULTS, type Drawing, type Stroke } from '../../../src/core/drawing/drawing.ts';
import { readDxf } from '../../../src/core/drawing/dxf.ts';
import type { Flat } from '../../../src/core/drawing/flat.ts';
import { flatForTests } from '../helpers/flat.ts';
import { type Around, dxf, type Groups } from './dxf-text.ts';

let flat: Flat;
beforeAll(async () => {
  flat = await flatForTests();
});

const readText = (text: string, unit: number | null = null): Drawing =>
  readDxf(text, 'a.dxf', { ...DEFAULTS, unit }, flat, quiet);
const read = (entities: Groups, around: Around = {}): Drawing =>
  readText(dxf(entities, { units: 4, ...around }));
const codes = (d: Drawing): string[] => d.notes.map((n) => `${n.code}×${n.count}`);
const area = (d: Drawing, i = 0): number => flat.area((d.shapes[i].figure as Area).rings);

function problems(text: string): readonly InputProblem[] {
  try {
    readText(text);
  } catch (error) {
    if (error instanceof InputError) return error.problems;
    throw error;
  }
  throw new Error('it was read');
}
const refused = (text: string): string[] => problems(text).map((p) => `${p.code} @ ${p.place}`);

const line: Groups = [0, 'LINE', 8, 'a', 10, 0, 20, 0, 11, 5, 21, 2];
const light = (more: Groups, ...xy: number[]): Groups => [
  ...[0, 'LWPOLYLINE', 8, 'a', 90, xy.length / 2, ...more],
  ...xy.flatMap((c, i) => [i % 2 === 0 ? 10 : 20, c]),
];

describe('units', () => {
  it('are asked for where the header says none, and the header’s own come first', () => {
    expect(refused(dxf(line))).toEqual(['no-units @ ']);
    expect(refused(dxf(line, { units: 0 }))).toEqual(['no-units @ line 8']);
    expect(refused(dxf(line, { units: 99 }))).toEqual(['no-units @ line 8']);
    const end = (d: Drawing): number => (d.shapes[0].figure as Stroke).points[2];
    expect(end(readText(dxf(line), 2))).toBe(10);
    expect(end(readText(dxf(line, { units: 0 }), 25.4))).toBeCloseTo(127, 12);
    expect(end(readText(dxf(line, { units: 5 }), 2))).toBe(50);
  });
});

describe('widths', () => {
  it('lines without one take the width that was asked for, and a note says so', () => {
    const d = read([...line, ...line, ...light([70, 0], 0, 0, 3, 0, 3, 9)]);
    expect(d.shapes.map((s) => s.figure)).toMatchObject([
      { width: 0.5, ends: 'round' },
      { width: 0.5 },
      { width: 0.5, closed: false },
    ]);
    expect(codes(d)).toEqual(['line-width×3']);
    expect(d.notes[0].place).toMatch(/^line \d+, LINE$/);
    expect(d.shapes[0].role).toBe('trace');
  });

  it('a polyline has one width for all or one a vertex, cut where it changes; a taper has its mean', () => {
    const d = read(light([70, 1, 43, 0.8], 0, 0, 9, 0, 3, 5), { units: 1 });
    expect(d.shapes.map((s) => s.figure)).toMatchObject([{ closed: true, ends: 'butt', bends: 'miter' }]);
    expect((d.shapes[0].figure as Stroke).width).toBeCloseTo(0.8 * 25.4, 12);
    const vertex = (x: number, y: number, a: number, b: number): Groups => [10, x, 20, y, 40, a, 41, b];
    const more = read([
      ...[0, 'LWPOLYLINE', 8, 'a', 90, 5, 70, 1],
      ...vertex(0, 0, 1, 1),
      ...vertex(4, 0, 1, 1),
      ...vertex(4, 3, 2, 4),
      ...vertex(0, 3, 0, 0),
      ...vertex(-2, 1, 0, 0),
    ]);
    const runs = more.shapes.map((s) => s.figure as Stroke);
    expect(runs.map((r) => [r.width, r.closed, r.points.length / 2])).toEqual([
      [1, false, 3],
      [3, false, 2],
      [0.5, false, 3],
    ]);
    expect([...runs[2].points]).toEqual([0, 3, -2, 1, 0, 0]);
    expect(codes(more)).toEqual(['taper×1', 'line-width×1']);
  });

  it('an old polyline hands its widths down; frames of splines are no vertices, meshes are left out', () => {
    const vertex = (x: number, y: number, more: Groups): Groups => [
      0,
      'VERTEX',
      8,
      'a',
      10,
      x,
      20,
      y,
      ...more,
    ];
    const d = read([
      ...[0, 'POLYLINE', 8, 'a', 66, 1, 70, 0, 40, 0.7, 41, 0.7],
      ...[
        ...vertex(0, 0, []),
        ...vertex(9, 9, [70, 16]),
        ...vertex(2, 0, []),
        ...vertex(2, 3, [40, 1]),
        0,
        'SEQEND',
      ],
      ...[0, 'POLYLINE', 8, 'a', 66, 1, 70, 64, ...vertex(0, 0, [70, 192]), 0, 'SEQEND'],
    ]);
    expect(d.shapes.map((s) => s.figure)).toMatchObject([{ width: 0.7 }]);
    expect([...(d.shapes[0].figure as Stroke).points]).toEqual([0, 0, 2, 0, 2, 3]);
    expect(codes(d)).toEqual(['mesh×1']);
  });
});

describe('regions', () => {
  it('closed outlines without a width are filled, and a note says so; names make pads of them', () => {
    const d = read(
      [
        ...light([70, 1], 0, 0, 9, 0, 3, 5),
        ...[0, 'CIRCLE', 8, 'Pads', 10, 30, 20, 0, 40, 2],
        ...[0, 'INSERT', 8, 'top', 2, 'pad_1', 10, 50, 20, 0],
      ],
      { blocks: { PAD_1: [0, 'SOLID', 8, '0', 10, 0, 20, 0, 11, 4, 21, 0, 12, 0, 22, 3, 13, 4, 23, 3] } },
    );
    expect(d.shapes.map((s) => [s.role, s.layer])).toEqual([
      ['region', 'a'],
      ['pad', 'Pads'],
      ['pad', 'top'],
    ]);
    expect(area(d)).toBeCloseTo(22.5, 9);
    expect(Math.abs(area(d, 1) - 4 * Math.PI)).toBeLessThan(4 * Math.PI * DEFAULTS.tolerance);
    expect(area(d, 2)).toBeCloseTo(12, 9);
    expect(codes(d)).toEqual(['outline×2']);
  });

  const box = (x: number, y: number, w: number, h: number, bulge = 0): Groups => [
    ...[92, 3, 72, 1, 73, 1, 93, 4, 10, x, 20, y, 42, bulge, 10, x + w, 20, y, 42, 0],
    ...[10, x + w, 20, y + h, 42, 0, 10, x, 20, y + h, 42, 0, 97, 1, 330, 'AF'],
  ];
  const hatch = (style: number, ...paths: Groups[]): Groups => [
    ...[0, 'HATCH', 8, 'a', 10, 0, 20, 0, 30, 0, 2, 'SOLID', 70, 1, 71, 0, 91, paths.length, ...paths.flat()],
    ...[75, style, 76, 1, 98, 1, 10, 1, 20, 1],
  ];

  it('a hatch with polylines for boundaries has holes and islands by its style', () => {
    const nested = [box(0, 0, 10, 7), box(1, 1, 8, 5), box(2, 2, 3, 2)];
    const d = read(hatch(0, ...nested));
    expect(d.shapes.map((_s, i) => Math.round(area(d, i) * 1e6) / 1e6)).toEqual([30, 6]);
    expect(area(read(hatch(2, ...nested)))).toBeCloseTo(70, 6);
    // Boundaries run either way round: this one to the right.
    expect(area(read(hatch(2, box(0, 0, 10, 7), box(9, 1, -8, 5))))).toBeCloseTo(70, 6);
    expect(area(read(hatch(0, box(0, 0, 10, 7), box(9, 1, -8, 5))))).toBeCloseTo(30, 6);
    expect(codes(d)).toEqual([]);
    // A bulge of 1 is half a circle outwards, since the boundary runs left round.
    const round = area(read(hatch(0, box(0, 0, 10, 7, 1))));
    expect(Math.abs(round - (70 + 12.5 * Math.PI))).toBeLessThan(16 * DEFAULTS.tolerance);
  });

  it('a hatch of edges: lines, arcs both ways round, half an ellipse, a spline', () => {
    // Right along y = 0, up round (10, 2), left along y = 4, and down by what each case says.
    const edges = (last: Groups): Groups => [
      ...[92, 1, 93, 4, 72, 1, 10, 0, 20, 0, 11, 10, 21, 0],
      ...[72, 2, 10, 10, 20, 2, 40, 2, 50, 270, 51, 450, 73, 1],
      ...[72, 1, 10, 10, 20, 4, 11, 0, 21, 4, ...last, 97, 0],
    ];
    const found = (last: Groups): number => area(read(hatch(0, edges(last))));
    const plain = 40 + 2 * Math.PI;
    const off = 8 * DEFAULTS.tolerance;
    const left = found([72, 2, 10, 0, 20, 2, 40, 2, 50, 90, 51, 270, 73, 1]);
    expect(Math.abs(left - (plain + 2 * Math.PI))).toBeLessThan(2 * off);
    // The other way round: angles count to the right, from −270° to −90° … it bites into the box.
    const bite = found([72, 2, 10, 0, 20, 2, 40, 2, 50, 270, 51, 450, 73, 0]);
    expect(Math.abs(bite - (plain - 2 * Math.PI))).toBeLessThan(2 * off);
    // A quarter bitten out of the corner (0, 4), from (2, 4) right round to (0, 2).
    const corner = read(
      hatch(0, [
        ...[92, 1, 93, 5, 72, 1, 10, 0, 20, 0, 11, 10, 21, 0, 72, 1, 10, 10, 20, 0, 11, 10, 21, 4],
        ...[72, 1, 10, 10, 20, 4, 11, 2, 21, 4, 72, 2, 10, 0, 20, 4, 40, 2, 50, 0, 51, 90, 73, 0],
        ...[72, 1, 10, 0, 20, 2, 11, 0, 21, 0, 97, 0],
      ]),
    );
    expect(Math.abs(area(corner) - (40 - Math.PI))).toBeLessThan(off);
    const ellipse = found([72, 3, 10, 0, 20, 2, 11, 0, 21, 2, 40, 0.5, 50, 0, 51, 180, 73, 1]);
    expect(Math.abs(ellipse - (plain + Math.PI))).toBeLessThan(2 * off);
    const spline = found([
      ...[72, 4, 94, 2, 73, 0, 74, 0, 95, 6, 96, 3, 40, 0, 40, 0, 40, 0, 40, 1, 40, 1, 40, 1],
      ...[10, 0, 20, 4, 10, -3, 20, 2, 10, 0, 20, 0],
    ]);
    // Two thirds of the triangle of its points.
    expect(Math.abs(spline - (plain + (2 / 3) * 6))).toBeLessThan(2 * off);
  });
});

describe('what is left out or assumed is said, with its place', () => {
  it.each<[string, Groups, Around]>([
    ['text', [0, 'TEXT', 8, 'a', 10, 0, 20, 0, 40, 1, 1, 'A'], {}],
    ['dimension', [0, 'DIMENSION', 8, 'a', 10, 0, 20, 0], {}],
    ['point', [0, 'POINT', 8, 'a', 10, 0, 20, 0], {}],
    ['insert', [0, 'INSERT', 8, 'a', 2, 'NONE', 10, 0, 20, 0], {}],
    ['hidden', [...line, 60, 1], {}],
    ['hidden', line, { layers: [['a', 1, 7]] }],
    ['hidden', line, { layers: [['a', 0, -7]] }],
    ['paper', [...line, 67, 1], {}],
    ['tilted', [...line, 210, 1, 220, 0, 230, 0], {}],
    ['height', [...light([38, 3, 43, 1], 0, 0, 1, 1)], {}],
    ['linetype', [...light([6, 'DASHED', 43, 1], 0, 0, 1, 1)], {}],
    ['fit-spline', [0, 'SPLINE', 8, 'a', 71, 3, 74, 2, 11, 0, 21, 0, 11, 1, 21, 1], {}],
  ])('%s', (code, entity, around) => {
    const d = read(entity, around);
    expect(d.notes.map((n) => n.code)).toEqual([code]);
    expect(d.notes[0].place).toMatch(/^line \d+, [A-Z]+$/);
    expect(d.layers).toEqual(['a']);
  });

  it('layers keep the order of their table, those without shapes too', () => {
    const d = read([0, 'LINE', 8, 'late', ...line.slice(4), ...line], {
      layers: [
        ['b', 0, 1],
        ['a', 0, 1],
      ],
    });
    expect(d.layers).toEqual(['b', 'a', 'late']);
    expect(d.shapes.map((s) => s.layer)).toEqual(['late', 'a']);
  });
});

describe('hostile and broken files', () => {
  const good = dxf(line, { units: 4 });
  it.each<[string, string, string[]]>([
    ['nothing', '', ['not-dxf @ line 1']],
    ['no groups', 'G01 X0\nY1\n', ['not-dxf @ line 1']],
    ['a picture', '\x89PNG\r\n\x1a\n\0\0\0', ['binary-dxf @ ']],
    ['a code that is none', good.replace('\r\n 11\r\n', '\r\nxx\r\n'), ['bad-group @ line 43']],
    ['a text that stops', good.slice(0, good.indexOf(' 11\r\n')), ['truncated @ line 42']],
    ['a number that is none', good.replace(' 11\r\n5', ' 11\r\nNaN'), ['bad-number @ line 35, LINE']],
    ['a number too large', good.replace(' 11\r\n5', ' 11\r\n1e999'), ['bad-number @ line 35, LINE']],
    ['a place too far', good.replace(' 11\r\n5', ' 11\r\n1e300'), ['out-of-range @ line 35, LINE']],
  ])('%s', (_what, text, found) => {
    expect(refused(text)).toEqual(found);
  });

  it.each<[string, Groups, string]>([
    ['a circle of no radius', [0, 'CIRCLE', 10, 0, 20, 0, 40, 0], 'bad-number'],
    ['a circle without a middle', [0, 'CIRCLE', 40, 1], 'bad-number'],
    ['a width below 0', light([43, -1], 0, 0, 1, 1), 'bad-number'],
    ['too few knots', [0, 'SPLINE', 71, 3, 40, 0, 10, 0, 20, 0, 10, 1, 20, 1], 'bad-spline'],
    [
      'weights of 0',
      [0, 'SPLINE', 71, 1, 40, 0, 40, 0, 40, 1, 40, 1, 41, 1, 41, 0, 10, 0, 20, 0, 10, 1, 20, 1],
      'bad-spline',
    ],
    ['a hatch of a million paths', [0, 'HATCH', 91, 1_000_000], 'bad-hatch'],
    ['a hatch out of order', [0, 'HATCH', 91, 1, 92, 2, 93, 3], 'bad-hatch'],
  ])('%s is refused', (_what, entity, code) => {
    expect(refused(dxf(entity, { units: 4 }))[0]).toMatch(new RegExp(`^${code} @ line 35, [A-Z]+$`));
  });

  it('blocks that hold themselves, ten steps of ten insertions, copies without end, nesting without end', () => {
    const into = (name: string): Groups => [0, 'INSERT', 8, '0', 2, name, 10, 0, 20, 0];
    const of = (entities: Groups, blocks: Record<string, Groups>): string =>
      refused(dxf(entities, { units: 4, blocks }))[0];
    expect(of(into('A'), { A: into('B'), B: into('a') })).toMatch(/^insert-cycle @ line \d+, INSERT$/);
    const steps: Record<string, Groups> = { B0: line };
    for (let i = 1; i <= 10; i++) steps[`B${i}`] = Array.from({ length: 10 }, () => into(`B${i - 1}`)).flat();
    expect(of(into('B10'), steps)).toMatch(/^too-large @/);
    expect(of([...into('A'), 70, 30_000, 71, 30_000, 44, 1], { A: line })).toMatch(/^too-large @/);
    const deep: Record<string, Groups> = { B0: line };
    for (let i = 1; i <= 400; i++) deep[`B${i}`] = into(`B${i - 1}`);
    expect(of(into('B400'), deep)).toMatch(/^too-deep @/);
  });

  it('a polyline of a million points is read', () => {
    const vertices: string[] = [];
    for (let i = 0; i < 1_000_000; i++) vertices.push(` 10\n${(i % 1000) / 10}\n 20\n${i / 1e5}\n`);
    const d = readText(
      dxf(light([43, 0.1]), { units: 4 }).replace(' 43\r\n0.1\r\n', ` 43\n0.1\n${vertices.join('')}`),
    );
    expect((d.shapes[0].figure as Stroke).points.length).toBe(2_000_000);
  });
});
