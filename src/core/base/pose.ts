/** Rigid transform part → bench (model.md §1): x ↦ R(q)·x + move, q = [x, y, z, w] of unit length. */
import { type BenchPoint, benchPoint, type PartPoint } from './brands.ts';
import type { Vec3 } from './vec.ts';

export interface Pose {
  rotate: readonly [number, number, number, number];
  move: Vec3;
}

/** Row-major 3×3 rotation of a unit quaternion [x, y, z, w]. */
export function rotationMatrix(q: readonly [number, number, number, number]): Float64Array {
  const l = Math.hypot(q[0], q[1], q[2], q[3]);
  const [x, y, z, w] = [q[0] / l, q[1] / l, q[2] / l, q[3] / l];
  return Float64Array.of(
    1 - 2 * (y * y + z * z),
    2 * (x * y - z * w),
    2 * (x * z + y * w),
    2 * (x * y + z * w),
    1 - 2 * (x * x + z * z),
    2 * (y * z - x * w),
    2 * (x * z - y * w),
    2 * (y * z + x * w),
    1 - 2 * (x * x + y * y),
  );
}

/** Prepared pose: the matrix once, then points and directions both ways. */
export function poseFrame(pose: Pose) {
  const m = rotationMatrix(pose.rotate);
  const [tx, ty, tz] = pose.move;
  return {
    point: (p: PartPoint): BenchPoint =>
      benchPoint([
        m[0] * p[0] + m[1] * p[1] + m[2] * p[2] + tx,
        m[3] * p[0] + m[4] * p[1] + m[5] * p[2] + ty,
        m[6] * p[0] + m[7] * p[1] + m[8] * p[2] + tz,
      ]),
    direction: (v: Vec3): Vec3 => [
      m[0] * v[0] + m[1] * v[1] + m[2] * v[2],
      m[3] * v[0] + m[4] * v[1] + m[5] * v[2],
      m[6] * v[0] + m[7] * v[1] + m[8] * v[2],
    ],
    pointToPart: (p: BenchPoint): PartPoint => {
      const [x, y, z] = [p[0] - tx, p[1] - ty, p[2] - tz];
      return [
        m[0] * x + m[3] * y + m[6] * z,
        m[1] * x + m[4] * y + m[7] * z,
        m[2] * x + m[5] * y + m[8] * z,
      ] as unknown as PartPoint;
    },
    directionToPart: (v: Vec3): Vec3 => [
      m[0] * v[0] + m[3] * v[1] + m[6] * v[2],
      m[1] * v[0] + m[4] * v[1] + m[7] * v[2],
      m[2] * v[0] + m[5] * v[1] + m[8] * v[2],
    ],
  };
}
export type PoseFrame = ReturnType<typeof poseFrame>;
