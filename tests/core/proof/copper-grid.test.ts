import { describe, expect, it } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import { bisect } from '../../../src/core/proof/bisect.ts';
import { copperGrid, distanceToCopper, squaredDistance } from '../../../src/core/proof/copper-grid.ts';
import { areaOf } from '../../../src/core/proof/samples.ts';
import { copperOf } from '../helpers/proof-scene.ts';

describe('distance to a triangle', () => {
  it('is the least over a fine grid of its own points (seed 3)', () => {
    const random = randomFrom(3);
    for (let i = 0; i < 200; i++) {
      const t = Array.from({ length: 9 }, () => 4 * random() - 2);
      const [x, y, z] = [6 * random() - 3, 6 * random() - 3, 6 * random() - 3];
      let best = Infinity;
      const n = 150;
      for (let a = 0; a <= n; a++)
        for (let b = 0; a + b <= n; b++) {
          const at = [0, 1, 2].map((c) => t[c] + ((t[3 + c] - t[c]) * a + (t[6 + c] - t[c]) * b) / n);
          best = Math.min(best, Math.hypot(at[0] - x, at[1] - y, at[2] - z));
        }
      const mine = Math.sqrt(squaredDistance(t, 0, x, y, z));
      expect(mine).toBeLessThanOrEqual(best + 1e-12);
      expect(mine).toBeGreaterThan(best - 0.04); // half the diagonal of a grid cell of edges up to 7 mm / 150
    }
  });
});

describe('halving a triangle', () => {
  it('keeps its area and leaves no edge longer than asked (seed 8)', () => {
    const random = randomFrom(8);
    for (let i = 0; i < 50; i++) {
      const t = Array.from({ length: 9 }, () => 2 * random() * (i % 5 === 0 ? 0.02 : 1));
      let [sum, longest] = [0, 0];
      bisect(t, 0.1, (p, o) => {
        sum += areaOf(p, o);
        for (const [j, k] of [
          [0, 3],
          [3, 6],
          [6, 0],
        ])
          longest = Math.max(
            longest,
            Math.hypot(p[o + j] - p[o + k], p[o + j + 1] - p[o + k + 1], p[o + j + 2] - p[o + k + 2]),
          );
      });
      expect(Math.abs(sum / areaOf(t, 0) - 1)).toBeLessThan(1e-9);
      expect(longest).toBeLessThanOrEqual(0.1);
    }
  });
});

describe('distance to drawn copper', () => {
  const grid = copperGrid(
    copperOf([
      { id: 'a', net: 'A', from: [-3.3, 1], to: [2.7, 1.6] },
      { id: 'b', net: 'B', from: [2.9, -2], to: [3.5, 4] },
    ]),
  );
  const up: Vec3 = [0, 0, 1];

  it('is exact: to an edge, to a corner, and nothing inside (seed 21)', () => {
    const random = randomFrom(21);
    const box = (x: number, y: number, z: number, b: number[]) =>
      Math.hypot(Math.max(b[0] - x, 0, x - b[2]), Math.max(b[1] - y, 0, y - b[3]), z);
    let near = 0;
    for (let i = 0; i < 3000; i++) {
      const [x, y, z] = [9 * random() - 4.5, 8 * random() - 3, 0.1 * random() - 0.05];
      const wanted = Math.min(box(x, y, z, [-3.3, 1, 2.7, 1.6]), box(x, y, z, [2.9, -2, 3.5, 4]));
      const found = distanceToCopper(grid, x, y, z, up, 0.3);
      if (wanted > 0.3) expect(found).toBe(Infinity);
      else {
        near++;
        expect(Math.abs(found - wanted)).toBeLessThan(1e-9);
      }
    }
    expect(near).toBeGreaterThan(300);
  });

  it('looks at one element when asked to', () => {
    expect(distanceToCopper(grid, 2.8, 1.2, 0, up, 0.3, 1)).toBeCloseTo(0.1, 12);
    expect(distanceToCopper(grid, 2.6, 1.2, 0, up, 0.2, 1)).toBe(Infinity);
  });

  it('does not see copper through a wall', () => {
    expect(distanceToCopper(grid, 0, 1.2, -0.01, [0, 0, -1], 0.3)).toBe(Infinity);
  });
});
