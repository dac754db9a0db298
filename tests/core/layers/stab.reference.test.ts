import { describe, expect, it } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import {
  type Demand,
  fewestHeights,
  type HeightGrid,
  stabLeft,
  stabRight,
  within,
} from '../../../src/core/layers/stab.ts';
import { source } from '../../reference/sources.ts';

const free: HeightGrid = { step: 0, least: -1e9, most: 1e9 };
const demand = (z: number, half: number): Demand => ({ lo: z - half, hi: z + half, low: z, high: z });

describe(source('kleinberg-tardos'), () => {
  it.each([
    [
      'A',
      [
        [0, 2],
        [2, 2],
        [3, 2],
        [5, 2],
        [6, 2],
        [7, 2],
      ],
      2,
      1.5,
    ],
    [
      'B',
      [
        [0, 2],
        [1, 0.5],
        [3, 2],
        [4, 0.5],
        [6, 1],
      ],
      3,
      0.5,
    ],
    [
      'C',
      [
        [0, 2],
        [1, 2],
        [3, 2],
        [4, 2],
        [6, 2],
        [9, 2],
      ],
      2,
      2,
    ],
    [
      'D',
      [
        [0, 2],
        [3, 2],
        [4, 2],
        [5, 2],
        [8, 2],
        [9.5, 2],
        [11, 2],
      ],
      3,
      1.5,
    ],
  ] as [string, [number, number][], number, number][])(
    'instance %s: count and smallest worst defocus',
    (_, samples, count, worst) => {
      const found = fewestHeights(
        samples.map(([z, h]) => demand(z, h)),
        free,
      )!;
      expect(found.count).toBe(count);
      expect(found.worst).toBeCloseTo(worst, 9);
    },
  );

  it('instance E: a stage that moves in whole millimetres cannot reach 0.6 ± 0.3', () => {
    const coarse: HeightGrid = { ...free, step: 1 };
    const [lo, hi] = within(demand(0.6, 0.3), Infinity, coarse);
    expect(lo).toBeGreaterThan(hi);
    const fine = fewestHeights([demand(0.2, 0.3), demand(0.6, 0.3)], { ...free, step: 0.1 })!;
    expect(fine.count).toBe(1);
    expect(fine.worst).toBeCloseTo(0.2, 9);
  });

  it.each([
    [10, 2, 0.1, 3, 10 / 6],
    [11.5, 2, 0, 3, 11.5 / 6],
    [11.5, 2, 0.1, 4, 11.5 / 8],
  ])('instance F: a ramp of %d mm, half-depth %d less %d', (span, half, reserve, count, worst) => {
    const n = 2000;
    const samples = Array.from({ length: n + 1 }, (_, i) => demand((span * i) / n, half - reserve));
    const found = fewestHeights(samples, free)!;
    expect(found.count).toBe(count);
    expect(found.worst).toBeCloseTo(worst, 2);
    expect(found.worst).toBeLessThanOrEqual(worst + 1e-9);
  });
});

/** All plans on the grid, tried one by one. */
function bruteForce(
  demands: Demand[],
  step: number,
  least: number,
  most: number,
): { count: number; worst: number } | null {
  const heights: number[] = [];
  for (let k = Math.ceil(least / step); k * step <= most + 1e-12; k++) heights.push(k * step);
  for (let count = 1; count <= demands.length; count++) {
    let best = Infinity;
    const pick: number[] = [];
    const go = (from: number): void => {
      if (pick.length === count) {
        let worst = 0;
        for (const d of demands) {
          const errors = pick
            .filter((h) => h >= d.lo - 1e-12 && h <= d.hi + 1e-12)
            .map((h) => Math.max(d.high - h, h - d.low));
          worst = Math.max(worst, errors.length > 0 ? Math.min(...errors) : Infinity);
        }
        best = Math.min(best, worst);
        return;
      }
      for (let i = from; i < heights.length; i++) {
        pick.push(heights[i]);
        go(i + 1);
        pick.pop();
      }
    };
    go(0);
    if (best < Infinity) return { count, worst: best };
  }
  return null;
}

describe('against every plan there is', () => {
  it('60 random jobs on a grid of 0.25: same count and same worst defocus, seed 31', () => {
    const random = randomFrom(31);
    for (let k = 0; k < 60; k++) {
      const n = 3 + Math.floor(random() * 4);
      const demands = Array.from({ length: n }, () => {
        const z = 4 * random();
        const thick = 0.3 * random();
        const half = 0.4 + random();
        return { lo: z + thick - half, hi: z + half, low: z, high: z + thick };
      });
      const grid: HeightGrid = { step: 0.25, least: -1, most: 5 };
      if (demands.some((d) => within(d, Infinity, grid)[0] > within(d, Infinity, grid)[1])) continue;
      const slow = bruteForce(demands, 0.25, -1, 5)!;
      const quick = fewestHeights(demands, grid)!;
      expect(quick.count).toBe(slow.count);
      // Bisection ends a hair above the least bound that the grid allows.
      expect(Math.abs(quick.worst - slow.worst)).toBeLessThan(1e-9);
    }
  });

  it('left-most and right-most plans are as long, and bracket one another, seed 32', () => {
    const random = randomFrom(32);
    for (let k = 0; k < 200; k++) {
      const intervals = Array.from({ length: 1 + Math.floor(random() * 12) }, () => {
        const a = 10 * random();
        return [a, a + 2 * random()] as const;
      });
      const [left, right] = [stabLeft(intervals)!, stabRight(intervals)!];
      expect(left.length).toBe(right.length);
      left.forEach((h, i) => {
        expect(h).toBeLessThanOrEqual(right[i] + 1e-12);
      });
      for (const [lo, hi] of intervals) {
        expect(left.some((h) => h >= lo && h <= hi)).toBe(true);
        expect(right.some((h) => h >= lo && h <= hi)).toBe(true);
      }
    }
  });
});
