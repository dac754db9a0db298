import DxfParser, { type IDxf, type IEntity } from 'dxf-parser';
import { beforeAll, expect, it } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import { quiet } from '../../../src/core/base/run-context.ts';
import { DEFAULTS, type Stroke } from '../../../src/core/drawing/drawing.ts';
import { readDxf } from '../../../src/core/drawing/dxf.ts';
import type { Flat } from '../../../src/core/drawing/flat.ts';
import { flattenSpline } from '../../../src/core/drawing/spline.ts';
import { flatForTests } from '../helpers/flat.ts';
import { dxf, type Groups } from './dxf-text.ts';

/** mm, on drawings some 100 mm large. */
const ROUNDING = 1e-9;

let flat: Flat;
beforeAll(async () => {
  flat = await flatForTests();
});

type Point = readonly [number, number];

it('dxf-parser reads the same drawings, drawn from what it reads by the plainest formulas (seed 51)', () => {
  const random = dice(51);
  for (let round = 0; round < 60; round++) {
    const blocks = { A: entities(random, 3), B: [...entities(random, 1), ...insertOf(random, 'A')] };
    const text = dxf([...entities(random, 4), ...insertOf(random, 'B'), ...insertOf(random, 'A')], {
      units: 4,
      blocks,
    });
    const ours = readDxf(text, 'a.dxf', DEFAULTS, flat, quiet).shapes;
    const parsed = new DxfParser().parseSync(text) as IDxf;
    const theirs = drawAll(parsed.entities, parsed, (p) => p, '0');
    expect(ours.length, text).toBe(theirs.length);
    ours.forEach((shape, i) => {
      const { points } = shape.figure as Stroke;
      expect(shape.layer, text).toBe(theirs[i].layer);
      const want = theirs[i].points;
      expect(farthest(want, points), text).toBeLessThan(DEFAULTS.tolerance * 1.0001 + ROUNDING);
      for (const k of [0, 1]) {
        expect(Math.abs(points[k] - want[0][k]), text).toBeLessThan(ROUNDING);
        expect(Math.abs((points.at(k - 2) ?? 0) - want[want.length - 1][k]), text).toBeLessThan(ROUNDING);
      }
    });
  }
});

it('splines of every degree and weight run where the basis functions say (seed 52)', () => {
  const random = dice(52);
  let compared = 0;
  for (let round = 0; round < 150; round++) {
    const degree = 1 + Math.floor(5 * random());
    const n = degree + 1 + Math.floor(6 * random());
    const knots: number[] = [0];
    // Knots that fall together now and then, ends clamped or not.
    while (knots.length < n + degree + 1)
      knots.push(knots[knots.length - 1] + (random() < 0.25 ? 0 : random()));
    if (random() < 0.5)
      for (let i = 0; i <= degree; i++) {
        knots[i] = knots[degree];
        knots[n + degree - i] = knots[n];
      }
    // A knot too often inside tears the curve.
    if (!(knots[degree] < knots[n]) || longestRun(knots.slice(degree + 1, n)) > degree) continue;
    compared++;
    const points = Array.from({ length: n }, (): Point => [random.number(), random.number()]);
    const weights = random() < 0.5 ? null : Array.from({ length: n }, () => 0.2 + 3 * random());
    const chain: number[] = [];
    const tolerance = 10 ** (-4 + 3 * random());
    const first = flattenSpline({ degree, knots, points, weights }, tolerance, (x, y) => chain.push(x, y));
    const flatChain = Float64Array.of(...first, ...chain);
    // Between knots alone: at a knot that jumps the basis takes the right side.
    const sampled = Array.from({ length: 200 }, (_, i) => {
      const u = knots[degree] + ((i + 0.5) / 200) * (knots[n] - knots[degree]);
      return pointOf(degree, knots, points, weights, u);
    });
    expect(farthest(sampled, flatChain)).toBeLessThan(tolerance * (1 + 1e-6) + ROUNDING);
  }
  expect(compared).toBeGreaterThan(100);
});

interface Dice {
  (): number;
  number(): number;
  pick<T>(from: readonly T[]): T;
}

function dice(seed: number): Dice {
  const random = randomFrom(seed);
  return Object.assign(() => random(), {
    number: () => Math.round((random() - 0.5) * 10_000) / 100,
    pick: <T>(from: readonly T[]): T => from[Math.floor(random() * from.length)],
  });
}

const DOWN: Groups = [210, 0, 220, 0, 230, -1];

/** Open lines alone: closed ones become regions. */
function entities(random: Dice, count: number): Groups {
  const at = (x: number, y: number): Groups => [x, random.number(), y, random.number()];
  const layer = (): Groups => [8, random.pick(['0', 'top', 'guard'])];
  const side = (): Groups => (random() < 0.3 ? DOWN : []);
  return Array.from({ length: count }, () =>
    random.pick<() => Groups>([
      () => [0, 'LINE', ...layer(), ...at(10, 20), ...at(11, 21)],
      () => {
        const from = Math.floor(360 * random());
        return [
          0,
          'ARC',
          ...layer(),
          ...at(10, 20),
          40,
          1 + 20 * random(),
          50,
          from,
          51,
          from + 1 + Math.floor(350 * random()),
          ...side(),
        ];
      },
      () => [
        ...[0, 'LWPOLYLINE', ...layer(), 90, 4, 70, 0, 43, 0.3],
        ...Array.from({ length: 4 }, () => [
          ...at(10, 20),
          42,
          random() < 0.3 ? 0 : random.number() / 25,
        ]).flat(),
        // The parser keeps this direction under names of its own.
        ...side(),
      ],
      () => [
        ...[0, 'POLYLINE', ...layer(), 66, 1, 70, 0, 40, 0.2, 41, 0.2, ...side()],
        ...Array.from({ length: 3 }, () => [
          0,
          'VERTEX',
          8,
          '0',
          ...at(10, 20),
          42,
          random.number() / 25,
        ]).flat(),
        ...[0, 'SEQEND', 8, '0'],
      ],
      () => [
        ...[0, 'ELLIPSE', ...layer(), ...at(10, 20), ...at(11, 21), 40, 0.2 + 0.7 * random()],
        ...[41, 3 * random(), 42, 3.1 + 3 * random()],
      ],
      () => [
        ...[0, 'SPLINE', ...layer(), 70, 8, 71, 3, 72, 9, 73, 5],
        ...[0, 0, 0, 0, 0.4, 1, 1, 1, 1].flatMap((u) => [40, u]),
        ...Array.from({ length: 5 }, () => at(10, 20)).flat(),
      ],
    ])(),
  ).flat();
}

function insertOf(random: Dice, name: string): Groups {
  const scale = (): number => (random() < 0.3 ? -1 : 1) * (0.3 + random());
  return [
    ...[0, 'INSERT', 8, random.pick(['0', 'pads']), 2, name, 10, random.number(), 20, random.number()],
    ...[41, scale(), 42, scale(), 50, random.number() * 4],
    ...(random() < 0.4 ? [70, 2, 71, 3, 44, random.number(), 45, random.number()] : []),
    ...(random() < 0.3 ? DOWN : []),
  ];
}

type Map = (p: Point) => Point;

interface Drawn {
  layer: string;
  points: Point[];
}

/** Everything that the parser found, sampled: to be compared with chains. */
function drawAll(list: IEntity[], file: IDxf, map: Map, around: string): Drawn[] {
  const STEPS = 40;
  return list.flatMap((entity) => {
    // biome-ignore lint/suspicious/noExplicitAny: each kind has fields of its own
    const e = entity as any;
    const layer = e.layer === '0' ? around : e.layer;
    const down = (e.extrusionDirectionZ ?? e.extrusionDirection?.z ?? 1) < 0;
    const sheet: Map = down ? ([x, y]) => map([-x, y]) : map;
    const along = (at: (t: number) => Point, how: Map): Drawn[] => [
      { layer, points: Array.from({ length: STEPS + 1 }, (_, i) => how(at(i / STEPS))) },
    ];
    switch (e.type) {
      case 'LINE':
        return [{ layer, points: e.vertices.map((v: { x: number; y: number }) => map([v.x, v.y])) }];
      case 'ARC': {
        let sweep = e.endAngle - e.startAngle;
        while (sweep <= 0) sweep += 2 * Math.PI;
        return along(
          (t) => [
            e.center.x + e.radius * Math.cos(e.startAngle + t * sweep),
            e.center.y + e.radius * Math.sin(e.startAngle + t * sweep),
          ],
          sheet,
        );
      }
      case 'ELLIPSE': {
        const { x, y } = e.majorAxisEndPoint;
        return along((t) => {
          const a = e.startAngle + t * (e.endAngle - e.startAngle);
          const [c, s] = [Math.cos(a), Math.sin(a) * e.axisRatio];
          return [e.center.x + c * x - s * y, e.center.y + c * y + s * x];
        }, map);
      }
      case 'LWPOLYLINE':
      case 'POLYLINE': {
        const points: Point[] = [];
        for (let i = 0; i + 1 < e.vertices.length; i++) {
          const [a, b] = [e.vertices[i], e.vertices[i + 1]];
          for (let k = 0; k <= 20; k++) points.push(sheet(bulged(a, b, a.bulge ?? 0, k / 20)));
        }
        return [{ layer, points }];
      }
      case 'SPLINE': {
        const points = e.controlPoints.map((p: { x: number; y: number }): Point => [p.x, p.y]);
        // The last parameter itself belongs to no span.
        return along((t) => pointOf(3, e.knotValues, points, null, Math.min(t, 1 - 1e-13)), map);
      }
      case 'INSERT': {
        const block = file.blocks[e.name];
        const turn = ((e.rotation ?? 0) * Math.PI) / 180;
        const out: Drawn[] = [];
        for (let row = 0; row < (e.rowCount ?? 1); row++)
          for (let column = 0; column < (e.columnCount ?? 1); column++)
            out.push(
              ...drawAll(
                block.entities,
                file,
                ([x, y]) => {
                  const u = (x - block.position.x) * e.xScale + column * (e.columnSpacing ?? 0);
                  const v = (y - block.position.y) * e.yScale + row * (e.rowSpacing ?? 0);
                  return sheet([
                    e.position.x + u * Math.cos(turn) - v * Math.sin(turn),
                    e.position.y + u * Math.sin(turn) + v * Math.cos(turn),
                  ]);
                },
                layer,
              ),
            );
        return out;
      }
      default:
        throw new Error(e.type);
    }
  });
}

/** The point on a bulge by the angle at its ends: the sine rule in the triangle of chord and point. */
function bulged(a: { x: number; y: number }, b: { x: number; y: number }, bulge: number, t: number): Point {
  const half = 2 * Math.atan(bulge);
  if (Math.abs(half) < 1e-12) return [a.x + t * (b.x - a.x), a.y + t * (b.y - a.y)];
  // Seen from a, the point at share t of the angle lies off the chord by (1 − t) of the half angle, to its right.
  const reach = Math.sin(half * t) / Math.sin(half);
  const off = -half * (1 - t);
  const [c, s] = [reach * Math.cos(off), reach * Math.sin(off)];
  return [a.x + c * (b.x - a.x) - s * (b.y - a.y), a.y + s * (b.x - a.x) + c * (b.y - a.y)];
}

/** Sum of basis functions (M. Cox 1972, C. de Boor 1972), by their recursion as it stands. */
function pointOf(
  degree: number,
  knots: readonly number[],
  points: readonly Point[],
  weights: readonly number[] | null,
  u: number,
): Point {
  const basis = (i: number, p: number): number => {
    if (p === 0) return knots[i] <= u && u < knots[i + 1] ? 1 : 0;
    const left = knots[i + p] - knots[i];
    const right = knots[i + p + 1] - knots[i + 1];
    return (
      (left > 0 ? ((u - knots[i]) / left) * basis(i, p - 1) : 0) +
      (right > 0 ? ((knots[i + p + 1] - u) / right) * basis(i + 1, p - 1) : 0)
    );
  };
  let [x, y, w] = [0, 0, 0];
  points.forEach((p, i) => {
    const b = basis(i, degree) * (weights?.[i] ?? 1);
    x += b * p[0];
    y += b * p[1];
    w += b;
  });
  return [x / w, y / w];
}

function longestRun(knots: readonly number[]): number {
  let [run, most] = [1, 1];
  for (let i = 1; i < knots.length; i++) {
    run = knots[i] === knots[i - 1] ? run + 1 : 1;
    most = Math.max(most, run);
  }
  return most;
}

/** How far the farthest of the points is from the chain. */
function farthest(points: readonly Point[], chain: Float64Array): number {
  let most = 0;
  for (const [x, y] of points) {
    let least = Infinity;
    for (let k = 0; k + 3 < chain.length; k += 2) {
      const [dx, dy] = [chain[k + 2] - chain[k], chain[k + 3] - chain[k + 1]];
      const [px, py] = [x - chain[k], y - chain[k + 1]];
      const length = dx * dx + dy * dy;
      const t = length > 0 ? Math.max(0, Math.min(1, (px * dx + py * dy) / length)) : 0;
      least = Math.min(least, Math.hypot(px - t * dx, py - t * dy));
    }
    most = Math.max(most, least);
  }
  return most;
}
