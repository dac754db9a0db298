/** Arcs as path data gives them, by their ends (SVG 2, appendix B.2, "Elliptical arc implementation notes"). */
import { cosine, sine } from '../base/trig.ts';
import type { Arc } from './flatten.ts';

export interface EndpointArc {
  from: readonly [number, number];
  to: readonly [number, number];
  rx: number;
  ry: number;
  /** Turn of the ellipse, degrees. */
  turn: number;
  large: boolean;
  /** Angles grow along the arc: from x towards y. */
  sweep: boolean;
}

/**
 * The arc about its centre; radii that do not reach are scaled up until they just do.
 * @returns 'nothing' when the ends are equal, 'line' when a radius is 0
 */
export function arcOfEnds({ from, to, rx, ry, turn, large, sweep }: EndpointArc): Arc | 'line' | 'nothing' {
  if (from[0] === to[0] && from[1] === to[1]) return 'nothing';
  if (rx === 0 || ry === 0) return 'line';
  const [c, s] = [cosine((turn * Math.PI) / 180), sine((turn * Math.PI) / 180)];
  const [hx, hy] = [(from[0] - to[0]) / 2, (from[1] - to[1]) / 2];
  // B.2.4 step 1, in the ellipse's axes and divided by its radii: the arc is one of a unit circle there.
  let [a, b] = [Math.abs(rx), Math.abs(ry)];
  let u = (c * hx + s * hy) / a;
  let v = (-s * hx + c * hy) / b;
  const lambda = u * u + v * v;
  if (lambda > 1) {
    const grow = Math.sqrt(lambda);
    [a, b, u, v] = [a * grow, b * grow, u / grow, v / grow];
  }
  // Step 2: the centre stands off the middle of the chord by what is left of the unit radius.
  const reach = Math.min(1, Math.hypot(u, v));
  const off = (Math.sqrt((1 - reach) * (1 + reach)) / reach) * (large === sweep ? -1 : 1);
  const [mu, mv] = lambda >= 1 ? [0, 0] : [off * v, -off * u];
  // Steps 3 and 4.
  const start = Math.atan2(v - mv, u - mu);
  let by = Math.atan2(-v - mv, -u - mu) - start;
  if (sweep && by <= 0) by += 2 * Math.PI;
  if (!sweep && by >= 0) by -= 2 * Math.PI;
  return {
    centre: [
      c * a * mu - s * b * mv + (from[0] + to[0]) / 2,
      s * a * mu + c * b * mv + (from[1] + to[1]) / 2,
    ],
    p: [a * c, a * s],
    q: [-b * s, b * c],
    start,
    sweep: by,
  };
}
