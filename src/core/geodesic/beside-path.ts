/** The way along edges that runs right beside a path: from it flips find the path again, or where its ends have moved to. */
import { Fault } from '../base/news.ts';
import { at3, type Vec3 } from '../base/vec.ts';
import type { SurfaceMesh } from '../mesh/surface-mesh.ts';
import type { SurfacePoint } from '../mesh/surface-point.ts';
import type { EdgeWay, EdgeWays } from './edge-ways.ts';
import type { GeodesicPath } from './geodesic-path.ts';
import { toPlace, toVertex } from './vertex-lengths.ts';

/**
 * A way along edges from one place to another that keeps the side of an old path between two places nearby: it passes
 * every hole as the old path does, since it leaves the faces of that path only near its ends. It runs through corners of
 * those faces, so on which side of a single corner it is pulled taut again is left open.
 * @returns null when the old path stays in one face, when its faces do not hang together, or when a place cannot be
 *          joined to it
 */
export function wayBeside(
  ways: EdgeWays,
  mesh: SurfaceMesh,
  path: GeodesicPath,
  from: SurfacePoint,
  to: SurfacePoint,
): EdgeWay | null {
  const chain = chainBeside(mesh, path);
  if (chain === null) return null;
  const first = ways.find(from, atVertex(mesh, chain.face, chain.start));
  const last = first && ways.find(atVertex(mesh, chain.lastFace, chain.end), to);
  if (!first || !last) return null;
  const steps = [...first.steps, ...chain.steps, ...last.steps];
  return { start: first.start, steps, length: first.length + chain.length + last.length };
}

/** From one crossing to the next, the nearer end of each edge crossed: neighbours are corners of the face between. */
function chainBeside(mesh: SurfaceMesh, path: GeodesicPath) {
  let v = -1;
  let [start, face, lastFace, length] = [-1, -1, -1, 0];
  const steps: number[] = [];
  for (let i = 0; i + 1 < path.faces.length; i++) {
    const [f, g] = [path.faces[i], path.faces[i + 1]];
    if (f === g) continue;
    const w = nearestShared(mesh, f, g, at3(path.points, i + 1));
    if (w < 0) return null;
    if (v < 0) [start, face] = [w, f];
    else if (w !== v) {
      steps.push(stepIn(mesh, f, v, w));
      length += toVertex(mesh.positions, v, w);
    }
    v = w;
    lastFace = g;
  }
  return v < 0 ? null : { start, face, steps, end: v, lastFace, length };
}

/** Corner nearest to `at` that faces f and g share, where they meet in an edge or turn about a vertex; -1 where none. */
function nearestShared(mesh: SurfaceMesh, f: number, g: number, at: Vec3): number {
  const { triangles } = mesh;
  let best = -1;
  let least = Infinity;
  for (let i = 3 * f; i < 3 * f + 3; i++)
    for (let j = 3 * g; j < 3 * g + 3; j++) {
      if (triangles[i] !== triangles[j]) continue;
      const d = toPlace(mesh.positions, triangles[i], at);
      if (d < least) [best, least] = [triangles[i], d];
    }
  return best;
}

/** Step of an `EdgeWay` from corner v of a face to corner w. */
function stepIn({ triangles }: SurfaceMesh, face: number, v: number, w: number): number {
  for (let i = 0; i < 3; i++) {
    const h = 3 * face + i;
    const n = 3 * face + ((i + 1) % 3);
    if (triangles[h] === v && triangles[n] === w) return h;
    if (triangles[h] === w && triangles[n] === v) return -1 - h;
  }
  throw new Fault(`vertices ${v} and ${w} are not corners of face ${face}`);
}

function atVertex({ triangles }: SurfaceMesh, face: number, v: number): SurfacePoint {
  const bary = [0, 1, 2].map((i) => (triangles[3 * face + i] === v ? 1 : 0));
  return { face, bary: [bary[0], bary[1], bary[2]] };
}
