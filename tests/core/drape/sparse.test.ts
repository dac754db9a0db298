import { describe, expect, it } from 'vitest';
import { Fault } from '../../../src/core/base/news.ts';
import { randomFrom } from '../../../src/core/base/random.ts';
import { factor, type SparseRows } from '../../../src/core/drape/sparse.ts';

/** A grid's Laplacian with random weights, in a random order of unknowns, and a little on the diagonal. */
function grid(n: number, random: () => number, extra: number): { rows: SparseRows; dense: number[][] } {
  const order = Array.from({ length: n * n }, (_, i) => i);
  for (let i = order.length - 1; i > 0; i--) {
    const j = Math.floor(random() * (i + 1));
    [order[i], order[j]] = [order[j], order[i]];
  }
  const dense = Array.from({ length: n * n }, () => new Array<number>(n * n).fill(0));
  const join = (a: number, b: number): void => {
    const w = 0.1 + random();
    dense[a][b] -= w;
    dense[b][a] -= w;
    dense[a][a] += w;
    dense[b][b] += w;
  };
  for (let i = 0; i < n; i++)
    for (let j = 0; j < n; j++) {
      if (i + 1 < n) join(order[i * n + j], order[(i + 1) * n + j]);
      if (j + 1 < n) join(order[i * n + j], order[i * n + j + 1]);
    }
  for (let i = 0; i < n * n; i++) dense[i][i] += extra;
  const start = [0];
  const column: number[] = [];
  const value: number[] = [];
  for (const row of dense) {
    row.forEach((x, j) => {
      if (x !== 0) {
        column.push(j);
        value.push(x);
      }
    });
    start.push(column.length);
  }
  return {
    rows: { start: Int32Array.from(start), column: Int32Array.from(column), value: Float64Array.from(value) },
    dense,
  };
}

describe('Cholesky within the envelope', () => {
  it('solves: the matrix times the answer is the right side, seeds 61 to 66', () => {
    for (let seed = 61; seed <= 66; seed++) {
      const random = randomFrom(seed);
      const { rows, dense } = grid(3 + (seed % 7), random, 0.01);
      const b = Float64Array.from({ length: dense.length }, () => random() - 0.5);
      const x = factor(rows).solve(b);
      dense.forEach((row, i) => {
        expect(row.reduce((sum, a, j) => sum + a * x[j], 0)).toBeCloseTo(b[i], 10);
      });
    }
  });

  it('a matrix that is not positive definite is a fault', () => {
    const { rows } = grid(4, randomFrom(67), -1);
    expect(() => factor(rows)).toThrow(Fault);
  });
});
