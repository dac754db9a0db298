/** Places as a project keeps them: rounded, but never to the other side of a wall. */
import type { Vec3 } from '../base/vec.ts';
import type { SurfaceQueries } from './queries.ts';

/** To 0.1 µm: far below what a bench can hold, and project files stay readable. */
const DIGITS = 4;
/** More than a double has after the point at any size of part: the place stays as it is. */
const ALL = 16;

/**
 * A project holds points, not faces, and each goes to the surface nearest to it. Where a wall is so thin that the rounded
 * point would go to its other side, more digits are kept: as many as that needs.
 *
 * @param point   on the surface, mm
 * @param normal  outward, where the point was picked
 */
export function roundedPlace(queries: SurfaceQueries, point: Vec3, normal: Vec3): [number, number, number] {
  for (let digits = DIGITS; digits < ALL; digits++) {
    const k = 10 ** digits;
    // + 0 turns –0 into +0.
    const p: [number, number, number] = [
      Math.round(point[0] * k) / k + 0,
      Math.round(point[1] * k) / k + 0,
      Math.round(point[2] * k) / k + 0,
    ];
    const hit = queries.nearest(p);
    if (hit && hit.face === queries.nearest(p, Infinity, normal)?.face) return p;
  }
  return [point[0], point[1], point[2]];
}
