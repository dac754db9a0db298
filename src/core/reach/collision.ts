/** **collision**: does the part come near the lens body while a layer is written? (model.md §4) */
import { partPoint } from '../base/brands.ts';
import { type Pose, poseFrame } from '../base/pose.ts';
import { at3, type Vec3 } from '../base/vec.ts';
import type { SurfaceMesh } from '../mesh/surface-mesh.ts';
import type { Head, Limits } from '../project/schema.ts';

export interface Collision {
  /** Height of the highest place under the lens body above the focal plane, mm. */
  height: number;
  /** Where it is, part frame. */
  at: Vec3;
}

/**
 * Highest place of the part under the lens body, when it stands higher than `workingDistance - clearance`.
 * A vertex is the highest place of its faces; faces that only cross the body's rim are taken as under it when one
 * of their vertices is.
 */
export function collision(
  mesh: SurfaceMesh,
  pose: Pose,
  stageOffset: number,
  head: Head,
  limits: Limits,
): Collision | null {
  const frame = poseFrame(pose);
  const free = head.workingDistance - limits.clearance;
  let worst: Collision | null = null;
  for (let v = 0; v < mesh.positions.length / 3; v++) {
    const at = at3(mesh.positions, v);
    const b = frame.point(partPoint(at));
    const height = b[2] + stageOffset;
    if (
      height > free &&
      height > (worst?.height ?? -Infinity) &&
      Math.hypot(b[0], b[1]) <= head.bodyDiameter / 2
    )
      worst = { height, at };
  }
  return worst;
}
