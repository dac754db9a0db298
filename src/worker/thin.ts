/** Fewer points for a line that is only drawn. */
import { pointsToKeep } from '../core/base/thin.ts';

/** @param line  3 a point; @param tolerance  mm that the thinned line may stray; @returns a line with the same ends */
export const thinned = (line: ArrayLike<number>, tolerance: number): Float32Array =>
  thinnedIn(3, line, tolerance);

/** @param size  numbers a point; the rest as for `thinned` */
export function thinnedIn(size: 2 | 3, line: ArrayLike<number>, tolerance: number): Float32Array {
  const keep = pointsToKeep(size, line, tolerance);
  return Float32Array.from(line).filter((_, i) => keep[Math.floor(i / size)]);
}
