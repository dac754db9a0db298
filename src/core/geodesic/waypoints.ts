/** Places that hold a path where it is, though between its ends another way is shorter. */
import { at3, distance, type Vec3 } from '../base/vec.ts';
import { barycentric } from '../mesh/surface-point.ts';
import type { GeodesicPath } from './geodesic-path.ts';
import { shortestWith } from './shortest.ts';
import type { WindowSolver } from './windows.ts';

/** A path this much longer than the shortest, as a share, is another one: it goes round something on its other side. */
const OTHER = 1e-6;
/** Two paths of one length whose middles are this share of it apart run on two sides of something. */
const APART = 1e-3;
/** A path is cut within these shares of a piece. */
const INSIDE = [0.1, 0.9] as const;
/** A path is halved at most this often; a piece of a thousandth of a locally shortest path is the shortest. */
const HALVINGS = 10;

/**
 * Places on a locally shortest path, in order, such that the shortest ways from one to the next are the path: none where
 * the path is the shortest as it is.
 * @returns faces and places in the part frame, mm, from the path's start to its end
 */
export const waypoints = (solver: WindowSolver, path: GeodesicPath): { face: number; point: Vec3 }[] =>
  held(solver, path, HALVINGS);

function held(solver: WindowSolver, path: GeodesicPath, halvings: number): { face: number; point: Vec3 }[] {
  const { mesh } = solver;
  const last = path.faces.length;
  const point = (i: number): Vec3 => at3(path.points, i);
  const at = (face: number, p: Vec3) => ({ face, bary: barycentric(mesh, face, p) });
  if (last < 2 || halvings === 0) return [];
  const shortest = shortestWith(solver, at(path.faces[0], point(0)), at(path.faces[last - 1], point(last)));
  if (shortest === null) return [];
  // As long as the shortest, but elsewhere: round the other side of something in the middle between the ends.
  const elsewhere = distance(middleOf(path), middleOf(shortest)) > APART * path.length;
  if (path.length <= shortest.length * (1 + OTHER) && !elsewhere) return [];
  let i = 0;
  let length = 0;
  // The piece that holds the middle is cut itself: it may be nearly the whole path.
  while (i + 1 < last && length + distance(point(i), point(i + 1)) < path.length / 2) {
    length += distance(point(i), point(i + 1));
    i++;
  }
  const [p, q] = [point(i), point(i + 1)];
  const whole = distance(p, q);
  // Off its ends, which lie on edges: inside the face the path is sure to pass.
  const share = Math.min(INSIDE[1], Math.max(INSIDE[0], (path.length / 2 - length) / whole));
  const middle: Vec3 = [
    p[0] + share * (q[0] - p[0]),
    p[1] + share * (q[1] - p[1]),
    p[2] + share * (q[2] - p[2]),
  ];
  const face = path.faces[i];
  const half = share * whole;
  const first: GeodesicPath = {
    points: Float64Array.from([...path.points.subarray(0, 3 * i + 3), ...middle]),
    faces: path.faces.slice(0, i + 1),
    length: length + half,
  };
  const second: GeodesicPath = {
    points: Float64Array.from([...middle, ...path.points.subarray(3 * i + 3)]),
    faces: path.faces.slice(i),
    length: path.length - length - half,
  };
  return [
    ...held(solver, first, halvings - 1),
    { face, point: middle },
    ...held(solver, second, halvings - 1),
  ];
}

/** Place half way along a path. */
function middleOf(path: GeodesicPath): Vec3 {
  const point = (i: number): Vec3 => at3(path.points, i);
  let left = path.length / 2;
  for (let i = 0; i < path.faces.length; i++) {
    const [p, q] = [point(i), point(i + 1)];
    const d = distance(p, q);
    if (left <= d && d > 0) {
      const t = left / d;
      return [p[0] + t * (q[0] - p[0]), p[1] + t * (q[1] - p[1]), p[2] + t * (q[2] - p[2])];
    }
    left -= d;
  }
  return point(path.faces.length);
}
