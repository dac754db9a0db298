/** Activated surface away from any drawn copper, counted in small cells of the part's faces. */
import type { Vec3 } from '../base/vec.ts';
import { faceOf, type SurfaceMesh } from '../mesh/surface-mesh.ts';
import { faceNormal } from '../mesh/surface-point.ts';
import { type CornerNormals, normalAt } from '../part/normals.ts';
import { SHEET_REACH } from './burn.ts';
import type { BurntPulses } from './burnt-pulses.ts';
import { type CopperGrid, distanceToCopper, squaredDistance } from './copper-grid.ts';

/**
 * Edge of a cell, mm, in the coordinate plane that a face leans least from. A strip of 0.35 mm (what is left of a trace
 * shifted by 0.4 mm) is more than 20 cells wide, so that its area comes out well within a tenth.
 */
const CELL = 0.015;
/** Share by which a pulse's reach is widened before it is looked at closely: the surface may curve toward the beam. */
const CURVING = 1.1;

/**
 * @param tolerance  mm from drawn copper that is forgiven
 * @returns          mm² activated farther from drawn copper than that; a place hit twice counts once
 */
export function strayArea(
  p: BurntPulses,
  mesh: SurfaceMesh,
  normals: CornerNormals,
  grid: CopperGrid,
  tolerance: number,
): number {
  const seen = cellSet();
  const faces: number[] = [];
  let area = 0;
  for (let i = 0; i < p.count; i++) {
    const reach = (CURVING * p.halfWidth[i]) / Math.max(p.cos[i], 1 / SHEET_REACH);
    // every sample is on copper: copper is no farther than the nearest one
    if (p.nearest[i] + reach <= tolerance) continue;
    const hit: Vec3 = [p.hit[3 * i], p.hit[3 * i + 1], p.hit[3 * i + 2]];
    const copper = distanceToCopper(
      grid,
      hit[0],
      hit[1],
      hit[2],
      faceNormal(mesh, p.face[i]),
      tolerance + reach,
    );
    if (copper + reach <= tolerance) continue;
    facesWithin(mesh, p.face[i], hit, reach, faces);
    for (const f of faces)
      area += cellsOf(p, i, hit, reach, f, mesh, normals, grid, tolerance, copper === Infinity, seen);
  }
  return area;
}

/** Faces that come within `reach` of a place on face `from`, walked from face to face so that they are one sheet. */
function facesWithin(mesh: SurfaceMesh, from: number, hit: Vec3, reach: number, out: number[]): void {
  const corners = new Float64Array(9);
  out.length = 0;
  out.push(from);
  for (let k = 0; k < out.length; k++)
    for (let h = 3 * out[k]; h < 3 * out[k] + 3; h++) {
      const twin = mesh.twin[h];
      if (twin < 0 || out.includes(faceOf(twin))) continue;
      const f = faceOf(twin);
      for (let i = 0; i < 3; i++)
        for (let c = 0; c < 3; c++) corners[3 * i + c] = mesh.positions[3 * mesh.triangles[3 * f + i] + c];
      if (squaredDistance(corners, 0, hit[0], hit[1], hit[2]) <= reach * reach) out.push(f);
    }
}

/** Area of the cells of one face that pulse `i` is the first to activate and that are stray, mm². */
function cellsOf(
  p: BurntPulses,
  i: number,
  hit: Vec3,
  reach: number,
  f: number,
  mesh: SurfaceMesh,
  normals: CornerNormals,
  grid: CopperGrid,
  tolerance: number,
  allStray: boolean,
  seen: ReturnType<typeof cellSet>,
): number {
  const { positions: x, triangles: t } = mesh;
  const n = faceNormal(mesh, f);
  // drop the axis that the face leans least from: faces of one plane share the lattice and tile it
  const k =
    Math.abs(n[2]) >= Math.abs(n[0]) && Math.abs(n[2]) >= Math.abs(n[1])
      ? 2
      : Math.abs(n[1]) >= Math.abs(n[0])
        ? 1
        : 0;
  const q = (k + 1) % 3;
  const r = (k + 2) % 3;
  const [A, B, C] = [3 * t[3 * f], 3 * t[3 * f + 1], 3 * t[3 * f + 2]];
  const [aq, ar, bq, br, cq, cr] = [x[A + q], x[A + r], x[B + q], x[B + r], x[C + q], x[C + r]];
  const turned = n[k] > 0 ? 1 : -1; // the corners run clockwise in the plane where n looks down
  const i0 = Math.floor(Math.max(hit[q] - reach, Math.min(aq, bq, cq)) / CELL);
  const i1 = Math.floor(Math.min(hit[q] + reach, Math.max(aq, bq, cq)) / CELL);
  const j0 = Math.floor(Math.max(hit[r] - reach, Math.min(ar, br, cr)) / CELL);
  const j1 = Math.floor(Math.min(hit[r] + reach, Math.max(ar, br, cr)) / CELL);
  const [ux, uy, uz] = [p.toward[3 * i], p.toward[3 * i + 1], p.toward[3 * i + 2]];
  const w2 = p.radius[i] * p.radius[i];
  // ln(F0/F_act) square on, from a² = ½ w² ln(F0 cos / F_act)
  const inside = (2 * p.halfWidth[i] * p.halfWidth[i]) / w2 - Math.log(p.cos[i]);
  const place = [0, 0, 0];
  let area = 0;
  for (let a = i0; a <= i1; a++)
    for (let b = j0; b <= j1; b++) {
      const mq = (a + 0.5) * CELL;
      const mr = (b + 0.5) * CELL;
      if (turned * ((bq - aq) * (mr - ar) - (br - ar) * (mq - aq)) < 0) continue;
      if (turned * ((cq - bq) * (mr - br) - (cr - br) * (mq - bq)) < 0) continue;
      if (turned * ((aq - cq) * (mr - cr) - (ar - cr) * (mq - cq)) < 0) continue;
      place[q] = mq;
      place[r] = mr;
      place[k] = x[A + k] - (n[q] * (mq - aq) + n[r] * (mr - ar)) / n[k];
      const vx = place[0] - hit[0];
      const vy = place[1] - hit[1];
      const vz = place[2] - hit[2];
      const vu = vx * ux + vy * uy + vz * uz;
      const rho = vx * vx + vy * vy + vz * vz - vu * vu;
      if (2 * rho > w2 * inside) continue;
      if (seen.has(f, a, b)) continue;
      const at = [place[0], place[1], place[2]] as const;
      const m = normalAt(mesh, normals, f, at);
      const cos = m[0] * ux + m[1] * uy + m[2] * uz;
      if (cos <= 0 || 2 * rho > w2 * (inside + Math.log(cos))) continue;
      seen.add(f, a, b);
      if (allStray || distanceToCopper(grid, at[0], at[1], at[2], n, tolerance) > tolerance)
        area += (CELL * CELL) / Math.abs(n[k]);
    }
  return area;
}

/** Set of triples of whole numbers: open addressing in one flat array. */
function cellSet() {
  let size = 1 << 12;
  let used = 0;
  let keys = new Int32Array(3 * size).fill(-1); // no face is -1
  const slot = (f: number, a: number, b: number): number => {
    let h = Math.imul(f, 0x9e3779b1) ^ Math.imul(a, 0x85ebca6b) ^ Math.imul(b, 0xc2b2ae35);
    h = Math.imul(h ^ (h >>> 15), 0x2c1b3c6d);
    let s = (h ^ (h >>> 13)) & (size - 1);
    while (keys[3 * s] !== -1 && (keys[3 * s] !== f || keys[3 * s + 1] !== a || keys[3 * s + 2] !== b))
      s = (s + 1) & (size - 1);
    return 3 * s;
  };
  const put = (f: number, a: number, b: number): void => {
    const s = slot(f, a, b);
    keys[s] = f;
    keys[s + 1] = a;
    keys[s + 2] = b;
  };
  return {
    has: (f: number, a: number, b: number): boolean => keys[slot(f, a, b)] !== -1,
    add(f: number, a: number, b: number): void {
      if (2 * ++used > size) {
        const old = keys;
        size *= 2;
        keys = new Int32Array(3 * size).fill(-1);
        for (let s = 0; s < old.length; s += 3) if (old[s] !== -1) put(old[s], old[s + 1], old[s + 2]);
      }
      put(f, a, b);
    },
  };
}
