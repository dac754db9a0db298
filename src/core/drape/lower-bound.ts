import type { Vec3 } from '../base/vec.ts';

/** Box around a source; no way over the surface to it is shorter than the straight way to its box. */
export function boxBound(points: Float64Array): (p: Vec3) => number {
  const lo = [Infinity, Infinity, Infinity];
  const hi = [-Infinity, -Infinity, -Infinity];
  for (let i = 0; i < points.length; i++) {
    lo[i % 3] = Math.min(lo[i % 3], points[i]);
    hi[i % 3] = Math.max(hi[i % 3], points[i]);
  }
  return (p) =>
    Math.hypot(
      Math.max(lo[0] - p[0], 0, p[0] - hi[0]),
      Math.max(lo[1] - p[1], 0, p[1] - hi[1]),
      Math.max(lo[2] - p[2], 0, p[2] - hi[2]),
    );
}

/**
 * Distance from a source, known only within `reach`: the field itself where it is known, and elsewhere a lower
 * bound that still grows by no more than the way walked, which refining relies on.
 * @param seen  distance found, or null where the source does not see the place
 * @param far   a lower bound of the true distance
 */
export const heldDistance = (seen: number | null, reach: number, far: number): number =>
  seen !== null && seen <= reach ? Math.max(seen, far) : Math.max(reach, far);
