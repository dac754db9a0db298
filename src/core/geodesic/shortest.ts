/** Shortest paths over the surface between two places, exact on the polyhedron. */
import { distance, type Vec3 } from '../base/vec.ts';
import { faceOf, next, type SurfaceMesh } from '../mesh/surface-mesh.ts';
import { positionOf, type SurfacePoint } from '../mesh/surface-point.ts';
import { edgeBound } from './edge-bound.ts';
import { type Arrival, WindowSolver } from './windows.ts';

/** A way over the surface: every place where it enters another face, part frame. */
export interface GeodesicPath {
  /** mm, 3 a point. */
  points: Float64Array;
  /** Face that the piece from point i to i + 1 lies in; one fewer than points. */
  faces: Int32Array;
  /** mm */
  length: number;
}

/** One path on one mesh. Where the same mesh is asked again, prepare a `WindowSolver` and use `shortestWith`. */
export const shortestPath = (mesh: SurfaceMesh, from: SurfacePoint, to: SurfacePoint): GeodesicPath | null =>
  shortestWith(new WindowSolver(mesh), from, to);

/**
 * Shortest path from one surface point to another: Chen and Han's windows with Xin and Wang's pruning
 * (`windows.ts`), bounded above by a path along edges.
 * @returns null when there is no way over the surface between them
 */
export function shortestWith(
  solver: WindowSolver,
  from: SurfacePoint,
  to: SurfacePoint,
): GeodesicPath | null {
  const bound = edgeBound(solver.mesh, from, to);
  if (bound === Infinity) return null;
  // A hair more than the bound, so that a path that is itself along edges still arrives.
  const arrival = solver.propagate([{ at: from, source: 0, radius: Infinity }], [], {
    at: to,
    bound: bound * (1 + 1e-9) + Number.MIN_VALUE,
  });
  return arrival.distance === Infinity ? null : traceBack(solver, arrival, to);
}

/** Follows the arrival back to its source and returns the path from source to target. */
export function traceBack(solver: WindowSolver, arrival: Arrival, to: SurfacePoint): GeodesicPath {
  const { mesh, windows } = solver;
  const points: Vec3[] = [positionOf(mesh, to)];
  const faces: number[] = [];
  let { window: w, root: r, vertex: v } = arrival;
  let p = points[0];
  if (v >= 0 && (w < 0 || r < 0)) {
    const corner = solver.position(v);
    if (distance(corner, p) > 0) {
      points.push(corner);
      faces.push(to.face);
    }
    p = corner;
    const via = solver.vertexVia(v);
    w = via >= 0 ? via : -1;
    r = via >= 0 ? windows.root[via] : -1 - via;
  }
  for (;;) {
    const root = solver.roots[r];
    if (w >= 0) {
      const q = solver.look(w, p, Infinity);
      if (!q) break;
      for (let k = w; k >= 0; k = windows.parent[k]) {
        const h = windows.half[k];
        const len = windows.num[8 * k + 7];
        const t = solver.crossingTo(k, q[0], q[1]) / len;
        const a = solver.position(mesh.triangles[h]);
        const b = solver.position(mesh.triangles[next(h)]);
        const x: Vec3 = [a[0] + t * (b[0] - a[0]), a[1] + t * (b[1] - a[1]), a[2] + t * (b[2] - a[2])];
        points.push(x);
        faces.push(faceOf(h));
      }
    }
    points.push(root.at);
    faces.push(root.face);
    if (root.vertex < 0) break;
    p = root.at;
    const via = solver.vertexVia(root.vertex);
    w = via >= 0 ? via : -1;
    r = via >= 0 ? windows.root[via] : -1 - via;
  }
  points.reverse();
  faces.reverse();
  return gather(points, faces);
}

/** A piece shorter than this share of the path is a crossing met twice (targets on edges): its direction would mean nothing. */
const NO_PIECE = 1e-10;

/** Drops pieces of no length, keeps both ends, and adds the rest up. */
function gather(points: Vec3[], faces: number[]): GeodesicPath {
  const last = points.length - 1;
  let whole = 0;
  for (let i = 0; i < last; i++) whole += distance(points[i], points[i + 1]);
  const keep: Vec3[] = [points[0]];
  const inFace: number[] = [];
  for (let i = 1; i <= last; i++) {
    if (distance(keep[keep.length - 1], points[i]) <= NO_PIECE * whole) {
      if (i < last) continue;
      if (keep.length > 1) {
        // The end stands for the crossing just before it.
        keep[keep.length - 1] = points[last];
        continue;
      }
    }
    keep.push(points[i]);
    inFace.push(faces[i - 1]);
  }
  let length = 0;
  for (let i = 0; i + 1 < keep.length; i++) length += distance(keep[i], keep[i + 1]);
  return { points: Float64Array.from(keep.flat()), faces: Int32Array.from(inFace), length };
}
