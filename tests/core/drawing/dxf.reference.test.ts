import { beforeAll, describe, expect, it } from 'vitest';
import { quiet } from '../../../src/core/base/run-context.ts';
import { type Area, DEFAULTS, type Drawing, type Stroke } from '../../../src/core/drawing/drawing.ts';
import { readDxf } from '../../../src/core/drawing/dxf.ts';
import { bulgeArc, onArc } from '../../../src/core/drawing/dxf-curves.ts';
import type { Flat } from '../../../src/core/drawing/flat.ts';
import { flattenSpline } from '../../../src/core/drawing/spline.ts';
import { source } from '../../reference/sources.ts';
import { flatForTests } from '../helpers/flat.ts';
import { dxf, type Groups } from './dxf-text.ts';

/** Of the published numbers: nine decimals. */
const TOL = 1e-8;

let flat: Flat;
beforeAll(async () => {
  flat = await flatForTests();
});

const read = (
  entities: Groups,
  blocks: Record<string, Groups> = {},
  tolerance = DEFAULTS.tolerance,
): Drawing => readDxf(dxf(entities, { units: 4, blocks }), 'a.dxf', { ...DEFAULTS, tolerance }, flat, quiet);
const near = (found: number, want: number, tol = TOL): void =>
  expect(Math.abs(found - want)).toBeLessThan(tol);
const stroke = (d: Drawing, i = 0): Stroke => d.shapes[i].figure as Stroke;
const area = (d: Drawing): number =>
  d.shapes.reduce((sum, s) => sum + (s.figure.kind === 'area' ? flat.area((s.figure as Area).rings) : 0), 0);
const length = (points: Float64Array): number => {
  let sum = 0;
  for (let i = 2; i < points.length; i += 2)
    sum += Math.hypot(points[i] - points[i - 2], points[i + 1] - points[i - 1]);
  return sum;
};

describe(source('dxf-reference'), () => {
  it.each([
    [1, 25.4],
    [2, 304.8],
    [3, 1_609_344],
    [4, 1],
    [5, 10],
    [6, 1000],
    [7, 1e6],
    [8, 2.54e-5],
    [9, 0.0254],
    [10, 914.4],
    [11, 1e-7],
    [12, 1e-6],
    [13, 1e-3],
    [14, 100],
    [15, 1e4],
    [16, 1e5],
    [17, 1e12],
    [18, 1.495978707e14],
    [19, 9.4607304725808e18],
    [20, 3.08567758149137e19],
  ])('$INSUNITS %i is %d mm', (units, mm) => {
    const line: Groups = [0, 'LINE', 8, 'a', 10, 0, 20, 0, 11, 7 / mm, 21, 0];
    const d = readDxf(dxf(line, { units }), 'a.dxf', { ...DEFAULTS, unit: 3 }, flat, quiet);
    near(stroke(d).points[2], 7, 1e-12);
  });

  // From (0, 0) to (10, 0): angle, radius, centre, middle, length, area between chord and arc.
  it.each([
    [1, 180, 5, [5, 0], [5, -5], 15.707963268, 39.26990817],
    [Math.tan(Math.PI / 8), 90, 7.071067812, [5, 5], [5, -2.071067812], 11.107207345, 14.26990817],
    [-Math.tan(Math.PI / 8), -90, 7.071067812, [5, -5], [5, 2.071067812], 11.107207345, 14.26990817],
    [0.5, 106.260204708, 6.25, [5, 3.75], [5, -2.5], 11.591190225, 17.472469453],
    [2, 253.739795292, 6.25, [5, -3.75], [5, -10], 27.678717945, 105.245993578],
  ])('a bulge of %f', (bulge, angle, radius, centre, middle, long, between) => {
    const arc = bulgeArc([0, 0], [10, 0], bulge);
    near((arc.sweep * 180) / Math.PI, angle);
    near(Math.hypot(...arc.p), radius);
    near(arc.centre[0], centre[0]);
    near(arc.centre[1], centre[1]);
    const half = onArc(arc, arc.start + arc.sweep / 2);
    near(half[0], middle[0]);
    near(half[1], middle[1]);
    near(Math.hypot(...arc.p) * Math.abs(arc.sweep), long);

    // And read: chords within the tolerance make the length and the area as short as they may.
    const tolerance = 1e-7;
    const vertices: Groups = [10, 0, 20, 0, 42, bulge, 10, 10, 20, 0];
    const open = read([0, 'LWPOLYLINE', 8, 'a', 90, 2, 70, 0, 43, 0.4, ...vertices], {}, tolerance);
    const { points, width, closed } = stroke(open);
    expect([points[0], points[1], points.at(-2), points.at(-1), width, closed]).toEqual([
      0,
      0,
      10,
      0,
      0.4,
      false,
    ]);
    near(length(points), long, long * ((4 * tolerance) / radius));
    near(
      area(read([0, 'LWPOLYLINE', 8, 'a', 90, 2, 70, 1, ...vertices], {}, tolerance)),
      between,
      long * tolerance + TOL,
    );
    const old: Groups = [0, 'POLYLINE', 8, 'a', 66, 1, 70, 1, 40, 0, 41, 0];
    const vertex = (x: number, b: number): Groups => [0, 'VERTEX', 8, 'a', 10, x, 20, 0, 30, 0, 42, b];
    near(
      area(read([...old, ...vertex(0, bulge), ...vertex(10, 0), 0, 'SEQEND'], {}, tolerance)),
      between,
      long * tolerance + TOL,
    );
  });

  it('an ellipse by its major end and ratio: area, length, and half of it by its parameters', () => {
    const tolerance = 1e-6;
    const ellipse: Groups = [0, 'ELLIPSE', 8, 'a', 10, 3, 20, 2, 11, 8, 21, 0, 40, 0.5];
    const whole = read([...ellipse, 41, 0, 42, 6.283185307179586], {}, tolerance);
    near(area(whole), 100.530964915, 38.8 * tolerance);
    const { rings } = whole.shapes[0].figure as Area;
    near(length(Float64Array.of(...rings[0], rings[0][0], rings[0][1])), 38.753792882, 1e-4);
    const half = stroke(read([...ellipse, 41, 0, 42, Math.PI]));
    near(half.points[0], 11, 1e-12);
    near(half.points.at(-2) ?? 0, -5, 1e-12);
    near(Math.max(...half.points.filter((_c, i) => i % 2 === 1)), 6, DEFAULTS.tolerance);
    // Seen from below it is the same ellipse, its parameter running right round.
    const below = stroke(read([...ellipse, 41, 0, 42, Math.PI, 210, 0, 220, 0, 230, -1]));
    near(Math.min(...below.points.filter((_c, i) => i % 2 === 1)), -2, DEFAULTS.tolerance);
  });

  it('a rational quadratic with weights 1, √½, 1 is a quarter of a circle, at every point', () => {
    const tolerance = 1e-6;
    const d = read(
      [
        ...[0, 'SPLINE', 8, 'a', 70, 4, 71, 2, 72, 6, 73, 3, 40, 0, 40, 0, 40, 0, 40, 1, 40, 1, 40, 1],
        ...[41, 1, 41, Math.SQRT1_2, 41, 1, 10, 10, 20, 0, 10, 10, 20, 10, 10, 0, 20, 10],
      ],
      {},
      tolerance,
    );
    const { points } = stroke(d);
    for (let i = 0; i < points.length; i += 2) near(Math.hypot(points[i], points[i + 1]), 10, 1e-12);
    near(length(points), 15.707963268, 1e-5);
    expect(points.length / 2).toBeGreaterThan(200);
  });

  it('a uniform cubic spline begins and ends where its basis says: sixths of its points', () => {
    const points: [number, number][] = [
      [0, 0],
      [1, 7],
      [5, 2],
      [9, 9],
      [12, -3],
    ];
    const last: [number, number][] = [];
    const first = flattenSpline(
      { degree: 3, knots: [0, 1, 2, 3, 4, 5, 6, 7, 8], points, weights: null },
      1e-4,
      (x, y) => last.push([x, y]),
    );
    near(first[0], (0 + 4 * 1 + 5) / 6, 1e-12);
    near(first[1], (0 + 4 * 7 + 2) / 6, 1e-12);
    near(last[last.length - 1][0], (5 + 4 * 9 + 12) / 6, 1e-12);
    near(last[last.length - 1][1], (2 + 4 * 9 - 3) / 6, 1e-12);
  });

  it('arcs run left round in degrees, over 0 where they must', () => {
    const d = read([0, 'ARC', 8, 'a', 10, 1, 20, 2, 40, 5, 50, 350, 51, 80]);
    const { points } = stroke(d);
    near(points[0], 1 + 5 * Math.cos((350 * Math.PI) / 180), 1e-12);
    near(points.at(-1) ?? 0, 2 + 5 * Math.sin((80 * Math.PI) / 180), 1e-12);
    near(length(points), (5 * Math.PI) / 2, 0.02);
  });

  it('an insertion scales and turns about the block’s base point, in columns and rows that turn with it', () => {
    const blocks = { PAD: [0, 'LINE', 8, '0', 10, 3, 20, 4, 11, 5, 21, 4] as Groups };
    const d = read(
      [0, 'INSERT', 8, 'top', 2, 'pad', 10, 100, 20, 50, 41, 2, 42, 3, 50, 90, 70, 2, 71, 2, 44, 7, 45, 9],
      blocks,
    );
    // Base (1, 2): (3, 4) → (2, 2) → scaled (4, 6) → plus the step → turned left: (−y, x) → placed.
    const want = [
      [0, 0],
      [7, 0],
      [0, 9],
      [7, 9],
    ].map(([dx, dy]) => [100 - (6 + dy), 50 + 4 + dx, 100 - (6 + dy), 50 + 8 + dx]);
    expect(d.shapes.map((s) => [...(s.figure as Stroke).points])).toEqual(want);
    expect(d.shapes.every((s) => s.layer === 'top')).toBe(true);
  });

  it('an extrusion of (0, 0, −1) and a negative scale mirror: bulges change sign', () => {
    const bulged: Groups = [
      0,
      'LWPOLYLINE',
      8,
      '0',
      90,
      2,
      70,
      0,
      43,
      0.2,
      10,
      0,
      20,
      0,
      42,
      1,
      10,
      10,
      20,
      0,
    ];
    const middle = (d: Drawing): [number, number] => {
      const { points } = stroke(d);
      const i = 2 * Math.floor(points.length / 4);
      return [points[i], points[i + 1]];
    };
    const lowest = (d: Drawing): number => Math.min(...stroke(d).points.filter((_c, i) => i % 2 === 1));
    const highest = (d: Drawing): number => Math.max(...stroke(d).points.filter((_c, i) => i % 2 === 1));
    near(lowest(read(bulged)), -5, DEFAULTS.tolerance);
    const below = read([...bulged, 210, 0, 220, 0, 230, -1]);
    near(lowest(below), -5, DEFAULTS.tolerance);
    expect(middle(below)[0]).toBeLessThan(0);
    const blocks = { B: bulged };
    const flipped = read([0, 'INSERT', 8, 'a', 2, 'B', 10, 0, 20, 0, 42, -1], blocks);
    near(highest(flipped), 2 + 5, DEFAULTS.tolerance);
    near(stroke(flipped).width, 0.2, 1e-12);
  });
});
