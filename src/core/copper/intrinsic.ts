/**
 * A triangulation known by the lengths of its edges alone: where its vertices lie is never asked, so that edges may be
 * flipped and cut over the folds of a part as in the plane, and long thin faces do no harm. Copper on an edge of the part
 * lies flat, if the two faces are rolled out.
 *
 * Delaunay flips: A. Bobenko and B. Springborn, Discrete Comput. Geom. 38 (2007) 740; with edge lengths only, M. Fisher,
 * B. Springborn, P. Schröder and A. Bobenko, Computing 81 (2007) 199. Faces that rounding has left without a height get one
 * by N. Sharp and K. Crane, Comput. Graph. Forum 39 (2020) 69, §4.5.
 */
import { PairMap } from '../base/pair-map.ts';

/** Share of the mean edge that three sides of a triangle must keep from lying on one line. */
const FLAT = 1e-9;
/** Sum of cotangents below which an edge is flipped: less than nothing, or rounding would flip it back and forth. */
const FLIP = -1e-10;

/** What holds an edge at one potential: none, or an electrode's number. */
const NONE = -1;

export class IntrinsicMesh {
  /** Corners, 3 a triangle; side s runs from tail[s] to the next corner's vertex. */
  tail: number[] = [];
  /** Edge that a side is of. */
  edge: number[] = [];
  /** Next side of the same edge, around in a ring: the side itself where nothing lies beyond it. */
  twin: number[] = [];
  /** Of each edge: length, a side, and the electrode along it. */
  length: number[] = [];
  side: number[] = [];
  held: number[] = [];
  /** Of each vertex: the electrode at it, or -1. */
  electrode: number[] = [];

  get triangles(): number {
    return this.tail.length / 3;
  }

  /**
   * @param x         mm, 3 a vertex
   * @param corners   3 a triangle. Triangles that share two vertices share the edge, whatever their number; those that
   *                  share no more than a corner do not touch
   * @param electrode of the edge between two vertices, -1 for none: an edge on an electrode has nothing beyond it
   */
  constructor(x: Float64Array, corners: ArrayLike<number>, electrode: (a: number, b: number) => number) {
    const number = new PairMap(corners.length);
    const n = corners.length;
    const headOf = (s: number): number => corners[next(s)];
    for (let s = 0; s < n; s++) {
      const [a, b] = [Math.min(corners[s], headOf(s)), Math.max(corners[s], headOf(s))];
      const on = electrode(a, b);
      const known = on < 0 ? number.get(a, b, -1) : -1;
      if (known >= 0) {
        this.edge.push(known);
        const first = this.side[known];
        this.twin.push(this.twin[first]);
        this.twin[first] = s;
        continue;
      }
      const e = this.length.length;
      if (on < 0) number.set(a, b, e);
      this.edge.push(e);
      this.twin.push(s);
      this.side.push(s);
      this.held.push(on);
      this.length.push(
        Math.hypot(x[3 * a] - x[3 * b], x[3 * a + 1] - x[3 * b + 1], x[3 * a + 2] - x[3 * b + 2]),
      );
    }
    this.numberCorners(corners);
    this.giveHeight();
  }

  /** Corners of triangles that edges join are one vertex. */
  private numberCorners(corners: ArrayLike<number>): void {
    const n = corners.length;
    const parent = Int32Array.from({ length: n }, (_, i) => i);
    const find = (i: number): number => {
      while (parent[i] !== i) i = parent[i] = parent[parent[i]];
      return i;
    };
    for (let s = 0; s < n; s++) {
      const t = this.twin[s];
      if (t === s) continue;
      const [a, b] = corners[t] === corners[s] ? [t, next(t)] : [next(t), t];
      parent[find(a)] = find(s);
      parent[find(b)] = find(next(s));
    }
    const vertex = new Int32Array(n).fill(-1);
    for (let s = 0; s < n; s++) {
      const r = find(s);
      if (vertex[r] < 0) {
        vertex[r] = this.electrode.length;
        this.electrode.push(NONE);
      }
      this.tail.push(vertex[r]);
    }
    for (let s = 0; s < n; s++)
      if (this.held[this.edge[s]] >= 0)
        this.electrode[this.tail[s]] = this.electrode[this.tail[next(s)]] = this.held[this.edge[s]];
  }

  /** Lengthens all edges by the least that gives every triangle a height. */
  private giveHeight(): void {
    const { length, edge } = this;
    const flat = (FLAT * length.reduce((a, b) => a + b, 0)) / Math.max(1, length.length);
    let lacking = 0;
    for (let s = 0; s < edge.length; s++) {
      const [a, b, c] = [length[edge[s]], length[edge[next(s)]], length[edge[before(s)]]];
      lacking = Math.max(lacking, flat + a - b - c);
    }
    if (lacking > 0) for (let e = 0; e < length.length; e++) length[e] += lacking;
  }

  /** Half the cotangents of a triangle's angles, each opposite side 3t + k. */
  halfCotangents(t: number, into: Float64Array): void {
    const { length, edge } = this;
    const [a, b, c] = [length[edge[3 * t]], length[edge[3 * t + 1]], length[edge[3 * t + 2]]];
    const area8 = 8 * heron(a, b, c);
    into[0] = (b * b + c * c - a * a) / area8;
    into[1] = (c * c + a * a - b * b) / area8;
    into[2] = (a * a + b * b - c * c) / area8;
  }

  area(t: number): number {
    const { length, edge } = this;
    return heron(length[edge[3 * t]], length[edge[3 * t + 1]], length[edge[3 * t + 2]]);
  }

  /** Flips to Delaunay's triangulation. @param edges  to look at first; default all */
  makeDelaunay(edges?: readonly number[]): void {
    const stack = edges ? [...edges] : Array.from(this.length, (_, e) => e);
    const waits = new Set(stack);
    while (stack.length > 0) {
      const e = stack.pop()!;
      waits.delete(e);
      const s = this.side[e];
      const t = this.twin[s];
      if (!this.isInner(s) || !(this.cotangent(s) + this.cotangent(t) < FLIP)) continue;
      this.flip(s);
      for (const f of [next(s), before(s), next(t), before(t), s, t])
        if (this.edge[f] !== e && !waits.has(this.edge[f])) {
          waits.add(this.edge[f]);
          stack.push(this.edge[f]);
        }
    }
  }

  /** Two triangles, wound alike, and not one on both sides. */
  isInner(s: number): boolean {
    const t = this.twin[s];
    return (
      t !== s &&
      this.twin[t] === s &&
      ((s / 3) | 0) !== ((t / 3) | 0) &&
      this.tail[s] === this.tail[next(t)] &&
      this.tail[t] === this.tail[next(s)]
    );
  }

  /** Of the angle opposite a side. */
  private cotangent(s: number): number {
    const { length, edge } = this;
    const [a, b, c] = [length[edge[s]], length[edge[next(s)]], length[edge[before(s)]]];
    return (b * b + c * c - a * a) / (4 * heron(a, b, c));
  }

  /** The other diagonal of the two triangles, rolled out. */
  flip(s: number): void {
    const { tail, edge, twin, side, length } = this;
    const t = twin[s];
    const e = edge[s];
    const [l, sn, sb, tn, tb] = [length[e], next(s), before(s), next(t), before(t)];
    // p above the edge, q below it; x along the edge from the tail of s.
    const px = (l * l + length[edge[sb]] ** 2 - length[edge[sn]] ** 2) / (2 * l);
    const qx = (l * l + length[edge[tn]] ** 2 - length[edge[tb]] ** 2) / (2 * l);
    const py = (2 * heron(l, length[edge[sn]], length[edge[sb]])) / l;
    const qy = (2 * heron(l, length[edge[tn]], length[edge[tb]])) / l;
    const [p, q] = [tail[sb], tail[tb]];
    // Sides s and t take the edges that tn and sn had; those take the new diagonal.
    this.move(tn, s);
    this.move(sn, t);
    tail[sn] = q;
    tail[tn] = p;
    edge[sn] = edge[tn] = e;
    twin[sn] = tn;
    twin[tn] = sn;
    side[e] = sn;
    length[e] = Math.hypot(px - qx, py + qy);
  }

  /** Side `to` takes the place of `from` in the ring of its edge. The tail is not touched. */
  move(from: number, to: number): void {
    const e = this.edge[from];
    if (this.twin[from] === from) this.twin[to] = to;
    else {
      let r = from;
      while (this.twin[r] !== from) r = this.twin[r];
      this.twin[to] = this.twin[from];
      this.twin[r] = to;
    }
    this.edge[to] = e;
    if (this.side[e] === from) this.side[e] = to;
  }

  /** Three triangles for one. */
  insert(t: number, corner: readonly number[], o: readonly [number, number]): number[] {
    const { tail, edge, twin, side, length, held } = this;
    const m = this.electrode.length;
    this.electrode.push(NONE);
    const spoke = length.length;
    const [u, w] = [tail.length, tail.length + 3];
    const [a, b, c] = [tail[3 * t], tail[3 * t + 1], tail[3 * t + 2]];
    for (let k = 0; k < 3; k++) {
      length.push(Math.hypot(corner[2 * k] - o[0], corner[2 * k + 1] - o[1]));
      held.push(NONE);
    }
    tail.push(b, c, m, c, a, m);
    edge.push(-1, spoke + 2, spoke + 1, -1, spoke, spoke + 2);
    twin.push(u, w + 2, 3 * t + 1, w, 3 * t + 2, u + 1);
    this.move(3 * t + 1, u);
    this.move(3 * t + 2, w);
    tail[3 * t + 2] = m;
    edge[3 * t + 1] = spoke + 1;
    edge[3 * t + 2] = spoke;
    twin[3 * t + 1] = u + 2;
    twin[3 * t + 2] = w + 1;
    side.push(3 * t + 2, 3 * t + 1, u + 1);
    return [edge[3 * t], edge[u], edge[w], spoke, spoke + 1, spoke + 2];
  }

  /** Cuts an edge in the middle, and every triangle at it. @returns the edges that came about or were cut */
  split(e: number): number[] {
    const { tail, edge, twin, side, length, held, electrode } = this;
    const ring: number[] = [];
    let s = side[e];
    do {
      ring.push(s);
      s = twin[s];
    } while (s !== side[e]);
    // A triangle that has the edge twice, rolled up, is cut through its third edge.
    for (const r of ring)
      for (const [other, third] of [
        [next(r), before(r)],
        [before(r), next(r)],
      ])
        if (edge[other] === e) return this.split(edge[third]);
    const m = electrode.length;
    electrode.push(held[e]);
    const l = length[e];
    const a = tail[ring[0]];
    const far = length.length;
    // The half at a keeps the number; the other half is new.
    length[e] = l / 2;
    length.push(l / 2);
    held.push(held[e]);
    side.push(-1);
    const touched = [e, far];
    const [nearHalf, farHalf]: number[][] = [[], []];
    for (const r of ring) {
      const [n, b] = [next(r), before(r)];
      const middle = length.length;
      length.push(Math.sqrt(Math.max(0, 2 * (length[edge[n]] ** 2 + length[edge[b]] ** 2) - l * l)) / 2);
      held.push(NONE);
      const u = tail.length;
      // r keeps tail → middle; the new triangle has middle → head, head → apex, apex → middle.
      tail.push(m, tail[n], tail[b]);
      edge.push(-1, -1, middle);
      twin.push(u, u + 1, n);
      this.move(n, u + 1);
      tail[n] = m;
      edge[n] = middle;
      twin[n] = u + 2;
      side.push(n);
      // Both ends may be one vertex, on a tube: the two sides then run against each other.
      const forward = r === ring[0] || (tail[r] === a && tail[u + 1] !== a);
      (forward ? nearHalf : farHalf).push(r);
      (forward ? farHalf : nearHalf).push(u);
      edge[r] = forward ? e : far;
      edge[u] = forward ? far : e;
      touched.push(middle, edge[u + 1], edge[b]);
    }
    for (const half of [nearHalf, farHalf])
      half.forEach((h, i) => {
        twin[h] = half[(i + 1) % half.length];
      });
    side[e] = nearHalf[0];
    side[far] = farHalf[0];
    return touched;
  }
}

/** Area of a triangle by its sides, as W. Kahan wrote Heron's formula: right for needles too. */
export function heron(a: number, b: number, c: number): number {
  if (a < b) [a, b] = [b, a];
  if (b < c) [b, c] = [c, b];
  if (a < b) [a, b] = [b, a];
  return Math.sqrt(Math.max(0, (a + (b + c)) * (c - (a - b)) * (c + (a - b)) * (a + (b - c)))) / 4;
}

export const next = (s: number): number => (s % 3 === 2 ? s - 2 : s + 1);
export const before = (s: number): number => (s % 3 === 0 ? s + 2 : s - 1);
