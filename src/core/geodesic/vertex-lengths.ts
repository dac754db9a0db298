/** Straight lengths between vertices of a mesh, mm. Inner loops call these: no arrays are made. */
import type { Vec3 } from '../base/vec.ts';

/** From vertex v to a place. @param x  3 a vertex */
export function toPlace(x: Float64Array, v: number, p: Vec3): number {
  const dx = x[3 * v] - p[0],
    dy = x[3 * v + 1] - p[1],
    dz = x[3 * v + 2] - p[2];
  return Math.sqrt(dx * dx + dy * dy + dz * dz);
}

/** From vertex v to vertex w. */
export function toVertex(x: Float64Array, v: number, w: number): number {
  const dx = x[3 * v] - x[3 * w],
    dy = x[3 * v + 1] - x[3 * w + 1],
    dz = x[3 * v + 2] - x[3 * w + 2];
  return Math.sqrt(dx * dx + dy * dy + dz * dz);
}
