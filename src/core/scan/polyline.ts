/** Runs of places on the surface with what was measured at each: cutting and thinning. */
import type { LevelLine } from '../drape/level-lines.ts';
import { alongLine } from '../drape/level-lines.ts';

export interface SurfaceLine {
  /** Part frame, mm, 3 a point. A closed line repeats its first point. */
  points: Float64Array;
  closed: boolean;
}

/** A condition on a value at each point of a line: kept where `least ≤ value ≤ most`. */
export interface Keep {
  values: Float64Array;
  least: number;
  most: number;
}

export function surfaceLine(line: LevelLine, positions: Float64Array): SurfaceLine {
  return { points: closeUp(alongLine(line, positions, 3), line.closed, 3), closed: line.closed };
}

/** Values of a vertex field along a level line, one a point of its surface line. */
export const lineValues = (line: LevelLine, values: Float64Array): Float64Array =>
  closeUp(alongLine(line, values, 1), line.closed, 1);

function closeUp(flat: Float64Array, closed: boolean, stride: number): Float64Array {
  if (!closed) return flat;
  const out = new Float64Array(flat.length + stride);
  out.set(flat);
  out.set(flat.subarray(0, stride), flat.length);
  return out;
}

/** The parts of a line where every condition holds, cut by linear interpolation. A closed line that is cut opens at the cut. */
export function cutLine(line: SurfaceLine, conditions: readonly Keep[]): SurfaceLine[] {
  const n = line.points.length / 3;
  const inside = (i: number) => conditions.every((c) => c.values[i] >= c.least && c.values[i] <= c.most);
  let whole = true;
  for (let i = 0; i < n && whole; i++) whole = inside(i);
  if (whole) return [line];
  const out: number[][] = [];
  let current: number[] | null = null;
  for (let i = 0; i + 1 < n; i++) {
    // Share of the piece i → i + 1 on which every condition holds.
    let t0 = 0;
    let t1 = 1;
    for (const c of conditions) {
      const a = c.values[i];
      const b = c.values[i + 1];
      for (const [fa, fb] of [
        [a - c.least, b - c.least],
        [c.most - a, c.most - b],
      ]) {
        if (fa < 0 && fb < 0) t1 = -1;
        else if (fa < 0) t0 = Math.max(t0, fa / (fa - fb));
        else if (fb < 0) t1 = Math.min(t1, fa / (fa - fb));
      }
    }
    if (!(t0 < t1)) {
      current = null;
      continue;
    }
    if (!current || t0 > 0) {
      current = place(line.points, i, t0);
      out.push(current);
    }
    current.push(...place(line.points, i, t1));
    if (t1 < 1) current = null;
  }
  // A closed line's last part runs on into its first.
  if (line.closed && out.length > 1 && inside(0)) {
    const first = out.shift()!;
    const last = out[out.length - 1];
    for (let i = 3; i < first.length; i++) last.push(first[i]);
  }
  return out.map((p) => ({ points: Float64Array.from(p), closed: false }));
}

function place(points: Float64Array, i: number, t: number): number[] {
  const o = 3 * i;
  return [0, 1, 2].map((k) => points[o + k] + t * (points[o + 3 + k] - points[o + k]));
}

/**
 * Points that can be left out without moving the line by more than `tolerance`.
 * D. Douglas and T. Peucker, "Algorithms for the reduction of the number of points required to represent a
 * digitized line or its caricature", Cartographica 10 (1973) 112. Returns the numbers of those that stay.
 */
export function thin(points: Float64Array, stride: 2 | 3, tolerance: number): number[] {
  const n = points.length / stride;
  if (n <= 2) return Array.from({ length: n }, (_, i) => i);
  const keep = new Uint8Array(n);
  keep[0] = keep[n - 1] = 1;
  const stack: [number, number][] = [[0, n - 1]];
  while (stack.length > 0) {
    const [a, b] = stack.pop()!;
    let worst = tolerance;
    let at = -1;
    for (let i = a + 1; i < b; i++) {
      const d = offSegment(points, stride, i, a, b);
      if (d > worst) {
        worst = d;
        at = i;
      }
    }
    if (at >= 0) {
      keep[at] = 1;
      stack.push([a, at], [at, b]);
    }
  }
  const out: number[] = [];
  for (let i = 0; i < n; i++) if (keep[i]) out.push(i);
  return out;
}

function offSegment(p: Float64Array, stride: number, i: number, a: number, b: number): number {
  let ee = 0;
  let pe = 0;
  let pp = 0;
  for (let k = 0; k < stride; k++) {
    const e = p[b * stride + k] - p[a * stride + k];
    const q = p[i * stride + k] - p[a * stride + k];
    ee += e * e;
    pe += q * e;
    pp += q * q;
  }
  const t = ee > 0 ? Math.min(1, Math.max(0, pe / ee)) : 0;
  return Math.sqrt(Math.max(0, pp - 2 * t * pe + t * t * ee));
}
