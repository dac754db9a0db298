/**
 * Rings that touch in points, traced anew so that each bounds one area: at a point where several pass, a ring goes on along
 * the next edge around the copper on its left, as faces of a planar map are traced (M. de Berg et al., Computational Geometry,
 * 2008, ch. 2). Copper that hangs by a point does not hang, and what two holes shut in between two points where they touch
 * has an outline of its own.
 */
import { cells } from './flat-cells.ts';
import { TOUCHING } from './flat-nesting.ts';

/** @returns rings with copper on their left, none twice through a point; the given ones where none touch */
export function traced(given: readonly Float64Array[]): readonly Float64Array[] {
  const rings = withTouchingCorners(given);
  if (allDiffer(rings)) return rings;
  const count = rings.reduce((n, r) => n + r.length / 2, 0);
  const points = new Float64Array(2 * count);
  const next = new Int32Array(count);
  const before = new Int32Array(count);
  let from = 0;
  for (const r of rings) {
    const n = r.length / 2;
    points.set(r, 2 * from);
    for (let i = 0; i < n; i++) {
      next[from + i] = from + ((i + 1) % n);
      before[from + ((i + 1) % n)] = from + i;
    }
    from += n;
  }
  const passes = new Map<string, number[]>();
  for (let p = 0; p < count; p++) {
    const key = `${points[2 * p]} ${points[2 * p + 1]}`;
    const here = passes.get(key);
    if (here) here.push(p);
    else passes.set(key, [p]);
  }
  const follow = next.slice();
  for (const here of passes.values()) if (here.length > 1) relink(here, points, before, next, follow);
  const out: Float64Array[] = [];
  const done = new Uint8Array(count);
  for (let p = 0; p < count; p++) {
    if (done[p]) continue;
    const ring: number[] = [];
    for (let q = p; !done[q]; q = follow[q]) {
      done[q] = 1;
      ring.push(q);
    }
    out.push(...apart(ring, points));
  }
  return out;
}

/** A number for each point tells quickly that all differ. */
function allDiffer(rings: readonly Float64Array[]): boolean {
  const seen = new Set<number>();
  let count = 0;
  for (const r of rings) {
    count += r.length / 2;
    for (let i = 0; i < r.length; i += 2) seen.add(r[i] + r[i + 1] * Math.E);
  }
  return seen.size === count;
}

/** Where a corner lies on another ring's edge, between its ends, the edge gets this corner too. */
function withTouchingCorners(rings: readonly Float64Array[]): readonly Float64Array[] {
  if (rings.length === 0) return rings;
  const near = cells(rings, TOUCHING);
  /** By ring and corner where the edge begins: corners on it, as x and y. */
  const added = new Map<Float64Array, Map<number, [number, number][]>>();
  for (const own of rings)
    for (let c = 0; c < own.length; c += 2) {
      const x = own[c];
      const y = own[c + 1];
      near(x, y, (ring, i) => {
        const r = rings[ring];
        const j = (i + 2) % r.length;
        if (!liesOn(x, y, r[i], r[i + 1], r[j], r[j + 1])) return;
        const edges = added.get(r) ?? new Map<number, [number, number][]>();
        const corners = edges.get(i) ?? [];
        corners.push([x, y]);
        added.set(r, edges.set(i, corners));
      });
    }
  if (added.size === 0) return rings;
  return rings.map((r) => {
    const edges = added.get(r);
    if (!edges) return r;
    const out: number[] = [];
    for (let i = 0; i < r.length; i += 2) {
      out.push(r[i], r[i + 1]);
      const away = ([x, y]: [number, number]): number => Math.hypot(x - r[i], y - r[i + 1]);
      const corners = edges.get(i)?.sort((a, b) => away(a) - away(b)) ?? [];
      corners.forEach(([x, y], k) => {
        // Two corners may touch the edge in the same point.
        if (k === 0 || x !== corners[k - 1][0] || y !== corners[k - 1][1]) out.push(x, y);
      });
    }
    return Float64Array.from(out);
  });
}

function liesOn(x: number, y: number, ax: number, ay: number, bx: number, by: number): boolean {
  if ((x === ax && y === ay) || (x === bx && y === by)) return false;
  if (x < Math.min(ax, bx) - TOUCHING || x > Math.max(ax, bx) + TOUCHING) return false;
  if (y < Math.min(ay, by) - TOUCHING || y > Math.max(ay, by) + TOUCHING) return false;
  const [dx, dy] = [bx - ax, by - ay];
  const length = Math.hypot(dx, dy);
  const along = ((x - ax) * dx + (y - ay) * dy) / length;
  const off = ((y - ay) * dx - (x - ax) * dy) / length;
  return along > 0 && along < length && Math.abs(off) <= TOUCHING;
}

/** At one point: each pass goes on with the way out that comes first clockwise from where it came. */
function relink(
  here: readonly number[],
  points: Float64Array,
  before: Int32Array,
  next: Int32Array,
  follow: Int32Array,
): void {
  const [x, y] = [points[2 * here[0]], points[2 * here[0] + 1]];
  const angle = (q: number): number => Math.atan2(points[2 * q + 1] - y, points[2 * q] - x);
  const ways = here.map((p) => {
    const back = angle(before[p]);
    let [best, least] = [p, Infinity];
    for (const q of here) {
      const turn = back - angle(next[q]);
      const clockwise = turn > 0 ? turn : turn + 2 * Math.PI;
      if (clockwise < least) [best, least] = [q, clockwise];
    }
    return next[best];
  });
  // Edges that rounding laid on one another: the rings stay as they were.
  if (new Set(ways).size < here.length) return;
  here.forEach((p, k) => {
    follow[p] = ways[k];
  });
}

/** A ring that touches itself as the rings between these points: the ones on its outside are its holes. */
function apart(ring: readonly number[], points: Float64Array): Float64Array[] {
  const out: number[][] = [];
  const way: number[] = [];
  const at = new Map<string, number>();
  const key = (p: number): string => `${points[2 * p]} ${points[2 * p + 1]}`;
  for (const p of ring) {
    const first = at.get(key(p));
    if (first !== undefined) {
      const loop = way.splice(first);
      for (const q of loop) at.delete(key(q));
      out.push(loop);
    }
    at.set(key(p), way.length);
    way.push(p);
  }
  return [...out, way].map((loop) =>
    Float64Array.from(loop.flatMap((p) => [points[2 * p], points[2 * p + 1]])),
  );
}
