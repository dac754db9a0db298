/**
 * Distance field of a path over the surface: for any place its exact distance, its side and its foot.
 *
 * Fermi coordinates about the path (do Carmo, *Riemannian Geometry*, ch. 5): each piece sends parallel windows
 * to both sides, each end and bend sends windows of its own, and the nearest wins. Lines of equal
 * distance are then equally spaced (Gauss's lemma), whatever the curvature.
 */
import { cosine, sine } from '../base/trig.ts';
import { dot, type Vec3 } from '../base/vec.ts';
import { ON_EDGE, type PointSource, type SegmentSource } from '../geodesic/roots.ts';
import { polarAngle, SurfaceField } from '../geodesic/surface-field.ts';
import type { WindowSolver } from '../geodesic/windows.ts';
import { barycentric, type SurfacePoint } from '../mesh/surface-point.ts';
import { boxBound } from './box-bound.ts';
import type { SurfacePath } from './copper.ts';

export interface BandPlace {
  /** Distance from the path, mm, never negative. */
  distance: number;
  /** Signed distance, positive on the path's left; beyond an end it goes on straight. */
  across: number;
  /** Arc length of the foot, mm; beyond an end it goes on. */
  along: number;
  /** Set where the path is nearest at a bend, on its outer side: number of the bend, angle from the middle of its sector. */
  bend: { number: number; off: number } | null;
}

/** A place where the path turns, as the surface beside it knows it. */
export interface Bend {
  /** Arc length, mm. */
  along: number;
  /** Side that the turn leaves open: +1 left, -1 right. */
  side: 1 | -1;
  /** Angle of the sector between the two pieces' normals on that side, radians, positive. */
  turn: number;
  /** Pieces of the path that meet in it. */
  before: number;
  after: number;
}

export interface Band {
  faces: Int32Array;
  bends: readonly Bend[];
  /** Lower bound of the distance from the path, mm, wherever a place lies. */
  far(p: Vec3): number;
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
  /** Arc length at the path's first point, mm; default 0. */
  start?: number;
  /** Reach about a bend where it is more than that of the sides, mm. */
  bendReach?: (turn: number) => number;
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
  const startOf = new Float64Array(n + 1);
  startOf[0] = options.start ?? 0;
  for (let i = 0; i < n; i++) {
    const d = direction(i);
    startOf[i + 1] = startOf[i] + Math.hypot(d[0], d[1], d[2]);
  }
  // Ends, and places where the path may bend: inside a face, or at a vertex of the mesh.
  const joints: Joint[] = [];
  const stops = new Set(options.stops);
  for (let i = options.closed ? 1 : 0; i <= n; i++) {
    const before = i === 0 ? -1 : i - 1;
    const after = i < n ? i : options.closed ? 0 : -1;
    if (before >= 0 && after >= 0 && !stops.has(i) && crossesEdge(mesh, path, before, after, i)) continue;
    joints.push({ index: i, before, after });
  }
  const pointsWith = (reach: (k: number) => number): PointSource[] =>
    joints.map((j, k) => {
      const piece = j.after >= 0 ? j.after : j.before;
      return {
        at: surfacePoint(mesh, path.faces[piece], point(j.index)),
        source: n + k,
        radius: reach(k),
        zero: direction(piece),
      };
    });
  /** Angles of each bend, of the run that the solver holds now. */
  const turnsNow = (): Turn[] =>
    joints.map((j, k) => {
      if (j.before < 0 || j.after < 0) return STRAIGHT;
      const root = solver.roots.find(
        (r) => r.source === n + k && r.kind === 'point' && r.face === path.faces[j.before],
      );
      if (!root) return STRAIGHT;
      const d = direction(j.before);
      const back = root.offset + Math.atan2(-dot(d, root.y), -dot(d, root.x));
      return { left: turnOf(back * root.scale), scale: root.scale };
    });
  const reach = Math.max(options.left, options.right);
  const isJoint = new Set(joints.map((j) => j.index));
  if (options.closed && isJoint.has(n)) isJoint.add(0);
  const segments = Array.from({ length: n }, (_, i): SegmentSource => {
    const [x, y, z] = direction(i);
    const length = Math.hypot(x, y, z);
    const lap = (index: number): number => (isJoint.has(index) || length === 0 ? 0 : LAP * reach);
    const [before, after] = [lap(i), lap(i + 1)];
    const along = (p: Vec3, way: number): Vec3 =>
      way === 0 ? p : [p[0] + (way / length) * x, p[1] + (way / length) * y, p[2] + (way / length) * z];
    return {
      face: path.faces[i],
      from: along(point(i), -before),
      to: along(point(i + 1), after),
      source: i,
      start: startOf[i] - before,
      radiusLeft: options.left,
      radiusRight: options.right,
    };
  });
  const { bendReach } = options;
  let reachOf = (_: number): number => reach;
  if (bendReach) {
    // Without any reach the sources only take their places, which is enough to know the angles.
    solver.propagate(pointsWith(() => 0));
    const turns = turnsNow();
    reachOf = (k) => Math.max(reach, bendReach(Math.max(sector(turns[k], 1), sector(turns[k], -1))));
  }
  solver.propagate(pointsWith(reachOf), segments);
  const field = new SurfaceField(solver);
  const turns = turnsNow();
  const far = boxBound(path.points);
  const bends: Bend[] = [];
  /** Number of the bend that each joint is on its left, and on its right; -1 where it is none. */
  const bendOf = joints.map((j, k) =>
    ([1, -1] as const).map((side): number => {
      const turn = sector(turns[k], side);
      if (j.before < 0 || j.after < 0 || turn <= 0) return -1;
      return bends.push({ along: startOf[j.index], side, turn, before: j.before, after: j.after }) - 1;
    }),
  );
  return {
    faces: field.faces,
    far,
    bends,
    at(face, p) {
      const seen = field.nearest(face, p);
      if (!seen) return null;
      const { root, distance } = seen;
      if (root.kind === 'segment')
        return { distance, across: seen.qy, along: root.start + seen.qx, bend: null };
      const k = root.source - n;
      // Behind a vertex that was reached from a piece of the path: the piece's side and foot.
      if (k < 0) return { distance, across: root.side * distance, along: root.start, bend: null };
      // Ends and bends know their sides by angle, that of the vertex for all that lies behind one.
      const joint = joints[k];
      const s = startOf[joint.index];
      const angle = polarAngle(seen);
      if (joint.before < 0 || joint.after < 0)
        return {
          distance,
          across: distance * sine(angle),
          along: s + distance * cosine(angle),
          bend: null,
        };
      const turned = turnOf(angle);
      const side = turned <= turns[k].left ? 1 : -1;
      // From the middle of the side's angles, where its outer sector lies.
      const { left, scale } = turns[k];
      const off = (side > 0 ? turned - left / 2 : turned - (left + 2 * Math.PI) / 2) / scale;
      const number = bendOf[k][side > 0 ? 0 : 1];
      return {
        distance,
        across: side * distance,
        along: s,
        bend: number >= 0 && Math.abs(off) <= bends[number].turn / 2 + SECTOR ? { number, off } : null,
      };
    },
  };
}

/**
 * Pieces are this much longer at either crossing, as a share of the band's reach: far above what rounding turns one
 * against the next, which would leave a crack between their strips, and far below what copper is true to.
 */
const LAP = 1e-7;

/** Number of a path point, and the pieces before and after it; -1 where there is none. */
interface Joint {
  index: number;
  before: number;
  after: number;
}

/** Polar angle from the way out, counter-clockwise, to the way back in, and the scale of polar angles (roots.ts). */
interface Turn {
  left: number;
  scale: number;
}

const STRAIGHT: Turn = { left: Math.PI, scale: 1 };
/** Rounding of an angle, radians. */
const SECTOR = 1e-6;

/** What a side's angle has over π: the sector that neither piece's own strip covers; negative on the inner side. */
const sector = ({ left, scale }: Turn, side: 1 | -1): number =>
  (side > 0 ? left : 2 * Math.PI - left) / scale - Math.PI;

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
