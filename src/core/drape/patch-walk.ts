/** From the drawing to the part: flat lines walked over the triangles of a map, through every face they cross. */
import type { Vec3 } from '../base/vec.ts';
import type { SurfacePath } from './copper.ts';
import type { MapPatch } from './map-patch.ts';

/** A weight this far below 0 is on the side of a triangle: rounding. */
const SIDE = 1e-9;

export interface WalkedLine {
  path: SurfacePath;
  /** Where the flat line left the map, as flat coordinates; null where it was walked to its end. */
  left: readonly [number, number] | null;
}

/** Prepared for one map: finds triangles by flat coordinates. */
export class PatchWalk {
  private readonly patch: MapPatch;
  private readonly cells: Int32Array[];
  private readonly lo: [number, number];
  private readonly side: number;
  private readonly columns: number;
  private readonly rows: number;

  constructor(patch: MapPatch) {
    this.patch = patch;
    const { flat, triangles } = patch;
    let [lu, lv, hu, hv] = [Infinity, Infinity, -Infinity, -Infinity];
    for (const c of triangles) {
      lu = Math.min(lu, flat[2 * c]);
      hu = Math.max(hu, flat[2 * c]);
      lv = Math.min(lv, flat[2 * c + 1]);
      hv = Math.max(hv, flat[2 * c + 1]);
    }
    const count = triangles.length / 3;
    this.lo = [lu, lv];
    this.side = count > 0 ? Math.sqrt(((hu - lu) * (hv - lv)) / count) || 1 : 1;
    this.columns = count > 0 ? Math.floor((hu - lu) / this.side) + 1 : 0;
    this.rows = count > 0 ? Math.floor((hv - lv) / this.side) + 1 : 0;
    const lists: number[][] = Array.from({ length: this.columns * this.rows }, () => []);
    for (let t = 0; t < count; t++) {
      const us = [0, 1, 2].map((i) => flat[2 * triangles[3 * t + i]]);
      const vs = [0, 1, 2].map((i) => flat[2 * triangles[3 * t + i] + 1]);
      for (let c = this.column(Math.min(...us)); c <= this.column(Math.max(...us)); c++)
        for (let r = this.row(Math.min(...vs)); r <= this.row(Math.max(...vs)); r++)
          lists[r * this.columns + c].push(t);
    }
    this.cells = lists.map((l) => Int32Array.from(l));
  }

  /** A triangle that holds the flat place, -1 where the map has none. */
  locate(u: number, v: number): number {
    const c = Math.floor((u - this.lo[0]) / this.side);
    const r = Math.floor((v - this.lo[1]) / this.side);
    if (c < 0 || r < 0 || c >= this.columns || r >= this.rows) return -1;
    for (const t of this.cells[r * this.columns + c]) {
      const w = this.weights(t, u, v);
      if (w && Math.min(w[0], w[1], w[2]) >= -SIDE) return t;
    }
    return -1;
  }

  /** Triangles whose flat boxes meet a box: least u, v, most u, v. */
  within([lu, lv, hu, hv]: readonly [number, number, number, number]): Set<number> {
    const found = new Set<number>();
    for (let c = this.column(lu); c <= this.column(hu); c++)
      for (let r = this.row(lv); r <= this.row(hv); r++)
        for (const t of this.cells[r * this.columns + c]) found.add(t);
    return found;
  }

  /** Face of the part that triangle t lies in. */
  faceOf(t: number): number {
    return this.patch.face[t];
  }

  /** Place on the part of a flat place in triangle t. */
  place(t: number, u: number, v: number): Vec3 {
    return this.weigh(t, this.weights(t, u, v) ?? [1 / 3, 1 / 3, 1 / 3]);
  }

  /**
   * Walks a flat line from point to point.
   * @param points  2 a point
   * @returns null where the first point is not on the map
   */
  line(points: Float64Array, closed: boolean): WalkedLine | null {
    const { patch } = this;
    let [u, v] = [points[0], points[1]];
    let t = this.locate(u, v);
    if (t < 0) return null;
    const out: number[] = [...this.place(t, u, v)];
    const faces: number[] = [];
    let length = 0;
    const step = (p: Vec3, face: number): void => {
      const o = out.length - 3;
      const d = Math.hypot(p[0] - out[o], p[1] - out[o + 1], p[2] - out[o + 2]);
      if (d === 0) return;
      length += d;
      out.push(p[0], p[1], p[2]);
      faces.push(face);
    };
    let left: readonly [number, number] | null = null;
    const stops = points.length / 2 + (closed ? 0 : -1);
    // A straight line meets each triangle once; only rounding goes round in circles.
    let guard = 4 * (patch.face.length + points.length);
    for (let i = 1; i <= stops && !left; i++) {
      const j = i % (points.length / 2);
      const [gu, gv] = [points[2 * j], points[2 * j + 1]];
      let entered = -1;
      while (guard-- > 0) {
        const goal = this.weights(t, gu, gv);
        if (!goal) break;
        const here = this.weights(t, u, v)!;
        // Out through the side whose weight reaches 0 first.
        let share = 1;
        let side = -1;
        for (let k = 0; k < 3; k++) {
          if (goal[k] >= -SIDE || k === entered) continue;
          const s = here[k] <= 0 ? 0 : here[k] / (here[k] - goal[k]);
          if (s < share) [share, side] = [s, k];
        }
        if (side < 0) {
          step(this.weigh(t, goal), patch.face[t]);
          [u, v] = [gu, gv];
          break;
        }
        [u, v] = [u + share * (gu - u), v + share * (gv - v)];
        const w = this.weights(t, u, v)!;
        w[side] = 0;
        step(this.weigh(t, w), patch.face[t]);
        // The side opposite to corner k runs from corner k + 1 to k + 2.
        const over = patch.across[3 * t + ((side + 1) % 3)];
        if (over < 0) {
          left = [u, v];
          break;
        }
        entered = [0, 1, 2].find((k) => patch.across[3 * over + ((k + 1) % 3)] === t) ?? -1;
        t = over;
      }
      if (u !== gu || v !== gv) left ??= [u, v];
    }
    return {
      path: { points: Float64Array.from(out), faces: Int32Array.from(faces), length },
      left,
    };
  }

  private column(u: number): number {
    return Math.max(0, Math.min(this.columns - 1, Math.floor((u - this.lo[0]) / this.side)));
  }

  private row(v: number): number {
    return Math.max(0, Math.min(this.rows - 1, Math.floor((v - this.lo[1]) / this.side)));
  }

  /** Weights of the corners of t; null where the map folds it over. */
  private weights(t: number, u: number, v: number): [number, number, number] | null {
    const { flat, triangles } = this.patch;
    const [a, b, c] = [2 * triangles[3 * t], 2 * triangles[3 * t + 1], 2 * triangles[3 * t + 2]];
    const [bu, bv] = [flat[b] - flat[a], flat[b + 1] - flat[a + 1]];
    const [cu, cv] = [flat[c] - flat[a], flat[c + 1] - flat[a + 1]];
    const det = bu * cv - bv * cu;
    if (det === 0) return null;
    const [pu, pv] = [u - flat[a], v - flat[a + 1]];
    const s = (pu * cv - pv * cu) / det;
    const r = (bu * pv - bv * pu) / det;
    return [1 - s - r, s, r];
  }

  private weigh(t: number, w: readonly number[]): Vec3 {
    const { positions: x, triangles } = this.patch;
    const p: [number, number, number] = [0, 0, 0];
    for (let i = 0; i < 3; i++) {
      const o = 3 * triangles[3 * t + i];
      for (let k = 0; k < 3; k++) p[k] += w[i] * x[o + k];
    }
    return p;
  }
}
