/** Which elements touch on the part, and where. */
import type { CopperElement } from '../drape/copper.ts';

export interface Contact {
  /** Indices into the list given. */
  a: number;
  b: number;
  /** Arc length on a trace where the other meets it, the middle of the touch; 0 on pads and regions. mm */
  alongA: number;
  alongB: number;
}

/** Patch triangles whose middles are this near touch, mm: about half a patch edge. */
const TOUCH = 0.03;
/** Grid cell, mm. */
const CELL = 0.1;

/** Pairs of elements whose copper overlaps or touches, found on the triangles of their patches. */
export function contacts(elements: readonly CopperElement[]): Contact[] {
  const discs = elements.map(discsOf);
  const out: Contact[] = [];
  for (let a = 0; a < elements.length; a++)
    for (let b = a + 1; b < elements.length; b++) {
      const touch = meet(elements[a], discs[a], elements[b], discs[b]);
      if (touch) out.push({ a, b, ...touch });
    }
  return out;
}

/** Middles (3 a triangle), reach from the middle to the farthest corner, and the box around all, of an element's triangles. */
interface Discs {
  middle: Float64Array;
  reach: Float64Array;
  box: Float64Array;
}

function discsOf(e: CopperElement): Discs {
  const { positions: x, triangles, face } = e.copper;
  const middle = new Float64Array(3 * face.length);
  const reach = new Float64Array(face.length);
  const box = Float64Array.of(Infinity, Infinity, Infinity, -Infinity, -Infinity, -Infinity);
  for (let t = 0; t < face.length; t++) {
    for (let k = 0; k < 3; k++) {
      const m =
        (x[3 * triangles[3 * t] + k] + x[3 * triangles[3 * t + 1] + k] + x[3 * triangles[3 * t + 2] + k]) / 3;
      middle[3 * t + k] = m;
      box[k] = Math.min(box[k], m);
      box[3 + k] = Math.max(box[3 + k], m);
    }
    for (let i = 0; i < 3; i++) {
      const o = 3 * triangles[3 * t + i];
      reach[t] = Math.max(
        reach[t],
        Math.hypot(x[o] - middle[3 * t], x[o + 1] - middle[3 * t + 1], x[o + 2] - middle[3 * t + 2]),
      );
    }
  }
  return { middle, reach, box };
}

function meet(
  a: CopperElement,
  da: Discs,
  b: CopperElement,
  db: Discs,
): { alongA: number; alongB: number } | null {
  // Only triangles where the boxes overlap can touch.
  const lo = [0, 1, 2].map((k) => Math.max(da.box[k], db.box[k]) - CELL);
  const hi = [0, 1, 2].map((k) => Math.min(da.box[3 + k], db.box[3 + k]) + CELL);
  if (lo.some((x, k) => x > hi[k])) return null;
  const size = lo.map((x, k) => Math.floor((hi[k] - x) / CELL) + 1);
  const inBox = (m: Float64Array, t: number) =>
    [0, 1, 2].every((k) => m[3 * t + k] >= lo[k] && m[3 * t + k] <= hi[k]);
  const cells = new Map<number, number[]>();
  const index = (m: Float64Array, t: number, k: number) => Math.floor((m[3 * t + k] - lo[k]) / CELL);
  for (let t = 0; t < db.reach.length; t++) {
    if (!inBox(db.middle, t)) continue;
    const c = (index(db.middle, t, 2) * size[1] + index(db.middle, t, 1)) * size[0] + index(db.middle, t, 0);
    const list = cells.get(c);
    if (list) list.push(t);
    else cells.set(c, [t]);
  }
  let sumA = 0;
  let sumB = 0;
  let n = 0;
  for (let ta = 0; ta < da.reach.length; ta++) {
    if (!inBox(da.middle, ta)) continue;
    const [i, j, l] = [index(da.middle, ta, 0), index(da.middle, ta, 1), index(da.middle, ta, 2)];
    for (let dz = -1; dz <= 1; dz++)
      for (let dy = -1; dy <= 1; dy++)
        for (let dx = -1; dx <= 1; dx++) {
          if (i + dx < 0 || i + dx >= size[0] || j + dy < 0 || j + dy >= size[1]) continue;
          for (const tb of cells.get(((l + dz) * size[1] + j + dy) * size[0] + i + dx) ?? []) {
            const d = Math.hypot(
              da.middle[3 * ta] - db.middle[3 * tb],
              da.middle[3 * ta + 1] - db.middle[3 * tb + 1],
              da.middle[3 * ta + 2] - db.middle[3 * tb + 2],
            );
            if (d > Math.max(TOUCH, Math.min(da.reach[ta], db.reach[tb]))) continue;
            sumA += along(a, ta);
            sumB += along(b, tb);
            n++;
          }
        }
  }
  return n > 0 ? { alongA: sumA / n, alongB: sumB / n } : null;
}

function along(e: CopperElement, t: number): number {
  if (e.kind !== 'trace') return 0;
  const s = 3 * e.copper.source[t];
  const { triangles, along: at } = e.field;
  return Math.min(
    e.length,
    Math.max(0, (at[triangles[s]] + at[triangles[s + 1]] + at[triangles[s + 2]]) / 3),
  );
}
