/** How far a place is from the nearest drawn copper, exactly: small pieces of it in hashed cells of space. */
import type { Vec3 } from '../base/vec.ts';
import type { Copper } from '../drape/copper.ts';
import { bisect } from './bisect.ts';

/** Edge of a cell and longest edge of a piece, mm: a few times the stray tolerance, so that a look visits few cells. */
const CELL = 0.2;

export interface CopperGrid {
  /** Corners of the pieces, part frame, mm, 9 a piece. */
  corners: Float64Array;
  /** Outward normal of each piece's face, not of unit length, 3 a piece. */
  normal: Float64Array;
  /** Index into `copper.elements`. */
  element: Int32Array;
  mask: number;
  start: Uint32Array;
  pieces: Uint32Array;
}

export function copperGrid(copper: Copper): CopperGrid {
  const corners: number[] = [];
  const element: number[] = [];
  const triangle = new Float64Array(9);
  copper.elements.forEach((e, number) => {
    const { positions, triangles } = e.copper;
    for (let t = 0; t < triangles.length; t += 3) {
      for (let i = 0; i < 3; i++)
        for (let c = 0; c < 3; c++) triangle[3 * i + c] = positions[3 * triangles[t + i] + c];
      bisect(triangle, CELL, (flat, at) => {
        for (let k = 0; k < 9; k++) corners.push(flat[at + k]);
        element.push(number);
      });
    }
  });
  return hashed(Float64Array.from(corners), Int32Array.from(element));
}

function hashed(p: Float64Array, element: Int32Array): CopperGrid {
  const count = element.length;
  let size = 16;
  while (size < 2 * count) size *= 2;
  const mask = size - 1;
  const normal = new Float64Array(3 * count);
  for (let t = 0; t < count; t++) {
    const o = 9 * t;
    const ux = p[o + 3] - p[o],
      uy = p[o + 4] - p[o + 1],
      uz = p[o + 5] - p[o + 2];
    const vx = p[o + 6] - p[o],
      vy = p[o + 7] - p[o + 1],
      vz = p[o + 8] - p[o + 2];
    normal[3 * t] = uy * vz - uz * vy;
    normal[3 * t + 1] = uz * vx - ux * vz;
    normal[3 * t + 2] = ux * vy - uy * vx;
  }
  const start = new Uint32Array(size + 1);
  const each = (use: (bucket: number, piece: number) => void) => {
    for (let t = 0; t < count; t++) {
      const o = 9 * t;
      const lo = (c: number) => Math.floor(Math.min(p[o + c], p[o + 3 + c], p[o + 6 + c]) / CELL);
      const hi = (c: number) => Math.floor(Math.max(p[o + c], p[o + 3 + c], p[o + 6 + c]) / CELL);
      for (let i = lo(0), i1 = hi(0); i <= i1; i++)
        for (let j = lo(1), j1 = hi(1); j <= j1; j++)
          for (let k = lo(2), k1 = hi(2); k <= k1; k++) use(bucketOf(i, j, k, mask), t);
    }
  };
  each((b) => start[b + 1]++);
  for (let b = 0; b < size; b++) start[b + 1] += start[b];
  const pieces = new Uint32Array(start[size]);
  const fill = start.slice();
  each((b, t) => {
    pieces[fill[b]++] = t;
  });
  return { corners: p, normal, element, mask, start, pieces };
}

/** Bucket of cell (i, j, k): large odd numbers, as in Teschner et al., "Optimized spatial hashing", VMV 2003. */
export const bucketOf = (i: number, j: number, k: number, mask: number): number => {
  let h = Math.imul(i, 73856093) ^ Math.imul(j, 19349663) ^ Math.imul(k, 83492791);
  h = Math.imul(h ^ (h >>> 15), 0x2c1b3c6d);
  return (h ^ (h >>> 13)) & mask;
};

/**
 * Straight distance from (x, y, z) to the nearest drawn copper on the same sheet, mm; Infinity when it is beyond `within`.
 * Same sheet: its face looks the same way as (nx, ny, nz), so that copper on the other side of a thin wall is not near.
 *
 * @param only  index of the one element that counts; all when left out
 */
export function distanceToCopper(
  g: CopperGrid,
  x: number,
  y: number,
  z: number,
  n: Vec3,
  within: number,
  only = -1,
): number {
  let best = within * within;
  let found = false;
  const i1 = Math.floor((x + within) / CELL);
  const j1 = Math.floor((y + within) / CELL);
  const k1 = Math.floor((z + within) / CELL);
  for (let i = Math.floor((x - within) / CELL); i <= i1; i++)
    for (let j = Math.floor((y - within) / CELL); j <= j1; j++)
      for (let k = Math.floor((z - within) / CELL); k <= k1; k++) {
        const b = bucketOf(i, j, k, g.mask);
        for (let s = g.start[b]; s < g.start[b + 1]; s++) {
          const t = g.pieces[s];
          if (only >= 0 && g.element[t] !== only) continue;
          if (g.normal[3 * t] * n[0] + g.normal[3 * t + 1] * n[1] + g.normal[3 * t + 2] * n[2] <= 0) continue;
          const d = squaredDistance(g.corners, 9 * t, x, y, z);
          if (d <= best) {
            best = d;
            found = true;
            if (d === 0) return 0;
          }
        }
      }
  return found ? Math.sqrt(best) : Infinity;
}

/** Squared distance from a place to the triangle at `o`: Ericson, *Real-Time Collision Detection* (2005), §5.1.5. */
export function squaredDistance(t: ArrayLike<number>, o: number, x: number, y: number, z: number): number {
  const ax = t[o],
    ay = t[o + 1],
    az = t[o + 2];
  const abx = t[o + 3] - ax,
    aby = t[o + 4] - ay,
    abz = t[o + 5] - az;
  const acx = t[o + 6] - ax,
    acy = t[o + 7] - ay,
    acz = t[o + 8] - az;
  const apx = x - ax,
    apy = y - ay,
    apz = z - az;
  const d1 = abx * apx + aby * apy + abz * apz;
  const d2 = acx * apx + acy * apy + acz * apz;
  let v = 0;
  let w = 0; // foot = a + v·ab + w·ac
  if (d1 > 0 || d2 > 0) {
    const bpx = apx - abx,
      bpy = apy - aby,
      bpz = apz - abz;
    const d3 = abx * bpx + aby * bpy + abz * bpz;
    const d4 = acx * bpx + acy * bpy + acz * bpz;
    const cpx = apx - acx,
      cpy = apy - acy,
      cpz = apz - acz;
    const d5 = abx * cpx + aby * cpy + abz * cpz;
    const d6 = acx * cpx + acy * cpy + acz * cpz;
    const vc = d1 * d4 - d3 * d2;
    const vb = d5 * d2 - d1 * d6;
    const va = d3 * d6 - d5 * d4;
    if (d3 >= 0 && d4 <= d3) v = 1;
    else if (d6 >= 0 && d5 <= d6) w = 1;
    else if (vc <= 0 && d1 >= 0 && d3 <= 0) v = d1 / (d1 - d3);
    else if (vb <= 0 && d2 >= 0 && d6 <= 0) w = d2 / (d2 - d6);
    else if (va <= 0 && d4 - d3 >= 0 && d5 - d6 >= 0) {
      w = (d4 - d3) / (d4 - d3 + (d5 - d6));
      v = 1 - w;
    } else {
      const all = va + vb + vc;
      v = vb / all;
      w = vc / all;
    }
  }
  const dx = apx - v * abx - w * acx;
  const dy = apy - v * aby - w * acy;
  const dz = apz - v * abz - w * acz;
  return dx * dx + dy * dy + dz * dz;
}
