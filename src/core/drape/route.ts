/** Route points pulled to the surface and joined by shortest paths. */
import { Fault, InputError } from '../base/news.ts';
import type { Vec3 } from '../base/vec.ts';
import { shortestWith } from '../geodesic/shortest.ts';
import type { WindowSolver } from '../geodesic/windows.ts';
import type { SurfaceQueries } from '../mesh/queries.ts';
import { barycentric, type SurfacePoint } from '../mesh/surface-point.ts';
import type { SurfacePath } from './copper.ts';

/** A point given farther from the surface than this is a mistake, not rounding, mm (job of the project file). */
export const PULL = 1;
/** Two route points nearer than this are one, mm: below the 0.1 µm that files hold. */
const SAME = 1e-7;

export interface Place {
  surface: SurfacePoint;
  point: Vec3;
}

/**
 * Nearest surface point to a place of the project file.
 * @param name  file and JSON path, for the message
 * @throws InputError `far-from-surface`
 */
export function pull(
  queries: SurfaceQueries,
  mesh: WindowSolver['mesh'],
  at: Vec3,
  name: { file: string; place: string },
): Place {
  const hit = queries.nearest(at);
  if (!hit) throw new Fault('a surface without faces was asked for its nearest point');
  if (hit.distance > PULL)
    throw new InputError({
      code: 'far-from-surface',
      file: name.file,
      place: name.place,
      problem: `the point [${at.map((x) => round(x)).join(', ')}] lies ${round(hit.distance)} mm off the part's surface`,
      mend: `move it to within ${PULL} mm; the nearest place is [${hit.point.map((x) => round(x)).join(', ')}]`,
    });
  const bary = barycentric(mesh, hit.face, hit.point).map((b) => (b < SNAP ? 0 : b));
  const sum = bary[0] + bary[1] + bary[2];
  return {
    surface: { face: hit.face, bary: [bary[0] / sum, bary[1] / sum, bary[2] / sum] },
    point: hit.point,
  };
}

/** A weight this small is an edge: nearest points on edges come with rounding of this size. */
const SNAP = 1e-9;
const round = (x: number): number => Math.round(x * 1000) / 1000;

export interface Route {
  path: SurfacePath;
  /** Number of the path point that each route point became. */
  stops: number[];
}

/**
 * Joins places by shortest paths, one after the other; `closed` returns to the first.
 * @returns the route, or the index of the first place that cannot be reached from the one before it
 */
export function joinRoute(
  solver: WindowSolver,
  places: readonly Place[],
  closed = false,
): Route | { unreached: number } {
  const points: number[] = [...places[0].point];
  const faces: number[] = [];
  const stops = [0];
  let length = 0;
  const count = closed ? places.length : places.length - 1;
  for (let i = 0; i < count; i++) {
    const to = places[(i + 1) % places.length];
    const from = places[i];
    if (
      Math.hypot(to.point[0] - from.point[0], to.point[1] - from.point[1], to.point[2] - from.point[2]) > SAME
    ) {
      const piece = shortestWith(solver, from.surface, to.surface);
      if (!piece) return { unreached: i + 1 };
      for (let k = 3; k < piece.points.length; k++) points.push(piece.points[k]);
      faces.push(...piece.faces);
      length += piece.length;
    }
    stops.push(faces.length);
  }
  return { path: { points: Float64Array.from(points), faces: Int32Array.from(faces), length }, stops };
}
