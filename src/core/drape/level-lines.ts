/**
 * Level lines of a field on a patch, and the part of a patch below a level: linear interpolation in each
 * triangle (marching triangles). A vertex exactly on the level counts as outside.
 */
import { PairMap } from '../base/pair-map.ts';
import type { Patch } from './copper.ts';

/** A level line: places on edges of the patch, as (vertex, vertex, share of the way) triples. */
export interface LevelLine {
  /** Two vertices a point; equal ones mean the vertex itself. */
  ends: Uint32Array;
  /** Where between them, 0 … 1; one a point. */
  share: Float64Array;
  closed: boolean;
}

/** Interpolates `stride` numbers a vertex along a level line. */
export function alongLine(line: LevelLine, values: ArrayLike<number>, stride: number): Float64Array {
  const n = line.share.length;
  const out = new Float64Array(n * stride);
  for (let i = 0; i < n; i++) {
    const a = line.ends[2 * i] * stride;
    const b = line.ends[2 * i + 1] * stride;
    const t = line.share[i];
    for (let k = 0; k < stride; k++)
      out[i * stride + k] = values[a + k] + t * (values[b + k] - values[a + k]);
  }
  return out;
}

/**
 * Lines where `values` crosses `level`, with the lower side on the left seen from outside the part.
 * Closed lines do not repeat their first point.
 * @param only  triangles to look at; lines end where they leave them. Default: all
 */
export function levelLines(
  patch: Patch,
  values: Float64Array,
  level: number,
  only?: ArrayLike<number>,
): LevelLine[] {
  const { triangles } = patch;
  const below = (v: number) => values[v] < level;
  // Crossed edges (a below, b not) are numbered; each triangle joins two of them; pieces chain.
  const number = new PairMap();
  const ends: number[] = [];
  const following: number[] = [];
  const hasBefore: number[] = [];
  const crossing = (a: number, b: number): number => {
    let n = number.get(a, b, -1);
    if (n < 0) {
      n = following.length;
      number.set(a, b, n);
      ends.push(a, b);
      following.push(-1);
      hasBefore.push(0);
    }
    return n;
  };
  const count = only ? only.length : triangles.length / 3;
  for (let i = 0; i < count; i++) {
    const t = 3 * (only ? only[i] : i);
    const a = triangles[t],
      b = triangles[t + 1],
      c = triangles[t + 2];
    const n = (below(a) ? 1 : 0) + (below(b) ? 1 : 0) + (below(c) ? 1 : 0);
    if (n === 0 || n === 3) continue;
    // p is the odd one out; the triangle stays counter-clockwise as p, q, r.
    const pBelow = n === 1;
    const [p, q, r] = below(a) === pBelow ? [a, b, c] : below(b) === pBelow ? [b, c, a] : [c, a, b];
    // Lower side on the left: with p below the line runs from edge pq to edge pr, else the other way.
    const from = pBelow ? crossing(p, q) : crossing(r, p);
    const to = pBelow ? crossing(p, r) : crossing(q, p);
    following[from] = to;
    hasBefore[to] = 1;
  }
  const lines: LevelLine[] = [];
  const done = new Uint8Array(following.length);
  const walk = (start: number) => {
    const list: number[] = [];
    let k = start;
    do {
      list.push(k);
      done[k] = 1;
      k = following[k];
    } while (k >= 0 && !done[k]);
    lines.push({
      ends: Uint32Array.from(list.flatMap((i) => [ends[2 * i], ends[2 * i + 1]])),
      share: Float64Array.from(
        list,
        (i) => (level - values[ends[2 * i]]) / (values[ends[2 * i + 1]] - values[ends[2 * i]]),
      ),
      closed: k === start,
    });
  };
  for (let i = 0; i < following.length; i++) if (!hasBefore[i]) walk(i);
  for (let i = 0; i < following.length; i++) if (!done[i]) walk(i);
  return lines;
}

export interface ClippedPatch extends Patch {
  /** Triangle of the patch that each triangle was cut from. */
  source: Int32Array;
}

/** The part of a patch where `values < level`, as triangles inside the same faces. */
export function clipBelow(patch: Patch, values: Float64Array, level: number): ClippedPatch {
  const positions: number[] = [];
  const triangles: number[] = [];
  const face: number[] = [];
  const source: number[] = [];
  const number = new PairMap();
  const vertex = (a: number, b: number): number => {
    // Corners as (a, a); places on edges as (lower side, upper side), the same from both triangles.
    let n = number.get(a, b, -1);
    if (n < 0) {
      n = positions.length / 3;
      const t = a === b ? 0 : (level - values[a]) / (values[b] - values[a]);
      for (let i = 0; i < 3; i++)
        positions.push(
          patch.positions[3 * a + i] + t * (patch.positions[3 * b + i] - patch.positions[3 * a + i]),
        );
      number.set(a, b, n);
    }
    return n;
  };
  const below = (v: number) => values[v] < level;
  for (let t = 0; t < patch.triangles.length; t += 3) {
    const a = patch.triangles[t],
      b = patch.triangles[t + 1],
      c = patch.triangles[t + 2];
    const n = (below(a) ? 1 : 0) + (below(b) ? 1 : 0) + (below(c) ? 1 : 0);
    if (n === 0) continue;
    const f = patch.face[t / 3];
    if (n === 3) {
      triangles.push(vertex(a, a), vertex(b, b), vertex(c, c));
      face.push(f);
      source.push(t / 3);
    } else if (n === 1) {
      const [p, q, r] = below(a) ? [a, b, c] : below(b) ? [b, c, a] : [c, a, b];
      triangles.push(vertex(p, p), vertex(p, q), vertex(p, r));
      face.push(f);
      source.push(t / 3);
    } else {
      const [p, q, r] = !below(a) ? [a, b, c] : !below(b) ? [b, c, a] : [c, a, b];
      const pq = vertex(q, p),
        pr = vertex(r, p),
        q0 = vertex(q, q),
        r0 = vertex(r, r);
      triangles.push(pq, q0, r0, pq, r0, pr);
      face.push(f, f);
      source.push(t / 3, t / 3);
    }
  }
  return {
    positions: Float64Array.from(positions),
    triangles: Uint32Array.from(triangles),
    face: Int32Array.from(face),
    source: Int32Array.from(source),
  };
}

/** Area of one triangle of a patch, mm². */
export function triangleArea(
  { positions: x, triangles }: Pick<Patch, 'positions' | 'triangles'>,
  t: number,
): number {
  const [a, b, c] = [3 * triangles[3 * t], 3 * triangles[3 * t + 1], 3 * triangles[3 * t + 2]];
  const [ux, uy, uz] = [x[b] - x[a], x[b + 1] - x[a + 1], x[b + 2] - x[a + 2]];
  const [vx, vy, vz] = [x[c] - x[a], x[c + 1] - x[a + 1], x[c + 2] - x[a + 2]];
  return Math.hypot(uy * vz - uz * vy, uz * vx - ux * vz, ux * vy - uy * vx) / 2;
}

/** Area of a patch, mm². */
export function patchArea(patch: Patch): number {
  let sum = 0;
  for (let t = 0; t < patch.face.length; t++) sum += triangleArea(patch, t);
  return sum;
}
