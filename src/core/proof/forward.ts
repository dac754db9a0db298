/**
 * The proof's own forward map (model.md §2): from a command to the beam it makes. Written apart from the landing
 * correction that plans: there the map is turned round, here it is followed.
 */
import { InputError } from '../base/news.ts';
import type { Vec3 } from '../base/vec.ts';
import type { Head } from '../project/schema.ts';

/** 1/p for each axis, 0 where telecentric: how far a beam leans for each mm of command, per mm of height. */
export interface Lean {
  kx: number;
  ky: number;
}

/** @throws InputError `not-yet` when the head says how its axes really run: that comes with a later version */
export function leanOf(head: Head, file = 'project'): Lean {
  if (isSet(head.axes))
    throw new InputError({
      code: 'not-yet',
      file,
      place: '$.head.axes',
      problem: 'turned or mirrored field axes cannot be used yet',
      mend: 'leave axes out and set the axes in the machine',
    });
  const [px, py] = head.pivot;
  return { kx: px === null ? 0 : 1 / px, ky: py === null ? 0 : 1 / py };
}

function isSet(axes: Head['axes']): boolean {
  if (!axes) return false;
  const { swap, flipX, flipY, turn = 0, scale = 1 } = axes;
  const scales = typeof scale === 'number' ? [scale] : scale;
  return Boolean(swap || flipX || flipY) || turn !== 0 || scales.some((k) => k !== 1);
}

/** Where the beam of command (X, Y) stands at height `d` above the focal plane, mm: ( X (1 − d/px), Y (1 − d/py), d ). */
export const beamAt = (lean: Lean, X: number, Y: number, d: number): Vec3 => [
  X * (1 - d * lean.kx),
  Y * (1 - d * lean.ky),
  d,
];

/** Unit vector from the surface to the head: normalize( −X/px, −Y/py, 1 ). */
export function towardHead(lean: Lean, X: number, Y: number): Vec3 {
  const x = -X * lean.kx;
  const y = -Y * lean.ky;
  const l = Math.sqrt(x * x + y * y + 1);
  return [x / l, y / l, 1 / l];
}

/** Least share of the pivot's height that must be left above a point: nearer than that no command means anything. */
const LEAST_LEFT = 1e-3;

/** Whether a height can be reached by commands at all: every pivot must lie above it. */
export const belowPivots = (lean: Lean, d: number): boolean =>
  1 - d * lean.kx > LEAST_LEFT && 1 - d * lean.ky > LEAST_LEFT;
