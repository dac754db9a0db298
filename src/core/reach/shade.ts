/** **shade**: does the part stand in the beam's way? (model.md §4) */
import type { PoseFrame } from '../base/pose.ts';
import { addScaled, type Vec3 } from '../base/vec.ts';
import { type ConeRay, towardLens } from '../beam/cone.ts';
import type { SurfaceQueries } from '../mesh/queries.ts';

/** The place is lifted this far along its normal, mm, so that its own face does not count. */
export const LIFT = 1e-3;

/**
 * Share of the beam that is blocked on the way from a place to the lens.
 * @param at     place on the part, part frame
 * @param normal outward normal of its face, part frame
 * @param u      unit direction to the head, bench frame
 * @param height from the place up to the lens body, mm
 * @param cone   rays of the cone; empty for the chief ray alone
 */
export function blockedShare(
  queries: SurfaceQueries,
  frame: PoseFrame,
  at: Vec3,
  normal: Vec3,
  u: Vec3,
  height: number,
  cone: readonly ConeRay[],
): number {
  const from = addScaled(at, normal, LIFT);
  const stands = (direction: Vec3): boolean =>
    queries.blocked(from, frame.directionToPart(direction), height / direction[2]);
  if (cone.length === 0) return stands(u) ? 1 : 0;
  let share = 0;
  for (const ray of cone) if (stands(towardLens(u, height, ray.offset))) share += ray.power;
  return share;
}
