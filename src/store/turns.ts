/** Turning a pose about an axis of the bench. */
import type { Pose } from '../core/base/pose.ts';

/** The pose turned about the bench's X, Y or Z (0, 1, 2) through the bench's origin; degrees, counter-clockwise. */
export function turned(pose: Pose, axis: number, degrees: number): Pose {
  const half = (degrees * Math.PI) / 360;
  const q: [number, number, number, number] = [0, 0, 0, Math.cos(half)];
  q[axis] = Math.sin(half);
  const [x, y, z] = pose.move;
  const [a, b, c, w] = q;
  const t = [2 * (b * z - c * y), 2 * (c * x - a * z), 2 * (a * y - b * x)] as const;
  const move: [number, number, number] = [
    x + w * t[0] + b * t[2] - c * t[1],
    y + w * t[1] + c * t[0] - a * t[2],
    z + w * t[2] + a * t[1] - b * t[0],
  ];
  return {
    ...pose,
    rotate: rounded(times(q, pose.rotate)),
    move: move.map((v) => Math.round(v * 1e6) / 1e6 + 0) as unknown as Pose['move'],
  };
}

type Quaternion = readonly [number, number, number, number];

const times = ([a, b, c, d]: Quaternion, [x, y, z, w]: Quaternion): [number, number, number, number] => [
  d * x + a * w + b * z - c * y,
  d * y - a * z + b * w + c * x,
  d * z + a * y - b * x + c * w,
  d * w - a * x - b * y - c * z,
];

function rounded(q: [number, number, number, number]): [number, number, number, number] {
  const l = Math.hypot(...q);
  return q.map((v) => Math.round((v / l) * 1e12) / 1e12 + 0) as [number, number, number, number];
}
