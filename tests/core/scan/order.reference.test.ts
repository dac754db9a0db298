import { describe, expect, it } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import { orderStrokes } from '../../../src/core/scan/order.ts';
import { source } from '../../reference/sources.ts';

/** Nearest neighbour by looking at every end each time. */
function slowOrder(ends: Float64Array): { index: number; reversed: boolean }[] {
  const n = ends.length / 4;
  const left = new Set(Array.from({ length: n }, (_, i) => i));
  const out: { index: number; reversed: boolean }[] = [];
  let [x, y] = [0, 0];
  while (left.size > 0) {
    let best = { index: -1, reversed: false, d: Infinity };
    for (const i of left)
      for (const k of [0, 1]) {
        const d = (ends[4 * i + 2 * k] - x) ** 2 + (ends[4 * i + 2 * k + 1] - y) ** 2;
        if (d < best.d) best = { index: i, reversed: k === 1, d };
      }
    left.delete(best.index);
    out.push({ index: best.index, reversed: best.reversed });
    const k = best.reversed ? 0 : 1;
    [x, y] = [ends[4 * best.index + 2 * k], ends[4 * best.index + 2 * k + 1]];
  }
  return out;
}

describe('order of strokes', () => {
  it('is the nearest neighbour that looking everywhere finds, seed 51', () => {
    const random = randomFrom(51);
    for (let k = 0; k < 40; k++) {
      const ends = Float64Array.from(
        { length: 4 * (1 + Math.floor(60 * random())) },
        (_, i) => (i % 2 ? 3 : 20) * random() - 1,
      );
      expect(orderStrokes(ends, [0, 0])).toEqual(slowOrder(ends));
    }
  });

  it('takes every stroke once, and a closed one as it is', () => {
    const ends = Float64Array.of(5, 5, 5, 5, 1, 1, 9, 9, 2, 2, 2, 2);
    const order = orderStrokes(ends, [0, 0]);
    expect(order.map((o) => o.index).sort()).toEqual([0, 1, 2]);
    expect(order.find((o) => o.index === 0)!.reversed).toBe(false);
  });

  it('parallel lines are written to and fro', () => {
    const ends = Float64Array.from([0, 1, 2, 3].flatMap((i) => [0, 0.03 * i, 10, 0.03 * i]));
    expect(orderStrokes(ends, [0, 0])).toEqual(
      [0, 1, 2, 3].map((index) => ({ index, reversed: index % 2 === 1 })),
    );
  });
});

describe(source('johnson-mcgeoch'), () => {
  it('a tour of 1000 random points is 0.915 √(NA) long, within 3 s.d. of the mean of six, seed 52', () => {
    const random = randomFrom(52);
    let sum = 0;
    for (let k = 0; k < 6; k++) {
      const n = 1000;
      const p = Float64Array.from({ length: 2 * n }, () => random());
      const ends = new Float64Array(4 * n);
      for (let i = 0; i < n; i++) ends.set([p[2 * i], p[2 * i + 1], p[2 * i], p[2 * i + 1]], 4 * i);
      const tour = orderStrokes(ends, [p[0], p[1]]).map((o) => o.index);
      let length = 0;
      tour.forEach((a, i) => {
        const b = tour[(i + 1) % n];
        length += Math.hypot(p[2 * a] - p[2 * b], p[2 * a + 1] - p[2 * b + 1]);
      });
      sum += length / Math.sqrt(n);
    }
    // Own simulation in the check values: mean 0.9152, s.d. of one run 0.018.
    expect(Math.abs(sum / 6 - 0.9152)).toBeLessThan((3 * 0.018) / Math.sqrt(6));
  });
});
