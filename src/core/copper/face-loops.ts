/**
 * Outlines of what each patch covers of each face: closed loops, the copper on the left seen from outside the part. What
 * lies inside a loop needs no vertices, and straight runs of a loop only their ends.
 */
import type { Patch } from '../drape/copper.ts';
import type { Weld } from './weld.ts';

/**
 * A straight run's vertices are nearer to it than this, mm: a hundredth of the narrowest traces that can be written would be
 * ten times as much.
 */
export const STRAIGHT = 1e-4;

export interface FaceLoop {
  /** Index of the patch in the list given. */
  patch: number;
  /** Vertices of the weld, in order; the last is followed by the first. */
  vertices: number[];
}

/** A face of the part that copper lies in. */
export interface CopperFace {
  face: number;
  /** Part frame: a place in the face, and two unit vectors along it, u × v outward. */
  origin: Float64Array;
  u: Float64Array;
  v: Float64Array;
  loops: FaceLoop[];
}

/** @returns faces in the order in which the patches come to them */
export function faceLoops(patches: readonly Patch[], weld: Weld): CopperFace[] {
  const rings = patches.map(ringsOf);
  const normals = new Map<number, Float64Array>();
  rings.forEach((list, p) => {
    for (const { face, vertices } of list) {
      let n = normals.get(face);
      if (!n) {
        n = new Float64Array(3);
        normals.set(face, n);
      }
      addArea(n, patches[p].positions, vertices);
    }
  });
  const faces = new Map<number, CopperFace>();
  rings.forEach((list, patch) => {
    const x = patches[patch].positions;
    for (const { face, vertices } of list) {
      let at = faces.get(face);
      if (!at) {
        const frame = frameOf(normals.get(face)!, x.subarray(3 * vertices[0], 3 * vertices[0] + 3));
        if (!frame) continue;
        at = { face, ...frame, loops: [] };
        faces.set(face, at);
      }
      const kept: number[] = [];
      for (const v of straightened(vertices, x, at)) {
        const w = weld.vertex(x[3 * v], x[3 * v + 1], x[3 * v + 2]);
        if (kept.length === 0 || kept[kept.length - 1] !== w) kept.push(w);
      }
      while (kept.length > 1 && kept[0] === kept[kept.length - 1]) kept.pop();
      if (kept.length > 2) at.loops.push({ patch, vertices: kept });
    }
  });
  return [...faces.values()].filter((f) => f.loops.length > 0);
}

interface Ring {
  face: number;
  /** Vertices of the patch. */
  vertices: number[];
}

/** Edges that only one triangle of a face has, chained. */
function ringsOf({ positions, triangles, face }: Patch): Ring[] {
  // Directed edges by the vertex that they leave: three million of them in a large region, so flat arrays and no map.
  const n = positions.length / 3;
  const start = new Int32Array(n + 1);
  for (let c = 0; c < triangles.length; c++) start[triangles[c] + 1]++;
  for (let v = 0; v < n; v++) start[v + 1] += start[v];
  const next = start.slice();
  const head = new Int32Array(triangles.length);
  const of = new Int32Array(triangles.length);
  for (let t = 0; t < face.length; t++)
    for (let k = 0; k < 3; k++) {
      const i = next[triangles[3 * t + k]]++;
      head[i] = triangles[3 * t + (k === 2 ? 0 : k + 1)];
      of[i] = face[t];
    }
  const open = new Uint8Array(triangles.length);
  const found: number[] = [];
  for (let v = 0; v < n; v++)
    for (let i = start[v]; i < start[v + 1]; i++) {
      let j = start[head[i]];
      const end = start[head[i] + 1];
      while (j < end && !(head[j] === v && of[j] === of[i])) j++;
      if (j < end) continue;
      open[i] = 1;
      found.push(v, i);
    }
  const rings: Ring[] = [];
  for (let f = 0; f < found.length; f += 2) {
    let i = found[f + 1];
    if (!open[i]) continue;
    const vertices: number[] = [];
    for (let v = found[f]; i >= 0; ) {
      open[i] = 0;
      vertices.push(v);
      v = head[i];
      let j = start[v];
      while (j < start[v + 1] && !(open[j] && of[j] === of[i])) j++;
      i = j < start[v + 1] ? j : -1;
    }
    rings.push({ face: of[found[f + 1]], vertices });
  }
  return rings;
}

/** Adds a ring's area, mm², along the normal of its plane. */
function addArea(to: Float64Array, x: Float64Array, ring: readonly number[]): void {
  const o = 3 * ring[0];
  for (let i = 1; i + 1 < ring.length; i++) {
    const [a, b] = [3 * ring[i], 3 * ring[i + 1]];
    const [ux, uy, uz] = [x[a] - x[o], x[a + 1] - x[o + 1], x[a + 2] - x[o + 2]];
    const [vx, vy, vz] = [x[b] - x[o], x[b + 1] - x[o + 1], x[b + 2] - x[o + 2]];
    to[0] += (uy * vz - uz * vy) / 2;
    to[1] += (uz * vx - ux * vz) / 2;
    to[2] += (ux * vy - uy * vx) / 2;
  }
}

function frameOf(
  n: Float64Array,
  at: Float64Array,
): { origin: Float64Array; u: Float64Array; v: Float64Array } | null {
  const area = Math.hypot(n[0], n[1], n[2]);
  if (area === 0) return null;
  const w = n.map((c) => c / area);
  // Across the axis that the normal is farthest from.
  const axis = [0, 1, 2].reduce((best, k) => (Math.abs(w[k]) < Math.abs(w[best]) ? k : best), 0);
  const u = Float64Array.from([0, 1, 2], (k) => (k === axis ? 1 : 0) - w[axis] * w[k]);
  const l = Math.hypot(u[0], u[1], u[2]);
  u.forEach((c, k) => {
    u[k] = c / l;
  });
  const v = Float64Array.of(w[1] * u[2] - w[2] * u[1], w[2] * u[0] - w[0] * u[2], w[0] * u[1] - w[1] * u[0]);
  return { origin: Float64Array.from(at), u, v };
}

/**
 * The ring without vertices on straight runs: from each vertex kept, the run goes on as long as one direction passes all of
 * it within the tolerance (J. Sklansky and V. Gonzalez, Pattern Recognition 12 (1980) 327).
 */
function straightened(
  ring: readonly number[],
  x: Float64Array,
  { origin, u, v }: Pick<CopperFace, 'origin' | 'u' | 'v'>,
): number[] {
  const n = ring.length;
  const flat = new Float64Array(2 * n);
  ring.forEach((w, i) => {
    for (let k = 0; k < 3; k++) {
      flat[2 * i] += (x[3 * w + k] - origin[k]) * u[k];
      flat[2 * i + 1] += (x[3 * w + k] - origin[k]) * v[k];
    }
  });
  // The vertex farthest from any other is a corner.
  let first = 0;
  let far = 0;
  for (let i = 0; i < n; i++) {
    const d = Math.hypot(flat[2 * i] - flat[0], flat[2 * i + 1] - flat[1]);
    if (d > far) [far, first] = [d, i];
  }
  const out = [ring[first]];
  let from = first;
  let last = first;
  // The directions that pass all of the run: from (rx, ry) counter-clockwise to (lx, ly); none yet where null.
  let cone: { rx: number; ry: number; lx: number; ly: number } | null = null;
  let gone = 0;
  for (let s = 1; s <= n; s++) {
    const i = (first + s) % n;
    const [dx, dy] = [flat[2 * i] - flat[2 * from], flat[2 * i + 1] - flat[2 * from + 1]];
    const d = Math.hypot(dx, dy);
    const passes: boolean = !cone || (cone.rx * dy - cone.ry * dx >= 0 && dx * cone.ly - dy * cone.lx >= 0);
    if (last !== from && !(passes && d >= gone)) {
      out.push(ring[last]);
      [from, cone, gone] = [last, null, 0];
      s--;
      continue;
    }
    if (d > STRAIGHT) {
      const sin = STRAIGHT / d;
      const cos = Math.sqrt(1 - sin * sin);
      const [rx, ry, lx, ly] = [
        (cos * dx + sin * dy) / d,
        (cos * dy - sin * dx) / d,
        (cos * dx - sin * dy) / d,
        (cos * dy + sin * dx) / d,
      ];
      if (!cone) cone = { rx, ry, lx, ly };
      else {
        if (cone.rx * ry - cone.ry * rx > 0) [cone.rx, cone.ry] = [rx, ry];
        if (cone.lx * ly - cone.ly * lx < 0) [cone.lx, cone.ly] = [lx, ly];
      }
    }
    gone = d;
    last = i;
  }
  return out;
}
