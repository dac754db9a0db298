import type { Vec3 } from '../base/vec.ts';
import type { SurfaceMesh } from './surface-mesh.ts';

/** A place on the surface: weights of the face's three corners, which sum to 1. A zero weight puts it on an edge. */
export interface SurfacePoint {
  readonly face: number;
  readonly bary: Vec3;
}

/** Where it is in the part frame, mm. */
export function positionOf(mesh: SurfaceMesh, p: SurfacePoint): Vec3 {
  const { positions: x, triangles: t } = mesh;
  const [a, b, c] = [3 * t[3 * p.face], 3 * t[3 * p.face + 1], 3 * t[3 * p.face + 2]];
  const [u, v, w] = p.bary;
  return [
    u * x[a] + v * x[b] + w * x[c],
    u * x[a + 1] + v * x[b + 1] + w * x[c + 1],
    u * x[a + 2] + v * x[b + 2] + w * x[c + 2],
  ];
}

/** Weights of `p` in face `f`, as of its foot in the face's plane; not clamped. */
export const barycentric = (mesh: SurfaceMesh, face: number, p: Vec3): Vec3 =>
  weightsIn(mesh.positions, mesh.triangles, face, p);

/** The same in triangle number `t` of any list. @param x  3 a vertex. @param triangles  3 a triangle */
export function weightsIn(x: Float64Array, triangles: Uint32Array, t: number, p: Vec3): Vec3 {
  const [a, b, c] = [3 * triangles[3 * t], 3 * triangles[3 * t + 1], 3 * triangles[3 * t + 2]];
  const ux = x[b] - x[a],
    uy = x[b + 1] - x[a + 1],
    uz = x[b + 2] - x[a + 2];
  const vx = x[c] - x[a],
    vy = x[c + 1] - x[a + 1],
    vz = x[c + 2] - x[a + 2];
  const px = p[0] - x[a],
    py = p[1] - x[a + 1],
    pz = p[2] - x[a + 2];
  const nx = uy * vz - uz * vy,
    ny = uz * vx - ux * vz,
    nz = ux * vy - uy * vx;
  const nn = nx * nx + ny * ny + nz * nz;
  const s = ((py * vz - pz * vy) * nx + (pz * vx - px * vz) * ny + (px * vy - py * vx) * nz) / nn;
  const r = ((uy * pz - uz * py) * nx + (uz * px - ux * pz) * ny + (ux * py - uy * px) * nz) / nn;
  return [1 - s - r, s, r];
}

/** Outward unit normal of a face. */
export function faceNormal(mesh: SurfaceMesh, face: number): Vec3 {
  const { positions: x, triangles: t } = mesh;
  const [a, b, c] = [3 * t[3 * face], 3 * t[3 * face + 1], 3 * t[3 * face + 2]];
  const ux = x[b] - x[a],
    uy = x[b + 1] - x[a + 1],
    uz = x[b + 2] - x[a + 2];
  const vx = x[c] - x[a],
    vy = x[c + 1] - x[a + 1],
    vz = x[c + 2] - x[a + 2];
  const nx = uy * vz - uz * vy,
    ny = uz * vx - ux * vz,
    nz = ux * vy - uy * vx;
  const l = Math.hypot(nx, ny, nz);
  return [nx / l, ny / l, nz / l];
}
