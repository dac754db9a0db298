import { describe, expect, it } from 'vitest';
import { nestedDissection } from '../../../src/core/base/nested-dissection.ts';
import { Fault } from '../../../src/core/base/news.ts';
import { randomFrom } from '../../../src/core/base/random.ts';
import { factor, type SparseRows } from '../../../src/core/base/sparse.ts';

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

describe('Cholesky by rows', () => {
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

  it('solves where several pieces hang on nothing, and one unknown stands alone', () => {
    const { rows } = grid(9, randomFrom(68), 0.5);
    const n = rows.start.length - 1;
    // Twice the grid and a lone unknown between the two.
    const both: SparseRows = {
      start: Int32Array.from([
        ...rows.start,
        rows.start[n] + 1,
        ...rows.start.subarray(1).map((s) => s + rows.start[n] + 1),
      ]),
      column: Int32Array.from([...rows.column, n, ...rows.column.map((c) => c + n + 1)]),
      value: Float64Array.from([...rows.value, 4, ...rows.value]),
    };
    const b = Float64Array.from({ length: n }, (_, i) => Math.sin(i));
    const x = factor(both).solve(Float64Array.from([...b, 2, ...b]));
    const alone = factor(rows).solve(b);
    expect(x[n]).toBe(0.5);
    alone.forEach((a, i) => {
      expect(x[i]).toBeCloseTo(a, 10);
      expect(x[n + 1 + i]).toBeCloseTo(a, 10);
    });
  });

  it('the order holds every unknown once, and entries grow as n log n on grids (George 1973), seed 69', () => {
    const cost = [12, 24, 48].map((n) => {
      const { rows } = grid(n, randomFrom(69), 0.1);
      expect([...nestedDissection(rows)].sort((a, b) => a - b)).toEqual(
        Array.from({ length: n * n }, (_, i) => i),
      );
      return factor(rows).entries;
    });
    // 31/4 n² log₂ n at the most; in an envelope they would grow as n³.
    for (const [i, n] of [12, 24, 48].entries())
      expect(cost[i]).toBeLessThan((31 / 4) * n * n * Math.log2(n));
    expect(cost[2] / cost[1]).toBeLessThan(6);
  });

  it('a hub that joins everything, as the pole of a fan does, is one part in the order like any other', () => {
    const n = 200;
    const start = [0];
    const column: number[] = [];
    for (let i = 0; i < n; i++) {
      column.push(i, ...(i === 7 ? [...Array(n).keys()].filter((j) => j !== 7) : [7]));
      start.push(column.length);
    }
    // Each row has its diagonal first.
    const value = Float64Array.from(column, (_, k) => (start.includes(k) ? n : -1));
    const rows = { start: Int32Array.from(start), column: Int32Array.from(column), value };
    const factors = factor(rows);
    expect(factors.entries).toBe(2 * n - 1);
    const x = factors.solve(new Float64Array(n).fill(1));
    // n x₀ - x₇ = 1 for all but the hub: n x₇ - (n - 1) x₀ = 1.
    expect(n * x[0] - x[7]).toBeCloseTo(1, 12);
    expect(n * x[7] - (n - 1) * x[0]).toBeCloseTo(1, 12);
  });

  it('a matrix that is not positive definite is a fault', () => {
    const { rows } = grid(4, randomFrom(67), -1);
    expect(() => factor(rows)).toThrow(Fault);
  });
});
