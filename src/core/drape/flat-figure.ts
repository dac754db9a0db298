/** Signed distances in the plane to the figures of a drawing, and the fields that fill lines follow. */
import type { Area, Stroke } from '../drawing/drawing.ts';
import { SegmentTree } from './segment-tree.ts';

export interface FlatPlace {
  /** Distance to the outline, mm, negative inside. */
  edge: number;
  /** Stroke: signed distance to its centre line, positive on the left. Area: across its fill lines. */
  hatch: number;
  /** Stroke: length walked along the centre line, mm. Area: 0. */
  along: number;
}

export interface FlatFigure {
  at(u: number, v: number): FlatPlace;
  /** Box that holds the figure: least u, v, most u, v. */
  box: readonly [number, number, number, number];
  /** Centre line of a stroke, or all outlines of an area, mm. */
  length: number;
}

export const flatFigure = (figure: Stroke | Area): FlatFigure =>
  figure.kind === 'stroke' ? strokeFigure(figure) : areaFigure(figure);

/** Longest mitre over the width: SVG 2, stroke-miterlimit. */
const MITRE_LIMIT = 4;

/**
 * Distance to a line of constant width. Its sides are at half the width from the centre line; an end that is square or plain
 * and a mitred bend are the lines through them, which is the outline near them and never farther than it.
 */
function strokeFigure(stroke: Stroke): FlatFigure {
  const points = withoutRepeats(stroke.points, stroke.closed);
  const n = points.length / 2;
  const count = stroke.closed && n > 2 ? n : n - 1;
  const closed = count === n;
  const half = stroke.width / 2;
  const ends = new Float64Array(4 * Math.max(1, count));
  const start = new Float64Array(Math.max(1, count) + 1);
  for (let i = 0; i < Math.max(1, count); i++) {
    const j = (i + 1) % n;
    ends.set([points[2 * i], points[2 * i + 1], points[2 * j], points[2 * j + 1]], 4 * i);
    start[i + 1] = start[i] + Math.hypot(ends[4 * i + 2] - ends[4 * i], ends[4 * i + 3] - ends[4 * i + 1]);
  }
  const tree = new SegmentTree(ends);
  const [lu, lv, hu, hv] = tree.bounds;
  const reach = half * (stroke.bends === 'miter' ? MITRE_LIMIT : stroke.ends === 'square' ? Math.SQRT2 : 1);
  const direction = (i: number): [number, number] => {
    const l = start[i + 1] - start[i];
    return l > 0 ? [(ends[4 * i + 2] - ends[4 * i]) / l, (ends[4 * i + 3] - ends[4 * i + 1]) / l] : [1, 0];
  };
  const side = (i: number, u: number, v: number): number => {
    const [eu, ev] = direction(i);
    return eu * (v - ends[4 * i + 1]) - ev * (u - ends[4 * i]);
  };
  const ahead = (i: number, u: number, v: number): number => {
    const [eu, ev] = direction(i);
    return eu * (u - ends[4 * i]) + ev * (v - ends[4 * i + 1]);
  };
  const atEnd = (i: number, share: number): 'first' | 'last' | null =>
    closed ? null : share === 0 && i === 0 ? 'first' : share === 1 && i === count - 1 ? 'last' : null;
  /** How far beyond the end of an open line that does not end round, mm: the more negative the farther inside; far inside elsewhere. */
  const pastEnd = (i: number, u: number, v: number): number => {
    if (closed || stroke.ends === 'round') return -Infinity;
    const more = stroke.ends === 'square' ? half : 0;
    const t = ahead(i, u, v);
    return (
      Math.max(i === 0 ? -t : -Infinity, i === count - 1 ? t - (start[i + 1] - start[i]) : -Infinity) - more
    );
  };
  return {
    box: [lu - reach, lv - reach, hu + reach, hv + reach],
    length: start[Math.max(1, count)],
    at(u, v) {
      const { index: i, share, distance } = tree.nearest(u, v);
      const across = side(i, u, v);
      const end = atEnd(i, share);
      if (end) {
        // Beyond an end the line goes on straight.
        const t = ahead(i, u, v);
        const beyond = end === 'first' ? -t : t - (start[i + 1] - start[i]);
        const along = start[i] + t;
        if (stroke.ends === 'round') return { edge: distance - half, hatch: across, along };
        const cap = beyond - (stroke.ends === 'square' ? half : 0);
        return { edge: boxDistance(cap, Math.abs(across) - half), hatch: across, along };
      }
      const along = start[i] + share * (start[i + 1] - start[i]);
      if (share > 0 && share < 1)
        return { edge: boxDistance(pastEnd(i, u, v), distance - half), hatch: across, along };
      // On the outside of a bend.
      const other = share === 0 ? (i + count - 1) % count : (i + 1) % count;
      const [before, after] = share === 0 ? [other, i] : [i, other];
      const left = side(before, u, v) + side(after, u, v) > 0;
      const hatch = left ? distance : -distance;
      if (stroke.bends === 'round') return { edge: distance - half, hatch, along };
      const [a, b] = [direction(before), direction(after)];
      const cos = a[0] * b[0] + a[1] * b[1];
      // Sine of half the angle between the two pieces: a mitre is the width over it long.
      const sin = Math.sqrt(Math.max(0, (1 + cos) / 2));
      const mitred = stroke.bends === 'miter' && sin * MITRE_LIMIT >= 1;
      const sides = Math.max(Math.abs(side(before, u, v)), Math.abs(side(after, u, v)));
      const s = left ? 1 : -1;
      if (mitred) return { edge: sides - half, hatch: s * sides, along };
      // A bevel runs from corner to corner, square to the line that halves the bend.
      const [mu, mv] = [a[1] + b[1], -(a[0] + b[0])];
      const m = Math.hypot(mu, mv);
      const corner = share === 0 ? 4 * i : 4 * i + 2;
      const out = m > 0 ? (-s * (mu * (u - ends[corner]) + mv * (v - ends[corner + 1]))) / m : distance;
      return { edge: Math.max(Math.abs(out) - half * sin, sides - half), hatch, along };
    },
  };
}

/** Distance to the corner of two half-planes at right angles, given the distances to both lines, negative inside. */
const boxDistance = (a: number, b: number): number =>
  Math.hypot(Math.max(a, 0), Math.max(b, 0)) + Math.min(Math.max(a, b), 0);

/** Distance to rings that cross neither themselves nor each other, by the nearest side and which side of it is inside. */
function areaFigure(area: Area): FlatFigure {
  const rings = area.rings.map((r) => withoutRepeats(r, true)).filter((r) => r.length >= 6);
  const count = rings.reduce((n, r) => n + r.length / 2, 0);
  const ends = new Float64Array(4 * count);
  const before = new Int32Array(count);
  const after = new Int32Array(count);
  let s = 0;
  let length = 0;
  for (const ring of rings) {
    const n = ring.length / 2;
    for (let i = 0; i < n; i++) {
      const j = (i + 1) % n;
      ends.set([ring[2 * i], ring[2 * i + 1], ring[2 * j], ring[2 * j + 1]], 4 * (s + i));
      before[s + i] = s + ((i + n - 1) % n);
      after[s + i] = s + j;
      length += Math.hypot(ring[2 * j] - ring[2 * i], ring[2 * j + 1] - ring[2 * i + 1]);
    }
    s += n;
  }
  const tree = new SegmentTree(ends);
  const [lu, lv, hu, hv] = tree.bounds;
  // Fill lines run along the longer side of the box: fewer, longer lines.
  const tall = hv - lv > hu - lu;
  const left = (i: number, u: number, v: number): number => {
    const [eu, ev] = [ends[4 * i + 2] - ends[4 * i], ends[4 * i + 3] - ends[4 * i + 1]];
    return (eu * (v - ends[4 * i + 1]) - ev * (u - ends[4 * i])) / Math.hypot(eu, ev);
  };
  return {
    box: [lu, lv, hu, hv],
    length,
    at(u, v) {
      const { index: i, share, distance } = tree.nearest(u, v);
      let inside = left(i, u, v);
      if (share === 0 || share === 1) {
        // At a corner the side that the point stands off the most decides (the sum of both is the corner's normal).
        const other = share === 0 ? before[i] : after[i];
        inside += left(other, u, v);
      }
      return { edge: inside > 0 ? -distance : distance, hatch: tall ? u : v, along: 0 };
    },
  };
}

/** Points one after the other at one place are one. */
function withoutRepeats(points: Float64Array, closed: boolean): Float64Array {
  const out: number[] = [];
  for (let i = 0; i < points.length; i += 2)
    if (out.length === 0 || points[i] !== out[out.length - 2] || points[i + 1] !== out[out.length - 1])
      out.push(points[i], points[i + 1]);
  while (closed && out.length > 4 && out[0] === out[out.length - 2] && out[1] === out[out.length - 1])
    out.length -= 2;
  return Float64Array.from(out);
}
