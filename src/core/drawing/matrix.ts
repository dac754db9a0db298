/** Affine maps of the plane, in the order in which SVG writes them: x' = a x + c y + e, y' = b x + d y + f. */
import { cosine, sine } from '../base/trig.ts';

export type Matrix = readonly [a: number, b: number, c: number, d: number, e: number, f: number];

export const IDENTITY: Matrix = [1, 0, 0, 1, 0, 0];

/** First `n`, then `m`. */
export const times = (m: Matrix, n: Matrix): Matrix => [
  m[0] * n[0] + m[2] * n[1],
  m[1] * n[0] + m[3] * n[1],
  m[0] * n[2] + m[2] * n[3],
  m[1] * n[2] + m[3] * n[3],
  m[0] * n[4] + m[2] * n[5] + m[4],
  m[1] * n[4] + m[3] * n[5] + m[5],
];

export const apply = (m: Matrix, x: number, y: number): [number, number] => [
  m[0] * x + m[2] * y + m[4],
  m[1] * x + m[3] * y + m[5],
];

export const translation = (x: number, y: number): Matrix => [1, 0, 0, 1, x, y];
export const scaling = (x: number, y: number): Matrix => [x, 0, 0, y, 0, 0];

/** Degrees from the first axis towards the second, exact for quarter turns. */
export function rotation(degrees: number): Matrix {
  const turn = ((degrees % 360) + 360) % 360;
  const quarter = QUARTERS.get(turn);
  if (quarter) return quarter;
  const [c, s] = [cosine((turn * Math.PI) / 180), sine((turn * Math.PI) / 180)];
  return [c, s, -s, c, 0, 0];
}

const QUARTERS = new Map<number, Matrix>([
  [0, IDENTITY],
  [90, [0, 1, -1, 0, 0, 0]],
  [180, [-1, 0, 0, -1, 0, 0]],
  [270, [0, -1, 1, 0, 0, 0]],
]);

/** Above 0 where the map keeps the sense of turning, below 0 where it mirrors. */
export const determinant = (m: Matrix): number => m[0] * m[3] - m[1] * m[2];

/** How much the map stretches lengths at most and at least (singular values of its linear part). */
export function stretches(m: Matrix): [most: number, least: number] {
  const sum = Math.hypot(m[0] + m[3], m[1] - m[2]);
  const difference = Math.hypot(m[0] - m[3], m[1] + m[2]);
  return [(sum + difference) / 2, Math.abs(sum - difference) / 2];
}
