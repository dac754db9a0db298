/** Where a command lands, and which command lands on a place (model.md §2). */
import { type BenchPoint, benchPoint, type FieldPoint, fieldPoint } from '../base/brands.ts';
import { InputError } from '../base/news.ts';
import type { Vec3 } from '../base/vec.ts';
import type { Head } from '../project/schema.ts';

/** What landing needs of a head. `pivot` null on an axis means telecentric there. */
export type Pivots = Pick<Head, 'pivot'>;

/**
 * Field command that hits a point standing off the focal plane.
 *
 * @param at   point in the bench frame, mm, after the stage has moved: its z is the defocus
 * @returns    command in the focal plane, mm; it may lie outside the field
 * @throws InputError `beyond-pivot` when the point is level with or above a pivot
 * Similar triangles about each pivot: X = x / (1 - d/p), model.md §2.
 */
export function landing(at: BenchPoint, head: Pivots): FieldPoint {
  return fieldPoint([toCommand(at[0], at[2], head.pivot[0], 0), toCommand(at[1], at[2], head.pivot[1], 1)]);
}

function toCommand(x: number, d: number, pivot: number | null, axis: number): number {
  if (pivot === null) return x;
  if (d >= pivot)
    throw new InputError({
      code: 'beyond-pivot',
      file: 'the project',
      place: `$.head.pivot[${axis}]`,
      problem: `a place ${d.toFixed(2)} mm above the focal plane is level with or above the pivot at ${pivot} mm`,
      mend: 'check the pose, the stage range and the pivot heights',
    });
  return x / (1 - d / pivot);
}

/** Point at height `d` above the focal plane that a command's beam runs through, bench frame, mm. */
export function beamPoint(command: FieldPoint, d: number, head: Pivots): BenchPoint {
  const along = (X: number, pivot: number | null) => (pivot === null ? X : X * (1 - d / pivot));
  return benchPoint([along(command[0], head.pivot[0]), along(command[1], head.pivot[1]), d]);
}

/** Unit direction u of a command's beam from the surface toward the head, bench frame. */
export function beamDirection(command: FieldPoint, head: Pivots): Vec3 {
  const x = head.pivot[0] === null ? 0 : -command[0] / head.pivot[0];
  const y = head.pivot[1] === null ? 0 : -command[1] / head.pivot[1];
  const l = Math.hypot(x, y, 1);
  return [x / l, y / l, 1 / l];
}
