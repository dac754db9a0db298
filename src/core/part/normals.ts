/**
 * Smooth normals: angle-weighted vertex normals (G. Thürmer and C. Wüthrich, "Computing vertex normals
 * from polygonal facets", J. Graphics Tools 3 (1998) 43), interpolated in the face, with creases kept.
 */
import { cosine } from '../base/trig.ts';
import { at3, type Vec3 } from '../base/vec.ts';
import { faceOf, next, previous, type SurfaceMesh } from '../mesh/surface-mesh.ts';
import { barycentric } from '../mesh/surface-point.ts';

/** Two faces that meet at more than this stay apart (model.md §4): cos 40°. */
const CREASE = cosine((40 * Math.PI) / 180);

/** Outward unit normals at the corners, 9 numbers a face, part frame. */
export type CornerNormals = Float64Array;

export function buildNormals(mesh: SurfaceMesh): CornerNormals {
  const { positions: x, triangles: t, twin } = mesh;
  const halves = t.length;
  const flat = new Float64Array(halves);
  const angle = new Float64Array(halves);
  for (let h = 0; h < halves; h++) {
    const a = 3 * t[h],
      b = 3 * t[next(h)],
      c = 3 * t[previous(h)];
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
    angle[h] = Math.atan2(l, ux * vx + uy * vy + uz * vz);
    if (h % 3 === 0) {
      flat[h] = nx / l;
      flat[h + 1] = ny / l;
      flat[h + 2] = nz / l;
    }
  }
  const out = new Float64Array(3 * halves);
  const smooth = (h: number, k: number): boolean => {
    const f = 3 * faceOf(h),
      g = 3 * faceOf(k);
    return flat[f] * flat[g] + flat[f + 1] * flat[g + 1] + flat[f + 2] * flat[g + 2] >= CREASE;
  };
  const done = new Uint8Array(halves);
  const fan: number[] = [];
  for (let h0 = 0; h0 < halves; h0++) {
    if (done[h0]) continue;
    // Clockwise to a crease or border, or once around; then the fan counter-clockwise.
    let first = h0;
    for (let t0 = twin[first]; t0 >= 0 && smooth(first, t0); t0 = twin[first]) {
      first = next(t0);
      if (first === h0) break;
    }
    fan.length = 0;
    let nx = 0,
      ny = 0,
      nz = 0;
    let h = first;
    for (;;) {
      const f = 3 * faceOf(h);
      fan.push(h);
      nx += angle[h] * flat[f];
      ny += angle[h] * flat[f + 1];
      nz += angle[h] * flat[f + 2];
      const t1 = twin[previous(h)];
      if (t1 < 0 || t1 === first || !smooth(previous(h), t1)) break;
      h = t1;
    }
    const l = Math.hypot(nx, ny, nz);
    for (const k of fan) {
      done[k] = 1;
      const f = 3 * faceOf(k);
      // Opposite faces of a blade may cancel out: each then keeps its own.
      out[3 * k] = l > 0 ? nx / l : flat[f];
      out[3 * k + 1] = l > 0 ? ny / l : flat[f + 1];
      out[3 * k + 2] = l > 0 ? nz / l : flat[f + 2];
    }
  }
  return out;
}

/** Unit normal at a place of a face, interpolated between its corners. */
export function normalAt(mesh: SurfaceMesh, normals: CornerNormals, face: number, p: Vec3): Vec3 {
  const [a, b, c] = barycentric(mesh, face, p);
  const o = 9 * face;
  const nx = a * normals[o] + b * normals[o + 3] + c * normals[o + 6];
  const ny = a * normals[o + 1] + b * normals[o + 4] + c * normals[o + 7];
  const nz = a * normals[o + 2] + b * normals[o + 5] + c * normals[o + 8];
  const l = Math.hypot(nx, ny, nz);
  return l > 0 ? [nx / l, ny / l, nz / l] : at3(normals, 3 * face);
}
