import { describe, expect, it } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import { bestHeights, countRuns, fewestRuns, type Intervals } from '../../../src/core/layers/runs.ts';

/** Every assignment of samples to heights, tried one by one. */
function slowRuns(chain: Intervals, heights: readonly number[]): number {
  let best = Infinity;
  const go = (i: number, last: number, runs: number): void => {
    if (runs >= best) return;
    if (i === chain.length) {
      best = runs;
      return;
    }
    heights.forEach((h, k) => {
      if (h >= chain[i][0] && h <= chain[i][1]) go(i + 1, k, runs + (k === last ? 0 : 1));
    });
  };
  go(0, -1, 0);
  return best;
}

const randomChain = (random: () => number, n: number): Intervals => {
  let z = 4 * random();
  return Array.from({ length: n }, () => {
    z += random() - 0.5;
    return [z - 1, z + 1] as const;
  });
};

describe('fewest runs', () => {
  it('as few as the best of all assignments, seed 41', () => {
    const random = randomFrom(41);
    for (let k = 0; k < 150; k++) {
      const chain = randomChain(random, 9);
      const heights = [-1, 0.5, 2, 3.5, 5];
      const slow = slowRuns(chain, heights);
      expect(fewestRuns(chain, heights)?.length ?? Infinity).toBe(slow);
    }
  });

  it('a sample that no height meets is told', () => {
    expect(
      fewestRuns(
        [
          [0, 1],
          [5, 6],
        ],
        [0.5],
      ),
    ).toBeNull();
    expect(countRuns([[[5, 6]]], [0.5])).toBe(Infinity);
  });

  it('the heights chosen cut no more often than any pair on a fine grid, seed 42', () => {
    const random = randomFrom(42);
    for (let k = 0; k < 15; k++) {
      const chains = [randomChain(random, 8), randomChain(random, 6)];
      const ranges = [
        [0, 1.5],
        [2, 3.5],
      ] as const;
      let least = Infinity;
      for (let a = 0; a <= 1.5; a += 0.05)
        for (let b = 2; b <= 3.5; b += 0.05) least = Math.min(least, countRuns(chains, [a, b]));
      const found = bestHeights(chains, ranges, (h) => h);
      expect(found.exact).toBe(true);
      expect(found.runs).toBeLessThanOrEqual(least);
    }
  });
});
