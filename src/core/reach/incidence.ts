/** **incidence**: angle between outward normal and the way to the head, radians (model.md §4). */
import type { Vec3 } from '../base/vec.ts';

/** Both unit, same frame. By the half-angle formula, which stays exact near 0 and π (W. Kahan, "How futile are mindless assessments of roundoff", 2006). */
export function incidenceAngle(normal: Vec3, u: Vec3): number {
  const minus = Math.hypot(normal[0] - u[0], normal[1] - u[1], normal[2] - u[2]);
  const plus = Math.hypot(normal[0] + u[0], normal[1] + u[1], normal[2] + u[2]);
  return 2 * Math.atan2(minus, plus);
}
