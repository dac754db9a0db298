/**
 * Corners near a segment, from a k-d tree (J. Bentley, "Multidimensional binary search trees used for associative
 * searching", 1975). A segment is clipped as it goes down, so that a long one looks only at what lies along it.
 */

export interface CornerTree {
  x: Float64Array;
  /** Corners: the middle of each stretch parts it into what lies below and above on its axis. */
  corners: Uint32Array;
  /** Axis of the stretch of which a corner is the middle. */
  axis: Uint8Array;
}

/**
 * @param x        3 a corner
 * @param corners  numbers of the corners that are asked for
 */
export function cornerTree(x: Float64Array, corners: Uint32Array): CornerTree {
  const tree: CornerTree = { x, corners: corners.slice(), axis: new Uint8Array(corners.length) };
  const stretches = [0, corners.length];
  while (stretches.length > 0) {
    const to = stretches.pop() as number;
    const from = stretches.pop() as number;
    if (to - from < 2) continue;
    const middle = (from + to) >> 1;
    const axis = widest(tree, from, to);
    tree.axis[middle] = axis;
    select(tree, axis, from, to - 1, middle);
    stretches.push(from, middle, middle + 1, to);
  }
  return tree;
}

/**
 * Corners within `distance` of the segment between two corners, and farther than that from its ends, in order along it.
 */
export function cornersAlong(tree: CornerTree, a: number, b: number, distance: number): number[] {
  const { x, corners, axis } = tree;
  const p = [x[3 * a], x[3 * a + 1], x[3 * a + 2]];
  const d = [x[3 * b] - p[0], x[3 * b + 1] - p[1], x[3 * b + 2] - p[2]];
  const length = Math.hypot(d[0], d[1], d[2]);
  const found: { v: number; along: number }[] = [];
  const visit = (from: number, to: number, start: number, end: number): void => {
    if (from >= to || start > end) return;
    const middle = (from + to) >> 1;
    const v = corners[middle];
    const [qx, qy, qz] = [x[3 * v] - p[0], x[3 * v + 1] - p[1], x[3 * v + 2] - p[2]];
    const along = (qx * d[0] + qy * d[1] + qz * d[2]) / length;
    const t = along / length;
    if (along > distance && length - along > distance)
      if (Math.hypot(qx - t * d[0], qy - t * d[1], qz - t * d[2]) <= distance) found.push({ v, along });
    const k = axis[middle];
    const wall = x[3 * v + k] - p[k];
    // Below the wall and a distance more, and above it.
    const [low, high] = [clip(d[k], wall + distance, start, end), clip(-d[k], distance - wall, start, end)];
    visit(from, middle, low[0], low[1]);
    visit(middle + 1, to, high[0], high[1]);
  };
  visit(0, corners.length, -distance / length, 1 + distance / length);
  return found.sort((m, n) => m.along - n.along || m.v - n.v).map(({ v }) => v);
}

/** The part of [start, end] where slope · t is no more than `most`; widened by what rounding can take. */
function clip(slope: number, most: number, start: number, end: number): [number, number] {
  if (slope === 0) return most >= 0 ? [start, end] : [1, 0];
  const t = most / slope;
  const hair = Number.EPSILON * 4 * (1 + Math.abs(t));
  return slope > 0 ? [start, Math.min(end, t + hair)] : [Math.max(start, t - hair), end];
}

function widest({ x, corners }: CornerTree, from: number, to: number): number {
  let best = 0;
  let width = -1;
  for (let k = 0; k < 3; k++) {
    let [lo, hi] = [Infinity, -Infinity];
    for (let i = from; i < to; i++) {
      const v = x[3 * corners[i] + k];
      if (v < lo) lo = v;
      if (v > hi) hi = v;
    }
    if (hi - lo > width) {
      width = hi - lo;
      best = k;
    }
  }
  return best;
}

/** Puts the corner that belongs at `middle` there, lower ones before it and higher ones behind (C. A. R. Hoare, FIND, 1961). */
function select({ x, corners }: CornerTree, axis: number, left: number, right: number, middle: number): void {
  while (left < right) {
    const pivot = x[3 * corners[middle] + axis];
    let [i, j] = [left, right];
    while (i <= j) {
      while (x[3 * corners[i] + axis] < pivot) i++;
      while (x[3 * corners[j] + axis] > pivot) j--;
      if (i > j) break;
      const v = corners[i];
      corners[i++] = corners[j];
      corners[j--] = v;
    }
    if (j < middle) left = i;
    if (i > middle) right = j;
  }
}
