import { describe, expect, it } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import { quiet } from '../../../src/core/base/run-context.ts';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import { netSheet } from '../../../src/core/copper/net-sheet.ts';
import { netReports } from '../../../src/core/copper/nets.ts';
import { sheetPieces } from '../../../src/core/copper/sheet-pieces.ts';
import { NEAR } from '../../../src/core/copper/sheet-solve.ts';
import { unionArea } from '../../../src/core/copper/union-area.ts';
import type { CopperElement } from '../../../src/core/drape/copper.ts';
import { drapeCircuit } from '../../../src/core/drape/drape.ts';
import { triangleArea } from '../../../src/core/drape/level-lines.ts';
import type { Project } from '../../../src/core/project/schema.ts';
import { partFrom, plate, tube } from '../helpers/surfaces.ts';
import { element, netOf, pad, patch, rect, region, resistance, ring, squares } from './patches.ts';

/** Bars and discs that hang together, with a pad at either end: a random walk from square to square. */
function walk(random: () => number): { from: number[][]; to: number[][]; copper: number[][][] } {
  const copper: number[][][] = [];
  let [x, y] = [0, 0];
  for (let i = 0; i < 7; i++) {
    const across = random() < 0.5;
    const l = 1 + 2 * random();
    const w = 0.3 + 0.5 * random();
    const [n, m] = [1 + Math.floor(6 * random()), 1 + Math.floor(3 * random())];
    if (across) {
      copper.push(rect(x - w / 2, y - w / 2, l + w, w, n, m));
      x += l;
    } else {
      const up = random() < 0.6;
      copper.push(rect(x - w / 2, (up ? y : y - l) - w / 2, w, l + w, m, n));
      y += up ? l : -l;
    }
    if (random() < 0.3) copper.push(ring(x + 0.1, y, 0, 0.5 + 0.4 * random(), 12));
  }
  return { from: rect(-0.11, -0.13, 0.22, 0.24), to: ring(x, y, 0, 0.17, 16), copper };
}

/** Two values that are each off by no more than they say. */
function expectSame(a: ReturnType<typeof netOf>, b: ReturnType<typeof netOf>): void {
  const [p, q] = [a.resistance_mohm[0], b.resistance_mohm[0]];
  expect(Math.abs(p.value - q.value)).toBeLessThanOrEqual((p.within + q.within) * 1.0001);
  expect(p.within).toBeLessThanOrEqual(NEAR * p.value);
}

describe('a sheet of copper', () => {
  it('has the area of the union, each place once: seeds 1 to 30', () => {
    for (let seed = 1; seed <= 30; seed++) {
      const { from, to, copper } = walk(randomFrom(seed));
      const elements = [pad(from), ...copper.map(region), pad(to)];
      const sheet = netSheet(elements);
      const patchOf = { positions: sheet.positions, triangles: sheet.triangles };
      let area = 0;
      for (let t = 0; t < sheet.pad.length; t++) area += triangleArea(patchOf, t);
      expect(Math.abs(area - unionArea(elements.map((e) => e.copper)))).toBeLessThan(1e-3);
      expect(sheetPieces(sheet).pieces.length).toBe(1);
    }
  });

  it('is the same from either pad, in any order, in one patch or many: seeds 1 to 6', () => {
    for (let seed = 1; seed <= 6; seed++) {
      const { from, to, copper } = walk(randomFrom(seed));
      const first = netOf(pad(from), ...copper.map(region), pad(to));
      expectSame(first, netOf(pad(to), ...copper.map(region), pad(from)));
      expectSame(first, netOf(...copper.map(region).reverse(), pad(from), pad(to)));
      // Every rectangle and disc cut in two where its triangles alternate.
      const halves = copper.flatMap((c) => [
        c.filter((_, i) => i % 2 === 0),
        c.filter((_, i) => i % 2 === 1),
      ]);
      expectSame(first, netOf(pad(from), ...halves.filter((h) => h.length > 0).map(region), pad(to)));
    }
  });

  it('one shape in several faces, each with its own patches, is the shape in one: an L over three faces', () => {
    const cells = (face: number, ...at: Parameters<typeof rect>) =>
      element('region', patch(rect(...at), face));
    const whole = [region(rect(0, 0, 4, 0.5)), region(rect(0, 0, 0.5, 3))];
    const parts = [
      cells(1, 0, 0, 0.5, 0.5, 3, 2),
      cells(2, 0.5, 0, 3.5, 0.5, 5, 3),
      cells(3, 0, 0.5, 0.5, 2.5, 1, 7),
    ];
    const ends = (a: number, b: number) => [
      element('pad', patch(rect(4, 0, 1, 0.5, 1, 2), a)),
      element('pad', patch(rect(0, 3, 0.5, 1, 3, 1), b)),
    ];
    expectSame(netOf(...ends(7, 7), ...whole), netOf(...ends(4, 5), ...parts));
    // A strip that ends within the side of a plate in another face, both ways round.
    const plateAndStrip = (p: number, q: number) => [
      element('pad', patch(rect(-1, 0, 1, 2), p)),
      element('pad', patch(rect(5, 0.7, 1, 0.4), q)),
      cells(p, 0, 0, 2, 2, 2, 3),
      cells(q, 2, 0.7, 3, 0.4, 4, 1),
    ];
    const [one, two] = [netOf(...plateAndStrip(7, 7)), netOf(...plateAndStrip(1, 2))];
    expect(two.pieces).toBe(1);
    expectSame(one, two);
  });

  it('in series resistances add up, side by side conductances do', () => {
    const ends = [pad(rect(-1, 0, 1, 2)), pad(rect(7, 0, 1, 2))];
    const one = region(rect(0, 0, 7, 0.5));
    const two = region(rect(0, 0.9, 7, 0.8, 4, 2));
    const [r1, r2, both] = [[one], [two], [one, two]].map((e) => resistance(...ends, ...e));
    expect(r1).toBeCloseTo(14, 8);
    expect(r2).toBeCloseTo(8.75, 8);
    expect(1 / both).toBeCloseTo(1 / 14 + 1 / 8.75, 9);
    // A pad between them is one potential: no spreading at the step.
    const steps = [region(rect(0, 0, 3, 0.5)), region(rect(3.5, 0, 3.5, 2))];
    const middle = pad(rect(3, 0, 0.5, 2));
    const net = netOf(...ends, middle, ...steps);
    expect(net.resistance_mohm.map((r) => r.value)).toEqual([
      expect.closeTo(6 + 1.75, 8),
      expect.closeTo(6, 8),
    ]);
  });

  it('more copper never has more resistance, beyond what the values say they are off: seeds 1 to 5', () => {
    for (let seed = 1; seed <= 5; seed++) {
      const random = randomFrom(seed);
      const { from, to, copper } = walk(random);
      const less = netOf(pad(from), ...copper.map(region), pad(to)).resistance_mohm[0];
      const more = netOf(
        pad(from),
        ...copper.map(region),
        region(ring(2 * random(), random(), 0, 0.9, 20)),
        pad(to),
      ).resistance_mohm[0];
      expect(more.value - more.within).toBeLessThanOrEqual(less.value + less.within);
    }
  });

  it('collinear strips that overlap count once; what touches by a micrometre, or at an edge, conducts', () => {
    const ends = [pad(rect(-1, 0, 1, 0.4)), pad(rect(8, 0, 1, 0.4))];
    const strip = (a: number, b: number) => region(rect(a, 0, b - a, 0.4, 7, 2));
    for (const [a, b] of [
      [3, 5],
      [4.001, 4],
      [4, 4],
      [3.999, 4],
      [4, 3.9995],
    ])
      expect(resistance(...ends, strip(0, b), strip(a, 8))).toBeCloseTo(20, 1);
    // Apart, or meeting in a corner alone: two pieces, and no resistance between them.
    const apart = netOf(...ends, strip(0, 4), strip(4.2, 8));
    expect([apart.pieces, apart.resistance_mohm]).toEqual([2, []]);
    const corner = netOf(...ends, strip(0, 4), region(rect(4, 0.4, 2, 1)), strip(6, 8));
    expect([corner.pieces, corner.resistance_mohm]).toEqual([3, []]);
  });

  it('pads that touch or overlap are one; a region under a pad adds nothing', () => {
    const a = pad(rect(-1, 0, 1, 1));
    const net = netOf(
      a,
      pad(rect(-1.5, 0.2, 0.9, 0.5)),
      pad(rect(-2.5, 0.2, 1, 0.5)),
      region(rect(-1, 0, 1, 1)),
    );
    expect(net.pieces).toBe(1);
    expect(net.resistance_mohm.map((r) => r.value)).toEqual([0, 0]);
  });

  it('no equipotential line is shorter than the narrowest copper, nor longer than a cut across a strip on the way: seeds 1 to 12', () => {
    for (let seed = 1; seed <= 12; seed++) {
      const random = randomFrom(seed);
      const necks = Array.from({ length: 4 }, () => 0.2 + 0.6 * random());
      const copper = necks.flatMap((w, i) => [
        rect(3 * i, 0, 2, 1.5, 2, 2),
        rect(3 * i + 2, random() * 0.7, 1, w),
      ]);
      const still = pad(ring(4, 0.7, 0, 0.2, 9));
      const { current_A } = netOf(
        pad(rect(-1, 0, 1, 1.5)),
        pad(rect(12, 0, 1, 1.5)),
        still,
        ...copper.map(region),
      );
      const width =
        (current_A /
          netOf(pad(rect(-1, 0, 1, 1)), pad(rect(1, 0, 1, 1)), region(rect(0, 0, 1, 1))).current_A) **
        (1 / 0.725);
      const least = Math.min(...necks);
      expect(width).toBeGreaterThan(least * 0.9999);
      expect(width).toBeLessThan(least * 1.01);
    }
  });
});

/** Grid of resistors of one square each: the slow, obvious way. Cells of size h; null where there is no copper. */
function gridResistance(
  n: number,
  m: number,
  kind: (i: number, j: number) => 'a' | 'b' | 'copper' | null,
): number {
  const at = (i: number, j: number): number => j * n + i;
  const what = Array.from({ length: n * m }, (_, k) => kind(k % n, Math.floor(k / n)));
  const u = Float64Array.from(what, (w) => (w === 'b' ? 1 : w === 'copper' ? 0.5 : 0));
  const relax = 2 / (1 + Math.sin(Math.PI / Math.max(n, m)));
  const near = (k: number): number[] => {
    const [i, j] = [k % n, Math.floor(k / n)];
    return [
      ...(i > 0 ? [at(i - 1, j)] : []),
      ...(i + 1 < n ? [at(i + 1, j)] : []),
      ...(j > 0 ? [at(i, j - 1)] : []),
      ...(j + 1 < m ? [at(i, j + 1)] : []),
    ].filter((l) => what[l] !== null);
  };
  const lists = what.map((w, k) => (w === null ? [] : near(k)));
  for (let round = 0; round < 40 * Math.max(n, m); round++)
    for (let k = 0; k < u.length; k++) {
      if (what[k] !== 'copper') continue;
      let sum = 0;
      for (const l of lists[k]) sum += u[l];
      u[k] += relax * (sum / lists[k].length - u[k]);
    }
  let current = 0;
  what.forEach((w, k) => {
    if (w === 'b') for (const l of lists[k]) current += 1 - u[l];
  });
  return 1 / current;
}

describe('against a fine grid of resistors', () => {
  /** Cells by their middles; two grids and what their difference says of the limit. */
  const limit = (
    w: number,
    h: number,
    kind: (x: number, y: number) => 'a' | 'b' | 'copper' | null,
  ): number => {
    const [coarse, fine] = [10, 20].map((k) =>
      gridResistance(w * k, h * k, (i, j) => kind((i + 0.5) / k, (j + 0.5) / k)),
    );
    // Inner right angles: the error falls as h to the power 4/3 there.
    return fine + (fine - coarse) / (2 ** (4 / 3) - 1);
  };

  it('a T with a pad at the foot and one at an arm, and a plate with a slot', () => {
    const tee = limit(7, 4, (x, y) => {
      if (y < 1) return x < 1 ? 'a' : 'copper';
      if (x < 3 || x > 4) return null;
      return y > 3 ? 'b' : 'copper';
    });
    // Middles of cells hold the potential: half a cell beyond the pad's edge is not copper.
    const r = resistance(
      pad(rect(0, 0, 1, 1)),
      pad(rect(3, 3, 1, 1)),
      region(rect(0.5, 0, 6.5, 1, 4, 2)),
      region(rect(3, 0.5, 1, 3)),
    );
    expect(Math.abs(r / tee - 1)).toBeLessThan(0.01);
    const slot = limit(6, 4, (x, y) => {
      if (x < 1) return 'a';
      if (x > 5) return 'b';
      return x > 2 && x < 3 && y > 1 ? null : 'copper';
    });
    const s = resistance(
      pad(rect(0, 0, 1, 4)),
      pad(rect(5, 0, 1, 4)),
      region(rect(1, 0, 1, 4)),
      region(rect(2, 0, 1, 1)),
      region(rect(3, 0, 2, 4)),
    );
    expect(Math.abs(s / slot - 1)).toBeLessThan(0.01);
  });
});

describe('on a part', () => {
  const copper = squares;
  const trace = (at: (s: number, z: number) => Vec3) => ({
    circuit: {
      drapes: [],
      elements: [
        { id: 'a', kind: 'pad', net: 'N', at: at(-5, 10), shape: { circle: 1.2 }, turn: 0 },
        { id: 'b', kind: 'pad', net: 'N', at: at(4, 16), shape: { circle: 1 }, turn: 0 },
        {
          id: 't',
          kind: 'trace',
          net: 'N',
          width: 0.4,
          route: [at(-5, 10), at(1, 9), at(2, 14), at(4, 16)].map((p) => ({ at: p })),
        },
        {
          id: 'u',
          kind: 'trace',
          net: 'N',
          width: 0.3,
          route: [at(1, 9), at(4, 16)].map((p) => ({ at: p })),
        },
      ],
    },
    copper,
  });

  it('a net rolled onto a cylinder is the net in the plane; its length is that of its lines', () => {
    const r = 8;
    const sides = 360;
    const parts: [Project, ReturnType<typeof partFrom>][] = [
      [trace((s, z) => [s, z - 12, 0]) as unknown as Project, partFrom(plate(30, 24, 7, 5))],
      [
        trace((s, z) => [r * Math.cos(s / r), r * Math.sin(s / r), z]) as unknown as Project,
        partFrom(tube(r, 24, sides, 3)),
      ],
    ];
    const [flat, rolled] = parts.map(([p, part]) => {
      const elements: CopperElement[] = drapeCircuit(p, 'x', part, quiet).copper.elements;
      return netReports(p, { elements })[0];
    });
    expect(Math.abs(rolled.resistance_mohm[0].value / flat.resistance_mohm[0].value - 1)).toBeLessThan(0.004);
    expect(rolled.pieces).toBe(1);
    expect(Math.abs(rolled.length / flat.length - 1)).toBeLessThan(1e-3);
    const line = Math.hypot(6, 1) + Math.hypot(1, 5) + Math.hypot(2, 2) + Math.hypot(3, 7);
    expect(flat.length).toBeCloseTo(line, 3);
  });
});
