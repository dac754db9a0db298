/**
 * Segments in the plane, cut so that they meet only at their ends: where two cross, and where a vertex lies on one. A vertex
 * nearer to a segment than the tolerance lies on it: the segment then goes through the vertex, and what it came to is looked
 * at again (snap rounding with vertices for pixels: J. Hobby, Comput. Geom. 13 (1999) 199).
 */

export interface Segment {
  a: number;
  b: number;
  /** What it bounds: carried along, never looked at. */
  owner: number;
}

/** The plane: places of vertices, and a vertex for a new place (one that is there already, where that is near). */
export interface Plane {
  x(vertex: number): number;
  y(vertex: number): number;
  vertex(x: number, y: number): number;
}

/** Each round cuts what the last one moved by less than the tolerance; two are the rule. */
const ROUNDS = 30;

/** @param tolerance  mm */
export function arrange(segments: readonly Segment[], plane: Plane, tolerance: number): Segment[] {
  let list = segments.filter((s) => s.a !== s.b);
  for (let round = 0; round < ROUNDS; round++) {
    const cuts = cutsOf(list, plane, tolerance);
    if (cuts.size === 0) break;
    list = list.flatMap((s, i) => {
      const through = cuts.get(i);
      if (!through) return [s];
      const [dx, dy] = [plane.x(s.b) - plane.x(s.a), plane.y(s.b) - plane.y(s.a)];
      const along = (v: number): number =>
        (plane.x(v) - plane.x(s.a)) * dx + (plane.y(v) - plane.y(s.a)) * dy;
      const chain = [s.a, ...[...through].sort((p, q) => along(p) - along(q) || p - q), s.b];
      return chain.slice(1).map((b, k) => ({ a: chain[k], b, owner: s.owner }));
    });
    list = withoutReturns(list);
  }
  return list;
}

/** Leaves out what one owner goes along forth and back: it bounds nothing. Among vertices about the tolerance apart such grow fast. */
function withoutReturns(list: readonly Segment[]): Segment[] {
  const net = new Map<string, number>();
  const key = ({ a, b, owner }: Segment): string => `${Math.min(a, b)} ${Math.max(a, b)} ${owner}`;
  for (const s of list) net.set(key(s), (net.get(key(s)) ?? 0) + (s.a < s.b ? 1 : -1));
  return list.filter((s) => {
    const left = net.get(key(s)) as number;
    if (s.a < s.b ? left <= 0 : left >= 0) return false;
    net.set(key(s), left + (s.a < s.b ? -1 : 1));
    return true;
  });
}

/** Vertices that each segment has to go through, by its place in the list. */
function cutsOf(list: readonly Segment[], plane: Plane, tolerance: number): Map<number, Set<number>> {
  const cuts = new Map<number, Set<number>>();
  const cut = (i: number, v: number): void => {
    if (v === list[i].a || v === list[i].b) return;
    const through = cuts.get(i);
    if (through) through.add(v);
    else cuts.set(i, new Set([v]));
  };
  const { cells, vertices } = cellsOf(list, plane, tolerance);
  const onIt = (v: number, s: Segment): boolean => {
    const [ax, ay] = [plane.x(s.a), plane.y(s.a)];
    const [dx, dy] = [plane.x(s.b) - ax, plane.y(s.b) - ay];
    const [px, py] = [plane.x(v) - ax, plane.y(v) - ay];
    const l = dx * dx + dy * dy;
    const t = px * dx + py * dy;
    // Both pieces are shorter than the whole: so cutting comes to an end.
    const [near, far] = [px * px + py * py, (px - dx) ** 2 + (py - dy) ** 2];
    return t > 0 && near < l && far < l && (dx * py - dy * px) ** 2 < tolerance * tolerance * l;
  };
  for (const [cell, inCell] of cells) {
    for (const v of vertices.get(cell) ?? [])
      for (const i of inCell) {
        const s = list[i];
        if (v !== s.a && v !== s.b && onIt(v, s)) cut(i, v);
      }
    for (let p = 0; p < inCell.length; p++)
      for (let q = p + 1; q < inCell.length; q++) {
        const [s, t] = [list[inCell[p]], list[inCell[q]]];
        if (s.a === t.a || s.a === t.b || s.b === t.a || s.b === t.b) continue;
        const at = crossing(s, t, plane);
        // An end on the other one is cut there, without a new vertex.
        if (!at || onIt(s.a, t) || onIt(s.b, t) || onIt(t.a, s) || onIt(t.b, s)) continue;
        const v = plane.vertex(at[0], at[1]);
        cut(inCell[p], v);
        cut(inCell[q], v);
      }
  }
  return cuts;
}

function crossing(s: Segment, t: Segment, plane: Plane): [number, number] | null {
  const [ax, ay, bx, by] = [plane.x(s.a), plane.y(s.a), plane.x(s.b), plane.y(s.b)];
  const [cx, cy, dx, dy] = [plane.x(t.a), plane.y(t.a), plane.x(t.b), plane.y(t.b)];
  const side = (px: number, py: number): number => (bx - ax) * (py - ay) - (by - ay) * (px - ax);
  const [c, d] = [side(cx, cy), side(dx, dy)];
  if (c > 0 === d > 0 || c === 0 || d === 0) return null;
  const other = (px: number, py: number): number => (dx - cx) * (py - cy) - (dy - cy) * (px - cx);
  const [a, b] = [other(ax, ay), other(bx, by)];
  if (a > 0 === b > 0 || a === 0 || b === 0) return null;
  const share = c / (c - d);
  return [cx + share * (dx - cx), cy + share * (dy - cy)];
}

/** Segments by the cells that they pass, no farther than the tolerance off, and vertices by the cell they are in. */
function cellsOf(
  list: readonly Segment[],
  plane: Plane,
  tolerance: number,
): { cells: Map<number, number[]>; vertices: Map<number, number[]> } {
  const [lo, hi] = [
    [Infinity, Infinity],
    [-Infinity, -Infinity],
  ];
  let total = 0;
  for (const { a, b } of list) {
    for (const v of [a, b]) {
      lo[0] = Math.min(lo[0], plane.x(v));
      lo[1] = Math.min(lo[1], plane.y(v));
      hi[0] = Math.max(hi[0], plane.x(v));
      hi[1] = Math.max(hi[1], plane.y(v));
    }
    total += Math.hypot(plane.x(b) - plane.x(a), plane.y(b) - plane.y(a));
  }
  // As wide as a segment is long on average: each is then in a few, and few are in each.
  const size = Math.max(
    total / Math.max(1, list.length),
    Math.max(hi[0] - lo[0], hi[1] - lo[1]) / 4096,
    4 * tolerance,
  );
  const columns = Math.floor((hi[0] - lo[0]) / size) + 3;
  const number = (i: number, j: number): number => (j + 1) * columns + i + 1;
  const cells = new Map<number, number[]>();
  const put = (into: Map<number, number[]>, cell: number, what: number): void => {
    const known = into.get(cell);
    if (known) known.push(what);
    else into.set(cell, [what]);
  };
  const vertices = new Map<number, number[]>();
  const seen = new Set<number>();
  const cellOf = (c: number, k: number): number => Math.floor((c - lo[k]) / size);
  list.forEach((s, n) => {
    for (const v of [s.a, s.b])
      if (!seen.has(v)) {
        seen.add(v);
        put(vertices, number(cellOf(plane.x(v), 0), cellOf(plane.y(v), 1)), v);
      }
    const [ax, ay, bx, by] = [plane.x(s.a), plane.y(s.a), plane.x(s.b), plane.y(s.b)];
    const [from, to] = [cellOf(Math.min(ax, bx) - tolerance, 0), cellOf(Math.max(ax, bx) + tolerance, 0)];
    for (let i = from; i <= to; i++) {
      // What of the segment is over this column.
      const [x0, x1] = [lo[0] + i * size - tolerance, lo[0] + (i + 1) * size + tolerance];
      const at = (x: number): number => ay + ((by - ay) * (x - ax)) / (bx - ax);
      let [y0, y1] = [Math.min(ay, by), Math.max(ay, by)];
      if (from !== to && ax !== bx) {
        const [p, q] = [at(Math.max(x0, Math.min(ax, bx))), at(Math.min(x1, Math.max(ax, bx)))];
        [y0, y1] = [Math.max(y0, Math.min(p, q)), Math.min(y1, Math.max(p, q))];
      }
      for (let j = cellOf(y0 - tolerance, 1); j <= cellOf(y1 + tolerance, 1); j++)
        put(cells, number(i, j), n);
    }
  });
  return { cells, vertices };
}
