/** What a Gerber file lays down, piece by piece in its order, and what clear pieces take away again. */
import { cosine, sine } from '../base/trig.ts';
import type { Area, Shape, Stroke } from './drawing.ts';
import { type Findings, inReach, tooLarge } from './findings.ts';
import type { Flat } from './flat.ts';
import { arcCorners, convexHull, reversed } from './gerber-arcs.ts';
import { rotation } from './matrix.ts';

export interface Mark {
  /** False: it erases what was laid before it. */
  dark: boolean;
  figure: Stroke | Area;
  role: Shape['role'];
  net: string | null;
  pin: string | null;
  line: number;
}

/** Turn, size and mirror of an aperture (LM, LR, LS), then a shift in mm. The mirror comes first. */
export interface Placing {
  mirrorX: boolean;
  mirrorY: boolean;
  /** Degrees counter-clockwise. */
  turn: number;
  scale: number;
}

export const AS_IT_IS: Placing = { mirrorX: false, mirrorY: false, turn: 0, scale: 1 };

/** The copper of a flash at (x, y). */
export function placedRings(
  rings: readonly Float64Array[],
  p: Placing,
  x: number,
  y: number,
): Float64Array[] {
  const [c, s] = rotation(p.turn);
  const [mx, my] = [p.mirrorX ? -p.scale : p.scale, p.mirrorY ? -p.scale : p.scale];
  return rings.map((ring) => {
    const out = new Float64Array(ring.length);
    for (let i = 0; i < ring.length; i += 2) {
      const [u, v] = [mx * ring[i], my * ring[i + 1]];
      out[i] = inReach(c * u - s * v + x);
      out[i + 1] = inReach(s * u + c * v + y);
    }
    return p.mirrorX !== p.mirrorY ? reversed(out) : out;
  });
}

/** A mark of a block, flashed at (x, y). @throws BadShape `out-of-range` */
export function placedMark(mark: Mark, p: Placing, x: number, y: number): Mark {
  const { figure } = mark;
  if (figure.kind === 'area')
    return { ...mark, figure: { kind: 'area', rings: placedRings(figure.rings, p, x, y) } };
  const unmirrored = { ...p, mirrorX: false, mirrorY: false };
  const points = figure.points.slice();
  for (let i = 0; i < points.length; i += 2) {
    if (p.mirrorX) points[i] = -points[i];
    if (p.mirrorY) points[i + 1] = -points[i + 1];
  }
  const [placed] = placedRings([points], unmirrored, x, y);
  return { ...mark, figure: { ...figure, points: placed, width: inReach(figure.width * p.scale) } };
}

export function pointsOf({ figure }: Mark): number {
  return figure.kind === 'stroke'
    ? figure.points.length / 2
    : figure.rings.reduce((n, r) => n + r.length / 2, 0);
}

/** Points that clipping may take in before the file is too large: 5 s of work. */
const MOST_CLIPPED = 600_000;

/**
 * Dark marks less the clear ones that come later. Strokes that no clear mark touches stay strokes; what is touched becomes areas,
 * one for each piece that is left.
 * @throws InputError `too-large`
 */
export function erased(
  marks: readonly Mark[],
  file: string,
  tolerance: number,
  flat: Flat,
  found: Findings,
): Mark[] {
  const clear = marks.flatMap((m, order) =>
    m.dark ? [] : [{ order, box: boxOf(m), rings: null as Float64Array[] | null }],
  );
  if (clear.length === 0) return [...marks];
  const near = grid(clear.map((c) => c.box));
  let clipped = 0;
  const count = (rings: readonly Float64Array[]): void => {
    clipped += rings.reduce((n, r) => n + r.length / 2, 0);
    if (clipped > MOST_CLIPPED)
      throw tooLarge(file, '', `more than ${MOST_CLIPPED} points where clear lies over dark`);
  };
  const ringsOf = (m: Mark): Float64Array[] => outline(m.figure, tolerance, (n) => found.spend(n));
  return marks.flatMap((mark, order) => {
    if (!mark.dark) return [];
    const box = boxOf(mark);
    const over = near(box, (k) => clear[k].order > order);
    if (over.length === 0) return [mark];
    const off = over.flatMap((k) => {
      clear[k].rings ??= ringsOf(marks[clear[k].order]);
      return clear[k].rings;
    });
    const own = ringsOf(mark);
    count(own);
    count(off);
    if (!flat.meet(own, off)) return [mark];
    return flat.split(flat.difference(own, off)).map((rings): Mark => {
      return { ...mark, figure: { kind: 'area', rings } };
    });
  });
}

/** Least x, least y, most x, most y. */
type Box = [number, number, number, number];

function boxOf({ figure }: Mark): Box {
  const box: Box = [Infinity, Infinity, -Infinity, -Infinity];
  const rings = figure.kind === 'stroke' ? [figure.points] : figure.rings;
  for (const r of rings)
    for (let i = 0; i < r.length; i += 2) {
      box[0] = Math.min(box[0], r[i]);
      box[1] = Math.min(box[1], r[i + 1]);
      box[2] = Math.max(box[2], r[i]);
      box[3] = Math.max(box[3], r[i + 1]);
    }
  // Half the width to the sides, and as much past a square end, seen along a diagonal.
  const out = figure.kind === 'stroke' ? (figure.width / 2) * Math.SQRT2 : 0;
  return [box[0] - out, box[1] - out, box[2] + out, box[3] + out];
}

const meet = (a: Box, b: Box): boolean => a[0] <= b[2] && b[0] <= a[2] && a[1] <= b[3] && b[1] <= a[3];

/** Cells along a side of the grid at most: boxes larger than a cell lie in several. */
const MOST_CELLS = 256;

/** Which of the boxes meet a given one, in their order. */
function grid(boxes: readonly Box[]): (box: Box, wanted: (k: number) => boolean) => number[] {
  const all = boxes.reduce(
    (a, b): Box => [Math.min(a[0], b[0]), Math.min(a[1], b[1]), Math.max(a[2], b[2]), Math.max(a[3], b[3])],
  );
  const n = Math.min(MOST_CELLS, Math.ceil(Math.sqrt(boxes.length)));
  const cells = Array.from({ length: n * n }, () => [] as number[]);
  const cell = (v: number, k: 0 | 1): number =>
    Math.max(0, Math.min(n - 1, Math.floor((n * (v - all[k])) / (all[k + 2] - all[k] || 1))));
  const under = function* (b: Box): Generator<number[]> {
    for (let i = cell(b[0], 0); i <= cell(b[2], 0); i++)
      for (let j = cell(b[1], 1); j <= cell(b[3], 1); j++) yield cells[i * n + j];
  };
  boxes.forEach((b, k) => {
    for (const list of under(b)) list.push(k);
  });
  return (box, wanted) => {
    const out = new Set<number>();
    for (const list of under(box)) for (const k of list) if (wanted(k) && meet(boxes[k], box)) out.add(k);
    return [...out].sort((a, b) => a - b);
  };
}

/** Rings that cover the figure, nonzero: for a stroke, one for each of its straight pieces, within the tolerance. */
export function outline(
  figure: Stroke | Area,
  tolerance: number,
  spend: (n: number) => void,
): Float64Array[] {
  if (figure.kind === 'area') return figure.rings;
  const { points: p, closed, width, ends } = figure;
  const n = p.length / 2;
  const rings: Float64Array[] = [];
  for (let k = 0; k + (closed ? 0 : 1) < n; k++) {
    const j = (k + 1) % n;
    const [from, to] = [
      [p[2 * k], p[2 * k + 1]],
      [p[2 * j], p[2 * j + 1]],
    ] as const;
    rings.push(
      ends === 'round' ? roundEnded(from, to, width, tolerance, spend) : squareEnded(from, to, width),
    );
  }
  return rings;
}

/** Its sides lie where the stroke's do, and its ends hold as much as half discs. */
function roundEnded(
  [ax, ay]: readonly [number, number],
  [bx, by]: readonly [number, number],
  w: number,
  tolerance: number,
  spend: (n: number) => void,
): Float64Array {
  const r = w / 2;
  const angle = Math.atan2(by - ay, bx - ax);
  const [ux, uy] = [r * cosine(angle), r * sine(angle)];
  const right = angle - Math.PI / 2;
  const ring = [bx + uy, by - ux];
  arcCorners(ring, [bx, by], r, r, right, Math.PI, tolerance, spend);
  ring.push(bx - uy, by + ux, ax - uy, ay + ux);
  arcCorners(ring, [ax, ay], r, r, right + Math.PI, Math.PI, tolerance, spend);
  ring.push(ax + uy, ay - ux);
  return Float64Array.from(ring);
}

function squareEnded(
  [ax, ay]: readonly [number, number],
  [bx, by]: readonly [number, number],
  w: number,
): Float64Array {
  const length = Math.hypot(bx - ax, by - ay);
  const [ux, uy] = [((bx - ax) / length) * (w / 2), ((by - ay) / length) * (w / 2)];
  const [px, py, qx, qy] = [ax - ux, ay - uy, bx + ux, by + uy];
  return Float64Array.of(px + uy, py - ux, qx + uy, qy - ux, qx - uy, qy + ux, px - uy, py + ux);
}

/** What a convex ring covers on its way between two places. */
export function sweep(
  ring: Float64Array,
  [ax, ay]: readonly [number, number],
  [bx, by]: readonly [number, number],
): Float64Array {
  const corners: [number, number][] = [];
  for (let i = 0; i < ring.length; i += 2)
    corners.push([ring[i] + ax, ring[i + 1] + ay], [ring[i] + bx, ring[i + 1] + by]);
  return convexHull(corners);
}
