/**
 * Log map: polar coordinates of a patch about one of its points, and where they end.
 *
 * Radii and directions are those of the exact windows of a point source (J. Chen and Y. Han, SoCG 1990; S.-Q. Xin and
 * G.-J. Wang, ACM Trans. Graph. 28 (2009) 104), read at any place of any face, so a patch of a few long slivers is as
 * true as one of many even triangles. On the polyhedron there is nothing left to solve: a shortest path is straight
 * once unfolded, and its length and its direction at the centre are the place's coordinates. The angle about a centre
 * at a vertex is scaled to 2π. What the polyhedron does to the smooth surface remains: behind each saddle vertex lies
 * a shadow whose shortest ways all bend at the vertex. They take the vertex's direction and their own length. A shadow
 * is as wide an angle, seen from its vertex, as the vertex's angles exceed 2π, which on a fine mesh of edge h is of
 * order h², so that coordinates are off sideways by that share of the way behind the vertex.
 */

import { Fault } from '../base/news.ts';
import { cosine, sine } from '../base/trig.ts';
import { distance, type Vec3 } from '../base/vec.ts';
import { positionOf, type SurfacePoint } from '../mesh/surface-point.ts';
import { findLimits, type MapLimit } from './map-limits.ts';
import { polarAngle, SurfaceField } from './surface-field.ts';
import type { WindowSolver } from './windows.ts';

export interface LogPlace {
  /** Length of the shortest way from the centre, mm. */
  radius: number;
  /** Direction in which it leaves the centre, radians in (-π, π], counter-clockwise seen from outside. */
  angle: number;
  /** The same as flat coordinates, mm: u along direction 0, v a quarter turn on. */
  u: number;
  v: number;
}

export interface LogMap {
  /** Faces that hold places within the radius (a few may lie just beyond), ascending. */
  readonly faces: Int32Array;
  /**
   * @param p  place in `face` or on its rim, part frame
   * @returns  null where no way shorter than the radius leads
   */
  at(face: number, p: Vec3): LogPlace | null;
  /**
   * What keeps the map from covering the whole patch: of each kind the least by `measure`. Empty where the map is
   * one to one on the whole disc of the radius.
   * @param measure  how near a place counts, mm; default: its radius. May change by no more than the way walked
   */
  limits(measure?: (place: LogPlace) => number): MapLimit[];
}

/**
 * Map about `at`, as far as `radius` (mm).
 *
 * The map is read from the solver's own windows: it holds until the solver runs again, and reading it afterwards
 * is a fault. Prepare a second solver where two maps are needed at once.
 * @param zero  direction of angle 0, part frame, in the plane of `at.face`; default: the face's first edge
 */
export function logMap(solver: WindowSolver, at: SurfacePoint, radius: number, zero?: Vec3): LogMap {
  solver.propagate([{ at, source: 0, radius, ...(zero ? { zero } : {}) }]);
  const field = new SurfaceField(solver);
  const { roots } = solver;
  const centre = positionOf(solver.mesh, at);
  const look = (face: number, p: Vec3): LogPlace | null => {
    if (solver.roots !== roots) throw new Fault('a log map was read after its solver had run again');
    // No way over the surface is shorter than the straight one.
    if (distance(p, centre) > radius) return null;
    const seen = field.nearest(face, p);
    if (!seen || seen.distance > radius) return null;
    const angle = polarAngle(seen);
    return {
      radius: seen.distance,
      angle,
      u: seen.distance * cosine(angle),
      v: seen.distance * sine(angle),
    };
  };
  return {
    faces: field.faces,
    at: look,
    limits: (measure = (place) => place.radius) =>
      findLimits({
        mesh: solver.mesh,
        faces: field.faces,
        centre,
        radius,
        look,
        measure,
      }),
  };
}
