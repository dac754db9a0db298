/** Creases and borders as segments to draw, 6 numbers a segment (model.md §4: dihedral above 40°). */
import { dot } from '../core/base/vec.ts';
import { faceOf, next, type SurfaceMesh } from '../core/mesh/surface-mesh.ts';
import { faceNormal } from '../core/mesh/surface-point.ts';

const CREASE = Math.cos((40 * Math.PI) / 180);

export function creases(mesh: SurfaceMesh): Float32Array {
  const { positions: x, triangles: t, twin } = mesh;
  const out: number[] = [];
  for (let h = 0; h < t.length; h++) {
    const g = twin[h];
    if (g >= 0 && (g < h || dot(faceNormal(mesh, faceOf(h)), faceNormal(mesh, faceOf(g))) >= CREASE))
      continue;
    const [a, b] = [3 * t[h], 3 * t[next(h)]];
    out.push(x[a], x[a + 1], x[a + 2], x[b], x[b + 1], x[b + 2]);
  }
  return Float32Array.from(out);
}
