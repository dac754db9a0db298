/**
 * Distance field of a path over the surface: for any place its exact distance, its side and its foot.
 *
 * Fermi coordinates about the path (do Carmo, *Riemannian Geometry*, ch. 5): each piece sends parallel windows
 * to both sides, each end and bend sends windows of its own, and the nearest wins. Lines of equal
 * distance are then equally spaced (Gauss's lemma), whatever the curvature.
 */
import { dot, type Vec3 } from '../base/vec.ts';
import { ON_EDGE, type PointSource, type SegmentSource } from '../geodesic/roots.ts';
import { polarAngle, SurfaceField } from '../geodesic/surface-field.ts';
import type { WindowSolver } from '../geodesic/windows.ts';
import { barycentric, type SurfacePoint } from '../mesh/surface-point.ts';
import type { SurfacePath } from './copper.ts';

export interface BandPlace {
  /** Distance from the path, mm, never negative. */
  distance: number;
  /** Signed distance, positive on the path's left; beyond an end it goes on straight. */
  across: number;
  /** Arc length of the foot, mm; beyond an end it goes on. */
  along: number;
}

export interface Band {
  faces: Int32Array;
  /** null where the path is farther than the band is wide. */
  at(face: number, p: Vec3): BandPlace | null;
}

export interface BandOptions {
  /** Reach of the field on either side, mm. */
  left: number;
  right: number;
  closed?: boolean;
  /** Numbers of the path points where it may bend. */
  stops: readonly number[];
}

/** @param path  pieces inside single faces; the first and last point coincide when `closed` */
export function band(solver: WindowSolver, path: SurfacePath, options: BandOptions): Band {
  const { mesh } = solver;
  const n = path.faces.length;
  const point = (i: number): Vec3 => [path.points[3 * i], path.points[3 * i + 1], path.points[3 * i + 2]];
  const direction = (i: number): Vec3 => {
    const a = point(i);
    const b = point(i + 1);
    return [b[0] - a[0], b[1] - a[1], b[2] - a[2]];
  };
  const segments: SegmentSource[] = [];
  const startOf = new Float64Array(n + 1);
  for (let i = 0; i < n; i++) {
    segments.push({
      face: path.faces[i],
      from: point(i),
      to: point(i + 1),
      source: i,
      start: startOf[i],
      radiusLeft: options.left,
      radiusRight: options.right,
    });
    const d = direction(i);
    startOf[i + 1] = startOf[i] + Math.hypot(d[0], d[1], d[2]);
  }
  // Ends, and places where the path may bend: inside a face, or at a vertex of the mesh.
  interface Joint {
    index: number;
    before: number;
    after: number;
  }
  const joints: Joint[] = [];
  const stops = new Set(options.stops);
  for (let i = options.closed ? 1 : 0; i <= n; i++) {
    const before = i === 0 ? -1 : i - 1;
    const after = i < n ? i : options.closed ? 0 : -1;
    if (before >= 0 && after >= 0 && !stops.has(i) && crossesEdge(mesh, path, before, after, i)) continue;
    joints.push({ index: i, before, after });
  }
  const reach = Math.max(options.left, options.right);
  const points: PointSource[] = joints.map((j, k) => {
    const piece = j.after >= 0 ? j.after : j.before;
    return {
      at: surfacePoint(mesh, path.faces[piece], point(j.index)),
      source: n + k,
      radius: reach,
      zero: direction(piece),
    };
  });
  solver.propagate(points, segments);
  const field = new SurfaceField(solver);
  // Left angle of each bend: from the way out, counter-clockwise, to the way back in.
  const leftAngle = joints.map((j, k) => {
    if (j.before < 0 || j.after < 0) return 0;
    const root = solver.roots.find(
      (r) => r.source === n + k && r.kind === 'point' && r.face === path.faces[j.before],
    );
    if (!root) return Math.PI;
    const d = direction(j.before);
    const back = (root.offset + Math.atan2(-dot(d, root.y), -dot(d, root.x))) * root.scale;
    return turnOf(back);
  });
  return {
    faces: field.faces,
    at(face, p) {
      const seen = field.nearest(face, p);
      if (!seen) return null;
      const { root, distance } = seen;
      if (root.kind === 'segment') return { distance, across: seen.qy, along: root.start + seen.qx };
      const k = root.source - n;
      // Behind a vertex that was reached from a piece of the path: the piece's side and foot.
      if (k < 0) return { distance, across: root.side * distance, along: root.start };
      // Ends and bends know their sides by angle, that of the vertex for all that lies behind one.
      const joint = joints[k];
      const s = startOf[joint.index];
      const angle = polarAngle(seen);
      if (joint.before < 0 || joint.after < 0)
        return { distance, across: distance * Math.sin(angle), along: s + distance * Math.cos(angle) };
      return { distance, across: turnOf(angle) <= leftAngle[k] ? distance : -distance, along: s };
    },
  };
}

/** Whether path point i is a plain crossing from one face into the next, where a shortest path runs straight on. */
function crossesEdge(
  mesh: WindowSolver['mesh'],
  path: SurfacePath,
  before: number,
  after: number,
  i: number,
): boolean {
  if (path.faces[before] === path.faces[after]) return false;
  const p: Vec3 = [path.points[3 * i], path.points[3 * i + 1], path.points[3 * i + 2]];
  const bary = barycentric(mesh, path.faces[before], p);
  return bary.filter((b) => Math.abs(b) <= AT_VERTEX).length < 2;
}

/** A crossing this near a vertex, as a share of the face, may as well be the vertex. */
const AT_VERTEX = 1e-7;

/** Surface point of a place known to lie in a face; weights that rounding left off an edge are put on it. */
function surfacePoint(mesh: WindowSolver['mesh'], face: number, p: Vec3): SurfacePoint {
  const b = barycentric(mesh, face, p).map((x) =>
    Math.abs(x) <= AT_VERTEX * 1e-2 || Math.abs(x) <= ON_EDGE ? 0 : x,
  );
  const sum = b[0] + b[1] + b[2];
  return { face, bary: [b[0] / sum, b[1] / sum, b[2] / sum] };
}

const turnOf = (a: number): number => a - 2 * Math.PI * Math.floor(a / (2 * Math.PI));
