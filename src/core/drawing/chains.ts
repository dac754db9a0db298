/** Flattened chains to what a drawing is made of: areas with fill rules worked out, strokes, dots. */
import { cosine, sine } from '../base/trig.ts';
import type { Area, Bends, Ends, Stroke } from './drawing.ts';
import { type Flat, type Rule, ringArea } from './flat.ts';
import { arcPieces, type Chain } from './flatten.ts';
import type { Tangle } from './tangle.ts';

/**
 * What the rule calls inside, open chains closed by a straight line: one area for each separate piece.
 * @throws BadShape `too-tangled`
 */
export function areasOf(chains: readonly Chain[], rule: Rule, flat: Flat, tangle: Tangle): Area[] {
  const rings = chains.map((c) => c.points).filter((p) => p.length >= 6);
  if (rings.length === 0) return [];
  if (rings.length === 1 && (isConvex(rings[0]) || isSimple(rings[0])))
    return [{ kind: 'area', rings: [turnedLeft(rings[0])] }];
  tangle.check(rings);
  const whole = flat.union(rings, rule);
  const outlines = whole.filter((r) => ringArea(r) > 0);
  // Most figures have one outline: then all else is its holes.
  const one =
    outlines.length === 1 ? [[outlines[0], ...whole.filter((r) => r !== outlines[0])]] : flat.split(whole);
  return one.map((of) => ({ kind: 'area', rings: of }));
}

/** One turn, all corners to one side: most pads are, and need no clipping. */
function isConvex(ring: Float64Array): boolean {
  const n = ring.length;
  let [left, right, turns] = [false, false, 0];
  let [dx, dy] = [ring[0] - ring[n - 2], ring[1] - ring[n - 1]];
  for (let i = 0; i < n; i += 2) {
    const j = (i + 2) % n;
    const [ex, ey] = [ring[j] - ring[i], ring[j + 1] - ring[i + 1]];
    const turn = dx * ey - dy * ex;
    if (turn > 0) left = true;
    else if (turn < 0) right = true;
    else if (dx * ex + dy * ey <= 0) return false;
    // Ways that go up and then down again: once in a ring that turns once.
    if (dy > 0 !== ey > 0) turns++;
    [dx, dy] = [ex, ey];
  }
  return left !== right && turns === 2;
}

/** Sides up to which comparing all with all is cheaper than clipping. */
const MOST_COMPARED = 48;

/** Few sides, of which no two touch but neighbours at their corner. Anything in doubt is not simple: it is clipped. */
function isSimple(ring: Float64Array): boolean {
  const n = ring.length / 2;
  if (n > MOST_COMPARED) return false;
  const at = (i: number): [number, number] => [ring[2 * (i % n)], ring[2 * (i % n) + 1]];
  for (let i = 0; i < n; i++) {
    const [[ax, ay], [bx, by]] = [at(i), at(i + 1)];
    const [cx, cy] = at(i + 2);
    if (sideOf(ax, ay, bx, by, cx, cy) === 0 && (bx - ax) * (cx - bx) + (by - ay) * (cy - by) <= 0)
      return false;
    for (let j = i + 2; j < n - (i === 0 ? 1 : 0); j++) {
      const [[px, py], [qx, qy]] = [at(j), at(j + 1)];
      const apart =
        Math.max(px, qx) < Math.min(ax, bx) ||
        Math.min(px, qx) > Math.max(ax, bx) ||
        Math.max(py, qy) < Math.min(ay, by) ||
        Math.min(py, qy) > Math.max(ay, by);
      if (apart) continue;
      const p = sideOf(ax, ay, bx, by, px, py);
      const q = sideOf(ax, ay, bx, by, qx, qy);
      if ((p > 0 && q > 0) || (p < 0 && q < 0)) continue;
      const a = sideOf(px, py, qx, qy, ax, ay);
      const b = sideOf(px, py, qx, qy, bx, by);
      if (!((a > 0 && b > 0) || (a < 0 && b < 0))) return false;
    }
  }
  return true;
}

/** Bound of the rounding in a 2 by 2 determinant of differences, as a share of its terms: 3 + 16 ε times ε (J. Shewchuk 1997). */
const DOUBT = 3.3306690738754716e-16;

/** Above 0 where c lies left of a to b, below 0 right; 0 on it or where rounding may have decided. */
function sideOf(ax: number, ay: number, bx: number, by: number, cx: number, cy: number): number {
  const left = (ax - cx) * (by - cy);
  const right = (ay - cy) * (bx - cx);
  const side = left - right;
  return Math.abs(side) > DOUBT * (Math.abs(left) + Math.abs(right)) ? side : 0;
}

function turnedLeft(ring: Float64Array): Float64Array {
  if (ringArea(ring) > 0) return ring;
  const out = new Float64Array(ring.length);
  for (let i = 0, j = ring.length - 2; j >= 0; i += 2, j -= 2) [out[i], out[i + 1]] = [ring[j], ring[j + 1]];
  return out;
}

/** Chains as lines of one width. A chain of one point is a dot where ends are round or square, and nothing where they are butt. */
export function strokesOf(
  chains: readonly Chain[],
  width: number,
  ends: Ends,
  bends: Bends,
  tolerance: number,
): (Stroke | Area)[] {
  const out: (Stroke | Area)[] = [];
  for (const { points, closed } of chains) {
    if (points.length >= 6) out.push({ kind: 'stroke', points, closed, width, ends, bends });
    else if (points.length === 4)
      // There and back has corners at its ends: round ones, or such as a square cut makes.
      out.push({
        kind: 'stroke',
        points,
        closed: false,
        width,
        ends: closed ? (bends === 'round' ? 'round' : 'butt') : ends,
        bends,
      });
    else if (ends !== 'butt') out.push({ kind: 'area', rings: [dot(points, width / 2, ends, tolerance)] });
  }
  return out;
}

/** A disc, or a square along the axes, as SVG 2 draws the caps of a line of no length. */
function dot(at: Float64Array, r: number, ends: Ends, tolerance: number): Float64Array {
  const n = ends === 'round' ? arcPieces(r, 2 * Math.PI, tolerance) : 4;
  const reach = ends === 'round' ? r : r * Math.SQRT2;
  const ring = new Float64Array(2 * n);
  for (let i = 0; i < n; i++) {
    const angle = (2 * Math.PI * (i + 0.5)) / n;
    ring[2 * i] = at[0] + reach * cosine(angle);
    ring[2 * i + 1] = at[1] + reach * sine(angle);
  }
  return ring;
}
