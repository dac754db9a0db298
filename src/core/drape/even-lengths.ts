/**
 * Evens out the lengths of a flat map over a drawing's own copper.
 *
 * As-rigid-as-possible parameterization: L. Liu, L. Zhang, Y. Xu, C. Gotsman, S. Gortler, "A local/global approach to mesh
 * parameterization", Computer Graphics Forum 27 (2008) 1495. Each triangle takes the rotation that fits it best (local), then
 * all corners move to where the rotated triangles agree the most (global, eq. 3: the cotangent Laplacian), and again. Only
 * triangles that carry copper count in full; the others hold the map together. The anchor and the direction of u there stay.
 */

import { factor, type SparseRows } from '../base/sparse.ts';
import type { MapPatch } from './map-patch.ts';

/**
 * What triangles without copper count, from little to as much as the others. Little is best for the copper, but where much
 * must give way between pieces of copper that little folds: then more is tried.
 */
const REST = [1e-2, 5e-2, 0.25, 1];
/** A map is crushed where a triangle has less than this share of the area that it has on the part. */
const CRUSHED = 0.1;
/** Copper counts in full out to this far past its edge, mm: its own triangles reach that far. */
export const BESIDE = 0.5;
/** Rounds at the most; each lowers the error, the first few by nearly all. */
const ROUNDS = 12;
/** A round that moves no corner by more than this share of the map's size is the last. */
const STILL = 1e-5;
/** Each corner is held where it is by this share of what holds its triangles together: pieces that nothing joins stay. */
const HOLD = 1e-7;

/**
 * Changes `patch.flat`.
 * @param edge  signed distance to the nearest copper of the drawing at a flat place, mm
 * @param step  called before each round; what it throws stops the work, and the map is then of no use
 * @returns whether the map was evened; false where that would have folded it: it is as it was then
 */
export function evenLengths(
  patch: MapPatch,
  edge: (u: number, v: number) => number,
  step: () => void = () => {},
): boolean {
  const { triangles, flat } = patch;
  const count = triangles.length / 3;
  if (count === 0) return true;
  const before = flat.slice();
  const sides = flatSides(patch);
  const handed = Math.sign(handedness(patch));
  const copper = Uint8Array.from({ length: count }, (_, t) => {
    const [u, v] = middle(flat, triangles, t);
    return edge(u, v) < BESIDE ? 1 : 0;
  });
  for (const rest of REST) {
    const weight = Float64Array.from(copper, (c) => (c ? 1 : rest));
    relax(patch, sides, weight, handed, step);
    turnBack(patch, before);
    if (!isCrushed(patch, sides, before, handed)) return true;
    flat.set(before);
  }
  return false;
}

/** Local and global steps until the map is still. */
function relax(patch: MapPatch, sides: Sides, weight: Float64Array, handed: number, step: () => void): void {
  const { flat, anchor } = patch;
  const { rows, hold } = laplacian(patch, sides, weight);
  const factors = factor(rows);
  const size = flat.reduce((m, x) => Math.max(m, Math.abs(x)), 0);
  const anchorAt = [flat[2 * anchor], flat[2 * anchor + 1]];
  for (let round = 0; round < ROUNDS; round++) {
    step();
    const right = rightSide(patch, sides, weight, handed);
    let moved = 0;
    for (let k = 0; k < 2; k++) {
      for (let i = 0; i < hold.length; i++) right[k][i] += hold[i] * flat[2 * i + k];
      const x = factors.solve(right[k]);
      const back = anchorAt[k] - x[anchor];
      for (let i = 0; i < x.length; i++) {
        moved = Math.max(moved, Math.abs(x[i] + back - flat[2 * i + k]));
        flat[2 * i + k] = x[i] + back;
      }
    }
    if (moved < STILL * size) break;
  }
}

/** Corners of each triangle laid flat: 6 numbers, in its own frame, and the cotangents of its angles: 3. */
interface Sides {
  /** (b - a) and (c - a): length l along x, then fx, fy. */
  l: Float64Array;
  fx: Float64Array;
  fy: Float64Array;
  /** Cotangent of the angle opposite to side i (from corner i to the next), 3 a triangle. */
  cot: Float64Array;
}

function flatSides({ positions: x, triangles }: MapPatch): Sides {
  const count = triangles.length / 3;
  const [l, fx, fy, cot] = [
    new Float64Array(count),
    new Float64Array(count),
    new Float64Array(count),
    new Float64Array(3 * count),
  ];
  for (let t = 0; t < count; t++) {
    const [a, b, c] = [3 * triangles[3 * t], 3 * triangles[3 * t + 1], 3 * triangles[3 * t + 2]];
    const e = [x[b] - x[a], x[b + 1] - x[a + 1], x[b + 2] - x[a + 2]];
    const f = [x[c] - x[a], x[c + 1] - x[a + 1], x[c + 2] - x[a + 2]];
    l[t] = Math.hypot(e[0], e[1], e[2]);
    fx[t] = (e[0] * f[0] + e[1] * f[1] + e[2] * f[2]) / l[t];
    const n = Math.hypot(e[1] * f[2] - e[2] * f[1], e[2] * f[0] - e[0] * f[2], e[0] * f[1] - e[1] * f[0]);
    fy[t] = n / l[t];
    if (!(n > 0)) continue;
    // Opposite to a → b lies c, and so on.
    cot[3 * t] = (fx[t] * (fx[t] - l[t]) + fy[t] * fy[t]) / n;
    cot[3 * t + 1] = (l[t] * fx[t]) / n;
    cot[3 * t + 2] = (l[t] * (l[t] - fx[t])) / n;
  }
  return { l, fx, fy, cot };
}

function laplacian(
  { triangles, flat }: MapPatch,
  { cot }: Sides,
  weight: Float64Array,
): { rows: SparseRows; hold: Float64Array } {
  const n = flat.length / 2;
  const entries: Map<number, number>[] = Array.from({ length: n }, () => new Map());
  for (let h = 0; h < triangles.length; h++) {
    const w = cot[h] * weight[(h / 3) | 0];
    const [a, b] = [triangles[h], triangles[h % 3 === 2 ? h - 2 : h + 1]];
    entries[a].set(b, (entries[a].get(b) ?? 0) - w);
    entries[b].set(a, (entries[b].get(a) ?? 0) - w);
    entries[a].set(a, (entries[a].get(a) ?? 0) + w);
    entries[b].set(b, (entries[b].get(b) ?? 0) + w);
  }
  const hold = new Float64Array(n);
  entries.forEach((e, i) => {
    hold[i] = HOLD * (e.get(i) ?? 0) || HOLD;
    e.set(i, (e.get(i) ?? 0) + hold[i]);
  });
  const start = new Int32Array(n + 1);
  entries.forEach((e, i) => {
    start[i + 1] = start[i] + e.size;
  });
  const column = new Int32Array(start[n]);
  const value = new Float64Array(start[n]);
  entries.forEach((e, i) => {
    let k = start[i];
    for (const [j, w] of e) {
      column[k] = j;
      value[k++] = w;
    }
  });
  return { rows: { start, column, value }, hold };
}

/** Local step: each triangle's rotation, and what the corners should differ by. */
function rightSide(
  { triangles, flat }: MapPatch,
  s: Sides,
  weight: Float64Array,
  handed: number,
): [Float64Array, Float64Array] {
  const n = flat.length / 2;
  const [bu, bv] = [new Float64Array(n), new Float64Array(n)];
  for (let t = 0; t < triangles.length / 3; t++) {
    const corner = [triangles[3 * t], triangles[3 * t + 1], triangles[3 * t + 2]];
    // A mirrored drawing sees the triangle from behind.
    const px = [0, s.l[t], s.fx[t]];
    const py = [0, 0, handed * s.fy[t]];
    let [p, q] = [0, 0];
    for (let i = 0; i < 3; i++) {
      const j = (i + 1) % 3;
      const w = s.cot[3 * t + i];
      const [dx, dy] = [px[i] - px[j], py[i] - py[j]];
      const du = flat[2 * corner[i]] - flat[2 * corner[j]];
      const dv = flat[2 * corner[i] + 1] - flat[2 * corner[j] + 1];
      p += w * (du * dx + dv * dy);
      q += w * (dv * dx - du * dy);
    }
    const r = Math.hypot(p, q);
    const [cos, sin] = r > 0 ? [p / r, q / r] : [1, 0];
    for (let i = 0; i < 3; i++) {
      const j = (i + 1) % 3;
      const w = s.cot[3 * t + i] * weight[t];
      const [dx, dy] = [px[i] - px[j], py[i] - py[j]];
      const [du, dv] = [w * (cos * dx - sin * dy), w * (sin * dx + cos * dy)];
      bu[corner[i]] += du;
      bu[corner[j]] -= du;
      bv[corner[i]] += dv;
      bv[corner[j]] -= dv;
    }
  }
  return [bu, bv];
}

/** Turns the map about the anchor until the triangles around it are turned by nothing on the whole. */
function turnBack({ triangles, flat, anchor }: MapPatch, before: Float64Array): void {
  let [p, q] = [0, 0];
  for (let h = 0; h < triangles.length; h++) {
    if (triangles[h] !== anchor) continue;
    for (const k of [h % 3 === 2 ? h - 2 : h + 1, h % 3 === 0 ? h + 2 : h - 1]) {
      const c = triangles[k];
      const [au, av] = [before[2 * c] - before[2 * anchor], before[2 * c + 1] - before[2 * anchor + 1]];
      const [nu, nv] = [flat[2 * c] - flat[2 * anchor], flat[2 * c + 1] - flat[2 * anchor + 1]];
      p += au * nu + av * nv;
      q += av * nu - au * nv;
    }
  }
  const r = Math.hypot(p, q);
  if (r === 0) return;
  const [cos, sin] = [p / r, q / r];
  const [ou, ov] = [flat[2 * anchor], flat[2 * anchor + 1]];
  for (let i = 0; i < flat.length; i += 2) {
    const [u, v] = [flat[i] - ou, flat[i + 1] - ov];
    flat[i] = ou + cos * u - sin * v;
    flat[i + 1] = ov + sin * u + cos * v;
  }
}

function flatArea(flat: Float64Array, triangles: Uint32Array, t: number): number {
  const [a, b, c] = [2 * triangles[3 * t], 2 * triangles[3 * t + 1], 2 * triangles[3 * t + 2]];
  return (
    ((flat[b] - flat[a]) * (flat[c + 1] - flat[a + 1]) - (flat[b + 1] - flat[a + 1]) * (flat[c] - flat[a])) /
    2
  );
}

/** Flat area of the whole map: its sign says whether it is mirrored. */
function handedness({ flat, triangles }: MapPatch): number {
  let sum = 0;
  for (let t = 0; t < triangles.length / 3; t++) sum += flatArea(flat, triangles, t);
  return sum;
}

/** Whether a triangle that was neither folded nor crushed before is now. */
function isCrushed(
  { flat, triangles }: MapPatch,
  { l, fy }: Sides,
  before: Float64Array,
  handed: number,
): boolean {
  for (let t = 0; t < triangles.length / 3; t++) {
    const least = (CRUSHED * l[t] * fy[t]) / 2;
    if (handed * flatArea(flat, triangles, t) < least && handed * flatArea(before, triangles, t) >= least)
      return true;
  }
  return false;
}

function middle(flat: Float64Array, triangles: Uint32Array, t: number): [number, number] {
  let [u, v] = [0, 0];
  for (let i = 0; i < 3; i++) {
    u += flat[2 * triangles[3 * t + i]] / 3;
    v += flat[2 * triangles[3 * t + i] + 1] / 3;
  }
  return [u, v];
}
