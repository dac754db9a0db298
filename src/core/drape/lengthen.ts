/** A path carried straight on past its ends. */

import type { Vec3 } from '../base/vec.ts';
import { straightest } from '../geodesic/straightest.ts';
import type { SurfaceMesh } from '../mesh/surface-mesh.ts';
import { barycentric, type SurfacePoint } from '../mesh/surface-point.ts';
import type { SurfacePath } from './copper.ts';

export interface Longer {
  path: SurfacePath;
  /** Length added before the start, mm; less than was asked where the surface ends. */
  lead: number;
  /** Pieces added before the start. */
  pieces: number;
}

/** At a rim the path goes on no farther than rounding does: this share of the way asked is none, for it has no direction. */
const LEAST = 1e-6;
const NOTHING: SurfacePath = { points: new Float64Array(3), faces: new Int32Array(0), length: 0 };

/** @param by  mm at either end */
export function lengthen(mesh: SurfaceMesh, path: SurfacePath, by: number): Longer {
  const n = path.faces.length;
  const at = (i: number): Vec3 => [path.points[3 * i], path.points[3 * i + 1], path.points[3 * i + 2]];
  const on = (piece: number, from: number, to: number): SurfacePath => {
    const [a, b] = [at(from), at(to)];
    const start: SurfacePoint = { face: path.faces[piece], bary: barycentric(mesh, path.faces[piece], b) };
    const { path: more } = straightest(mesh, start, [b[0] - a[0], b[1] - a[1], b[2] - a[2]], by);
    return more.length > LEAST * by ? more : NOTHING;
  };
  const lead = on(0, 1, 0);
  const tail = on(n - 1, n - 1, n);
  const points: number[] = [];
  for (let i = lead.points.length / 3 - 1; i > 0; i--) points.push(...lead.points.subarray(3 * i, 3 * i + 3));
  points.push(...path.points, ...tail.points.subarray(3));
  return {
    path: {
      points: Float64Array.from(points),
      faces: Int32Array.from([...[...lead.faces].reverse(), ...path.faces, ...tail.faces]),
      length: lead.length + path.length + tail.length,
    },
    lead: lead.length,
    pieces: lead.faces.length,
  };
}
