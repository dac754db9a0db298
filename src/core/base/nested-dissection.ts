/**
 * Order in which unknowns of a sparse symmetric system are eliminated so that few new entries arise: nested dissection
 * (A. George, "Nested dissection of a regular finite element mesh", SIAM J. Numer. Anal. 10 (1973) 345) for any graph, as
 * A. George and J. Liu, *Computer Solution of Large Sparse Positive Definite Systems*, 1981, ch. 8: the middle level of a
 * long, thin level structure parts the graph in two, comes last, and each half is parted in the same way.
 */

/** The pattern of a symmetric matrix: row i has its columns from start[i] to start[i + 1]. */
export interface SparsePattern {
  start: Int32Array;
  column: Int32Array;
}

/** Parts of so few unknowns are not parted any more. */
const SMALL = 48;
/** Searches for the far end of a part; each makes the level structure longer, the first two by nearly all. */
const SEARCHES = 3;

/** @returns the unknowns in the order of their elimination; the same for the same pattern */
export function nestedDissection({ start, column }: SparsePattern): Int32Array {
  const n = start.length - 1;
  const order = new Int32Array(n);
  // Filled from the back: separators first, then what they part.
  let last = n;
  /** The part that an unknown is in; -1 once its place in the order is known. */
  const part = new Int32Array(n);
  let parts = 1;
  const queue = new Int32Array(n);
  const level = new Int32Array(n);
  const stack: Int32Array[] = [Int32Array.from({ length: n }, (_, i) => i)];

  const place = (v: number): void => {
    order[--last] = v;
    part[v] = -1;
  };
  /** Breadth first from v over its own part. @returns how many were found: in `queue`, with their `level` */
  const spread = (v: number): number => {
    const own = part[v];
    const mark = ++parts;
    let count = 0;
    queue[count++] = v;
    level[v] = 0;
    part[v] = mark;
    for (let i = 0; i < count; i++) {
      const u = queue[i];
      for (let k = start[u]; k < start[u + 1]; k++) {
        const w = column[k];
        if (part[w] !== own) continue;
        part[w] = mark;
        level[w] = level[u] + 1;
        queue[count++] = w;
      }
    }
    return count;
  };

  while (stack.length > 0) {
    const own = stack.pop()!;
    let count = spread(own[0]);
    if (count < own.length) {
      // Nothing joins what was found to the rest.
      const mark = part[own[0]];
      stack.push(
        own.filter((v) => part[v] !== mark),
        queue.slice(0, count),
      );
      continue;
    }
    if (count <= SMALL) {
      for (let i = 0; i < count; i++) place(queue[i]);
      continue;
    }
    let depth = 0;
    for (let search = 0; search < SEARCHES; search++) {
      const far = level[queue[count - 1]];
      if (search > 0 && far <= depth) break;
      depth = far;
      count = spread(queue[count - 1]);
    }
    // Never the last level: what comes after the middle is not empty, and so every part is smaller than the whole.
    const middle = Math.min(level[queue[count >> 1]], level[queue[count - 1]] - 1);
    const [before, after]: [number[], number[]] = [[], []];
    for (let i = 0; i < count; i++) {
      const v = queue[i];
      if (level[v] > middle) after.push(v);
      else if (level[v] < middle || !reaches(v, middle + 1)) before.push(v);
      else place(v);
    }
    if (before.length > 0) stack.push(Int32Array.from(before));
    if (after.length > 0) stack.push(Int32Array.from(after));
  }
  return order;

  function reaches(v: number, other: number): boolean {
    for (let k = start[v]; k < start[v + 1]; k++)
      if (level[column[k]] === other && part[column[k]] === part[v]) return true;
    return false;
  }
}
