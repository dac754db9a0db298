/**
 * Ways along edges, from which shorter ones are made. E. W. Dijkstra, "A note on two problems in connexion with graphs",
 * 1959, led by the straight line to the target (P. Hart, N. Nilsson, B. Raphael 1968), so that a search stays between the
 * two places; led harder than is right (I. Pohl 1970) it is quicker and at most as much too long.
 */
import { at3, type Vec3 } from '../base/vec.ts';
import { faceOf, next, previous, type SurfaceMesh } from '../mesh/surface-mesh.ts';
import { positionOf, type SurfacePoint } from '../mesh/surface-point.ts';
import { type GeodesicPath, gatherPath } from './geodesic-path.ts';
import { fillRing } from './ring.ts';
import { cornerAt } from './roots.ts';
import { toPlace, toVertex } from './vertex-lengths.ts';
import { KeyHeap } from './window-store.ts';

export interface EdgeWay {
  /** Where the way along edges starts: the vertex that the first place is, or a corner of its face. */
  start: number;
  /** Half-edges walked, in order; -1 - h where half-edge h is walked against its direction. */
  steps: number[];
  /** mm, with the straight pieces inside the first and the last face */
  length: number;
}

/** Prepared for one mesh. Arrays as long as its vertices, touched only where a search comes near. */
export class EdgeWays {
  private readonly mesh: SurfaceMesh;
  private readonly dist: Float64Array;
  private readonly stamp: Int32Array;
  private readonly done: Int32Array;
  /** Half-edge that starts at the vertex, in a face that the search reached it through. */
  private readonly leaves: Int32Array;
  /** Last step to the vertex, as in `EdgeWay.steps`; `FIRST` at a corner of the first face. */
  private readonly came: Int32Array;
  private run = 0;
  private readonly heap = new KeyHeap();
  private readonly ring: number[] = [];

  constructor(mesh: SurfaceMesh) {
    this.mesh = mesh;
    const n = mesh.positions.length / 3;
    this.dist = new Float64Array(n);
    this.stamp = new Int32Array(n);
    this.done = new Int32Array(n);
    this.leaves = new Int32Array(n);
    this.came = new Int32Array(n);
  }

  /**
   * @param greed  1 finds the shortest way along edges; more looks at fewer vertices and is at most that much too long
   * @returns null when no way over edges joins the two
   */
  find(from: SurfacePoint, to: SurfacePoint, greed = 1): EdgeWay | null {
    const { mesh, dist, done, heap, ring } = this;
    const { triangles } = mesh;
    const run = ++this.run;
    const start = positionOf(mesh, from);
    const target = positionOf(mesh, to);
    heap.size = 0;
    for (const h of doorsOf(from)) this.reach(h, FIRST, this.apart(triangles[h], start), target, greed);
    const goals = doorsOf(to).map((h) => triangles[h]);
    let best = Infinity;
    let end = -1;
    while (heap.size > 0 && heap.least < best) {
      const v = heap.pop();
      if (done[v] === run) continue;
      done[v] = run;
      const d = dist[v];
      if (goals.includes(v) && d + this.apart(v, target) < best) {
        best = d + this.apart(v, target);
        end = v;
      }
      const count = fillRing(mesh, this.leaves[v], ring);
      for (let i = 0; i < count; i++) {
        const h = ring[i];
        const b = next(h);
        const c = previous(h);
        this.reach(b, h, d + this.edge(v, triangles[b]), target, greed);
        this.reach(c, -1 - c, d + this.edge(v, triangles[c]), target, greed);
      }
    }
    if (end < 0) return null;
    const steps: number[] = [];
    let v = end;
    for (let step = this.came[v]; step !== FIRST; step = this.came[v]) {
      steps.push(step);
      v = step >= 0 ? triangles[step] : triangles[next(-1 - step)];
    }
    return { start: v, steps: steps.reverse(), length: best };
  }

  /** Half-edge `half` starts at the vertex reached. */
  private reach(half: number, step: number, d: number, target: Vec3, greed: number): void {
    const v = this.mesh.triangles[half];
    if (this.stamp[v] === this.run && d >= this.dist[v]) return;
    // A settled vertex stays: what greed loses is bounded by it.
    if (this.done[v] === this.run) return;
    this.stamp[v] = this.run;
    this.dist[v] = d;
    this.leaves[v] = half;
    this.came[v] = step;
    this.heap.push(v, d + greed * this.apart(v, target));
  }

  private apart(v: number, p: Vec3): number {
    return toPlace(this.mesh.positions, v, p);
  }

  private edge(v: number, w: number): number {
    return toVertex(this.mesh.positions, v, w);
  }
}

/** The way as a path over the surface. */
export function pathOfWay(
  mesh: SurfaceMesh,
  from: SurfacePoint,
  to: SurfacePoint,
  way: EdgeWay,
): GeodesicPath {
  const { positions: x, triangles } = mesh;
  const vertex = (v: number): Vec3 => at3(x, v);
  const points = [positionOf(mesh, from), vertex(way.start)];
  const faces = [from.face];
  for (const step of way.steps) {
    const half = step >= 0 ? step : -1 - step;
    points.push(vertex(triangles[step >= 0 ? next(half) : half]));
    faces.push(faceOf(half));
  }
  points.push(positionOf(mesh, to));
  faces.push(to.face);
  return gatherPath(points, faces);
}

const FIRST = -(2 ** 31);

/** Half-edges at whose starts a way leaves a place: one at a vertex, else all of its face. */
function doorsOf(p: SurfacePoint): number[] {
  const corner = cornerAt(p);
  const halves = [3 * p.face, 3 * p.face + 1, 3 * p.face + 2];
  return corner < 0 ? halves : [halves[corner]];
}
