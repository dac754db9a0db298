/** Arcs as DXF gives them. */
import { cosine, sine } from '../base/trig.ts';
import type { Arc } from './flatten.ts';

/**
 * Bulge of a polyline: the tangent of a quarter of the angle about the centre, above 0 to the left.
 * @param bulge  not 0
 */
export function bulgeArc(from: readonly [number, number], to: readonly [number, number], bulge: number): Arc {
  // From the middle of the chord to the centre, as a share of the chord.
  const off = (1 - bulge * bulge) / (4 * bulge);
  const centre = [
    (from[0] + to[0]) / 2 - off * (to[1] - from[1]),
    (from[1] + to[1]) / 2 + off * (to[0] - from[0]),
  ] as const;
  const p = [from[0] - centre[0], from[1] - centre[1]] as const;
  return { centre, p, q: [-p[1], p[0]], start: 0, sweep: 4 * Math.atan(bulge) };
}

/** From a to b left round, radians: above 0, a full turn where both are the same. */
export function leftSweep(a: number, b: number): number {
  const turn = (b - a) % (2 * Math.PI);
  return turn <= SAME ? turn + 2 * Math.PI : turn;
}

/** Radians: angles that differ by less are rounded from the same, and a full turn is meant. */
const SAME = 1e-9;

export const radians = (degrees: number): number => (degrees * Math.PI) / 180;

export function onArc({ centre, p, q }: Arc, angle: number): [number, number] {
  const [c, s] = [cosine(angle), sine(angle)];
  return [centre[0] + c * p[0] + s * q[0], centre[1] + c * p[1] + s * q[1]];
}
