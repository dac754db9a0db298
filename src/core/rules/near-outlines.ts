/** Places where outlines come near each other, or near themselves, by a grid of cells. */
import { pointsToKeep } from '../base/thin.ts';
import { add, at3, distance, lerp, normalize, sub, type Vec3 } from '../base/vec.ts';
import type { CopperElement } from '../drape/copper.ts';
import { TRUE_TO } from '../drape/element.ts';

/** A point of one outline and the nearest place on a piece of another. */
export interface Near {
  /** mm, straight */
  distance: number;
  at: Vec3;
  to: Vec3;
  /** Unit directions of the outline at `at`, halfway between its two pieces, and of the piece that `to` lies on: copper on the left. */
  heading: Vec3;
  facing: Vec3;
}

/** Cells no smaller than this, mm: a gap of nothing would have cells of nothing. */
const LEAST_CELL = 0.05;

/** Outlines of all elements, in pieces; thinned first, which keeps them as true as they are. */
export class OutlineGrid {
  private readonly elements: number;
  private readonly within: number;
  /** 6 a piece, none longer than a cell. */
  private readonly lines: Float64Array;
  /** Unit, 3 a piece: the outline's direction where the piece begins. */
  private readonly headings: Float64Array;
  /** Element of each piece. */
  private readonly element: Int32Array;
  private readonly cell: number;
  private readonly lo = [Infinity, Infinity, Infinity];
  private readonly size: number[];
  /** Pieces that come within reach of a cell. */
  private readonly cells = new Map<number, number[]>();

  /** @param within  mm: what is farther away is never found */
  constructor(elements: readonly CopperElement[], within: number) {
    this.elements = elements.length;
    this.within = within;
    this.cell = Math.max(within, LEAST_CELL);
    const pieces: number[] = [];
    const headings: number[] = [];
    const element: number[] = [];
    const hi = [-Infinity, -Infinity, -Infinity];
    elements.forEach((e, n) => {
      for (const loop of e.outline) {
        const own = piecesOf(loop, this.cell);
        const ways = own.map(([from, to]) => normalize(sub(to, from)));
        own.forEach(([from, to], i) => {
          pieces.push(...from, ...to);
          headings.push(...normalize(add(ways.at(i - 1)!, ways[i])));
          element.push(n);
        });
        for (let i = 0; i < loop.length; i++) {
          this.lo[i % 3] = Math.min(this.lo[i % 3], loop[i]);
          hi[i % 3] = Math.max(hi[i % 3], loop[i]);
        }
      }
    });
    this.lines = Float64Array.from(pieces);
    this.headings = Float64Array.from(headings);
    this.element = Int32Array.from(element);
    this.size = this.lo.map((l, k) => Math.max(1, Math.floor((hi[k] - l) / this.cell) + 1));
    for (let s = 0; s < element.length; s++) this.enter(s);
  }

  /**
   * @param meet  which elements to compare, by number, the lower first; one with itself, too
   * @param keep  what to leave out at once
   * @returns by `a * elements.length + b`, a <= b: every point of either outline with every piece of the other that is nearer
   *          than `within`, nearest first
   */
  pairs(
    meet: (a: number, b: number) => boolean,
    keep: (near: Near) => boolean = () => true,
  ): Map<number, Near[]> {
    const { lines, headings, element, within } = this;
    const found = new Map<number, Near[]>();
    for (let s = 0; s < element.length; s++) {
      const p = at3(lines, 2 * s);
      const heading = at3(headings, s);
      for (const o of this.around(p)) {
        const [a, b] = element[s] < element[o] ? [element[s], element[o]] : [element[o], element[s]];
        if (o === s || !meet(a, b)) continue;
        const foot = footOn(p, lines, 6 * o);
        if (foot.distance >= within) continue;
        const near: Near = { ...foot, at: p, heading, facing: directionOf(lines, 6 * o) };
        if (!keep(near)) continue;
        const key = a * this.elements + b;
        const list = found.get(key);
        if (list) list.push(near);
        else found.set(key, [near]);
      }
    }
    for (const list of found.values()) list.sort((x, y) => x.distance - y.distance);
    return found;
  }

  /** Whether no outline of an element comes nearer to a place than so many mm. @param radius  `within` at the most */
  isClear(element: number, p: Vec3, radius: number): boolean {
    return !this.around(p).some(
      (o) => this.element[o] === element && footOn(p, this.lines, 6 * o).distance < radius,
    );
  }

  /** A piece stands in every cell that it comes near to, so that a place asks its own cell alone. */
  private enter(s: number): void {
    const { lines, within } = this;
    const [from, to] = [
      [0, 0, 0],
      [0, 0, 0],
    ];
    for (let k = 0; k < 3; k++) {
      const [x, y] = [lines[6 * s + k], lines[6 * s + 3 + k]];
      from[k] = this.column(Math.min(x, y) - within, k);
      to[k] = this.column(Math.max(x, y) + within, k);
    }
    for (let l = from[2]; l <= to[2]; l++)
      for (let j = from[1]; j <= to[1]; j++)
        for (let i = from[0]; i <= to[0]; i++) {
          const c = this.key(i, j, l);
          const list = this.cells.get(c);
          if (list) list.push(s);
          else this.cells.set(c, [s]);
        }
  }

  private around(p: Vec3): readonly number[] {
    return this.cells.get(this.key(this.column(p[0], 0), this.column(p[1], 1), this.column(p[2], 2))) ?? [];
  }

  private column(x: number, k: number): number {
    return Math.max(0, Math.min(this.size[k] - 1, Math.floor((x - this.lo[k]) / this.cell)));
  }

  private key(i: number, j: number, l: number): number {
    return (l * this.size[1] + j) * this.size[0] + i;
  }
}

function piecesOf(loop: Float64Array, longest: number): [Vec3, Vec3][] {
  const keep = pointsToKeep(3, loop, TRUE_TO);
  const out: [Vec3, Vec3][] = [];
  let from = at3(loop, 0);
  for (let i = 1; i < keep.length; i++) {
    if (!keep[i]) continue;
    const to = at3(loop, i);
    const count = Math.max(1, Math.ceil(distance(from, to) / longest));
    for (let k = 0; k < count; k++) out.push([lerp(from, to, k / count), lerp(from, to, (k + 1) / count)]);
    from = to;
  }
  return out;
}

const directionOf = (x: Float64Array, a: number): Vec3 =>
  normalize([x[a + 3] - x[a], x[a + 4] - x[a + 1], x[a + 5] - x[a + 2]]);

function footOn(p: Vec3, x: Float64Array, a: number): Pick<Near, 'distance' | 'to'> {
  const e = [x[a + 3] - x[a], x[a + 4] - x[a + 1], x[a + 5] - x[a + 2]];
  const q = [p[0] - x[a], p[1] - x[a + 1], p[2] - x[a + 2]];
  const ee = e[0] ** 2 + e[1] ** 2 + e[2] ** 2;
  const t = ee > 0 ? Math.min(1, Math.max(0, (q[0] * e[0] + q[1] * e[1] + q[2] * e[2]) / ee)) : 0;
  return {
    distance: Math.hypot(q[0] - t * e[0], q[1] - t * e[1], q[2] - t * e[2]),
    to: [x[a] + t * e[0], x[a + 1] + t * e[1], x[a + 2] + t * e[2]],
  };
}
