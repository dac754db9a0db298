/** How the surface curves beside a bend, as its mitre feels it. */
import { cosine, tangent } from '../base/trig.ts';
import type { Vec3 } from '../base/vec.ts';
import { straightest } from '../geodesic/straightest.ts';
import type { SurfaceMesh } from '../mesh/surface-mesh.ts';
import { barycentric, faceNormal, positionOf } from '../mesh/surface-point.ts';
import type { Band, Bend } from './band.ts';
import type { SurfacePath } from './copper.ts';

/** More than this share of a mitre's length is not a curvature but a corner of the part: its polar coordinates are left as they are. */
const MOST = 0.3;
/** A bend of less, radians, has a mitre so short that curvature does not show in it. */
const SLIGHT = 0.1;

/**
 * Height over a straight line through a pole, at radius r and with s the sine of the angle from the line, where the surface's
 * curvature is K: r s (1 - K r² (1 - s²) / 6), the first term of sin(√K y) = sin(√K r) s (the sine rule of spherical
 * trigonometry).
 */
export const heightOver = (r: number, s: number, curvature: number): number =>
  r * s * (1 - (curvature * r * r * (1 - s * s)) / 6);

/**
 * Curvature that puts the corner of a mitre at its true place: each side of the bend is carried straight on, square to it the
 * half-width is walked, and the place reached is looked up in the bend's own polar coordinates.
 * @returns 1/mm²; 0 on flats, for the slightest bends, and where the surface ends before the corner
 */
export function mitreCurvature(
  mesh: SurfaceMesh,
  path: SurfacePath,
  band: Band,
  bend: Bend,
  half: number,
): number {
  if (bend.turn < SLIGHT) return 0;
  const at = (i: number): Vec3 => [path.points[3 * i], path.points[3 * i + 1], path.points[3 * i + 2]];
  const found = [
    { piece: bend.before, from: at(bend.before), to: at(bend.before + 1), turn: bend.side },
    { piece: bend.after, from: at(bend.after + 1), to: at(bend.after), turn: -bend.side },
  ].flatMap(({ piece, from, to, turn }): number[] => {
    const face = path.faces[piece];
    const on = straightest(
      mesh,
      { face, bary: barycentric(mesh, face, to) },
      [to[0] - from[0], to[1] - from[1], to[2] - from[2]],
      half * tangent(bend.turn / 2),
    );
    if (on.stopped) return [];
    const [n, d] = [faceNormal(mesh, on.end.face), on.direction];
    const left: Vec3 = [n[1] * d[2] - n[2] * d[1], n[2] * d[0] - n[0] * d[2], n[0] * d[1] - n[1] * d[0]];
    const out = straightest(mesh, on.end, [turn * left[0], turn * left[1], turn * left[2]], half);
    const seen = out.stopped ? null : band.at(out.end.face, positionOf(mesh, out.end));
    if (!seen?.bend) return [];
    const r = seen.distance;
    const s = cosine(bend.turn / 2 - Math.abs(seen.bend.off));
    const share = 1 - half / (r * s);
    return Math.abs(share) <= MOST ? [(6 * share) / (r * r * (1 - s * s))] : [];
  });
  return found.length > 0 ? found.reduce((sum, k) => sum + k, 0) / found.length : 0;
}
