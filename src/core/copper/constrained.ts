/**
 * Triangulation of points in the plane that holds given segments: points are put in one after the other (C. Lawson, 1977,
 * flips to Delaunay), then each segment by flips of the edges that it crosses (S. Sloan, Comput. Struct. 47 (1993) 441).
 * Points lie on a grid so fine that the side of a line that a point is on comes out exactly in doubles.
 */
import { Fault } from '../base/news.ts';

/** Steps of the grid along the box of the points: differences have 26 bits, products 52, and their difference 53. */
const STEPS = 2 ** 24;
/** Share of the sum of sizes below which the sign of the circle's determinant may be rounding. */
const ROUNDING = 1e-14;
/** Flips in vain for one segment, times the number of edges it crosses squared, that only a fault needs. */
const VAIN = 64;

export interface Constrained {
  /** 3 a triangle, counter-clockwise; numbers from the count of points on are the three corners around everything. */
  triangles: Int32Array;
  /** Of edge e, from triangles[e] to the next corner: the same edge of the neighbour; -1 around everything. */
  twin: Int32Array;
}

/**
 * @param points    x, y of each; no two at one place of the grid
 * @param segments  pairs of points; they meet only at their ends
 */
export function constrained(
  points: Float64Array,
  segments: readonly (readonly [number, number])[],
): Constrained {
  const work = new Work(points);
  for (const p of work.insertionOrder()) work.insert(p);
  for (const [a, b] of segments) work.enforce(a, b);
  return { triangles: work.tail.slice(0, work.used), twin: work.twin.slice(0, work.used) };
}

class Work {
  readonly n: number;
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly tail: Int32Array;
  readonly twin: Int32Array;
  /** An edge that leaves each vertex. */
  private readonly out: Int32Array;
  used = 3;
  private near = 0;

  constructor(points: Float64Array) {
    const n = points.length / 2;
    this.n = n;
    let [x0, y0, x1, y1] = [Infinity, Infinity, -Infinity, -Infinity];
    for (let i = 0; i < n; i++) {
      x0 = Math.min(x0, points[2 * i]);
      y0 = Math.min(y0, points[2 * i + 1]);
      x1 = Math.max(x1, points[2 * i]);
      y1 = Math.max(y1, points[2 * i + 1]);
    }
    const size = Math.max(x1 - x0, y1 - y0);
    const step = size > 0 ? size / STEPS : 1;
    this.x = new Float64Array(n + 3);
    this.y = new Float64Array(n + 3);
    for (let i = 0; i < n; i++) {
      this.x[i] = Math.round((points[2 * i] - x0) / step);
      this.y[i] = Math.round((points[2 * i + 1] - y0) / step);
    }
    // Around the square of all points with little to spare: constraints, not circles, see to the rim.
    this.x.set([-STEPS / 2, 3 * STEPS, -STEPS / 2], n);
    this.y.set([-STEPS / 2, -STEPS / 2, 3 * STEPS], n);
    this.tail = new Int32Array(3 * (2 * n + 1));
    this.twin = new Int32Array(3 * (2 * n + 1)).fill(-1);
    this.tail.set([n, n + 1, n + 2]);
    this.out = new Int32Array(n + 3).fill(-1);
    this.out.set([0, 1, 2], n);
  }

  /** Cell by cell along a snake, so that each point is near the last one. */
  insertionOrder(): number[] {
    const across = Math.max(1, Math.round(Math.sqrt(this.n / 2)));
    const cell = (STEPS + 1) / across;
    const place = (i: number): number => {
      const [c, r] = [Math.floor(this.x[i] / cell), Math.floor(this.y[i] / cell)];
      return r * across + (r % 2 === 0 ? c : across - 1 - c);
    };
    const places = Float64Array.from({ length: this.n }, (_, i) => place(i));
    return Array.from({ length: this.n }, (_, i) => i).sort((a, b) => places[a] - places[b] || a - b);
  }

  insert(p: number): void {
    const { tail, twin } = this;
    let t = this.near;
    let on = -1;
    walk: for (;;) {
      on = -1;
      for (let k = 0; k < 3; k++) {
        const e = t + k;
        const s = this.side(tail[e], tail[next(e)], p);
        if (s < 0) {
          t = first(twin[e]);
          continue walk;
        }
        if (s === 0) on = e;
      }
      break;
    }
    if (on >= 0) this.splitEdge(on, p);
    else this.splitTriangle(t, p);
    this.near = first(this.out[p]);
  }

  private splitTriangle(t: number, p: number): void {
    const { tail, twin } = this;
    const [a, b, c] = [tail[t], tail[t + 1], tail[t + 2]];
    const [, bc, ca] = [twin[t], twin[t + 1], twin[t + 2]];
    const [u, w] = [this.used, this.used + 3];
    this.used += 6;
    this.put(t, a, b, p);
    this.put(u, b, c, p);
    this.put(w, c, a, p);
    this.link(u, bc);
    this.link(w, ca);
    this.link(t + 1, u + 2);
    this.link(u + 1, w + 2);
    this.link(w + 1, t + 2);
    this.settle([t, u, w], p);
  }

  private splitEdge(e: number, p: number): void {
    const { tail, twin } = this;
    const g = twin[e];
    if (g < 0) throw new Fault('a point lies on the corners around everything');
    const [t, u] = [first(e), first(g)];
    const [a, b, c, d] = [tail[e], tail[g], tail[before(e)], tail[before(g)]];
    const [bc, ca, ad, db] = [twin[next(e)], twin[before(e)], twin[next(g)], twin[before(g)]];
    const [v, w] = [this.used, this.used + 3];
    this.used += 6;
    // Around p: a b c on one side, b a d on the other.
    this.put(t, c, a, p);
    this.put(v, b, c, p);
    this.put(u, d, b, p);
    this.put(w, a, d, p);
    this.link(t, ca);
    this.link(v, bc);
    this.link(u, db);
    this.link(w, ad);
    this.link(v + 1, t + 2);
    this.link(t + 1, w + 2);
    this.link(w + 1, u + 2);
    this.link(u + 1, v + 2);
    this.settle([t, v, u, w], p);
  }

  /** Flips edges opposite the new point p until they are Delaunay's. */
  private settle(stack: number[], p: number): void {
    while (stack.length > 0) {
      const e = stack.pop()!;
      const g = this.twin[e];
      if (g < 0) continue;
      const [a, b, d] = [this.tail[e], this.tail[g], this.tail[before(g)]];
      if (!this.inCircle(a, b, p, d)) continue;
      this.flip(e);
      // The two edges that were the neighbour's now stand opposite p.
      for (const f of [e, next(e), before(e), g, next(g), before(g)])
        if (this.tail[f] !== p && this.tail[next(f)] !== p) stack.push(f);
    }
  }

  enforce(a: number, b: number): void {
    const { tail, twin } = this;
    const crossed: [number, number][] = [];
    // The triangle at a whose far edge the segment leaves by.
    let e = this.out[a];
    for (const start = e; ; ) {
      const [x, y] = [tail[next(e)], tail[before(e)]];
      if (x === b || y === b) return;
      if (this.side(a, x, b) > 0 && this.side(a, y, b) < 0) {
        e = next(e);
        break;
      }
      e = twin[before(e)];
      if (e === start || e < 0) throw new Fault('a segment lies on a vertex of the triangulation');
    }
    for (;;) {
      crossed.push([tail[e], tail[next(e)]]);
      const g = twin[e];
      const d = tail[before(g)];
      if (d === b) break;
      const s = this.side(a, b, d);
      if (s === 0) throw new Fault('a segment lies on a vertex of the triangulation');
      e = s > 0 ? next(g) : before(g);
    }
    let left = VAIN * (crossed.length + 1) ** 2;
    for (let i = 0; i < crossed.length; i++) {
      if (left-- < 0) throw new Fault('a segment cannot be put into the triangulation');
      const f = this.edge(crossed[i][0], crossed[i][1]);
      const g = twin[f];
      const [x, y, p, d] = [tail[f], tail[g], tail[before(f)], tail[before(g)]];
      if (this.side(p, d, x) * this.side(p, d, y) >= 0) {
        crossed.push(crossed[i]);
        continue;
      }
      this.flip(f);
      if (p !== a && p !== b && d !== a && d !== b && this.side(a, b, p) * this.side(a, b, d) < 0)
        crossed.push([p, d]);
    }
  }

  private edge(a: number, b: number): number {
    // The ring around a corner of everything is not closed.
    if (a >= this.n) return this.twin[this.edge(b, a)];
    let e = this.out[a];
    for (const start = e; ; ) {
      if (this.tail[next(e)] === b) return e;
      e = this.twin[before(e)];
      if (e === start || e < 0) throw new Fault('an edge of the triangulation is lost');
    }
  }

  private put(t: number, a: number, b: number, c: number): void {
    this.tail[t] = a;
    this.tail[t + 1] = b;
    this.tail[t + 2] = c;
    this.out[a] = t;
    this.out[b] = t + 1;
    this.out[c] = t + 2;
  }

  private link(e: number, g: number): void {
    this.twin[e] = g;
    if (g >= 0) this.twin[g] = e;
  }

  /** The other diagonal of the two triangles at an edge. */
  private flip(e: number): void {
    const { tail, twin, out } = this;
    const g = twin[e];
    const [a, b, p, d] = [tail[e], tail[g], tail[before(e)], tail[before(g)]];
    const [ofGn, ofEn] = [twin[next(g)], twin[next(e)]];
    tail[next(e)] = d;
    tail[next(g)] = p;
    this.link(e, ofGn);
    this.link(g, ofEn);
    this.link(next(e), next(g));
    out[a] = e;
    out[b] = g;
    out[d] = next(e);
    out[p] = next(g);
  }

  /** Twice the area of a, b, c: positive counter-clockwise, and exact. */
  private side(a: number, b: number, c: number): number {
    const { x, y } = this;
    return (x[b] - x[a]) * (y[c] - y[a]) - (y[b] - y[a]) * (x[c] - x[a]);
  }

  /** Whether d is certainly inside the circle through a, b, c. */
  private inCircle(a: number, b: number, c: number, d: number): boolean {
    const { x, y } = this;
    const [ax, ay, bx, by, cx, cy] = [
      x[a] - x[d],
      y[a] - y[d],
      x[b] - x[d],
      y[b] - y[d],
      x[c] - x[d],
      y[c] - y[d],
    ];
    const [al, bl, cl] = [ax * ax + ay * ay, bx * bx + by * by, cx * cx + cy * cy];
    const [bc, ca, ab] = [bx * cy - by * cx, cx * ay - cy * ax, ax * by - ay * bx];
    const sizes =
      al * (Math.abs(bx * cy) + Math.abs(by * cx)) +
      bl * (Math.abs(cx * ay) + Math.abs(cy * ax)) +
      cl * (Math.abs(ax * by) + Math.abs(ay * bx));
    return al * bc + bl * ca + cl * ab > ROUNDING * sizes;
  }
}

const first = (e: number): number => e - (e % 3);
const next = (e: number): number => (e % 3 === 2 ? e - 2 : e + 1);
const before = (e: number): number => (e % 3 === 0 ? e + 2 : e - 1);
