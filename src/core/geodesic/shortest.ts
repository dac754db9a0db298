/** Shortest paths over the surface between two places, exact on the polyhedron. */
import { Fault } from '../base/news.ts';
import { at3, distance, type Vec3 } from '../base/vec.ts';
import { faceOf, next, type SurfaceMesh } from '../mesh/surface-mesh.ts';
import { barycentric, positionOf, type SurfacePoint } from '../mesh/surface-point.ts';
import { wayBeside } from './beside-path.ts';
import { EdgeWays, pathOfWay } from './edge-ways.ts';
import { FlipPaths, sharedFace } from './flip-path.ts';
import { type GeodesicPath, gatherPath } from './geodesic-path.ts';
import { LowerBound } from './lower-bound.ts';
import { type Arrival, WindowSolver } from './windows.ts';

export type { GeodesicPath } from './geodesic-path.ts';

/** How much longer than the shortest way along edges the first guess may be: flips pull it taut anyhow. */
const GREED = 1.25;
/** A path through fewer faces has so few windows that bounds better than the straight line cost more than they save. */
const MANY_FACES = 60;
/** A path no longer than the straight line by this share is the shortest: what is left is rounding. */
const ROUNDING = 1e-13;
/** How much longer than the distance that windows found, as a share, the path traced through them may be by rounding. */
const TRACED = 1e-12;

/** Rounding that a sum of three lengths may have, as a share. */
const SLIPPED = 1e-9;

/** One path on one mesh. Where the same mesh is asked again, prepare a `WindowSolver` and use `shortestWith`. */
export const shortestPath = (mesh: SurfaceMesh, from: SurfacePoint, to: SurfacePoint): GeodesicPath | null =>
  shortestWith(new WindowSolver(mesh), from, to);

/**
 * Shortest path from one surface point to another: Chen and Han's windows with Xin and Wang's pruning (`windows.ts`), let
 * loose only where a path shorter than a known one may run. The known one is a way along edges pulled taut by flips
 * (`flip-path.ts`); what is still to go is bounded from below by the straight line and, over many faces, by `lower-bound.ts`.
 * @returns null when there is no way over the surface between them
 */
export function shortestWith(
  solver: WindowSolver,
  from: SurfacePoint,
  to: SurfacePoint,
): GeodesicPath | null {
  const { mesh } = solver;
  const straight = distance(positionOf(mesh, from), positionOf(mesh, to));
  const known = tautWith(solver, from, to);
  if (known === null || known.length <= straight * (1 + ROUNDING)) return known;
  let toGo: LowerBound | null = null;
  if (known.faces.length > MANY_FACES) {
    toGo = helpersOf(solver).bound;
    toGo.aim(from, to, known.length);
  }
  const bound = known.length;
  const arrival = solver.propagate([{ at: from, source: 0, radius: Infinity }], [], { at: to, bound, toGo });
  if (arrival.distance === Infinity) return known;
  const traced = traceBack(solver, arrival, to);
  // Among slivers crossings come out a little off; pulled taut over the same faces they are where they should be.
  const off = traced.length > arrival.distance * (1 + TRACED);
  const taut = off ? followWith(solver, traced, from, to) : null;
  return [traced, taut].reduce((best: GeodesicPath, p) => (p && p.length < best.length ? p : best), known);
}

/** A path that is taut and may be the shortest: what can be had at once however far it is. Null when there is none. */
export function tautWith(solver: WindowSolver, from: SurfacePoint, to: SurfacePoint): GeodesicPath | null {
  const { mesh } = solver;
  const face = sharedFace(mesh, from, to);
  if (face >= 0) return gatherPath([positionOf(mesh, from), positionOf(mesh, to)], [face]);
  const { ways, flips } = helpersOf(solver);
  const way = ways.find(from, to, GREED);
  return way && (flips.tauten(from, to, way) ?? pathOfWay(mesh, from, to, way));
}

/**
 * The locally shortest path that an old path becomes when its ends move a little: it stays on the old path's side of
 * holes, and of humps where faces are small beside them; it costs by the path, not by the part (`flip-path.ts`).
 * @returns null when it cannot be made from the old path, or comes out longer than the old one and the moves together:
 *          ask for the shortest then
 */
export function followWith(
  solver: WindowSolver,
  old: GeodesicPath,
  from: SurfacePoint,
  to: SurfacePoint,
): GeodesicPath | null {
  const { mesh } = solver;
  const { ways, flips } = helpersOf(solver);
  const way = wayBeside(ways, mesh, old, from, to);
  const path = way && flips.tauten(from, to, way);
  if (!path) return null;
  const last = old.faces.length;
  const end = (i: number, face: number): SurfacePoint => ({
    face,
    bary: barycentric(mesh, face, at3(old.points, i)),
  });
  // The old path and the moves are a way on the same side: a longer answer slipped over something.
  const moves = [
    tautWith(solver, end(0, old.faces[0]), from),
    tautWith(solver, end(last, old.faces[last - 1]), to),
  ];
  const most = old.length + (moves[0]?.length ?? Infinity) + (moves[1]?.length ?? Infinity);
  return path.length <= most * (1 + SLIPPED) ? path : null;
}

interface Helpers {
  ways: EdgeWays;
  flips: FlipPaths;
  bound: LowerBound;
}

/** What a prepared solver's paths need besides windows; made when the first path is asked for. */
const helpers = new WeakMap<WindowSolver, Helpers>();

function helpersOf(solver: WindowSolver): Helpers {
  let known = helpers.get(solver);
  if (!known) {
    const { mesh } = solver;
    known = { ways: new EdgeWays(mesh), flips: new FlipPaths(mesh), bound: new LowerBound(mesh) };
    helpers.set(solver, known);
  }
  return known;
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
      if (!q) throw new Fault(`window ${w} does not see the place that it was reached by`);
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
  return gatherPath(points, faces);
}
