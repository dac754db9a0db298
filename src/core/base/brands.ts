/** Brands keep apart what must not be mixed: frames and angle units (model.md §1). */
import type { Vec2, Vec3 } from './vec.ts';

declare const brand: unique symbol;
type Brand<T, B extends string> = T & { readonly [brand]: B };

export type Radians = Brand<number, 'rad'>;
/** Point in the coordinates of the part's file, mm. */
export type PartPoint = Brand<Vec3, 'part'>;
/** Point in the bench frame, mm: +Z along the optical axis toward the head, origin in the focal plane. */
export type BenchPoint = Brand<Vec3, 'bench'>;
/** Command in the focal plane, mm. */
export type FieldPoint = Brand<Vec2, 'field'>;

export const radiansFromDegrees = (deg: number): Radians => ((deg * Math.PI) / 180) as Radians;
export const degreesFromRadians = (rad: number): number => (rad * 180) / Math.PI;
export const partPoint = (p: Vec3): PartPoint => p as PartPoint;
export const benchPoint = (p: Vec3): BenchPoint => p as BenchPoint;
export const fieldPoint = (p: Vec2): FieldPoint => p as FieldPoint;
