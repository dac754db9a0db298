/**
 * Which hole lies in which outline, for rings that do not cross: one look straight down from each hole's leftmost point. What
 * lies there bounds the same area: an outline is the hole's own, another hole has the same outline. So each area is told in
 * time of the edges near a vertical line, not of all rings.
 */
import { Fault } from '../base/news.ts';
import { strips } from './flat-strips.ts';

/**
 * @param rings  outlines counter-clockwise, holes clockwise, each from its leftmost (then lowest) point on; they may touch in
 *               points
 * @returns for each ring the outline that it belongs to, itself for an outline; -1 for a hole that lies in nothing
 */
export function outlinesOf(rings: readonly Float64Array[], isHole: readonly boolean[]): Int32Array {
  const out = Int32Array.from(rings, (_, k) => (isHole[k] ? UNKNOWN : k));
  const below = isHole.includes(true) ? looker(rings) : () => NOTHING;
  for (let k = 0; k < rings.length; k++) {
    /** Holes on the way to one whose outline is known. */
    const way: number[] = [];
    let at = k;
    while (out[at] === UNKNOWN) {
      if (way.includes(at)) throw new Fault('holes of an area lie within one another');
      way.push(at);
      const next = below(at);
      if (next === NOTHING) {
        out[at] = NOTHING;
        break;
      }
      at = next;
    }
    for (const w of way) out[w] = out[at];
  }
  return out;
}

const UNKNOWN = -2;
const NOTHING = -1;

/** An edge seen from a hole's first point. */
interface Seen {
  ring: number;
  /** It goes through the point itself: compared by how far to turn clockwise to it from the hole's lower edge. */
  touches: boolean;
  turn: number;
  /** Else by its height there, then by its rise. */
  y: number;
  slope: number;
}

/** Gives for a ring the ring next below its first point. */
function looker(rings: readonly Float64Array[]): (ring: number) => number {
  const near = strips(rings);
  return (k) => {
    const own = rings[k];
    const [x, y] = own;
    // The hole's two edges at its first point, both to the right of it; the copper is on the other side.
    const [f, l] = [2, own.length - 2];
    const edges = [Math.atan2(own[f + 1] - y, own[f] - x), Math.atan2(own[l + 1] - y, own[l] - x)];
    const lower = Math.min(...edges);
    const outside = 2 * Math.PI - (Math.max(...edges) - lower);
    let best = null as Seen | null;
    near(x, (ring, i) => {
      if (ring === k) return;
      const r = rings[ring];
      const j = (i + 2) % r.length;
      const seen = see(x, y, lower, ring, r[i], r[i + 1], r[j], r[j + 1]);
      // What touches from within the hole is an island.
      if (!seen || (seen.touches && seen.turn >= outside)) return;
      if (best === null || nearer(seen, best)) best = seen;
    });
    return best === null ? NOTHING : best.ring;
  };
}

/** mm: rings that touch in a point inside an edge lie off each other by their rounding, two steps of the grid of flat.ts. */
export const TOUCHING = 2 ** -26;

function see(
  x: number,
  y: number,
  lower: number,
  ring: number,
  ax: number,
  ay: number,
  bx: number,
  by: number,
): Seen | null {
  const turn = (tx: number, ty: number): number => {
    const by = lower - Math.atan2(ty - y, tx - x);
    return by > 0 ? by : by + 2 * Math.PI;
  };
  const touching = (by: number): Seen => ({ ring, turn: by, touches: true, y, slope: 0 });
  if (ax === x && ay === y) return touching(turn(bx, by));
  if (bx === x && by === y) return touching(turn(ax, ay));
  // An edge reaches from its left end on to just before its right one: a corner below is met once.
  if (!(Math.min(ax, bx) <= x && x < Math.max(ax, bx))) return null;
  const slope = (by - ay) / (bx - ax);
  const at = ax === x ? ay : bx === x ? by : ay + (x - ax) * slope;
  if (Math.abs(at - y) <= TOUCHING * (1 + Math.abs(slope)))
    return touching(Math.min(turn(ax, ay), turn(bx, by)));
  return at < y ? { ring, turn: 0, touches: false, y: at, slope } : null;
}

/** What touches the point comes first, by its turn; then the highest, and of two in one corner the one that rises more. */
function nearer(a: Seen, b: Seen): boolean {
  if (a.touches !== b.touches) return a.touches;
  if (a.touches) return a.turn < b.turn;
  return a.y > b.y || (a.y === b.y && a.slope > b.slope);
}
