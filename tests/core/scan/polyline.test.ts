import { describe, expect, it } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import { cutLine, thin } from '../../../src/core/scan/polyline.ts';

const line = (points: number[][], closed = false) => ({ points: Float64Array.from(points.flat()), closed });

describe('cutting a line', () => {
  const l = line([
    [0, 0, 0],
    [1, 0, 0],
    [2, 0, 0],
    [3, 0, 0],
  ]);
  const x = Float64Array.of(0, 1, 2, 3);
  it('keeps what lies between the limits, cut inside its pieces', () => {
    expect(cutLine(l, [{ values: x, least: 0.25, most: 2.5 }]).map((c) => [...c.points])).toEqual([
      [0.25, 0, 0, 1, 0, 0, 2, 0, 0, 2.5, 0, 0],
    ]);
  });
  it('two limits may leave two parts', () => {
    const hump = Float64Array.of(0, 2, 2, 0);
    expect(cutLine(l, [{ values: hump, least: -Infinity, most: 1 }]).map((c) => [...c.points])).toEqual([
      [0, 0, 0, 0.5, 0, 0],
      [2.5, 0, 0, 3, 0, 0],
    ]);
  });
  it('a closed line that is cut opens at the cut, not at its start', () => {
    const square = line(
      [
        [0, 0, 0],
        [1, 0, 0],
        [1, 1, 0],
        [0, 1, 0],
        [0, 0, 0],
      ],
      true,
    );
    const [part, ...rest] = cutLine(square, [
      { values: Float64Array.of(0, 1, 1, 0, 0), least: -Infinity, most: 0.5 },
    ]);
    expect(rest).toEqual([]);
    expect([...part.points]).toEqual([0.5, 1, 0, 0, 1, 0, 0, 0, 0, 0.5, 0, 0]);
    expect(part.closed).toBe(false);
  });
  it('untouched it stays itself; outside nothing is left', () => {
    expect(cutLine(l, [{ values: x, least: -1, most: 4 }])[0]).toBe(l);
    expect(cutLine(l, [{ values: x, least: 5, most: 6 }])).toEqual([]);
  });
});

describe('thinning', () => {
  it('leaves no point farther off than the tolerance, and keeps both ends, seed 61', () => {
    const random = randomFrom(61);
    for (let k = 0; k < 30; k++) {
      const p = Float64Array.from({ length: 90 }, (_, i) => (i % 3 === 0 ? i / 30 : 0.05 * random()));
      const keep = thin(p, 3, 0.02);
      expect(keep[0]).toBe(0);
      expect(keep[keep.length - 1]).toBe(29);
      for (let j = 0; j + 1 < keep.length; j++)
        for (let i = keep[j]; i <= keep[j + 1]; i++) {
          const [a, b, q] = [keep[j], keep[j + 1], i].map((n) => [p[3 * n], p[3 * n + 1], p[3 * n + 2]]);
          const e = b.map((v, m) => v - a[m]);
          const t = Math.min(
            1,
            Math.max(0, e.reduce((s, v, m) => s + v * (q[m] - a[m]), 0) / e.reduce((s, v) => s + v * v, 0)),
          );
          expect(Math.hypot(...q.map((v, m) => v - a[m] - t * e[m]))).toBeLessThanOrEqual(0.02);
        }
    }
  });
});
