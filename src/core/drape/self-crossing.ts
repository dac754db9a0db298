/** Does a closed path meet itself? Pieces are compared inside the faces they lie in, so the search costs little more than the path. */
import type { Vec3 } from '../base/vec.ts';
import type { SurfaceMesh } from '../mesh/surface-mesh.ts';
import { faceNormal } from '../mesh/surface-point.ts';
import type { SurfacePath } from './copper.ts';

/** Ends of pieces lie on edges, where ways that cross there meet only to rounding: a share of their lengths. */
const TOUCH = 1e-9;

/** @returns a place where two pieces meet that do not follow one another, or null */
export function selfCrossing(mesh: SurfaceMesh, path: SurfacePath): Vec3 | null {
  const byFace = new Map<number, number[]>();
  path.faces.forEach((f, i) => {
    const list = byFace.get(f);
    if (list) list.push(i);
    else byFace.set(f, [i]);
  });
  for (const [face, pieces] of byFace) {
    if (pieces.length < 2) continue;
    // Seen along the axis that the face leans away from least.
    const n = faceNormal(mesh, face).map(Math.abs);
    const drop = n[0] >= n[1] && n[0] >= n[2] ? 0 : n[1] >= n[2] ? 1 : 2;
    const [u, v] = [(drop + 1) % 3, (drop + 2) % 3];
    for (let a = 0; a < pieces.length; a++)
      for (let b = a + 1; b < pieces.length; b++) {
        const apart = pieces[b] - pieces[a];
        if (apart === 1 || apart === path.faces.length - 1) continue;
        const t = crossingShare(path.points, pieces[a], pieces[b], u, v);
        if (t === null) continue;
        const o = 3 * pieces[a];
        const p = path.points;
        return [0, 1, 2].map((k) => p[o + k] + t * (p[o + 3 + k] - p[o + k])) as unknown as Vec3;
      }
  }
  return null;
}

/** Share of piece i at which it meets piece j, ends included; null where they do not meet, or run side by side. */
function crossingShare(p: Float64Array, i: number, j: number, u: number, v: number): number | null {
  const [a, b] = [3 * i, 3 * j];
  const [dx, dy] = [p[a + 3 + u] - p[a + u], p[a + 3 + v] - p[a + v]];
  const [ex, ey] = [p[b + 3 + u] - p[b + u], p[b + 3 + v] - p[b + v]];
  const [wx, wy] = [p[b + u] - p[a + u], p[b + v] - p[a + v]];
  const det = dx * ey - dy * ex;
  if (det === 0) return null;
  const t = (wx * ey - wy * ex) / det;
  const s = (wx * dy - wy * dx) / det;
  return t >= -TOUCH && t <= 1 + TOUCH && s >= -TOUCH && s <= 1 + TOUCH ? t : null;
}
