import { beforeAll, describe, expect, test } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import { type Flat, GRID, loadFlat, ringArea } from '../../../src/core/drawing/flat.ts';
import { flatForTests } from '../helpers/flat.ts';

let flat: Flat;
beforeAll(async () => {
  flat = await flatForTests();
});

const ring = (...xy: number[]): Float64Array => Float64Array.from(xy);
const box = (x: number, y: number, w: number, h: number): Float64Array =>
  ring(x, y, x + w, y, x + w, y + h, x, y + h);
const turned = (r: Float64Array): Float64Array => {
  const out: number[] = [];
  for (let i = r.length - 2; i >= 0; i -= 2) out.push(r[i], r[i + 1]);
  return Float64Array.from(out);
};
const regular = (n: number, x: number, y: number, r: number, from = 0): Float64Array =>
  Float64Array.from({ length: 2 * n }, (_, i) => {
    const a = from + (2 * Math.PI * (i >> 1)) / n;
    return i % 2 === 0 ? x + r * Math.cos(a) : y + r * Math.sin(a);
  });
const perimeter = (r: Float64Array): number => {
  let sum = 0;
  for (let i = 0; i < r.length; i += 2)
    sum += Math.hypot(r[(i + 2) % r.length] - r[i], r[(i + 3) % r.length] - r[i + 1]);
  return sum;
};
/** Corners and crossings move by a step of the grid at most. */
const slack = (...rings: Float64Array[]): number => GRID * rings.reduce((s, r) => s + perimeter(r), 0);

describe('areas in closed form', () => {
  test('two boxes that overlap', () => {
    const a = box(0.1, 0.2, 10, 7);
    const b = box(3.3, -2.1, 2.2, 5.7);
    // b lies over a between y 0.2 and 3.6
    const over = 2.2 * 3.4;
    expect(Math.abs(flat.area(flat.union([a, b])) - (70 + 2.2 * 5.7 - over))).toBeLessThan(slack(a, b));
    expect(Math.abs(flat.area(flat.difference([a], [b])) - (70 - over))).toBeLessThan(slack(a, b));
    expect(Math.abs(flat.area(flat.intersection([a], [b])) - over)).toBeLessThan(slack(a, b));
  });

  test('the lens of two discs, as polygons of 4096 corners', () => {
    // r² (2 θ − sin 2 θ) with cos θ = d / 2r, for equal radii; a polygon keeps n/2π sin(2π/n) of its disc
    const [r, d] = [7, 9];
    const theta = Math.acos(d / 2 / r);
    const lens = r * r * (2 * theta - Math.sin(2 * theta));
    const found = flat.area(flat.intersection([regular(4096, 1, 2, r)], [regular(4096, 1 + d, 2, r)]));
    // chords lie within r (1 − cos(π/n)) of the arcs
    expect(Math.abs(found - lens)).toBeLessThan(r * (1 - Math.cos(Math.PI / 4096)) * 2 * Math.PI * r);
  });

  test('a five-pointed star that crosses itself: nonzero fills its middle, even–odd does not', () => {
    const corners = regular(5, 20, -3, 10, 0.3);
    const star = Float64Array.from([0, 2, 4, 1, 3].flatMap((k) => [corners[2 * k], corners[2 * k + 1]]));
    // The inner pentagon has circumradius R φ⁻²; a pentagon's area is 5/2 R² sin 72°.
    const phi = (1 + Math.sqrt(5)) / 2;
    const inner = 2.5 * (10 / phi ** 2) ** 2 * Math.sin((2 * Math.PI) / 5);
    // The shoelace formula counts the middle twice.
    const twice = Math.abs(ringArea(star));
    expect(Math.abs(flat.area(flat.union([star], 'nonzero')) - (twice - inner))).toBeLessThan(slack(star));
    expect(Math.abs(flat.area(flat.union([star], 'evenodd')) - (twice - 2 * inner))).toBeLessThan(
      slack(star),
    );
  });

  test('places hold to 1e-8 mm at 100 mm from the origin, and at 10 m', () => {
    for (const far of [0, 100, -99.123456789, 10_000]) {
      const square = box(far + 1 / 3, far + 1 / 7, 1, 1);
      const [out] = flat.union([square]);
      out.forEach((c, i) => {
        expect(Math.abs(c - square[i])).toBeLessThanOrEqual(GRID / 2 + 1e-12 * Math.abs(far));
      });
    }
  });
});

describe('the form of answers', () => {
  test('outlines run counter-clockwise, holes clockwise, from the leftmost point on', () => {
    const out = flat.difference([turned(box(0, 0, 10, 8))], [box(2, 3, 4, 1), turned(box(7, 1, 1, 1))]);
    expect(out.map((r) => Math.sign(ringArea(r)))).toEqual([1, -1, -1]);
    expect(out.map((r) => [r[0], r[1]])).toEqual([
      [0, 0],
      [2, 3],
      [7, 1],
    ]);
  });

  test('separate areas come apart with their holes; an island in a hole is an area of its own', () => {
    const rings = [
      box(20, 0, 3, 3),
      box(0, 0, 10, 10),
      turned(box(1, 1, 8, 7)),
      box(3, 4, 2, 2),
      turned(box(21, 1, 1, 1)),
    ];
    const parts = flat.split(rings);
    expect(parts.map((p) => [p.length, flat.area(p)])).toEqual([
      [2, 44],
      [1, 4],
      [2, 8],
    ]);
    expect(parts.every((p) => ringArea(p[0]) > 0)).toBe(true);
  });

  test('where a hole begins, islands in it, other holes and other areas may touch it', () => {
    const diamond = (x: number, y: number, r: number): Float64Array =>
      ring(x + r, y, x, y + r, x - r, y, x, y - r);
    const outer = box(-6, -4, 20, 16);
    const hole = turned(diamond(5, 4, 3));
    const within = diamond(3.5, 4, 1.5);
    const left = turned(diamond(0.5, 4, 1.5));
    const withinLeft = diamond(1, 4, 1);
    // All touch in (2, 4): a hole and an island in it to the right, the same to the left.
    const areas = (...rings: Float64Array[]): number[][] =>
      flat.split(rings).map((p) => [p.length, flat.area(p)]);
    expect(areas(outer, hole, within)).toEqual([
      [2, 320 - 18],
      [1, 4.5],
    ]);
    expect(areas(withinLeft, within, left, hole, outer)).toEqual([
      [3, 320 - 18 - 4.5],
      [1, 2],
      [1, 4.5],
    ]);
    // Below the hole an area of its own, in a hole of its own.
    expect(areas(outer, hole, turned(box(0, -3, 9, 3)), box(1, -2, 7, 1))).toEqual([
      [3, 320 - 18 - 27],
      [1, 7],
    ]);
  });

  test('nothing is an answer, and rings of two points are nothing', () => {
    expect(flat.union([])).toEqual([]);
    expect(flat.union([ring(0, 0, 1, 1)])).toEqual([]);
    expect(flat.split([])).toEqual([]);
    expect(flat.intersection([box(0, 0, 1, 1)], [])).toEqual([]);
    expect(flat.meet([box(0, 0, 1, 1)], [])).toBe(false);
    expect(flat.meet([box(0, 0, 1, 1)], [box(1, 0, 1, 1)])).toBe(false);
    expect(flat.meet([box(0, 0, 1, 1)], [box(0.9, 0.9, 1, 1)])).toBe(true);
    expect(flat.difference([], [box(0, 0, 1, 1)])).toEqual([]);
    expect(flat.difference([box(0, 0, 1, 1)], [])).toEqual([box(0, 0, 1, 1)]);
    expect(flat.difference([box(0, 0, 1, 1)], [box(-1, -1, 3, 3)])).toEqual([]);
  });

  test('what is not finite is refused as our own mistake', () => {
    for (const bad of [Number.NaN, Infinity, 1e10])
      for (const work of [flat.union, flat.split])
        expect(() => work([ring(0, 0, 1, 0, 1, bad)])).toThrow(/a ring goes through/);
  });

  test('a second loading gives the same bits', async () => {
    const { readFileSync } = await import('node:fs');
    const { createRequire } = await import('node:module');
    const wasm = readFileSync(createRequire(import.meta.url).resolve('manifold-3d/manifold.wasm'));
    const again = await loadFlat(wasm);
    const rings = [regular(37, 0, 0, 5, 0.1), regular(11, 3, 1, 4, 0.2), box(-6, 0.5, 12, 0.7)];
    expect(again.union(rings)).toEqual(flat.union(rings));
  });
});

describe('theorems over random figures, seed 5101', () => {
  const random = randomFrom(5101);
  const figures = (): Float64Array[] =>
    Array.from({ length: 2 + Math.floor(random() * 9) }, () => {
      const n = 3 + Math.floor(random() * 9);
      return regular(n, 40 * random(), 30 * random(), 1 + 9 * random(), 7 * random());
    });
  const rounds = Array.from({ length: 60 }, () => [figures(), figures()] as const);

  test('the order of the rings and their first points change nothing', () => {
    for (const [rings] of rounds) {
      const back = [...rings].reverse().map((r) => Float64Array.from([...r.slice(4), ...r.slice(0, 4)]));
      const [one, other] = [flat.union(rings), flat.union(back)];
      expect(other.map((r) => r.length)).toEqual(one.map((r) => r.length));
      other.forEach((r, k) => {
        r.forEach((c, i) => {
          expect(Math.abs(c - one[k][i])).toBeLessThanOrEqual(2 * GRID);
        });
      });
    }
  });

  test('|A ∪ B| = |A| + |B| − |A ∩ B| and |A − B| = |A| − |A ∩ B|', () => {
    for (const [a, b] of rounds) {
      const of = (rings: Float64Array[]): number => flat.area(rings);
      const [A, B, both] = [of(flat.union(a)), of(flat.union(b)), of(flat.intersection(a, b))];
      const most = 4 * slack(...a, ...b);
      expect(flat.meet(a, b)).toBe(both > 0);
      expect(Math.abs(of(flat.union([...a, ...b])) - (A + B - both))).toBeLessThan(most);
      expect(Math.abs(of(flat.difference(a, b)) - (A - both))).toBeLessThan(most);
    }
  });

  test('separate areas add up to the whole, each with one outline and positive area', () => {
    for (const [a, b] of rounds) {
      const cut = flat.difference(a, b);
      const parts = flat.split(cut);
      for (const p of parts) expect(p.filter((r) => ringArea(r) > 0).length).toBe(1);
      for (const p of parts) expect(flat.area(p)).toBeGreaterThan(0);
      const sum = parts.reduce((s, p) => s + flat.area(p), 0);
      expect(Math.abs(sum - flat.area(cut))).toBeLessThan(4 * slack(...a, ...b));
    }
  });

  test('separate areas are those that a flood over the triangles of a coarse grid finds, where rings touch', () => {
    const [least, most] = [-6, 26];
    const side = most - least;
    let holes = 0;
    let parts = 0;
    for (let round = 0; round < 150; round++) {
      const step = (n: number): number => Math.floor(random() * n);
      const diamond = (x: number, y: number, r: number): Float64Array =>
        ring(x + r, y, x, y + r, x - r, y, x, y - r);
      const solid = Array.from({ length: 42 }, (_, k) =>
        k % 3 > 0
          ? box(step(16), step(16), 1 + step(5), 1 + step(5))
          : diamond(step(16), step(16), 1 + step(3)),
      );
      const off = Array.from({ length: 40 }, () =>
        random() < 0.5 ? box(step(18), step(18), 1, 1) : diamond(step(18), step(18), 1),
      );
      const inBox = (r: Float64Array, x: number, y: number): boolean => {
        const [cx, cy] = [(Math.min(r[0], r[4]) + Math.max(r[0], r[4])) / 2, (r[3] + r[7]) / 2];
        return r[1] === r[3]
          ? x > r[0] && x < r[2] && y > r[1] && y < r[5]
          : Math.abs(x - cx) + Math.abs(y - cy) < (r[0] - r[4]) / 2;
      };
      // Each square of 1 falls into four triangles by its diagonals: east, north, west, south of its middle.
      const filled = new Uint8Array(4 * side * side);
      for (let t = 0; t < filled.length; t++) {
        const cell = t >> 2;
        const x = least + (cell % side) + 0.5 + [1, 0, -1, 0][t & 3] / 3;
        const y = least + Math.floor(cell / side) + 0.5 + [0, 1, 0, -1][t & 3] / 3;
        if (solid.some((r) => inBox(r, x, y)) && !off.some((r) => inBox(r, x, y))) filled[t] = 1;
      }
      const want: number[] = [];
      for (let t = 0; t < filled.length; t++) {
        let count = 0;
        const todo = [t];
        while (todo.length > 0) {
          const u = todo.pop()!;
          if (filled[u] !== 1) continue;
          filled[u] = 2;
          count++;
          const cell = u >> 2;
          todo.push((cell << 2) | ((u + 1) & 3), (cell << 2) | ((u + 3) & 3));
          todo.push(((cell + [1, side, -1, -side][u & 3]) << 2) | ((u + 2) & 3));
        }
        if (count > 0) want.push(count / 4);
      }
      const cut = flat.difference(solid, off);
      const found = flat.split(cut);
      holes += cut.length - found.length;
      parts += found.length;
      const sorted = (list: number[]): number[] => list.sort((a, b) => a - b);
      expect(sorted(found.map((p) => Number(flat.area(p).toFixed(5))))).toEqual(sorted(want));
    }
    expect(holes).toBeGreaterThan(300);
    expect(parts).toBeGreaterThan(500);
  });
});
