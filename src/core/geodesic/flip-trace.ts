/** Walks an edge of a flipped triangulation over the faces of the surface, straight through each edge it crosses. */
import { cosine, sine } from '../base/trig.ts';
import type { Vec3 } from '../base/vec.ts';
import { faceOf, next, previous } from '../mesh/surface-mesh.ts';
import { positionOf } from '../mesh/surface-point.ts';
import { AT_POINT, type FlipMesh, NONE } from './flip-mesh.ts';

/** How far from its end, as a share of its length, an edge may come out by rounding. */
const MISS = 1e-7;
/** More than the angles around any vertex of a printable part, radians. */
const TURN = 1e3;

/**
 * Appends the crossings of half-edge k and its end to `points`, whose last one is its start, and the faces between.
 * @returns whether the walk came out at the end of the edge
 */
export function walkEdge(flips: FlipMesh, k: number, points: Vec3[], faces: number[]): boolean {
  // From a vertex rather than from an inserted point where there is a choice; along a border from the side that has a face.
  const t = flips.twin(k);
  const fromVertex = flips.tail[k] < flips.vertices || flips.tail[t] >= flips.vertices;
  if (flips.base[t] === NONE || (fromVertex && flips.base[k] !== NONE)) return walk(flips, k, points, faces);
  const start = points.length - 1;
  const back: Vec3[] = [place(flips, flips.tail[t])];
  const through: number[] = [];
  if (!walk(flips, t, back, through)) return false;
  points.length = start;
  points.push(...back.reverse());
  faces.push(...through.reverse());
  return true;
}

function walk(flips: FlipMesh, k: number, points: Vec3[], faces: number[]): boolean {
  const { mesh } = flips;
  const { positions: x, triangles, twin } = mesh;
  const length = flips.length[k];
  const end = flips.tail[flips.twin(k)];
  const goal = place(flips, end);
  const first = points[points.length - 1];
  const start = outward(flips, k);
  if (!start) return false;
  // Ray in the local frame of the half-edge (start at the origin, end on the x axis, face above).
  let { half, px, py, dx, dy } = start;
  let [lx, ly, lz] = first;
  let left = length;
  // Half-edge through which the face was entered; the ray never leaves through it.
  let entered = start.onHalf;
  // A straight line meets each half-edge of the surface a few times at the most; only rounding goes on for ever.
  for (let n = 0; n < triangles.length; n++) {
    const face = faceOf(half);
    if (holds(flips, face, end)) {
      const d = Math.hypot(goal[0] - lx, goal[1] - ly, goal[2] - lz);
      if (Math.abs(d - left) <= MISS * length) {
        points.push(goal);
        faces.push(face);
        return true;
      }
    }
    if (left < -MISS * length) return false;
    const a = 3 * triangles[half];
    const b = 3 * triangles[next(half)];
    const c = 3 * triangles[previous(half)];
    const ux = x[b] - x[a],
      uy = x[b + 1] - x[a + 1],
      uz = x[b + 2] - x[a + 2];
    const vx = x[c] - x[a],
      vy = x[c + 1] - x[a + 1],
      vz = x[c + 2] - x[a + 2];
    const len = Math.sqrt(ux * ux + uy * uy + uz * uz);
    const cx = (ux * vx + uy * vy + uz * vz) / len;
    const nx = uy * vz - uz * vy,
      ny = uz * vx - ux * vz,
      nz = ux * vy - uy * vx;
    const cy = Math.sqrt(nx * nx + ny * ny + nz * nz) / len;
    // Out through the side that the ray meets first of those it meets going outward: it turns to the right of them.
    let out = -1;
    let far = Infinity;
    let share = 0;
    for (let side = entered ? 1 : 0; side < 3; side++) {
      const fx = side === 0 ? 0 : side === 1 ? len : cx;
      const fy = side === 2 ? cy : 0;
      const ex = side === 0 ? len : side === 1 ? cx - len : -cx;
      const ey = side === 0 ? 0 : side === 1 ? cy : -cy;
      const den = dx * ey - dy * ex;
      if (!(den > 0)) continue;
      const t = ((fx - px) * ey - (fy - py) * ex) / den;
      if (t >= far) continue;
      far = t;
      out = side === 0 ? half : side === 1 ? next(half) : previous(half);
      share = ((px + t * dx - fx) * ex + (py + t * dy - fy) * ey) / (ex * ex + ey * ey);
    }
    if (out < 0) return false;
    share = Math.max(0, Math.min(1, share));
    const t = twin[out];
    if (t < 0) return false;
    const o = 3 * triangles[out];
    const e = 3 * triangles[next(out)];
    const qx = x[o] + share * (x[e] - x[o]),
      qy = x[o + 1] + share * (x[e + 1] - x[o + 1]),
      qz = x[o + 2] + share * (x[e + 2] - x[o + 2]);
    const side = out === half ? len : out === next(half) ? Math.hypot(cx - len, cy) : Math.hypot(cx, cy);
    left -= Math.hypot(qx - lx, qy - ly, qz - lz);
    [lx, ly, lz] = [qx, qy, qz];
    points.push([qx, qy, qz]);
    faces.push(face);
    // Direction of the side in the old frame; its twin runs the other way.
    const [sx, sy] =
      out === half ? [1, 0] : out === next(half) ? [(cx - len) / side, cy / side] : [-cx / side, -cy / side];
    [dx, dy] = [-(dx * sx + dy * sy), -(dy * sx - dx * sy)];
    half = t;
    [px, py] = [(1 - share) * side, 0];
    entered = true;
  }
  return false;
}

/** Ray along half-edge k from its start, in a face of the surface; null over a border. */
function outward(flips: FlipMesh, k: number) {
  const { mesh } = flips;
  const v = flips.tail[k];
  let turn = flips.turn[k];
  if (flips.base[k] === AT_POINT) {
    const point = flips.inserted[v - flips.vertices];
    turn -= 2 * Math.PI * Math.floor(turn / (2 * Math.PI));
    const across = point.onEdge && turn > Math.PI;
    const half = across ? mesh.twin[point.half] : point.half;
    if (half < 0) return null;
    if (across) turn -= Math.PI;
    const [px, py] = inFrame(flips, half, positionOf(mesh, point.at));
    return {
      half,
      px,
      py: point.onEdge ? 0 : py,
      dx: cosine(turn),
      dy: sine(turn),
      onHalf: point.onEdge,
    };
  }
  let half = flips.base[k];
  if (half < 0) return null;
  // Once round the vertex is more than any direction needs; a direction that is no number ends here too.
  for (const first = half; ; ) {
    const angle = flips.geometry.cornerAngle(half);
    if (turn <= angle) break;
    const t = mesh.twin[previous(half)];
    if (t < 0) {
      if (turn > angle * (1 + MISS)) return null;
      break;
    }
    turn -= angle;
    half = t;
    if (half === first && !(turn < TURN)) return null;
  }
  return { half, px: 0, py: 0, dx: cosine(turn), dy: sine(turn), onHalf: true };
}

function inFrame(flips: FlipMesh, half: number, p: Vec3): [number, number] {
  const { positions: x, triangles: t } = flips.mesh;
  const a = 3 * t[half];
  const b = 3 * t[next(half)];
  return flips.geometry.inHalf(half, p, Math.hypot(x[b] - x[a], x[b + 1] - x[a + 1], x[b + 2] - x[a + 2]));
}

function place(flips: FlipMesh, v: number): Vec3 {
  if (v >= flips.vertices) return positionOf(flips.mesh, flips.inserted[v - flips.vertices].at);
  return flips.geometry.position(v);
}

function holds(flips: FlipMesh, face: number, v: number): boolean {
  const { mesh } = flips;
  if (v < flips.vertices) {
    const t = mesh.triangles;
    return t[3 * face] === v || t[3 * face + 1] === v || t[3 * face + 2] === v;
  }
  const { half, onEdge } = flips.inserted[v - flips.vertices];
  return faceOf(half) === face || (onEdge && mesh.twin[half] >= 0 && faceOf(mesh.twin[half]) === face);
}
