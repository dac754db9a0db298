/**
 * The outline of a strip about a path: how ends and bends are finished.
 *
 * The words are those of the open standard SVG 2 (W3C, ch. 13: `stroke-linecap`, `stroke-linejoin`,
 * `stroke-miterlimit`). On a curved surface a place is taken by its Fermi coordinates about the path (band.ts): along
 * it and across. A square end is the plain end of a path carried straight on (lengthen.ts), so that its corners are true.
 * A mitre is drawn in polar coordinates about the bend, whose heights over the sides carried straight on are put right for
 * the surface's curvature.
 */
import { cosine, sine } from '../base/trig.ts';
import type { BandPlace, Bend } from './band.ts';
import { heightOver } from './mitre-curvature.ts';

export type Ends = 'round' | 'square' | 'butt';
export type Bends = 'round' | 'miter';

/** A mitre longer than this times the strip's width is bevelled: SVG 2's own default. */
export const MITER_LIMIT = 4;

export interface Strip {
  /** Half of the width, mm. */
  half: number;
  ends: Ends;
  bends: Bends;
  /** Of the path, mm. */
  length: number;
}

/** A bend, and how the surface curves beside it (mitre-curvature.ts), 1/mm². */
export interface CurvedBend extends Bend {
  curvature: number;
}

/** Whether a bend that leaves this sector open outside, radians, may be mitred: SVG's 1 / sin(θ/2), θ the angle between the pieces. */
export const mitred = (strip: Strip, turn: number): boolean =>
  strip.bends === 'miter' && cosine(turn / 2) >= 1 / MITER_LIMIT;

/** How far from a bend that leaves this sector open outside, radians, the strip reaches, mm. */
export const stripReach = (strip: Strip, turn: number): number =>
  turn > 0 && mitred(strip, turn) ? strip.half / cosine(turn / 2) : strip.half;

/**
 * Distance to the strip's outline plus half its width, mm: what the distance from the path is for a strip that is round all over. It
 * grows by no more than the way walked (on a sphere, near square and butt ends, by 1 / cos(half / R) of it).
 * Where a trace runs back over its own butt end, the end is cut out of it.
 * @param bends  of the band that `at` comes from
 */
export function stripDistance(strip: Strip, at: BandPlace, bends: readonly CurvedBend[]): number {
  const { half, ends, length } = strip;
  const side = bendDistance(strip, at, bends);
  if (ends === 'round') return side;
  const over = Math.max(-at.along, at.along - length) - (ends === 'square' ? half : 0);
  const out = side - half;
  return half + (out > 0 && over > 0 ? Math.hypot(out, over) : Math.max(out, over));
}

/** Coordinate whose level lines fill the strip: `across`, carried on into a mitre along its sides. */
export const stripHatch = (strip: Strip, at: BandPlace, bends: readonly CurvedBend[]): number =>
  at.bend && mitred(strip, bends[at.bend.number].turn)
    ? Math.sign(at.across) * mitreHeight(at.bend, at.distance, bends)
    : at.across;

/** Distance of a place in a bend's outer sector from the nearer of its two sides' lines, carried straight on. */
function mitreHeight(
  { number, off }: { number: number; off: number },
  r: number,
  bends: readonly CurvedBend[],
): number {
  const { turn, curvature } = bends[number];
  return heightOver(r, cosine(turn / 2 - Math.abs(off)), curvature);
}

function bendDistance(strip: Strip, at: BandPlace, bends: readonly CurvedBend[]): number {
  const { half } = strip;
  if (at.bend && strip.bends === 'round') return at.distance;
  if (!at.bend) {
    let distance = strip.ends === 'round' ? at.distance : Math.abs(at.across);
    if (strip.bends === 'round') return distance;
    // The line that cuts off a bend runs on through the copper beside it, and is the nearer outline there.
    for (const bend of bends) {
      if (mitred(strip, bend.turn)) continue;
      const [c, s] = [cosine(bend.turn / 2), sine(bend.turn / 2)];
      const over = (bend.side * at.across - half) * c - Math.abs(at.along - bend.along) * s;
      distance = Math.max(distance, half + over);
    }
    return distance;
  }
  const { turn } = bends[at.bend.number];
  const { off } = at.bend;
  const r = at.distance;
  // Within both sides, each carried straight on.
  if (mitred(strip, turn)) return mitreHeight(at.bend, r, bends);
  const out = r * cosine(off) - half * cosine(turn / 2);
  const past = r * sine(Math.abs(off)) - half * sine(turn / 2);
  return half + (past > 0 ? Math.hypot(out, past) : out);
}
