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

/** Patch triangles whose middles are this near touch, mm: half the fine patch edge. */
const TOUCH = 0.03;

/** Pairs of elements whose copper overlaps or touches, found on the triangles of their patches. */
export function contacts(elements: readonly CopperElement[]): Contact[] {
  const out: Contact[] = [];
  const boxes = elements.map((e) => boxOf(e.copper.positions));
  for (let a = 0; a < elements.length; a++)
    for (let b = a + 1; b < elements.length; b++) {
      if (!boxes[a].every((_, k) => (k < 3 ? boxes[a][k] <= boxes[b][k + 3] + TOUCH : boxes[a][k] >= boxes[b][k - 3] - TOUCH))) continue;
      const touch = meet(elements[a], elements[b]);
      if (touch) out.push({ a, b, ...touch });
    }
  return out;
}

function meet(a: CopperElement, b: CopperElement): { alongA: number; alongB: number } | null {
  const cells = new Map<string, number[]>();
  const cell = (m: readonly number[], dx = 0, dy = 0, dz = 0) => `${Math.floor(m[0] / CELL) + dx},${Math.floor(m[1] / CELL) + dy},${Math.floor(m[2] / CELL) + dz}`;
  for (let t = 0; t < b.copper.face.length; t++) {
    const key = cell(disc(b, t)[0]);
    const list = cells.get(key);
    if (list) list.push(t);
    else cells.set(key, [t]);
  }
  let sumA = 0;
  let sumB = 0;
  let n = 0;
  for (let ta = 0; ta < a.copper.face.length; ta++) {
    const [m] = disc(a, ta);
    for (let k = 0; k < 27; k++)
      for (const tb of cells.get(cell(m, (k % 3) - 1, (Math.floor(k / 3) % 3) - 1, Math.floor(k / 9) - 1)) ?? []) {
        if (!near(a, ta, b, tb)) continue;
        sumA += along(a, ta);
        sumB += along(b, tb);
        n++;
      }
  }
  return n > 0 ? { alongA: sumA / n, alongB: sumB / n } : null;
}

/** Patch triangles are no larger than the sampling step, mm: neighbours lie in neighbouring cells. */
const CELL = 0.1;

/** Whether the middles of two small triangles are no farther apart than their sizes and the touch allow. */
function near(a: CopperElement, ta: number, b: CopperElement, tb: number): boolean {
  const [pa, ra] = disc(a, ta);
  const [pb, rb] = disc(b, tb);
  return Math.hypot(pa[0] - pb[0], pa[1] - pb[1], pa[2] - pb[2]) <= Math.max(TOUCH, Math.min(ra, rb));
}

function disc(e: CopperElement, t: number): [number[], number] {
  const x = e.copper.positions;
  const v = [0, 1, 2].map((i) => 3 * e.copper.triangles[3 * t + i]);
  const m = [0, 1, 2].map((k) => (x[v[0] + k] + x[v[1] + k] + x[v[2] + k]) / 3);
  return [m, Math.max(...v.map((o) => Math.hypot(x[o] - m[0], x[o + 1] - m[1], x[o + 2] - m[2])))];
}

function along(e: CopperElement, t: number): number {
  if (e.kind !== 'trace') return 0;
  const s = 3 * e.copper.source[t];
  const sum = [0, 1, 2].reduce((acc, i) => acc + e.field.along[e.field.triangles[s + i]], 0) / 3;
  return Math.min(e.length, Math.max(0, sum));
}

function boxOf(x: Float64Array): number[] {
  const box = [Infinity, Infinity, Infinity, -Infinity, -Infinity, -Infinity];
  for (let i = 0; i < x.length; i++) {
    box[i % 3] = Math.min(box[i % 3], x[i]);
    box[3 + (i % 3)] = Math.max(box[3 + (i % 3)], x[i]);
  }
  return box;
}
