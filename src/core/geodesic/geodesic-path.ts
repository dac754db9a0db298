/** A way over the surface as plain data. */
import { distance, type Vec3 } from '../base/vec.ts';

export interface GeodesicPath {
  /** Every place where the way enters another face or bends, part frame, mm, 3 a point. */
  points: Float64Array;
  /** Face that the piece from point i to i + 1 lies in; one fewer than points. */
  faces: Int32Array;
  /** mm */
  length: number;
}

/** A piece shorter than this share of the path is a crossing met twice (ends on edges, ways through vertices): its direction would mean nothing. */
const NO_PIECE = 1e-10;

/** Drops pieces of no length, keeps both ends, and adds the rest up. @param faces  one fewer than points */
export function gatherPath(points: readonly Vec3[], faces: readonly number[]): GeodesicPath {
  const last = points.length - 1;
  let whole = 0;
  for (let i = 0; i < last; i++) whole += distance(points[i], points[i + 1]);
  const keep: Vec3[] = [points[0]];
  const inFace: number[] = [];
  for (let i = 1; i <= last; i++) {
    if (distance(keep[keep.length - 1], points[i]) <= NO_PIECE * whole) {
      if (i < last) continue;
      if (keep.length > 1) {
        // The end stands for the crossing just before it.
        keep[keep.length - 1] = points[last];
        continue;
      }
    }
    keep.push(points[i]);
    inFace.push(faces[i - 1]);
  }
  let length = 0;
  for (let i = 0; i + 1 < keep.length; i++) length += distance(keep[i], keep[i + 1]);
  return { points: Float64Array.from(keep.flat()), faces: Int32Array.from(inFace), length };
}
