/**
 * Symmetric sparse systems that are solved many times with one matrix: Cholesky's factors within the envelope (A. George and
 * J. Liu, *Computer Solution of Large Sparse Positive Definite Systems*, 1981, ch. 4), unknowns in the reverse order of
 * E. Cuthill and J. McKee (1969), which keeps neighbours near each other.
 */
import { Fault } from '../base/news.ts';

export interface SparseRows {
  /** Row i has its entries from start[i] to start[i + 1]. */
  start: Int32Array;
  column: Int32Array;
  value: Float64Array;
}

export interface Factored {
  /** Solves A x = b. */
  solve(b: Float64Array): Float64Array;
}

/** @param rows  symmetric, positive definite. @throws Fault where it is not */
export function factor(rows: SparseRows): Factored {
  const order = reverseCuthillMcKee(rows);
  const n = order.length;
  const placeOf = new Int32Array(n);
  order.forEach((v, i) => {
    placeOf[v] = i;
  });
  // Row i of the factor holds columns first[i] … i, from at[i] on.
  const first = new Int32Array(n);
  const at = new Float64Array(n + 1);
  for (let i = 0; i < n; i++) {
    const v = order[i];
    let least = i;
    for (let k = rows.start[v]; k < rows.start[v + 1]; k++) least = Math.min(least, placeOf[rows.column[k]]);
    first[i] = least;
    at[i + 1] = at[i] + (i - least + 1);
  }
  const l = new Float64Array(at[n]);
  for (let i = 0; i < n; i++) {
    const v = order[i];
    for (let k = rows.start[v]; k < rows.start[v + 1]; k++) {
      const j = placeOf[rows.column[k]];
      if (j <= i) l[at[i] + j - first[i]] += rows.value[k];
    }
  }
  for (let i = 0; i < n; i++) {
    const [oi, fi] = [at[i], first[i]];
    for (let j = fi; j < i; j++) {
      const [oj, fj] = [at[j], first[j]];
      let sum = l[oi + j - fi];
      for (let k = Math.max(fi, fj); k < j; k++) sum -= l[oi + k - fi] * l[oj + k - fj];
      l[oi + j - fi] = sum / l[oj + j - fj];
    }
    let pivot = l[oi + i - fi];
    for (let k = fi; k < i; k++) pivot -= l[oi + k - fi] ** 2;
    if (!(pivot > 0))
      throw new Fault(`the matrix is not positive definite: pivot ${pivot} in row ${i} of ${n}`);
    l[oi + i - fi] = Math.sqrt(pivot);
  }
  return {
    solve(b) {
      const y = Float64Array.from(order, (v) => b[v]);
      for (let i = 0; i < n; i++) {
        const [oi, fi] = [at[i], first[i]];
        let sum = y[i];
        for (let k = fi; k < i; k++) sum -= l[oi + k - fi] * y[k];
        y[i] = sum / l[oi + i - fi];
      }
      for (let i = n - 1; i >= 0; i--) {
        const [oi, fi] = [at[i], first[i]];
        const x = (y[i] /= l[oi + i - fi]);
        for (let k = fi; k < i; k++) y[k] -= l[oi + k - fi] * x;
      }
      const out = new Float64Array(n);
      order.forEach((v, i) => {
        out[v] = y[i];
      });
      return out;
    },
  };
}

function reverseCuthillMcKee({ start, column }: SparseRows): Int32Array {
  const n = start.length - 1;
  const degree = (v: number): number => start[v + 1] - start[v];
  const order: number[] = [];
  const seen = new Uint8Array(n);
  const spread = (from: number, into: number[], mark: Uint8Array): void => {
    mark[from] = 1;
    const first = into.length;
    into.push(from);
    for (let i = first; i < into.length; i++) {
      const v = into[i];
      const next: number[] = [];
      for (let k = start[v]; k < start[v + 1]; k++) {
        const w = column[k];
        if (mark[w]) continue;
        mark[w] = 1;
        next.push(w);
      }
      next.sort((a, b) => degree(a) - degree(b) || a - b);
      into.push(...next);
    }
  };
  for (let v = 0; v < n; v++) {
    if (seen[v]) continue;
    // From the far end of the piece: a level structure that is long and thin.
    const trial: number[] = [];
    spread(v, trial, seen.slice());
    spread(trial[trial.length - 1], order, seen);
  }
  return Int32Array.from(order.reverse());
}
