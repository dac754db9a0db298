/**
 * Lower bounds of the ways over the surface to one target: how much a path that has come to a vertex still has to go.
 *
 * A function that runs evenly inside each face and has no slope above 1 grows along no way by more than the way's length,
 * so its rise bounds the distance from below (a subsolution of the eikonal equation; M. Crandall and P.-L. Lions,
 * "Viscosity solutions of Hamilton–Jacobi equations", 1983). One is made in two steps: distances at vertices by marching
 * with circular fronts (M. Novotni and R. Klein, "Computing geodesic distances on triangular meshes", WSCG 2002), good to a
 * small share of an edge but a little too steep here and there; then, as much as each belt of distance is too steep, its
 * rise is lowered. Slopes are looked at, not assumed, in every face through which a path of the known length may run. Close
 * to the target, where even functions cannot follow the round fronts, the straight line takes over.
 */
import type { Vec3 } from '../base/vec.ts';
import { next, previous, type SurfaceMesh } from '../mesh/surface-mesh.ts';
import { positionOf, type SurfacePoint } from '../mesh/surface-point.ts';
import { fillRing } from './ring.ts';
import { toPlace, toVertex } from './vertex-lengths.ts';
import { KeyHeap } from './window-store.ts';

/** Belts of distance to a path's length at most, each about an edge wide; as many again lie beyond it. */
const BELTS = 512;
/** The straight line takes over within this share of the length, where it is longest at the most. */
const NEAR = 0.25;
/** Every point of a triangle lies within its longest side times this of a corner. */
const COVER = 1 / Math.sqrt(3);
/** Rounds of narrowing at most: each looks only where the one before lets a path run. */
const ROUNDS = 8;
/** A round that leaves more than this share of the faces is the last. */
const NARROWER = 0.95;
const ROUNDING = 1e-12;

/** Prepared for one mesh; `aim` starts afresh. Its arrays are touched only where a path may run. */
export class LowerBound {
  private readonly mesh: SurfaceMesh;
  /** Marched distance at a vertex; valid where `reached` is the run's. */
  private readonly u: Float64Array;
  private readonly reached: Int32Array;
  private readonly settled: Int32Array;
  private readonly leaves: Int32Array;
  private readonly bound: Float64Array;
  /** Run in which a path of the known length could still come near the vertex when all was done. */
  private readonly open: Int32Array;
  private run = 0;
  private readonly heap = new KeyHeap();
  private readonly ring: number[] = [];
  private readonly order: number[] = [];
  private readonly faces = new FaceList();
  private source: Vec3 = [0, 0, 0];
  private target: Vec3 = [0, 0, 0];

  constructor(mesh: SurfaceMesh) {
    this.mesh = mesh;
    const n = mesh.positions.length / 3;
    this.u = new Float64Array(n);
    this.reached = new Int32Array(n);
    this.settled = new Int32Array(n);
    this.leaves = new Int32Array(n);
    this.bound = new Float64Array(n);
    this.open = new Int32Array(n);
  }

  /**
   * Lower bound of the way from vertex v to the target, mm, to be taken as even along edges; NaN so close to the target
   * that only the straight line says anything; Infinity where no path of the known length can pass beside it.
   */
  at(v: number): number {
    return this.open[v] === this.run ? this.bound[v] : Infinity;
  }

  /**
   * Makes the bounds for paths of at most `length` between two places.
   * @param length  of a known path, mm
   */
  aim(from: SurfacePoint, to: SurfacePoint, length: number): void {
    this.run++;
    this.source = positionOf(this.mesh, from);
    this.target = positionOf(this.mesh, to);
    const most = length * (1 + ROUNDING);
    this.march(to, most);
    this.gatherFaces();
    const { faces, u, bound, open } = this;
    let near = 0;
    let edges = 0;
    for (let f = 0; f < faces.count; f++) edges += faces.longest(f);
    const belts = Math.max(1, Math.min(BELTS, Math.ceil((length * faces.count) / edges)));
    for (let round = 0; round < ROUNDS; round++) {
      near = this.lower(to, length, belts);
      const before = faces.count;
      faces.keep((f) => this.mayPass(f, near, most));
      if (faces.count > NARROWER * before) break;
    }
    for (let i = 0; i < 3 * faces.count; i++) {
      const v = faces.corners[i];
      if (u[v] < near) bound[v] = NaN;
      open[v] = this.run;
    }
  }

  /** Distances by circular fronts, over all vertices of faces that hold a place near enough to both ends. */
  private march(to: SurfacePoint, most: number): void {
    const { mesh, heap, ring, order, run } = this;
    const { triangles } = mesh;
    heap.size = 0;
    order.length = 0;
    for (let i = 0; i < 3; i++)
      this.reach(3 * to.face + i, this.apart(triangles[3 * to.face + i], this.target));
    while (heap.size > 0) {
      const key = heap.least;
      const v = heap.pop();
      if (key !== this.u[v]) continue;
      const count = fillRing(mesh, this.leaves[v], ring);
      let far = 0;
      for (let i = 0; i < count; i++)
        far = Math.max(
          far,
          this.edge(v, triangles[next(ring[i])]),
          this.edge(v, triangles[previous(ring[i])]),
        );
      if (this.apart(v, this.source) + this.apart(v, this.target) > most + 2 * far) continue;
      if (this.settled[v] !== run) order.push(v);
      this.settled[v] = run;
      for (let i = 0; i < count; i++) {
        const hb = next(ring[i]);
        const hc = previous(ring[i]);
        const b = triangles[hb];
        const c = triangles[hc];
        const vb = this.edge(v, b);
        const vc = this.edge(v, c);
        this.reach(hb, key + vb);
        this.reach(hc, key + vc);
        if (this.settled[b] === run) this.reach(hc, front(key, this.u[b], vb, vc, this.edge(b, c)));
        if (this.settled[c] === run) this.reach(hb, front(key, this.u[c], vc, vb, this.edge(b, c)));
      }
    }
  }

  private reach(half: number, value: number): void {
    const v = this.mesh.triangles[half];
    if (this.reached[v] === this.run && value >= this.u[v] * (1 - ROUNDING)) return;
    this.u[v] = value;
    this.reached[v] = this.run;
    this.leaves[v] = half;
    this.heap.push(v, value);
  }

  /** Faces with three settled corners, each from its corner of least number. */
  private gatherFaces(): void {
    const { mesh, ring, faces, settled, run } = this;
    const { triangles } = mesh;
    faces.count = 0;
    for (const a of this.order) {
      const count = fillRing(mesh, this.leaves[a], ring);
      for (let i = 0; i < count; i++) {
        const b = triangles[next(ring[i])];
        const c = triangles[previous(ring[i])];
        if (a > b || a > c || settled[b] !== run || settled[c] !== run) continue;
        faces.push(a, b, c, this.edge(a, b), this.edge(a, c), this.edge(b, c), this.u);
      }
    }
  }

  /**
   * Sets bounds at the corners of the faces, with no slope above 1 in any of them farther than `near` from the target.
   * @returns `near`, a marched distance: within it no bound is given
   */
  private lower(to: SurfacePoint, length: number, count: number): number {
    const { u, bound, faces, target } = this;
    const width = length / count;
    const belts = 2 * count;
    const belt = (d: number): number => Math.min(belts - 1, Math.floor(d / width));
    const steepest = new Float64Array(belts).fill(1);
    // Straight way to the target from all places at the start of a belt, at least.
    const straight = new Float64Array(Math.ceil(NEAR * count) + 1).fill(Infinity);
    for (let f = 0; f < faces.count; f++) {
      const [low, high, slope] = [faces.low(f), faces.high(f), faces.slope(f)];
      const last = belt(high);
      for (let i = belt(low); i <= last; i++) {
        if (slope > steepest[i]) steepest[i] = slope;
        if (i < straight.length && i * width >= low)
          straight[i] = Math.min(straight[i], this.levelApart(f, i * width, target));
      }
    }
    const rise = new Float64Array(belts + 1);
    for (let i = 0; i < belts; i++) rise[i + 1] = rise[i] + width / steepest[i];
    // The even function is not 0 at a target inside a face: the first belt may only count from there on.
    const atTarget = [0, 1, 2].reduce(
      (sum, i) => sum + to.bary[i] * u[this.mesh.triangles[3 * to.face + i]],
      0,
    );
    let lead = -atTarget;
    // The belt at whose start the straight line is ahead the most.
    let first = 0;
    for (let i = Math.floor(atTarget / width) + 1; i < straight.length; i++)
      if (straight[i] < Infinity && straight[i] - rise[i] > lead) {
        first = i;
        lead = straight[i] - rise[i];
      }
    const near = first * width;
    const lowered = (v: number): number => {
      const i = Math.max(first, belt(u[v]));
      return lead + rise[i] + (u[v] - i * width) / steepest[i];
    };
    // Where belts of unlike slope meet in a face, the even function through its corners may be steeper than both.
    let steep = 1;
    for (let f = 0; f < faces.count; f++) {
      const [a, b, c] = [faces.corners[3 * f], faces.corners[3 * f + 1], faces.corners[3 * f + 2]];
      bound[a] = lowered(a);
      bound[b] = lowered(b);
      bound[c] = lowered(c);
      if (faces.high(f) >= near)
        steep = Math.max(steep, faces.slopeOf(f, bound[b] - bound[a], bound[c] - bound[a]));
    }
    if (steep > 1) this.flatten(steep, lead + rise[first]);
    return near;
  }

  /** Divides all rises above `base` by `by`. */
  private flatten(by: number, base: number): void {
    const { faces, bound } = this;
    const done = new Set<number>();
    for (let i = 0; i < 3 * faces.count; i++) {
      const v = faces.corners[i];
      if (done.has(v)) continue;
      done.add(v);
      bound[v] = base + (bound[v] - base) / by;
    }
  }

  /** Whether a path of the known length may pass through face f: some place of it is near enough to both ends. */
  private mayPass(f: number, near: number, most: number): boolean {
    const { faces, u, bound } = this;
    let least = Infinity;
    for (let i = 0; i < 3; i++) {
      const v = faces.corners[3 * f + i];
      const straight = this.apart(v, this.target);
      const left = u[v] < near ? straight : Math.max(bound[v], straight);
      least = Math.min(least, this.apart(v, this.source) + left);
    }
    return faces.low(f) < near || least <= most + 2 * COVER * faces.longest(f);
  }

  /** Distance from p to the places of face f where the marched distance, taken as even, is d. */
  private levelApart(f: number, d: number, p: Vec3): number {
    const { faces, u } = this;
    const x = this.mesh.positions;
    const ends: number[] = [];
    for (let i = 0; i < 3; i++) {
      const a = faces.corners[3 * f + i];
      const b = faces.corners[3 * f + ((i + 1) % 3)];
      if (u[a] <= d === u[b] <= d) continue;
      const t = (d - u[a]) / (u[b] - u[a]);
      for (let k = 0; k < 3; k++) ends.push(x[3 * a + k] + t * (x[3 * b + k] - x[3 * a + k]) - p[k]);
    }
    if (ends.length < 6) return Infinity;
    const [ax, ay, az, bx, by, bz] = ends;
    const [ex, ey, ez] = [bx - ax, by - ay, bz - az];
    const ee = ex * ex + ey * ey + ez * ez;
    const t = ee > 0 ? Math.max(0, Math.min(1, -(ax * ex + ay * ey + az * ez) / ee)) : 0;
    return Math.hypot(ax + t * ex, ay + t * ey, az + t * ez);
  }

  private apart(v: number, p: Vec3): number {
    return toPlace(this.mesh.positions, v, p);
  }

  private edge(v: number, w: number): number {
    return toVertex(this.mesh.positions, v, w);
  }
}

/** Flat list of faces with what does not change while bounds are lowered. */
class FaceList {
  count = 0;
  /** 3 a face. */
  corners = new Int32Array(3 * 64);
  /** 7 a face: side ab, second corner's foot and height over it, least and greatest marched distance, slope, longest side. */
  private num = new Float64Array(7 * 64);

  push(a: number, b: number, c: number, ab: number, ac: number, bc: number, u: Float64Array): void {
    if (3 * this.count === this.corners.length) {
      const corners = new Int32Array(2 * this.corners.length);
      corners.set(this.corners);
      this.corners = corners;
      const num = new Float64Array(2 * this.num.length);
      num.set(this.num);
      this.num = num;
    }
    const f = this.count++;
    this.corners[3 * f] = a;
    this.corners[3 * f + 1] = b;
    this.corners[3 * f + 2] = c;
    const o = 7 * f;
    const cx = (ab * ab + ac * ac - bc * bc) / (2 * ab);
    this.num[o] = ab;
    this.num[o + 1] = cx;
    this.num[o + 2] = Math.sqrt(Math.max(0, ac * ac - cx * cx));
    this.num[o + 3] = Math.min(u[a], u[b], u[c]);
    this.num[o + 4] = Math.max(u[a], u[b], u[c]);
    this.num[o + 5] = this.slopeOf(f, u[b] - u[a], u[c] - u[a]);
    this.num[o + 6] = Math.max(ab, ac, bc);
  }

  /** Slope of the even function that rises by db and dc from the first corner to the others; infinite on a face of no height. */
  slopeOf(f: number, db: number, dc: number): number {
    const o = 7 * f;
    const gx = db / this.num[o];
    const gy = (dc - gx * this.num[o + 1]) / this.num[o + 2];
    const slope = Math.sqrt(gx * gx + gy * gy);
    return slope >= 0 ? slope : Infinity;
  }

  low(f: number): number {
    return this.num[7 * f + 3];
  }

  high(f: number): number {
    return this.num[7 * f + 4];
  }

  slope(f: number): number {
    return this.num[7 * f + 5];
  }

  longest(f: number): number {
    return this.num[7 * f + 6];
  }

  keep(holds: (f: number) => boolean): void {
    let kept = 0;
    for (let f = 0; f < this.count; f++) {
      if (!holds(f)) continue;
      this.corners.copyWithin(3 * kept, 3 * f, 3 * f + 3);
      this.num.copyWithin(7 * kept, 7 * f, 7 * f + 7);
      kept++;
    }
    this.count = kept;
  }
}

/** Distance at the third corner from those at two others, `l` apart, p and q away from it: as from one point in the face's plane. */
function front(ua: number, ub: number, l: number, p: number, q: number): number {
  const sx = (l * l + ua * ua - ub * ub) / (2 * l);
  const below = ua * ua - sx * sx;
  if (below < 0) return Math.min(ua + p, ub + q);
  const sy = -Math.sqrt(below);
  const cx = (l * l + p * p - q * q) / (2 * l);
  const cy = Math.sqrt(Math.max(0, p * p - cx * cx));
  const crossing = sx * cy - cx * sy;
  if (crossing < 0 || crossing > l * (cy - sy)) return Math.min(ua + p, ub + q);
  return Math.sqrt((cx - sx) * (cx - sx) + (cy - sy) * (cy - sy));
}
