/**
 * Cuts the faces around an element into small triangles that carry its fields: fine where the outline bends, coarser inside,
 * nothing outside.
 *
 * First edges, then faces: where an edge is cut depends on the edge alone, so that neighbours agree and the patch has
 * no cracks; a face with cut edges is then a convex polygon, and is halved across its long way until only triangles are
 * left (`halve.ts`), each new edge being cut like the others. Long thin faces, which parts from CAD are full of, are so cut
 * across and not into thinner ones.
 */
import { PairMap } from '../base/pair-map.ts';
import type { Vec3 } from '../base/vec.ts';
import type { SurfaceMesh } from '../mesh/surface-mesh.ts';
import type { FieldPatch } from './copper.ts';
import { faceFrame, halve } from './halve.ts';

/** Fields at a place; `edge` may be a lower bound where the place is far outside. */
export interface FieldValue {
  edge: number;
  hatch: number;
  along: number;
}

export interface RefineOptions {
  /** Edges no longer than this are not cut, mm. */
  fine: number;
  /** Longest edge, mm. */
  coarse: number;
  /** Near the outline edges are halved until the field is this straight along them, mm. */
  tolerance: number;
}

/**
 * @param faces    every face that may hold copper
 * @param evaluate fields at a place of a face; `edge` must grow by no more than the way walked
 */
export function refine(
  mesh: SurfaceMesh,
  faces: Iterable<number>,
  evaluate: (face: number, p: Vec3) => FieldValue,
  options: RefineOptions,
): FieldPatch {
  const positions: number[] = [];
  const edge: number[] = [];
  const hatch: number[] = [];
  const along: number[] = [];
  const triangles: number[] = [];
  const faceOfTriangle: number[] = [];
  const corners = new Map<number, number>();
  const chains = new PairMap();
  const chainList: number[][] = [[]];

  const add = (face: number, x: number, y: number, z: number): number => {
    const f = evaluate(face, [x, y, z]);
    positions.push(x, y, z);
    edge.push(f.edge);
    hatch.push(f.hatch);
    along.push(f.along);
    return edge.length - 1;
  };
  const between = (face: number, a: number, b: number, t: number): number =>
    add(
      face,
      positions[3 * a] + t * (positions[3 * b] - positions[3 * a]),
      positions[3 * a + 1] + t * (positions[3 * b + 1] - positions[3 * a + 1]),
      positions[3 * a + 2] + t * (positions[3 * b + 2] - positions[3 * a + 2]),
    );
  const size = (a: number, b: number) =>
    Math.hypot(
      positions[3 * a] - positions[3 * b],
      positions[3 * a + 1] - positions[3 * b + 1],
      positions[3 * a + 2] - positions[3 * b + 2],
    );

  /** Where to cut the stretch a → b of an edge: a new vertex, or -1. */
  const cut = (face: number, a: number, b: number): number => {
    const [fa, fb] = [edge[a], edge[b]];
    const len = size(a, b);
    // The field grows by no more than the way walked: here it cannot come down to 0 between the ends.
    if (fa + fb > len) return -1;
    if (len > options.coarse) {
      // No copper within fa of a, nor within fb of b: a long edge is cut where it may begin, but not at its other end.
      const most = len - options.coarse / 2;
      if (fa > options.coarse && fa >= fb) return between(face, a, b, Math.min(fa, most) / len);
      if (fb > options.coarse) return between(face, a, b, 1 - Math.min(fb, most) / len);
      return between(face, a, b, 0.5);
    }
    if (len <= options.fine || !touches(fa, fb, len)) return -1;
    // A field that changes by more than the way walked is torn (an outline that crosses itself): nothing to follow.
    if (Math.abs(fa - fb) > TORN * len) return -1;
    const m = between(face, a, b, 0.5);
    return Math.abs(edge[m] - (fa + fb) / 2) > options.tolerance ? m : -1;
  };

  /** Vertices between a and b, in order from a. Worked out once an edge, from its lower vertex. */
  const chain = (face: number, a: number, b: number): readonly number[] => {
    const [lo, hi] = a < b ? [a, b] : [b, a];
    let n = chains.get(lo, hi, -1);
    if (n < 0) {
      const found: number[] = [];
      const walk = (p: number, q: number): void => {
        const m = cut(face, p, q);
        if (m < 0) return;
        walk(p, m);
        found.push(m);
        walk(m, q);
      };
      walk(lo, hi);
      n = found.length === 0 ? 0 : chainList.push(found) - 1;
      chains.set(lo, hi, n);
    }
    return a < b || n === 0 ? chainList[n] : [...chainList[n]].reverse();
  };

  /** Vertex inside a triangle whose edges are free of copper, when copper may lie within all the same; -1 otherwise. */
  const island = (face: number, a: number, b: number, c: number): number => {
    const [ab, bc, ca] = [size(a, b), size(b, c), size(c, a)];
    const s = (ab + bc + ca) / 2;
    const inradius = Math.sqrt(Math.max(0, ((s - ab) * (s - bc) * (s - ca)) / s));
    if (inradius < SMALLEST) return -1;
    // The middle of the inscribed circle is the farthest place from the edges.
    const w = [bc / (2 * s), ca / (2 * s), ab / (2 * s)];
    const at = [0, 1, 2].map(
      (k) => w[0] * positions[3 * a + k] + w[1] * positions[3 * b + k] + w[2] * positions[3 * c + k],
    );
    const m = add(face, at[0], at[1], at[2]);
    return edge[m] <= Math.max(size(m, a), size(m, b), size(m, c)) ? m : -1;
  };

  for (const face of faces) {
    const [a, b, c] = [0, 1, 2].map((i) => {
      const v = mesh.triangles[3 * face + i];
      let n = corners.get(v);
      if (n === undefined) {
        n = add(face, mesh.positions[3 * v], mesh.positions[3 * v + 1], mesh.positions[3 * v + 2]);
        corners.set(v, n);
      }
      return n;
    });
    const frame = faceFrame(positions, a, b, c);
    const stack: number[][] = [[a, ...chain(face, a, b), b, ...chain(face, b, c), c, ...chain(face, c, a)]];
    while (stack.length > 0) {
      const polygon = stack.pop()!;
      if (polygon.length > 3) {
        const chord = halve(polygon, positions, frame);
        if (!chord) {
          // Triangles without area keep its neighbours joined.
          for (let k = 1; k + 1 < polygon.length; k++) stack.push([polygon[0], polygon[k], polygon[k + 1]]);
          continue;
        }
        const [i, j] = chord;
        const across = chain(face, polygon[i], polygon[j]);
        stack.push([...polygon.slice(i, j + 1), ...[...across].reverse()]);
        stack.push([...polygon.slice(0, i + 1), ...across, ...polygon.slice(j)]);
        continue;
      }
      const [p, q, r] = polygon;
      if (edge[p] < 0 || edge[q] < 0 || edge[r] < 0) {
        triangles.push(p, q, r);
        faceOfTriangle.push(face);
        continue;
      }
      const m = island(face, p, q, r);
      if (m < 0) continue;
      for (const [u, v] of [
        [p, q],
        [q, r],
        [r, p],
      ])
        stack.push([u, v, ...chain(face, v, m), m, ...chain(face, m, u)]);
    }
  }
  return compact(positions, edge, hatch, along, triangles, faceOfTriangle);
}

/** No element is so small that it fits a circle of this radius inside a triangle, mm: a tenth of the narrowest trace. */
const SMALLEST = 0.025;

/** More than rounding and cracks between windows can bring about. */
const TORN = 1.5;

/** Whether the level 0 can run near an edge. */
const touches = (a: number, b: number, len: number): boolean =>
  Math.min(Math.abs(a), Math.abs(b)) <= 0.75 * len || a < 0 !== b < 0;

/** Keeps the vertices that triangles use, in the order of first use. */
function compact(
  positions: number[],
  edge: number[],
  hatch: number[],
  along: number[],
  triangles: number[],
  face: number[],
): FieldPatch {
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
