/**
 * Straightest lines: K. Polthier, M. Schmies, "Straightest geodesics on polyhedral surfaces", 1998. Over an edge the line
 * runs on as in the plane with both faces unfolded; through a vertex it leaves equal angles left and right (definition 1).
 */

import { Fault } from '../base/news.ts';
import { cosine, sine } from '../base/trig.ts';
import { add, clamp, distance, dot, normalize, scale, type Vec3 } from '../base/vec.ts';
import { faceOf, next, previous, type SurfaceMesh } from '../mesh/surface-mesh.ts';
import { positionOf, type SurfacePoint } from '../mesh/surface-point.ts';
import { FaceGeometry, type Fan } from './face-geometry.ts';
import type { GeodesicPath } from './geodesic-path.ts';

/**
 * A line that meets an edge this near one of its ends, as a share of the edge, meets the vertex: far above what rounding
 * gathers over a million faces, far below anything that is made.
 */
const AT = 1e-10;
/** A weight of the start up to this is none: what rounding leaves of a place on an edge or a vertex. */
const NO_WEIGHT = 1e-14;
/** A line at this angle to an edge or less, radians, runs along it: where it would cross is lost in rounding. */
const ALONG = 1e-12;
/** What is left of a line at a crossing, as a share of the whole, and no longer than rounding: the line ends there. */
const LEFT = 1e-13;

export interface StraightLine {
  /** Two points at least, also where the line has no length. */
  path: GeodesicPath;
  end: SurfacePoint;
  /** Unit, part frame, in the plane of the end's face. */
  direction: Vec3;
  /** Null when the line has its whole length; a border is an open edge, one of three facets or more, or an end of such. */
  stopped: { kind: 'border'; at: Vec3 } | null;
}

/** A place in the flat frame of half-edge `half`: its start at the origin, its end on +x, its face above. */
interface Walker {
  half: number;
  x: number;
  y: number;
  /** Unit. */
  dx: number;
  dy: number;
  /** Where in the face: on the half-edge, pointing in or along it, at its start, or somewhere inside. */
  on: 'edge' | 'start' | 'inside';
}

/** A unit direction in the flat frame of a half-edge. */
interface Heading {
  half: number;
  dx: number;
  dy: number;
}

/** Where a walker leaves its face. */
interface Exit {
  x: number;
  y: number;
  far: number;
  /** Half-edge of the face that is left over, its length, and the way along it as a share of its length, 0 … 1. */
  over: number;
  len: number;
  share: number;
  /** Direction in the frame of `over`; `out` points out of the face. */
  along: number;
  out: number;
}

/**
 * Walks straight on from a surface point. It ends: a step either gains ground or turns about a vertex that it passes, and
 * passing one takes half a turn in all.
 *
 * @param from       may lie on an edge or a vertex. A direction that leaves the face there turns into the next face over the
 *                   edge; at a vertex, angles outside the face's corner are spread evenly over the other faces around it
 * @param direction  part frame, any length; what counts is its foot in the plane of the start's face
 * @param length     mm, 0 or more
 * @throws Fault     for a length that is none, or a direction with no foot in the face's plane
 */
export function straightest(
  mesh: SurfaceMesh,
  from: SurfacePoint,
  direction: Vec3,
  length: number,
): StraightLine {
  if (!(length >= 0 && length < Infinity)) throw new Fault(`a line of length ${length}`);
  const geometry = new FaceGeometry(mesh);
  const spare = LEFT * length;
  const trail = startTrail(positionOf(mesh, from), spare);
  const first = start(geometry, from, direction);
  let { walker } = first;
  let left = length;
  if (!first.onSurface && length > 0)
    return finish(geometry, trail, from, headingOf(walker), { kind: 'border', at: positionOf(mesh, from) });
  for (;;) {
    const exit = leave(geometry, walker);
    if (left < exit.far - spare)
      return finish(geometry, trail, inside(geometry, walker, left), headingOf(walker), null);
    const end = onEdge(exit);
    const at = positionOf(mesh, end);
    const heading: Heading = { half: exit.over, dx: exit.along, dy: -exit.out };
    if (left <= exit.far + spare) return finish(geometry, trail, end, heading, null);
    const onward = exit.share === 0 || exit.share === 1 ? pass(geometry, exit) : cross(mesh, exit);
    if (!onward) return finish(geometry, trail, end, heading, { kind: 'border', at });
    extend(trail, at, faceOf(exit.over));
    left -= exit.far;
    walker = onward;
  }
}

/** @returns where the walker sets off, and whether there is a surface that way */
function start(g: FaceGeometry, from: SurfacePoint, direction: Vec3): { walker: Walker; onSurface: boolean } {
  const { face, bary } = from;
  const zero = bary.map((w) => w <= NO_WEIGHT);
  const vertex = [0, 1, 2].find((i) => zero[(i + 1) % 3] && zero[(i + 2) % 3]);
  const edge = [0, 1, 2].find((i) => zero[(i + 2) % 3]);
  // The frame's half-edge: from the vertex, along the edge, or any.
  const i = vertex ?? edge ?? 0;
  const half = 3 * face + i;
  const e = g.edgeDirection(half);
  const len = Math.hypot(...e);
  const axes = g.axes(face, e);
  const [fx, fy] = [dot(direction, axes.x), dot(direction, axes.y)];
  const foot = Math.hypot(fx, fy);
  if (!(foot > ALONG * Math.hypot(...direction) && foot < Infinity))
    throw new Fault(`the direction [${direction.join(', ')}] has no foot in the plane of face ${face}`);
  const [dx, dy] = [fx / foot, fy / foot];
  if (vertex !== undefined) return startAtVertex(g, half, dx, dy);
  const [u, v] = [bary[(i + 1) % 3], bary[(i + 2) % 3]];
  const [ax, ay] = g.apex(half, len);
  if (edge === undefined)
    return { walker: { half, x: u * len + v * ax, y: v * ay, dx, dy, on: 'inside' }, onSurface: true };
  const here: Walker = { half, x: u * len, y: 0, dx, dy, on: 'edge' };
  if (dy >= -ALONG) return { walker: here, onSurface: true };
  const twin = g.mesh.twin[half];
  if (twin < 0) return { walker: here, onSurface: false };
  return { walker: { half: twin, x: len - here.x, y: 0, dx: -dx, dy: -dy, on: 'edge' }, onSurface: true };
}

/**
 * Inside the corner of the face an angle is what it is. Around a closed vertex the rest of the full turn is spread over the
 * rest of the vertex' angle; around one on a border faces are unfolded the nearer way, and what no face covers is off the
 * surface.
 */
function startAtVertex(g: FaceGeometry, half: number, dx: number, dy: number) {
  const own = g.cornerAngle(half);
  const turn = Math.atan2(dy, dx);
  const angle = turn < -ALONG ? turn + 2 * Math.PI : Math.max(0, turn);
  const here: Walker = { half, x: 0, y: 0, dx, dy, on: 'start' };
  if (angle <= own) return { walker: here, onSurface: true };
  const fan = g.fan(half);
  const before = fan.angles[fan.halves.indexOf(half)];
  if (!fan.border) {
    const rest = (angle - own) * ((fan.total - own) / (2 * Math.PI - own));
    return { walker: atAngle(g, fan, (before + own + rest) % fan.total), onSurface: true };
  }
  const ways = [before + angle, before + angle - 2 * Math.PI];
  if (2 * Math.PI - angle < angle - own) ways.reverse();
  const covered = ways.find((a) => a >= -ALONG && a <= fan.total + ALONG);
  return covered === undefined
    ? { walker: here, onSurface: false }
    : { walker: atAngle(g, fan, Math.max(0, covered)), onSurface: true };
}

/** The walker that leaves a vertex at an angle of its fan. */
function atAngle(g: FaceGeometry, fan: Fan, angle: number): Walker {
  let i = fan.halves.length - 1;
  while (i > 0 && fan.angles[i] > angle) i--;
  const half = fan.halves[i];
  const turn = Math.min(angle - fan.angles[i], g.cornerAngle(half));
  return { half, x: 0, y: 0, dx: cosine(turn), dy: sine(turn), on: 'start' };
}

/** Where the walker's line leaves its face. */
function leave(g: FaceGeometry, w: Walker): Exit {
  const len = Math.hypot(...g.edgeDirection(w.half));
  const [ax, ay] = g.apex(w.half, len);
  const cornerX = [0, len, ax];
  const cornerY = [0, 0, ay];
  // Distance of each corner from the line: left of it positive. The line leaves from right to left.
  const side = [0, 1, 2].map((i) => w.dx * (cornerY[i] - w.y) - w.dy * (cornerX[i] - w.x));
  const k = way(w, cornerX, cornerY, side);
  const to = (k + 1) % 3;
  const [ex, ey] = [cornerX[to] - cornerX[k], cornerY[to] - cornerY[k]];
  const edge = Math.hypot(ex, ey);
  const along = (w.dx * ex + w.dy * ey) / edge;
  const out = (w.dx * ey - w.dy * ex) / edge;
  // Never behind the walker, which stands on the edge already when rounding says so.
  const stands = ((w.x - cornerX[k]) * ex + (w.y - cornerY[k]) * ey) / (edge * edge);
  const meets = out <= ALONG ? (along > 0 ? 1 : 0) : side[k] / (side[k] - side[to]);
  const ahead = along > 0 ? Math.max(meets, stands) : Math.min(meets, stands);
  const share = ahead <= AT ? 0 : ahead >= 1 - AT ? 1 : ahead;
  const [x, y] = [cornerX[k] + share * ex, cornerY[k] + share * ey];
  const over = k === 0 ? w.half : k === 1 ? next(w.half) : previous(w.half);
  return { x, y, far: Math.hypot(x - w.x, y - w.y), over, len: edge, share, along, out };
}

/** Side of the triangle that the line leaves over: 0 the frame's own half-edge, 1 the next, 2 the one before. */
function way(w: Walker, cornerX: number[], cornerY: number[], side: number[]): number {
  if (w.on === 'start') return 1;
  if (w.on === 'edge') return w.dy <= ALONG ? 0 : side[2] < 0 ? 2 : 1;
  // From inside: the side that is reached first.
  let best = 0;
  let soonest = Infinity;
  for (let k = 0; k < 3; k++) {
    const to = (k + 1) % 3;
    const nearing = side[to] - side[k];
    if (!(nearing > 0)) continue;
    const [ex, ey] = [cornerX[to] - cornerX[k], cornerY[to] - cornerY[k]];
    const height = ex * (w.y - cornerY[k]) - ey * (w.x - cornerX[k]);
    if (height / nearing < soonest) {
      soonest = height / nearing;
      best = k;
    }
  }
  return best;
}

/** Over an edge both faces lie in one plane: the frame of the half-edge on the other side is turned by half a turn. */
function cross(mesh: SurfaceMesh, exit: Exit): Walker | null {
  const half = mesh.twin[exit.over];
  if (half < 0) return null;
  const unit = Math.hypot(exit.along, exit.out);
  return {
    half,
    x: (1 - exit.share) * exit.len,
    y: 0,
    dx: -exit.along / unit,
    dy: exit.out / unit,
    on: 'edge',
  };
}

/** Through a vertex: half of its angle to the left, half to the right. */
function pass(g: FaceGeometry, exit: Exit): Walker | null {
  const half = exit.share === 0 ? exit.over : next(exit.over);
  const fan = g.fan(half);
  if (fan.border) return null;
  const own = g.cornerAngle(half);
  // Angle of the way that the line came, from the half-edge. A line that passed a hair beside the vertex over another edge
  // came from outside this corner: its faces are unfolded around the vertex, and so is its angle.
  const came = exit.share === 0 ? Math.atan2(exit.out, -exit.along) : own - Math.atan2(exit.out, exit.along);
  const back = fan.angles[fan.halves.indexOf(half)] + came;
  const out = (back + fan.total / 2) % fan.total;
  return atAngle(g, fan, out < 0 ? out + fan.total : out);
}

const headingOf = ({ half, dx, dy }: Walker): Heading => ({ half, dx, dy });

/** The place `far` on from the walker in its face. */
function inside(g: FaceGeometry, w: Walker, far: number): SurfacePoint {
  const len = Math.hypot(...g.edgeDirection(w.half));
  const [ax, ay] = g.apex(w.half, len);
  const third = clamp((w.y + far * w.dy) / ay, 0, 1);
  const second = clamp((w.x + far * w.dx - third * ax) / len, 0, 1 - third);
  return weights(w.half, 1 - third - second, second, third);
}

const onEdge = ({ over, share }: Exit): SurfacePoint => weights(over, 1 - share, share, 0);

/** Weights of the half-edge's start, its end, and the third corner. */
function weights(half: number, a: number, b: number, c: number): SurfacePoint {
  const bary: [number, number, number] = [a, b, c];
  const i = half % 3;
  return { face: faceOf(half), bary: [bary[(3 - i) % 3], bary[(4 - i) % 3], bary[(5 - i) % 3]] };
}

interface Trail {
  points: Vec3[];
  faces: number[];
  /** Pieces no longer than this are left out. */
  least: number;
}

const startTrail = (at: Vec3, least: number): Trail => ({ points: [at], faces: [], least });

function extend(trail: Trail, at: Vec3, face: number): void {
  if (distance(trail.points[trail.points.length - 1], at) <= trail.least) return;
  trail.points.push(at);
  trail.faces.push(face);
}

function finish(
  g: FaceGeometry,
  { points, faces, least }: Trail,
  end: SurfacePoint,
  heading: Heading,
  stopped: StraightLine['stopped'],
): StraightLine {
  const at = positionOf(g.mesh, end);
  if (faces.length > 0 && distance(points[points.length - 1], at) <= least) points[points.length - 1] = at;
  else {
    points.push(at);
    faces.push(end.face);
  }
  let length = 0;
  for (let i = 1; i < points.length; i++) length += distance(points[i - 1], points[i]);
  const { x, y } = g.axes(end.face, g.edgeDirection(heading.half));
  return {
    path: { points: Float64Array.from(points.flat()), faces: Int32Array.from(faces), length },
    end,
    direction: normalize(add(scale(x, heading.dx), scale(y, heading.dy))),
    stopped,
  };
}
