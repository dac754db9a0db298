/**
 * The copper of one net as one sheet: every place once, triangles that meet at whole edges wherever copper touches.
 *
 * Outlines of the elements in each face (`face-loops.ts`) give the union face by face (`face-union.ts`). Along edges of
 * the part two faces may then have different vertices: a vertex that lies on a free edge of another triangle is put into it,
 * so that nothing is cut off there.
 */
import { PairMap } from '../base/pair-map.ts';
import type { CopperElement } from '../drape/copper.ts';
import { faceLoops } from './face-loops.ts';
import { faceUnion } from './face-union.ts';
import { Weld } from './weld.ts';

/**
 * Outlines nearer than this are one, mm: copper drawn edge to edge conducts, whatever rounding and the level lines that
 * outlines are made of have done to it (they are good to a tenth of it). A third of the usual plating's thickness, by which
 * copper grows sideways too.
 */
export const JOIN = 1e-3;

export interface NetSheet {
  /** Part frame, mm, 3 a vertex. */
  positions: Float64Array;
  /** 3 a triangle. */
  triangles: Uint32Array;
  /**
   * Of each triangle: the pad that covers it, an index into the elements given, the least of those that overlap or touch; -1
   * where none does.
   */
  pad: Int32Array;
  /** Of each element: the same, for a pad; -1 for others. */
  padOf: Int32Array;
}

/** The sheet of elements that were asked for before is kept with the first of them: rules and resistances share it. */
const kept = new WeakMap<CopperElement, { elements: readonly CopperElement[]; sheet: NetSheet }>();

export function netSheet(elements: readonly CopperElement[]): NetSheet {
  const known = elements.length > 0 ? kept.get(elements[0]) : undefined;
  if (known && known.elements.length === elements.length && known.elements.every((e, i) => e === elements[i]))
    return known.sheet;
  const sheet = makeSheet(elements);
  if (elements.length > 0) kept.set(elements[0], { elements: [...elements], sheet });
  return sheet;
}

function makeSheet(elements: readonly CopperElement[]): NetSheet {
  const weld = new Weld(JOIN);
  const ownerOf = (i: number): number => (elements[i].kind === 'pad' ? i : -1);
  const triangles: number[] = [];
  const pad: number[] = [];
  const parent = Int32Array.from(elements, (_, i) => i);
  const find = (i: number): number => {
    while (parent[i] !== i) i = parent[i] = parent[parent[i]];
    return i;
  };
  const join = (a: number, b: number): void => {
    const [p, q] = [find(a), find(b)];
    parent[Math.max(p, q)] = Math.min(p, q);
  };
  for (const face of faceLoops(
    elements.map((e) => e.copper),
    weld,
  )) {
    const union = faceUnion(face, ownerOf, weld, JOIN);
    for (const v of union.triangles) triangles.push(v);
    for (const owners of union.owners) {
      for (const o of owners) join(owners[0], o);
      pad.push(owners.length > 0 ? owners[0] : -1);
    }
  }
  const positions = Float64Array.from(weld.positions);
  const whole = withoutHanging(positions, triangles, pad);
  // Pads that touch are one.
  const padAt = new PairMap(whole.triangles.length);
  whole.triangles.forEach((v, e) => {
    const p = whole.pad[(e / 3) | 0];
    if (p < 0) return;
    const w = whole.triangles[e % 3 === 2 ? e - 2 : e + 1];
    const other = padAt.get(Math.min(v, w), Math.max(v, w), -1);
    if (other < 0) padAt.set(Math.min(v, w), Math.max(v, w), p);
    else join(p, other);
  });
  return {
    positions,
    triangles: Uint32Array.from(whole.triangles),
    pad: Int32Array.from(whole.pad, (p) => (p < 0 ? -1 : find(p))),
    padOf: Int32Array.from(elements, (e, i) => (e.kind === 'pad' ? find(i) : -1)),
  };
}

/** Rounds of putting vertices into edges: each cuts one side of a triangle, and what a round cuts may lie near more. */
const ROUNDS = 16;

/** Triangles cut where vertices lie on edges that only they have. */
function withoutHanging(
  x: Float64Array,
  triangles: number[],
  pad: number[],
): { triangles: number[]; pad: number[] } {
  let whole = { triangles, pad };
  for (let round = 0; round < ROUNDS; round++) {
    const through = verticesOn(x, whole.triangles, freeEdges(whole.triangles));
    if (through.size === 0) break;
    const cut = { triangles: [] as number[], pad: [] as number[] };
    for (let t = 0; t < whole.pad.length; t++) {
      const side = [3 * t, 3 * t + 1, 3 * t + 2].find((e) => through.has(e)) ?? -1;
      const [a, b, c] = [0, 1, 2].map((k) => whole.triangles[3 * t + ((Math.max(0, side) + k) % 3)]);
      const chain = side < 0 ? [a, b] : [a, ...through.get(side)!, b];
      for (let i = 0; i + 1 < chain.length; i++) {
        cut.triangles.push(chain[i], chain[i + 1], c);
        cut.pad.push(whole.pad[t]);
      }
    }
    whole = cut;
  }
  return whole;
}

/** Edges, by the place of their first corner in the list, that no other triangle has. */
function freeEdges(triangles: readonly number[]): number[] {
  const count = new PairMap(triangles.length);
  const pair = (e: number): [number, number] => {
    const [a, b] = [triangles[e], triangles[e % 3 === 2 ? e - 2 : e + 1]];
    return a < b ? [a, b] : [b, a];
  };
  for (let e = 0; e < triangles.length; e++) {
    const [a, b] = pair(e);
    count.set(a, b, count.get(a, b, 0) + 1);
  }
  const out: number[] = [];
  for (let e = 0; e < triangles.length; e++) if (count.get(...pair(e), 0) === 1) out.push(e);
  return out;
}

/** A cell is at least so many times the tolerance wide; places along an edge are this share of a cell apart. */
const SPACED = 20;
const STEP = 0.9;

/** Ends of free edges that lie on other ones, in their order along each. */
function verticesOn(
  x: Float64Array,
  triangles: readonly number[],
  free: readonly number[],
): Map<number, number[]> {
  const headOf = (e: number): number => triangles[e % 3 === 2 ? e - 2 : e + 1];
  const lengthOf = (e: number): number => distance(x, triangles[e], headOf(e));
  const total = free.reduce((sum, e) => sum + lengthOf(e), 0);
  const cell = Math.max(total / Math.max(1, free.length), SPACED * JOIN);
  // Cells that share a number do no harm: what lies on an edge is decided by distances, and asked once.
  const cells = new Map<number, number[]>();
  const number = (i: number, j: number, k: number): number =>
    (Math.imul(i, 73856093) ^ Math.imul(j, 19349663) ^ Math.imul(k, 83492791)) >>> 0;
  const asked = new Int32Array(x.length / 3).fill(-1);
  for (const e of free)
    for (const v of [triangles[e], headOf(e)]) {
      if (asked[v] === -2) continue;
      asked[v] = -2;
      const key = number(
        Math.floor(x[3 * v] / cell),
        Math.floor(x[3 * v + 1] / cell),
        Math.floor(x[3 * v + 2] / cell),
      );
      const list = cells.get(key);
      if (list) list.push(v);
      else cells.set(key, [v]);
    }
  const out = new Map<number, number[]>();
  for (const e of free) {
    const [a, b] = [3 * triangles[e], 3 * headOf(e)];
    const l = lengthOf(e);
    if (l === 0) continue;
    const found: { v: number; t: number }[] = [];
    // Places along the edge, less than a cell apart: what lies on it is in one of the eight cells around one of them.
    const steps = Math.ceil(l / (STEP * cell));
    for (let s = 0; s <= steps; s++) {
      const [i, j, k] = [0, 1, 2].map((n) =>
        Math.floor((x[a + n] + (s / steps) * (x[b + n] - x[a + n])) / cell - 0.5),
      );
      for (let n = 0; n < 8; n++)
        for (const v of cells.get(number(i + (n & 1), j + ((n >> 1) & 1), k + (n >> 2))) ?? []) {
          if (asked[v] === e || 3 * v === a || 3 * v === b) continue;
          asked[v] = e;
          const t = shareOn(x, v, a, b, l);
          if (t !== null) found.push({ v, t });
        }
    }
    if (found.length > 0)
      out.set(
        e,
        found.sort((p, q) => p.t - q.t || p.v - q.v).map((f) => f.v),
      );
  }
  return out;
}

/** How far along an edge a vertex lies on it, 0 … 1; null where it lies off. */
function shareOn(x: Float64Array, v: number, a: number, b: number, l: number): number | null {
  let t = 0;
  for (let k = 0; k < 3; k++) t += ((x[3 * v + k] - x[a + k]) * (x[b + k] - x[a + k])) / (l * l);
  if (!(t > 0 && t < 1)) return null;
  let off = 0;
  for (let k = 0; k < 3; k++) off += (x[3 * v + k] - x[a + k] - t * (x[b + k] - x[a + k])) ** 2;
  return off < JOIN * JOIN ? t : null;
}

const distance = (x: Float64Array, a: number, b: number): number =>
  Math.hypot(x[3 * a] - x[3 * b], x[3 * a + 1] - x[3 * b + 1], x[3 * a + 2] - x[3 * b + 2]);
