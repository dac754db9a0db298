/** Circular moves of Gerber (2022.02, ch. 4.7): from two places and a centre's offset to an arc. */

/** How moves run: G01, G02, G03, and how I and J are read: G74, G75, or null where the file says neither. */
export interface Interpolation {
  way: 'line' | 'clockwise' | 'counter-clockwise';
  quadrants: 'single' | 'multi' | null;
}

export interface ArcMove {
  centre: readonly [number, number];
  /** Radius at the start and at the end; a rounded file's differ a little. */
  r: number;
  rEnd: number;
  /** Radians; the sweep is above 0 counter-clockwise. */
  start: number;
  sweep: number;
}

/** A quarter turn, and as much again as rounded coordinates may lie apart. */
const QUARTER = Math.PI / 2 + 0.02;

/**
 * @param ij  I and J, mm: signed from the start for many quadrants, without signs for a single one
 * @returns null for no arc: start and end are the same in a single quadrant, or the centre is the start
 */
export function arcMove(
  from: readonly [number, number],
  to: readonly [number, number],
  [i, j]: readonly [number, number],
  { way, quadrants }: Interpolation,
): ArcMove | null {
  if (i === 0 && j === 0) return null;
  const turn = way === 'clockwise' ? -1 : 1;
  const about = (di: number, dj: number): ArcMove => {
    const centre = [from[0] + di, from[1] + dj] as const;
    const start = Math.atan2(-dj, -di);
    const end = Math.atan2(to[1] - centre[1], to[0] - centre[0]);
    let sweep = turn * (end - start);
    while (sweep <= 0) sweep += 2 * Math.PI;
    while (sweep > 2 * Math.PI) sweep -= 2 * Math.PI;
    const same = from[0] === to[0] && from[1] === to[1];
    return {
      centre,
      r: Math.hypot(di, dj),
      rEnd: Math.hypot(to[0] - centre[0], to[1] - centre[1]),
      start,
      sweep: turn * (same ? 2 * Math.PI : sweep),
    };
  };
  const apart = (a: ArcMove): number => Math.abs(a.r - a.rEnd);
  const multi = about(i, j);
  if (quadrants === 'multi') return multi;
  const [u, v] = [Math.abs(i), Math.abs(j)];
  const within = [about(u, v), about(-u, v), about(u, -v), about(-u, -v)]
    .filter((a) => Math.abs(a.sweep) <= QUARTER)
    .sort((a, b) => apart(a) - apart(b));
  if (quadrants === 'single') return from[0] === to[0] && from[1] === to[1] ? null : (within[0] ?? multi);
  // The file does not say: signs are for many quadrants, and so is a centre that fits as it stands.
  return i < 0 || j < 0 || within.length === 0 || apart(multi) <= apart(within[0]) ? multi : within[0];
}
