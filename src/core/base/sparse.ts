/**
 * Symmetric sparse systems that are solved many times with one matrix: Cholesky's factors row by row, each row's entries
 * found by the elimination tree (T. Davis, *Direct Methods for Sparse Linear Systems*, 2006, §4.1 to §4.7), unknowns in the
 * order of `nested-dissection.ts`.
 */
import { nestedDissection } from './nested-dissection.ts';
import { Fault } from './news.ts';

export interface SparseRows {
  /** Row i has its entries from start[i] to start[i + 1]; both (i, j) and (j, i) stand there. */
  start: Int32Array;
  column: Int32Array;
  value: Float64Array;
}

export interface Factored {
  /** Of the factor: what it costs. */
  entries: number;
  /** Solves A x = b. */
  solve(b: Float64Array): Float64Array;
}

/** @param rows  symmetric, positive definite. @throws Fault where it is not */
export function factor(rows: SparseRows): Factored {
  const order = nestedDissection(rows);
  const n = order.length;
  const lower = lowerHalf(rows, order);
  const parent = eliminationTree(lower, n);
  const start = columnStarts(lower, parent, n);
  // Columns of the factor, each with its diagonal first, rows ascending.
  const row = new Int32Array(start[n]);
  const value = new Float64Array(start[n]);
  const next = start.slice();
  const x = new Float64Array(n);
  const reach = new RowReach(n);
  for (let k = 0; k < n; k++) {
    const from = reach.find(lower, parent, k);
    for (let i = lower.start[k]; i < lower.start[k + 1]; i++) x[lower.column[i]] += lower.value[i];
    let pivot = x[k];
    x[k] = 0;
    for (let i = from; i < n; i++) {
      const j = reach.stack[i];
      const entry = x[j] / value[start[j]];
      x[j] = 0;
      const end = next[j];
      for (let p = start[j] + 1; p < end; p++) x[row[p]] -= value[p] * entry;
      pivot -= entry * entry;
      row[end] = k;
      value[end] = entry;
      next[j] = end + 1;
    }
    if (!(pivot > 0))
      throw new Fault(`the matrix is not positive definite: pivot ${pivot} in row ${k} of ${n}`);
    row[next[k]] = k;
    value[next[k]++] = Math.sqrt(pivot);
  }
  return {
    entries: start[n],
    solve(b) {
      const y = Float64Array.from(order, (v) => b[v]);
      for (let j = 0; j < n; j++) {
        const yj = (y[j] /= value[start[j]]);
        for (let p = start[j] + 1; p < start[j + 1]; p++) y[row[p]] -= value[p] * yj;
      }
      for (let j = n - 1; j >= 0; j--) {
        let sum = y[j];
        for (let p = start[j] + 1; p < start[j + 1]; p++) sum -= value[p] * y[row[p]];
        y[j] = sum / value[start[j]];
      }
      const out = new Float64Array(n);
      order.forEach((v, i) => {
        out[v] = y[i];
      });
      return out;
    },
  };
}

/** Rows of the matrix in the new order, columns up to the diagonal. */
function lowerHalf({ start, column, value }: SparseRows, order: Int32Array): SparseRows {
  const n = order.length;
  const placeOf = new Int32Array(n);
  order.forEach((v, i) => {
    placeOf[v] = i;
  });
  const out: SparseRows = {
    start: new Int32Array(n + 1),
    column: new Int32Array(column.length),
    value: new Float64Array(column.length),
  };
  let count = 0;
  for (let i = 0; i < n; i++) {
    for (let k = start[order[i]]; k < start[order[i] + 1]; k++) {
      const j = placeOf[column[k]];
      if (j > i) continue;
      out.column[count] = j;
      out.value[count++] = value[k];
    }
    out.start[i + 1] = count;
  }
  return out;
}

/** Parent of each column: the first row below the diagonal with an entry in the factor; -1 at a root (§4.1). */
function eliminationTree({ start, column }: SparseRows, n: number): Int32Array {
  const parent = new Int32Array(n).fill(-1);
  const ancestor = new Int32Array(n).fill(-1);
  for (let k = 0; k < n; k++)
    for (let i = start[k]; i < start[k + 1]; i++)
      for (let j = column[i]; j !== -1 && j < k; ) {
        const up = ancestor[j];
        ancestor[j] = k;
        if (up === -1) parent[j] = k;
        j = up;
      }
  return parent;
}

function columnStarts(lower: SparseRows, parent: Int32Array, n: number): Int32Array {
  const start = new Int32Array(n + 1);
  const reach = new RowReach(n);
  for (let k = 0; k < n; k++) {
    start[k + 1]++;
    for (let i = reach.find(lower, parent, k); i < n; i++) start[reach.stack[i] + 1]++;
  }
  for (let k = 0; k < n; k++) start[k + 1] += start[k];
  return start;
}

/** Columns in which a row of the factor has entries: what its own entries reach up the tree (§4.2). */
class RowReach {
  /** Those found, in an order in which each may be eliminated, from where `find` says to the end. */
  readonly stack: Int32Array;
  private readonly seen: Int32Array;
  private readonly path: Int32Array;

  constructor(n: number) {
    this.stack = new Int32Array(n);
    this.path = new Int32Array(n);
    this.seen = new Int32Array(n).fill(-1);
  }

  find({ start, column }: SparseRows, parent: Int32Array, k: number): number {
    const { stack, seen, path } = this;
    let top = stack.length;
    seen[k] = k;
    for (let i = start[k]; i < start[k + 1]; i++) {
      let count = 0;
      for (let j = column[i]; seen[j] !== k; j = parent[j]) {
        path[count++] = j;
        seen[j] = k;
      }
      while (count > 0) stack[--top] = path[--count];
    }
    return top;
  }
}
