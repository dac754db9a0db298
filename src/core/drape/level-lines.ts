/**
 * Level lines of a field on a patch, and the part of a patch below a level: linear interpolation in each
 * triangle (marching triangles). A vertex exactly on the level counts as outside.
 */
import type { FieldPatch, Patch } from './copper.ts';

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
    for (let k = 0; k < stride; k++) out[i * stride + k] = values[a + k] + t * (values[b + k] - values[a + k]);
  }
  return out;
}

/**
 * Lines where `values` crosses `level`, with the lower side on the left seen from outside the part.
 * Closed lines do not repeat their first point.
 */
export function levelLines(patch: Patch, values: Float64Array, level: number): LevelLine[] {
  const { triangles } = patch;
  const below = (v: number) => values[v] < level;
  // Each crossed edge a → b (a below, b not) starts or ends one piece; pieces chain over shared edges.
  const nextOf = new Map<number, number>();
  const hasBefore = new Set<number>();
  const key = (a: number, b: number) => a * 67108864 + b;
  for (let t = 0; t < triangles.length; t += 3) {
    const a = triangles[t], b = triangles[t + 1], c = triangles[t + 2];
    const n = (below(a) ? 1 : 0) + (below(b) ? 1 : 0) + (below(c) ? 1 : 0);
    if (n === 0 || n === 3) continue;
    // p is the odd one out; the triangle stays counter-clockwise as p, q, r.
    const odd = n === 1 ? below : (v: number) => !below(v);
    const [p, q, r] = odd(a) ? [a, b, c] : odd(b) ? [b, c, a] : [c, a, b];
    // Lower side on the left: with p below the line runs from edge pq to edge pr, else the other way.
    const from = n === 1 ? key(p, q) : key(r, p);
    const to = n === 1 ? key(p, r) : key(q, p);
    nextOf.set(from, to);
    hasBefore.add(to);
  }
  const lines: LevelLine[] = [];
  const walk = (start: number, closed: boolean) => {
    const keys: number[] = [];
    for (let k: number | undefined = start; k !== undefined; ) {
      keys.push(k);
      const following: number | undefined = nextOf.get(k);
      nextOf.delete(k);
      k = following === start ? undefined : following;
    }
    const ends = new Uint32Array(2 * keys.length);
    const share = new Float64Array(keys.length);
    keys.forEach((k, i) => {
      const a = Math.floor(k / 67108864);
      const b = k - a * 67108864;
      ends[2 * i] = a;
      ends[2 * i + 1] = b;
      share[i] = (level - values[a]) / (values[b] - values[a]);
    });
    lines.push({ ends, share, closed });
  };
  for (const k of [...nextOf.keys()]) if (nextOf.has(k) && !hasBefore.has(k)) walk(k, false);
  for (const k of [...nextOf.keys()]) if (nextOf.has(k)) walk(k, true);
  return lines;
}

/** The part of a patch where `values < level`, as triangles inside the same faces. */
export function clipBelow(patch: FieldPatch, values: Float64Array, level: number): Patch {
  const positions: number[] = [];
  const triangles: number[] = [];
  const face: number[] = [];
  const number = new Map<number, number>();
  const vertex = (a: number, b: number): number => {
    // Corners as (a, a); places on edges as (lower side, upper side), the same from both triangles.
    const k = a * 67108864 + b;
    let n = number.get(k);
    if (n === undefined) {
      n = positions.length / 3;
      const t = a === b ? 0 : (level - values[a]) / (values[b] - values[a]);
      for (let i = 0; i < 3; i++) positions.push(patch.positions[3 * a + i] + t * (patch.positions[3 * b + i] - patch.positions[3 * a + i]));
      number.set(k, n);
    }
    return n;
  };
  const below = (v: number) => values[v] < level;
  for (let t = 0; t < patch.triangles.length; t += 3) {
    const a = patch.triangles[t], b = patch.triangles[t + 1], c = patch.triangles[t + 2];
    const n = (below(a) ? 1 : 0) + (below(b) ? 1 : 0) + (below(c) ? 1 : 0);
    if (n === 0) continue;
    const f = patch.face[t / 3];
    if (n === 3) {
      triangles.push(vertex(a, a), vertex(b, b), vertex(c, c));
      face.push(f);
    } else if (n === 1) {
      const [p, q, r] = below(a) ? [a, b, c] : below(b) ? [b, c, a] : [c, a, b];
      triangles.push(vertex(p, p), vertex(p, q), vertex(p, r));
      face.push(f);
    } else {
      const [p, q, r] = !below(a) ? [a, b, c] : !below(b) ? [b, c, a] : [c, a, b];
      const pq = vertex(q, p), pr = vertex(r, p), q0 = vertex(q, q), r0 = vertex(r, r);
      triangles.push(pq, q0, r0, pq, r0, pr);
      face.push(f, f);
    }
  }
  return { positions: Float64Array.from(positions), triangles: Uint32Array.from(triangles), face: Int32Array.from(face) };
}

/** Area of a patch, mm². */
export function patchArea(patch: Patch): number {
  const { positions: x, triangles: t } = patch;
  let sum = 0;
  for (let i = 0; i < t.length; i += 3) {
    const a = 3 * t[i], b = 3 * t[i + 1], c = 3 * t[i + 2];
    const ux = x[b] - x[a], uy = x[b + 1] - x[a + 1], uz = x[b + 2] - x[a + 2];
    const vx = x[c] - x[a], vy = x[c + 1] - x[a + 1], vz = x[c + 2] - x[a + 2];
    sum += Math.hypot(uy * vz - uz * vy, uz * vx - ux * vz, ux * vy - uy * vx) / 2;
  }
  return sum;
}
