/** Which elements touch on the part: those whose copper conducts into each other's. */
import type { CopperElement } from '../drape/copper.ts';
import { JOIN } from './net-sheet.ts';

export interface Contact {
  /** Indices into the list given, a below b. */
  a: number;
  b: number;
}

/** Grid cell, mm: about the longest patch edge. */
const CELL = 0.1;

/**
 * Pairs of elements with triangles that overlap or are nearer to each other than `JOIN`, as the sheet of a net has them. That
 * two meet in a corner alone is a contact too, though no current passes there.
 */
export function contacts(elements: readonly CopperElement[]): Contact[] {
  const boxes = elements.map(boxOf);
  const out: Contact[] = [];
  for (let a = 0; a < elements.length; a++)
    for (let b = a + 1; b < elements.length; b++)
      if (meet(elements[a], boxes[a], elements[b], boxes[b])) out.push({ a, b });
  return out;
}

function boxOf({ copper: { positions: x } }: CopperElement): Float64Array {
  const box = Float64Array.of(Infinity, Infinity, Infinity, -Infinity, -Infinity, -Infinity);
  for (let i = 0; i < x.length; i += 3)
    for (let k = 0; k < 3; k++) {
      box[k] = Math.min(box[k], x[i + k]);
      box[3 + k] = Math.max(box[3 + k], x[i + k]);
    }
  return box;
}

function meet(a: CopperElement, boxA: Float64Array, b: CopperElement, boxB: Float64Array): boolean {
  // Only triangles where the boxes overlap can touch.
  const lo = [0, 1, 2].map((k) => Math.max(boxA[k], boxB[k]) - JOIN);
  const hi = [0, 1, 2].map((k) => Math.min(boxA[3 + k], boxB[3 + k]) + JOIN);
  if (lo.some((x, k) => x > hi[k])) return false;
  const size = lo.map((x, k) => Math.floor((hi[k] - x) / CELL) + 1);
  const cells = new Map<number, number[]>();
  for (let t = 0; t < b.copper.face.length; t++)
    eachCell(b, t, lo, hi, size, (cell) => {
      const list = cells.get(cell);
      if (list) list.push(t);
      else cells.set(cell, [t]);
      return false;
    });
  for (let t = 0; t < a.copper.face.length; t++)
    if (
      eachCell(a, t, lo, hi, size, (cell) => (cells.get(cell) ?? []).some((u) => trianglesTouch(a, t, b, u)))
    )
      return true;
  return false;
}

/** Cells that a triangle's box passes, within lo … hi. @returns whether one of them was what is looked for */
function eachCell(
  e: CopperElement,
  t: number,
  lo: readonly number[],
  hi: readonly number[],
  size: readonly number[],
  visit: (cell: number) => boolean,
): boolean {
  const { positions: x, triangles } = e.copper;
  const [a, b, c] = [3 * triangles[3 * t], 3 * triangles[3 * t + 1], 3 * triangles[3 * t + 2]];
  // Most triangles of a large element are far away: they must cost little.
  for (let k = 0; k < 3; k++) {
    if (x[a + k] + JOIN < lo[k] && x[b + k] + JOIN < lo[k] && x[c + k] + JOIN < lo[k]) return false;
    if (x[a + k] - JOIN > hi[k] && x[b + k] - JOIN > hi[k] && x[c + k] - JOIN > hi[k]) return false;
  }
  const from = [0, 0, 0];
  const to = [0, 0, 0];
  for (let k = 0; k < 3; k++) {
    const least = Math.min(x[a + k], x[b + k], x[c + k]) - JOIN;
    const most = Math.max(x[a + k], x[b + k], x[c + k]) + JOIN;
    from[k] = Math.max(0, Math.floor((least - lo[k]) / CELL));
    to[k] = Math.min(size[k] - 1, Math.floor((most - lo[k]) / CELL));
  }
  for (let l = from[2]; l <= to[2]; l++)
    for (let j = from[1]; j <= to[1]; j++)
      for (let i = from[0]; i <= to[0]; i++) if (visit((l * size[1] + j) * size[0] + i)) return true;
  return false;
}

/** Triangles of one face or of neighbours: their sides come near each other, or one holds a corner of the other. */
function trianglesTouch(a: CopperElement, t: number, b: CopperElement, u: number): boolean {
  const [p, q] = [cornersOf(a, t), cornersOf(b, u)];
  for (let i = 0; i < 3; i++)
    for (let j = 0; j < 3; j++)
      if (sidesNear(p, 3 * i, 3 * ((i + 1) % 3), q, 3 * j, 3 * ((j + 1) % 3))) return true;
  return holds(p, q) || holds(q, p);
}

function cornersOf({ copper: { positions: x, triangles } }: CopperElement, t: number): Float64Array {
  const out = new Float64Array(9);
  for (let i = 0; i < 9; i++) out[i] = x[3 * triangles[3 * t + Math.floor(i / 3)] + (i % 3)];
  return out;
}

/** Whether two segments come within `JOIN`: C. Ericson, *Real-Time Collision Detection*, 2005, §5.1.9. */
function sidesNear(p: Float64Array, a: number, b: number, q: Float64Array, c: number, d: number): boolean {
  let [uu, uv, vv, uw, vw] = [0, 0, 0, 0, 0];
  for (let k = 0; k < 3; k++) {
    const [u, v, w] = [p[b + k] - p[a + k], q[d + k] - q[c + k], p[a + k] - q[c + k]];
    uu += u * u;
    uv += u * v;
    vv += v * v;
    uw += u * w;
    vw += v * w;
  }
  const clamp = (x: number): number => Math.min(1, Math.max(0, x));
  const area = uu * vv - uv * uv;
  let s = area > 0 ? clamp((uv * vw - uw * vv) / area) : 0;
  const t = vv > 0 ? clamp((uv * s + vw) / vv) : 0;
  s = uu > 0 ? clamp((uv * t - uw) / uu) : 0;
  let off = 0;
  for (let k = 0; k < 3; k++)
    off += (p[a + k] + s * (p[b + k] - p[a + k]) - q[c + k] - t * (q[d + k] - q[c + k])) ** 2;
  return off < JOIN * JOIN;
}

/** Whether the first corner of q lies in p, no farther off its plane than `JOIN`. */
function holds(p: Float64Array, q: Float64Array): boolean {
  const u = [p[3] - p[0], p[4] - p[1], p[5] - p[2]];
  const v = [p[6] - p[0], p[7] - p[1], p[8] - p[2]];
  const w = [q[0] - p[0], q[1] - p[1], q[2] - p[2]];
  const [uu, uv, vv, wu, wv] = [dot(u, u), dot(u, v), dot(v, v), dot(w, u), dot(w, v)];
  const area = uu * vv - uv * uv;
  if (!(area > 0)) return false;
  const [s, t] = [(vv * wu - uv * wv) / area, (uu * wv - uv * wu) / area];
  if (s < 0 || t < 0 || s + t > 1) return false;
  const off = Math.max(0, dot(w, w) - 2 * (s * wu + t * wv) + s * s * uu + 2 * s * t * uv + t * t * vv);
  return off < JOIN * JOIN;
}

const dot = (x: readonly number[], y: readonly number[]): number => x[0] * y[0] + x[1] * y[1] + x[2] * y[2];
