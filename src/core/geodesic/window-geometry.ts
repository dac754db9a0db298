/** Plane geometry of one window in the local frame of its half-edge (`window-store.ts`): distances and least distances. */
import type { Root } from './roots.ts';

/** Length t along unit direction e, from the edge's start, of its crossing with the ray P + k d; `parallel` when they never meet. */
export function crossing(
  px: number,
  py: number,
  dx: number,
  dy: number,
  ex: number,
  ey: number,
  parallel: number,
): number {
  const den = ex * dy - ey * dx;
  return den === 0 ? parallel : (px * dy - py * dx) / den;
}

/** Distance of (x, y) that a root whose image is at (sx, sy) stands for. */
export function pointDistance(
  root: Root,
  x: number,
  y: number,
  sx: number,
  sy: number,
  cos: number,
  sin: number,
): number {
  return root.kind === 'point'
    ? root.sigma + apart(x - sx, y - sy)
    : Math.abs(sin * (x - sx) + cos * (y - sy));
}

/** Least distance on the edge from b0 to b1. */
export function leastDistance(
  root: Root,
  b0: number,
  b1: number,
  sx: number,
  sy: number,
  cos: number,
  sin: number,
): number {
  if (root.kind === 'point') return root.sigma + apart(Math.max(b0, Math.min(sx, b1)) - sx, sy);
  return Math.min(Math.abs(sin * (b0 - sx) - cos * sy), Math.abs(sin * (b1 - sx) - cos * sy));
}

/**
 * Least sum, over x from b0 to b1, of the way from (sx, sy) and a function that runs evenly from fa at 0 to fb at len.
 * The sum is convex; it is least where the slope of the distance is that of the function turned round.
 */
export function leastLinear(
  b0: number,
  b1: number,
  sx: number,
  sy: number,
  fa: number,
  fb: number,
  len: number,
): number {
  const slope = (fb - fa) / len;
  const steep = 1 - slope * slope;
  let x = steep > 0 ? sx + (slope * sy) / Math.sqrt(steep) : slope > 0 ? b0 : b1;
  if (x < b0) x = b0;
  else if (x > b1) x = b1;
  return apart(x - sx, sy) + fa + slope * x;
}

/** Least sum, over x from b0 to b1 on the edge, of the ways from (sx, sy), sy ≤ 0, and to (tx, ty), ty ≥ 0: straight where the edge allows. */
export function leastBroken(b0: number, b1: number, sx: number, sy: number, tx: number, ty: number): number {
  const across = ty - sy;
  let x = across > 0 ? (sx * ty - tx * sy) / across : sx;
  if (x < b0) x = b0;
  else if (x > b1) x = b1;
  return apart(x - sx, sy) + apart(x - tx, ty);
}

const apart = (x: number, y: number): number => Math.sqrt(x * x + y * y);
