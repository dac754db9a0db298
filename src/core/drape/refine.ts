/**
 * Cuts the faces around an element into small triangles that carry its fields: fine where the outline
 * runs, coarser inside, nothing outside.
 *
 * Whether an edge is halved depends on the edge alone, and the answer is kept for the face across it;
 * so neighbours agree and the patch has no cracks (edge-driven refinement, as in Velho and Gomes,
 * "Variable resolution 4-k meshes", 2000, and other conforming schemes).
 */
import { PairMap } from '../base/pair-map.ts';
import type { Vec3 } from '../base/vec.ts';
import type { SurfaceMesh } from '../mesh/surface-mesh.ts';
import type { FieldPatch } from './copper.ts';

/** Fields at a place; `edge` may be a lower bound where the place is far outside. */
export interface FieldValue {
  edge: number;
  hatch: number;
  along: number;
}

export interface RefineOptions {
  /** Edges no longer than this are not halved, mm. */
  fine: number;
  /** Longest edge, mm. */
  coarse: number;
  /** Near the outline edges are halved until the field is this straight along them, mm. */
  tolerance: number;
}

/**
 * @param faces    every face that may hold copper
 * @param evaluate fields at a place of a face
 */
export function refine(mesh: SurfaceMesh, faces: Iterable<number>, evaluate: (face: number, p: Vec3) => FieldValue, options: RefineOptions): FieldPatch {
  const positions: number[] = [];
  const edge: number[] = [];
  const hatch: number[] = [];
  const along: number[] = [];
  const triangles: number[] = [];
  const faceOfTriangle: number[] = [];
  const corners = new Map<number, number>();
  const middles = new PairMap();
  const add = (face: number, x: number, y: number, z: number): number => {
    const f = evaluate(face, [x, y, z]);
    positions.push(x, y, z);
    edge.push(f.edge);
    hatch.push(f.hatch);
    along.push(f.along);
    return edge.length - 1;
  };
  const size = (a: number, b: number) =>
    Math.hypot(positions[3 * a] - positions[3 * b], positions[3 * a + 1] - positions[3 * b + 1], positions[3 * a + 2] - positions[3 * b + 2]);

  /** Vertex in the middle of an edge, or -1 when the edge stays whole. */
  const middle = (face: number, a: number, b: number): number => {
    const lo = a < b ? a : b;
    const hi = a < b ? b : a;
    const known = middles.get(lo, hi, UNKNOWN);
    if (known !== UNKNOWN) return known;
    const len = size(a, b);
    const m = wanted(face, a, b, len);
    middles.set(lo, hi, m);
    return m;
  };

  const halfway = (face: number, a: number, b: number): number =>
    add(face, (positions[3 * a] + positions[3 * b]) / 2, (positions[3 * a + 1] + positions[3 * b + 1]) / 2, (positions[3 * a + 2] + positions[3 * b + 2]) / 2);

  const wanted = (face: number, a: number, b: number, len: number): number => {
    // The field grows by no more than the way walked: beyond one length it cannot change sign near the edge.
    if (Math.min(edge[a], edge[b]) > len) return -1;
    if (len > options.coarse) return halfway(face, a, b);
    if (len <= options.fine || !touches(edge[a], edge[b], len)) return -1;
    // Near the outline the edge is halved where the field bends between its ends.
    const m = halfway(face, a, b);
    return Math.abs(edge[m] - (edge[a] + edge[b]) / 2) > options.tolerance ? m : -1;
  };

  const stack: number[] = [];
  for (const face of faces) {
    for (let i = 0; i < 3; i++) {
      const v = mesh.triangles[3 * face + i];
      let n = corners.get(v);
      if (n === undefined) {
        n = add(face, mesh.positions[3 * v], mesh.positions[3 * v + 1], mesh.positions[3 * v + 2]);
        corners.set(v, n);
      }
      stack.push(n);
    }
    while (stack.length > 0) {
      const c = stack.pop()!;
      const b = stack.pop()!;
      const a = stack.pop()!;
      const ab = middle(face, a, b);
      const bc = middle(face, b, c);
      const ca = middle(face, c, a);
      const cuts = (ab >= 0 ? 1 : 0) + (bc >= 0 ? 1 : 0) + (ca >= 0 ? 1 : 0);
      if (cuts === 0) {
        if (edge[a] < 0 || edge[b] < 0 || edge[c] < 0) {
          triangles.push(a, b, c);
          faceOfTriangle.push(face);
        }
      } else if (cuts === 3) stack.push(a, ab, ca, ab, b, bc, ca, bc, c, ab, bc, ca);
      else if (cuts === 1) {
        if (ab >= 0) stack.push(a, ab, c, ab, b, c);
        else if (bc >= 0) stack.push(b, bc, a, bc, c, a);
        else stack.push(c, ca, b, ca, a, b);
      } else {
        // Two cuts: the corner between them, and a quad cut along its shorter diagonal.
        const [p, q, r, pq, qr] = ab >= 0 && bc >= 0 ? [a, b, c, ab, bc] : bc >= 0 && ca >= 0 ? [b, c, a, bc, ca] : [c, a, b, ca, ab];
        stack.push(pq, q, qr);
        if (size(p, qr) <= size(pq, r)) stack.push(p, pq, qr, p, qr, r);
        else stack.push(p, pq, r, pq, qr, r);
      }
    }
  }
  return compact(positions, edge, hatch, along, triangles, faceOfTriangle);
}

/** An edge not asked about yet; -1 stands for one that stays whole. */
const UNKNOWN = -2;

/** Whether the level 0 can run near an edge. */
const touches = (a: number, b: number, len: number): boolean => Math.min(Math.abs(a), Math.abs(b)) <= 0.75 * len || a < 0 !== b < 0;

/** Keeps the vertices that triangles use, in the order of first use. */
function compact(positions: number[], edge: number[], hatch: number[], along: number[], triangles: number[], face: number[]): FieldPatch {
  const number = new Int32Array(edge.length).fill(-1);
  const order: number[] = [];
  const used = Uint32Array.from(triangles, (v) => {
    if (number[v] < 0) {
      number[v] = order.length;
      order.push(v);
    }
    return number[v];
  });
  const kept = new Float64Array(3 * order.length);
  order.forEach((v, i) => {
    for (let k = 0; k < 3; k++) kept[3 * i + k] = positions[3 * v + k];
  });
  return {
    positions: kept,
    triangles: used,
    face: Int32Array.from(face),
    edge: Float64Array.from(order, (v) => edge[v]),
    hatch: Float64Array.from(order, (v) => hatch[v]),
    along: Float64Array.from(order, (v) => along[v]),
  };
}
