import { describe, expect, it } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import { flatFigure } from '../../../src/core/drape/flat-figure.ts';
import { SegmentTree } from '../../../src/core/drape/segment-tree.ts';
import { polygonDistance } from '../../../src/core/drape/shapes.ts';
import type { Stroke } from '../../../src/core/drawing/drawing.ts';

/** A ring about (cu, cv) with teeth of random length: it never crosses itself. */
function star(random: () => number, cu: number, cv: number, r: number, corners: number): number[] {
  const out: number[] = [];
  for (let k = 0; k < corners; k++) {
    const a = (2 * Math.PI * (k + 0.6 * random())) / corners;
    const d = r * (0.3 + 0.7 * random());
    out.push(cu + d * Math.cos(a), cv + d * Math.sin(a));
  }
  return out;
}
const pairs = (ring: readonly number[]): [number, number][] =>
  Array.from({ length: ring.length / 2 }, (_, i) => [ring[2 * i], ring[2 * i + 1]]);

describe('flat figures', () => {
  it('the nearest segment is the one that a look at all of them finds, seed 51', () => {
    const random = randomFrom(51);
    for (const count of [1, 3, 4, 5, 37, 200]) {
      const ends = Float64Array.from({ length: 4 * count }, () => 20 * random() - 10);
      const tree = new SegmentTree(ends);
      for (let k = 0; k < 60; k++) {
        const [u, v] = [30 * random() - 15, 30 * random() - 15];
        let best = Infinity;
        for (let i = 0; i < count; i++) {
          const [a, b, c, d] = ends.subarray(4 * i, 4 * i + 4);
          const ee = (c - a) ** 2 + (d - b) ** 2;
          const t = Math.max(0, Math.min(1, ((u - a) * (c - a) + (v - b) * (d - b)) / ee));
          best = Math.min(best, Math.hypot(u - a - t * (c - a), v - b - t * (d - b)));
        }
        expect(tree.nearest(u, v).distance).toBeCloseTo(best, 12);
      }
    }
  });

  it('a straight line with plain or square ends has the signed distance of its rectangle, inside its ends too, seed 54', () => {
    const random = randomFrom(54);
    for (const ends of ['butt', 'square'] as const) {
      const stroke: Stroke = {
        kind: 'stroke',
        points: Float64Array.of(-3, 1, 4, 1),
        closed: false,
        width: 0.8,
        ends,
        bends: 'round',
      };
      const more = ends === 'square' ? 0.4 : 0;
      const outline: [number, number][] = [
        [-3 - more, 0.6],
        [4 + more, 0.6],
        [4 + more, 1.4],
        [-3 - more, 1.4],
      ];
      for (let k = 0; k < 400; k++) {
        const [u, v] = [10 * random() - 4.5, 4 * random() - 1];
        expect(flatFigure(stroke).at(u, v).edge).toBeCloseTo(polygonDistance(outline, u, v), 10);
      }
    }
  });

  it('an area with a hole has the signed distance of its rings, by even and odd, seed 52', () => {
    const random = randomFrom(52);
    for (let n = 0; n < 30; n++) {
      const outer = star(random, 1, -2, 10, 5 + Math.floor(20 * random()));
      const hole = pairs(star(random, 1, -2, 2.4, 7))
        .reverse()
        .flat();
      const { at, length } = flatFigure({
        kind: 'area',
        rings: [Float64Array.from(outer), Float64Array.from(hole)],
      });
      for (let k = 0; k < 100; k++) {
        const [u, v] = [24 * random() - 11, 24 * random() - 14];
        const [o, h] = [polygonDistance(pairs(outer), u, v), polygonDistance(pairs(hole), u, v)];
        const inside = o < 0 && h > 0;
        const d = Math.min(Math.abs(o), Math.abs(h));
        expect(at(u, v).edge).toBeCloseTo(inside ? -d : d, 10);
      }
      expect(length).toBeGreaterThan(0);
    }
  });

  /** Whether a place lies in the outline of a stroke, spelled out piece by piece (SVG 2, stroke shape). */
  function inStroke(s: Stroke, u: number, v: number): boolean {
    const h = s.width / 2;
    const p = pairs([...s.points]);
    const inBox = (a: [number, number], b: [number, number], before: number, after: number): boolean => {
      const l = Math.hypot(b[0] - a[0], b[1] - a[1]);
      const [eu, ev] = [(b[0] - a[0]) / l, (b[1] - a[1]) / l];
      const t = eu * (u - a[0]) + ev * (v - a[1]);
      const w = -ev * (u - a[0]) + eu * (v - a[1]);
      return t >= -before && t <= l + after && Math.abs(w) <= h;
    };
    for (let i = 0; i + 1 < p.length; i++) {
      const cap = s.ends === 'square' ? h : 0;
      if (inBox(p[i], p[i + 1], i === 0 ? cap : 0, i + 2 === p.length ? cap : 0)) return true;
      const round = (q: [number, number]) => Math.hypot(u - q[0], v - q[1]) <= h;
      if (s.ends === 'round' && ((i === 0 && round(p[0])) || (i + 2 === p.length && round(p[i + 1]))))
        return true;
      if (i === 0) continue;
      if (s.bends === 'round' && round(p[i])) return true;
      // The corner piece outside the bend: between the two sides, to the mitre's tip or the bevel.
      const [a, b, c] = [p[i - 1], p[i], p[i + 1]];
      const [l1, l2] = [Math.hypot(b[0] - a[0], b[1] - a[1]), Math.hypot(c[0] - b[0], c[1] - b[1])];
      const [d1, d2] = [
        [(b[0] - a[0]) / l1, (b[1] - a[1]) / l1],
        [(c[0] - b[0]) / l2, (c[1] - b[1]) / l2],
      ];
      const turn = Math.sign(d1[0] * d2[1] - d1[1] * d2[0]);
      const [n1, n2] = [
        [turn * d1[1], -turn * d1[0]],
        [turn * d2[1], -turn * d2[0]],
      ];
      const x = [u - b[0], v - b[1]];
      const [s1, s2] = [x[0] * n1[0] + x[1] * n1[1], x[0] * n2[0] + x[1] * n2[1]];
      // In the wedge of the two normals.
      if (x[0] * d1[0] + x[1] * d1[1] < 0 || x[0] * d2[0] + x[1] * d2[1] > 0) continue;
      const half = Math.sqrt((1 + d1[0] * d2[0] + d1[1] * d2[1]) / 2);
      const m = [n1[0] + n2[0], n1[1] + n2[1]];
      const bevel = (x[0] * m[0] + x[1] * m[1]) / Math.hypot(m[0], m[1]) <= h * half;
      if (
        s.bends === 'miter' && 1 / half <= 4
          ? s1 <= h && s2 <= h && s1 >= 0 && s2 >= 0
          : bevel && s1 <= h && s2 <= h
      )
        return true;
    }
    return false;
  }

  it.each([
    ['round', 'round'],
    ['square', 'miter'],
    ['butt', 'miter'],
    ['butt', 'bevel'],
    ['square', 'round'],
  ] as const)('a line with %s ends and %s bends holds what SVG 2 says, seed 53', (ends, bends) => {
    const random = randomFrom(53);
    let [inside, seen] = [0, 0];
    for (let n = 0; n < 40; n++) {
      // Long pieces beside the width, so that the line does not run over itself.
      const points = [0, 0];
      let heading = 6 * random();
      for (let k = 0; k < 3; k++) {
        heading += (random() - 0.5) * 3.4;
        const l = 4 + 4 * random();
        points.push(
          points[points.length - 2] + l * Math.cos(heading),
          points[points.length - 1] + l * Math.sin(heading),
        );
      }
      const stroke: Stroke = {
        kind: 'stroke',
        points: Float64Array.from(points),
        closed: false,
        width: 1.2,
        ends,
        bends,
      };
      const { at, box } = flatFigure(stroke);
      for (let k = 0; k < 400; k++) {
        const [u, v] = [box[0] + random() * (box[2] - box[0]), box[1] + random() * (box[3] - box[1])];
        const { edge } = at(u, v);
        if (Math.abs(edge) < 1e-3) continue;
        seen++;
        inside += Number(edge < 0);
        if (edge < 0 !== inStroke(stroke, u, v)) expect([points, u, v, edge]).toEqual([ends, bends]);
      }
    }
    expect(inside).toBeGreaterThan(500);
    expect(seen).toBeGreaterThan(10_000);
  });
});
