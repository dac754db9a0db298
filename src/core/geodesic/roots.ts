/** Where windows start: points and segments of paths, one root for each face that sees them. */
import { dot, type Vec3 } from '../base/vec.ts';
import { faceOf, next, previous } from '../mesh/surface-mesh.ts';
import { positionOf, type SurfacePoint } from '../mesh/surface-point.ts';
import type { FaceGeometry } from './face-geometry.ts';

/** Weight below which a surface point counts as lying on the opposite edge: float32 input cannot mean less. */
export const ON_EDGE = 1e-10;
/** How far past its ends a window is still believed to see, as a share of the edge: closes hair cracks between windows. */
export const SEEN = 1e-9;
/**
 * Where windows start. One root serves one face; a source on an edge or a vertex makes one for each
 * face around it.
 */
export interface Root {
  kind: 'point' | 'segment';
  /** Number the caller gave to the source. */
  source: number;
  face: number;
  /** Position of the point, or of the segment's start, part frame. */
  at: Vec3;
  /** Length already walked before the root (pseudo-sources at vertices). */
  sigma: number;
  /** Vertex whose pseudo-source this is, -1 for a true source. */
  vertex: number;
  /** Point: angle of the root frame's x axis in the source's polar angle. */
  offset: number;
  /** Point at a vertex: 2π over the sum of its angles; 1 elsewhere. */
  scale: number;
  /** Pseudo-source of a point: polar angle, radians, at which the source sees its vertex, and with it all that lies behind. */
  bearing: number;
  /**
   * Segment: length, arc length at its start, and the side (+1 left, -1 right) its windows run to.
   * Pseudo-source: `start` and `side` are those of the path that reached its vertex.
   */
  length: number;
  start: number;
  side: 1 | -1;
  /** Windows stop at this distance. */
  radius: number;
  /** Root frame in the face: origin `at`, x and y axes as part-frame unit vectors. */
  x: Vec3;
  y: Vec3;
}

export interface PointSource {
  at: SurfacePoint;
  source: number;
  radius: number;
  /** Direction of polar angle 0, part frame, in the plane of `at.face`; default: its first edge. */
  zero?: Vec3;
}

export interface SegmentSource {
  face: number;
  from: Vec3;
  to: Vec3;
  source: number;
  /** Arc length at `from`. */
  start: number;
  radiusLeft: number;
  radiusRight: number;
}

/** A root and the half-edges of its face that look away from it. */
export interface Start {
  root: Root;
  halves: readonly number[];
  /** Pseudo-source: the root looks only between these angles of its frame, radians. */
  wedge?: readonly [number, number];
}

const PLAIN = {
  sigma: 0,
  vertex: -1,
  offset: 0,
  scale: 1,
  bearing: 0,
  length: 0,
  start: 0,
  side: 1 as const,
};

/** Corner of the face on which a surface point lies, -1 when it lies on none. */
export const cornerAt = (p: SurfacePoint): number => p.bary.findIndex((b) => Math.abs(b - 1) <= ON_EDGE);

/** Half-edge of its face on which a surface point that is no corner lies, -1 when it lies inside. */
export function edgeAt(p: SurfacePoint): number {
  const opposite = p.bary.findIndex((b) => Math.abs(b) <= ON_EDGE);
  return opposite < 0 ? -1 : 3 * p.face + ((opposite + 1) % 3);
}

/** Roots of a point: in its face, in both faces of its edge, or all around its vertex. */
export function pointRoots(geometry: FaceGeometry, s: PointSource): Start[] {
  const { mesh } = geometry;
  const at = positionOf(mesh, s.at);
  const f = s.at.face;
  const zero = s.zero ?? geometry.edgeDirection(3 * f);
  const corner = cornerAt(s.at);
  if (corner >= 0)
    return fanRoots(
      geometry,
      3 * f + corner,
      { ...PLAIN, source: s.source, at, radius: s.radius },
      { face: f, zero },
    );
  const root = { ...PLAIN, kind: 'point' as const, source: s.source, at, radius: s.radius };
  const axes = geometry.axes(f, zero);
  const h = edgeAt(s.at);
  if (h < 0) return [{ root: { ...root, face: f, ...axes }, halves: [3 * f, 3 * f + 1, 3 * f + 2] }];
  // On an edge: the face across it sees the point too, in the same frame once unfolded.
  const here = { root: { ...root, face: f, ...axes }, halves: [next(h), previous(h)] };
  const t = mesh.twin[h];
  if (t < 0) return [here];
  return [
    here,
    { root: { ...root, face: faceOf(t), ...geometry.unfold(h, axes) }, halves: [next(t), previous(t)] },
  ];
}

/** What the roots around a vertex have in common. */
export type AtVertex = Pick<
  Root,
  'source' | 'at' | 'sigma' | 'vertex' | 'side' | 'start' | 'bearing' | 'radius'
>;

/** How much wider than its shadow a pseudo-source looks, radians: rounding leaves no crack between it and its neighbours. */
const WEDGE_SLACK = 1e-6;

/**
 * Roots around the vertex at which half-edge `h` starts: one for each face, or for a pseudo-source one for each face of
 * its shadow. A shortest path makes at least a half turn on either side of each vertex it passes (Mitchell, Mount and
 * Papadimitriou 1987, lemma 3.4), so a pseudo-source has nothing to say to the rest.
 * @param zero  direction of polar angle 0 in one of the faces
 * @param back  pseudo-source: angle from half-edge h, counter-clockwise, to the way it was reached by
 */
export function fanRoots(
  geometry: FaceGeometry,
  h: number,
  common: AtVertex,
  zero?: { face: number; zero: Vec3 },
  back?: number,
): Start[] {
  const { halves, angles, total, border } = geometry.fan(h);
  let zeroAngle = 0;
  if (zero) {
    const i = halves.findIndex((half) => faceOf(half) === zero.face);
    const { x, y } = geometry.axes(zero.face, geometry.edgeDirection(halves[i]));
    zeroAngle = angles[i] + Math.atan2(dot(zero.zero, y), dot(zero.zero, x));
  }
  const scale = border ? 1 : (2 * Math.PI) / total;
  const shadow = back === undefined ? null : shadowOf(angles[halves.indexOf(h)] + back, total, border);
  const starts: Start[] = [];
  halves.forEach((half, i) => {
    const corner = (i + 1 < angles.length ? angles[i + 1] : total) - angles[i];
    const wedges: [number, number][] = shadow
      ? shadow
          .map(([lo, hi]): [number, number] => [
            Math.max(0, lo - angles[i]),
            Math.min(corner, hi - angles[i]),
          ])
          .filter(([lo, hi]) => lo < hi)
      : [[0, corner]];
    if (wedges.length === 0) return;
    const face = faceOf(half);
    const axes = geometry.axes(face, geometry.edgeDirection(half));
    const { source, at, sigma, vertex, side, start, bearing, radius } = common;
    const root: Root = {
      kind: 'point',
      source,
      at,
      sigma,
      vertex,
      side,
      start,
      bearing,
      radius,
      face,
      offset: angles[i] - zeroAngle,
      scale,
      length: 0,
      ...axes,
    };
    for (const [lo, hi] of wedges)
      starts.push(
        lo === 0 && hi === corner
          ? { root, halves: [next(half)] }
          : { root, halves: [next(half)], wedge: [lo, hi] },
      );
  });
  return starts;
}

/** Angles of a fan, from its first half-edge, in which a path that came in along `back` may go on. */
function shadowOf(back: number, total: number, border: boolean): [number, number][] {
  const lo = back + Math.PI - WEDGE_SLACK;
  if (border)
    return [
      [0, back - Math.PI + WEDGE_SLACK],
      [lo, total],
    ];
  const hi = back + total - Math.PI + WEDGE_SLACK;
  return [
    [lo, hi],
    [lo - total, hi - total],
  ];
}

/** Roots of a segment of a path: one to each side that has a reach. A segment of no length has none. */
export function segmentRoots(geometry: FaceGeometry, s: SegmentSource): Start[] {
  const along: Vec3 = [s.to[0] - s.from[0], s.to[1] - s.from[1], s.to[2] - s.from[2]];
  const length = Math.hypot(along[0], along[1], along[2]);
  if (length === 0) return [];
  const axes = geometry.axes(s.face, along);
  const halves = [3 * s.face, 3 * s.face + 1, 3 * s.face + 2];
  const both = [
    { side: 1 as const, radius: s.radiusLeft },
    { side: -1 as const, radius: s.radiusRight },
  ];
  return both
    .filter((b) => b.radius > 0)
    .map((b) => ({
      root: {
        ...PLAIN,
        kind: 'segment',
        source: s.source,
        face: s.face,
        at: s.from,
        length,
        start: s.start,
        ...b,
        ...axes,
      },
      halves,
    }));
}

/** Distance that a root-frame point stands for; Infinity where a segment has no foot for it. */
export function rootDistance(root: Root, qx: number, qy: number): number {
  if (root.kind === 'point') return root.sigma + Math.hypot(qx, qy);
  const slack = SEEN * root.length;
  return qx < -slack || qx > root.length + slack || qy * root.side < -slack ? Infinity : Math.abs(qy);
}

/**
 * Part of the edge A → B (root frame of a segment, half-edge of the far face) whose feet lie on the segment and
 * which lies on the asked side, as lengths from A. An edge that the segment runs along belongs to the side beyond it.
 */
export function clipToStrip(
  ax: number,
  ay: number,
  bx: number,
  by: number,
  length: number,
  side: number,
  len: number,
): [number, number] | null {
  const slack = SEEN * (length + len);
  let t0 = 0;
  let t1 = 1;
  const cut = (fa: number, fb: number): boolean => {
    // Keeps where fa + t (fb - fa) >= 0.
    if (fa < 0 && fb < 0) return false;
    if (fa < 0) t0 = Math.max(t0, fa / (fa - fb));
    else if (fb < 0) t1 = Math.min(t1, fa / (fa - fb));
    return t0 < t1;
  };
  if (!cut(ax, bx) || !cut(length - ax, length - bx)) return null;
  if (Math.abs(ay) <= slack && Math.abs(by) <= slack) {
    // The far face lies left of A → B: to the segment's left when both run the same way.
    return bx - ax > 0 === side > 0 ? [t0 * len, t1 * len] : null;
  }
  if (!cut(ay * side, by * side)) return null;
  return [t0 * len, t1 * len];
}
