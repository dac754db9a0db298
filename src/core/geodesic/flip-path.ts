/**
 * Locally shortest paths by edge flips: a way along edges is pulled taut without leaving its side of holes and humps.
 *
 * N. Sharp and K. Crane, "You can find geodesic paths in triangle meshes by just flipping edges", ACM Trans. Graph. 39
 * (2020) 249: where the path makes an angle below π on one side of a vertex, the edges inside that angle are flipped out
 * of the way and the path takes the outer arc (FlipOut); the sharpest angle goes first. Each step makes the path shorter
 * and keeps its homotopy class, so it ends at a path that is straight everywhere, but where it runs along itself or crosses
 * itself at a vertex: there it may stay bent, for an angle with another piece of the path in it is left alone.
 */
import type { Vec3 } from '../base/vec.ts';
import { faceOf, next, type SurfaceMesh } from '../mesh/surface-mesh.ts';
import { positionOf, type SurfacePoint } from '../mesh/surface-point.ts';
import type { EdgeWay } from './edge-ways.ts';
import { FlipMesh } from './flip-mesh.ts';
import { walkEdge } from './flip-trace.ts';
import { type GeodesicPath, gatherPath } from './geodesic-path.ts';
import { fillRing } from './ring.ts';
import { cornerAt, edgeAt } from './roots.ts';
import { KeyHeap } from './window-store.ts';

/** A bend below this, radians, is straight: it makes a path longer by about a 1e-13th. */
const STRAIGHT = 1e-6;
/** Steps that no path needs; flips end by themselves, and this only stops rounding from going round in circles. */
const STEPS = 200;

/** Prepared for one mesh; each path starts afresh. */
export class FlipPaths {
  readonly flips: FlipMesh;
  private readonly heap = new KeyHeap();
  /** Pieces of the path as a list: half-edge, and the piece before and after it, -1 at the ends, `GONE` when replaced. */
  private half: number[] = [];
  private before: number[] = [];
  private after: number[] = [];
  /** Of a queued joint: the piece after it, and whether it bends to the left. */
  private seen: number[] = [];
  private onLeft: boolean[] = [];
  /** How often the path runs along an edge, by the lower of its two half-edges. */
  private used = new Int32Array(256);

  constructor(mesh: SurfaceMesh) {
    this.flips = new FlipMesh(mesh);
  }

  /**
   * Pulls a way along edges taut.
   * @returns the taut path, or null where its ends share a face or rounding lost it: use another method there
   */
  tauten(from: SurfacePoint, to: SurfacePoint, way: EdgeWay): GeodesicPath | null {
    const { flips } = this;
    flips.reset();
    this.half = [];
    this.before = [];
    this.after = [];
    this.seen = [];
    this.onLeft = [];
    this.used.fill(0);
    if (sharedFace(flips.mesh, from, to) >= 0) return null;
    const a = flips.insert(from);
    const b = flips.insert(to);
    const halves = this.layWay(from, a, to, b, way);
    if (halves === null || !this.pull(halves)) return null;
    return this.walk(from, to);
  }

  /** Half-edges of the way here, from vertex a to vertex b. */
  private layWay(from: SurfacePoint, a: number, to: SurfacePoint, b: number, way: EdgeWay): number[] | null {
    const { flips } = this;
    const { triangles } = flips.mesh;
    const halves = way.steps.flatMap((step) => this.layStep(step));
    let v = way.start;
    for (const step of way.steps) v = step >= 0 ? triangles[next(step)] : triangles[-1 - step];
    // An end inside a face or on an edge has an edge to each corner of its faces.
    if (a !== way.start) {
      const first = this.edgeTo(from, a, way.start);
      if (first < 0) return null;
      halves.unshift(first);
    }
    if (b !== v) {
      const last = this.edgeTo(to, b, v);
      if (last < 0) return null;
      halves.push(flips.twin(last));
    }
    return halves;
  }

  /** Half-edges of one step of a way: two where an end of the path lies on that edge. */
  private layStep(step: number): number[] {
    const { flips } = this;
    const h = step >= 0 ? step : -1 - step;
    const k = flips.take(h);
    const middle = flips.head(k);
    const halves = [k];
    if (middle >= flips.vertices) {
      const { half, out } = flips.inserted[middle - flips.vertices];
      halves.push(h === half ? out : flips.twin(flips.take(half)));
    }
    return step >= 0 ? halves : halves.reverse().map((half) => flips.twin(half));
  }

  /** Half-edge from the place `at`, vertex v, to vertex w; -1 where none. */
  private edgeTo(at: SurfacePoint, v: number, w: number): number {
    const { flips } = this;
    const first =
      v >= flips.vertices
        ? flips.inserted[v - flips.vertices].out
        : flips.take(3 * at.face + at.bary.findIndex((x) => x > 0.5));
    let k = first;
    do {
      if (flips.head(k) === w) return k;
      if (flips.next[k] < 0) break;
      k = flips.twin(flips.previous(k));
    } while (k !== first);
    // Over a border: round the other way.
    for (k = flips.twin(first); flips.next[k] >= 0; ) {
      k = flips.next[k];
      if (k === first) break;
      if (flips.head(k) === w) return k;
      k = flips.twin(k);
    }
    return -1;
  }

  /** Flips until the path is straight at each vertex. */
  private pull(halves: readonly number[]): boolean {
    const { heap } = this;
    heap.size = 0;
    let last = -1;
    for (const h of halves) last = this.append(h, last);
    for (let left = STEPS * (halves.length + STEPS); ; ) {
      // Again at the end: where the path ran twice along an edge it may have been held up by itself.
      for (let i = 0; i < this.half.length; i++) this.look(i);
      if (heap.size === 0) return true;
      while (heap.size > 0) {
        if (left-- === 0) return false;
        const node = heap.pop();
        if (this.half[node] === GONE || this.after[node] !== this.seen[node] || !this.stillBends(node))
          continue;
        if (!this.flipOut(node)) return false;
      }
    }
  }

  private append(half: number, before: number): number {
    const node = this.half.push(half) - 1;
    this.before.push(before);
    this.after.push(-1);
    this.seen.push(-1);
    this.onLeft.push(false);
    if (before >= 0) this.after[before] = node;
    this.use(half, 1);
    return node;
  }

  private use(half: number, by: number): void {
    const edge = Math.min(half, this.flips.twin(half));
    if (edge >= this.used.length) {
      const used = new Int32Array(2 * edge);
      used.set(this.used);
      this.used = used;
    }
    this.used[edge] += by;
  }

  private isUsed(half: number): boolean {
    const edge = Math.min(half, this.flips.twin(half));
    return edge < this.used.length && this.used[edge] > 0;
  }

  /** Queues the joint at the end of a piece, by the smaller angle that the path makes there, if it bends. */
  private look(node: number): void {
    if (node < 0 || this.half[node] === GONE || this.after[node] < 0) return;
    const back = this.flips.twin(this.half[node]);
    const out = this.half[this.after[node]];
    const left = back === out ? 0 : this.wedge(out, back);
    const right = left === 0 ? Infinity : this.wedge(back, out);
    const angle = Math.min(left, right);
    if (angle >= Math.PI - STRAIGHT) return;
    this.seen[node] = this.after[node];
    this.onLeft[node] = left <= right;
    this.heap.push(node, angle);
  }

  /**
   * Whether a queued joint may still be cut off. The angle between two edges is the surface's own, but another piece of the
   * path may lie in it by now: then the last round asks again.
   */
  private stillBends(node: number): boolean {
    const back = this.flips.twin(this.half[node]);
    const out = this.half[this.after[node]];
    return back === out || (this.onLeft[node] ? this.wedge(out, back) : this.wedge(back, out)) < Math.PI;
  }

  /** Angle counter-clockwise from half-edge k to half-edge `end` around their start; Infinity over a border or an edge of the path. */
  private wedge(k: number, end: number): number {
    const { flips } = this;
    let sum = 0;
    while (k !== end) {
      if (flips.next[k] < 0) return Infinity;
      sum += flips.corner(k);
      if (sum >= Math.PI) return Infinity;
      k = flips.twin(flips.previous(k));
      if (k !== end && this.isUsed(k)) return Infinity;
    }
    return sum;
  }

  /** Replaces the two pieces at a joint by the outer arc of the faces on one side, once edges that are in its way are flipped out. */
  private flipOut(node: number): boolean {
    const { flips } = this;
    const left = this.onLeft[node];
    const other = this.after[node];
    const [p, q] = [this.before[node], this.after[other]];
    const back = flips.twin(this.half[node]);
    const out = this.half[other];
    this.use(this.half[node], -1);
    this.use(out, -1);
    this.half[node] = this.half[other] = GONE;
    let arc: number[] = [];
    if (back !== out) {
      const [first, end] = left ? [out, back] : [back, out];
      if (!this.clear(first, end)) return false;
      for (let k = first; k !== end; k = flips.twin(flips.previous(k))) arc.push(flips.next[k]);
      if (left) arc = arc.reverse().map((k) => flips.twin(k));
    }
    let last = p;
    const made: number[] = [];
    for (const k of arc) made.push((last = this.append(k, last)));
    if (last >= 0) this.after[last] = q;
    if (q >= 0) this.before[q] = last;
    this.look(p);
    for (const m of made) this.look(m);
    return true;
  }

  /** Flips edges strictly between two half-edges around their start until the outer arc bends nowhere inward. */
  private clear(first: number, end: number): boolean {
    const { flips } = this;
    let k = flips.twin(flips.previous(first));
    for (let left = STEPS * STEPS; k !== end; left--) {
      if (left === 0) return false;
      const outer = flips.corner(flips.next[k]) + flips.corner(flips.twin(k));
      const onward = flips.twin(flips.previous(k));
      if (outer < Math.PI - STRAIGHT && flips.canFlip(k)) {
        const before = flips.next[flips.twin(k)];
        flips.flip(k);
        // The neighbour before it now sees a smaller angle.
        k = before === first ? onward : before;
      } else k = onward;
    }
    return true;
  }

  /** The path over the surface. */
  private walk(from: SurfacePoint, to: SurfacePoint): GeodesicPath | null {
    const { flips } = this;
    const points: Vec3[] = [positionOf(flips.mesh, from)];
    const faces: number[] = [];
    let node = this.half.findIndex((h, i) => h !== GONE && this.before[i] < 0);
    for (; node >= 0; node = this.after[node])
      if (!walkEdge(flips, this.half[node], points, faces)) return null;
    points[points.length - 1] = positionOf(flips.mesh, to);
    return faces.length === 0 ? null : gatherPath(points, faces);
  }
}

const GONE = -1;

/** A face that holds both places, -1 where none: the straight line is the path then, and there is nothing to flip. */
export function sharedFace(mesh: SurfaceMesh, a: SurfacePoint, b: SurfacePoint): number {
  const faces = facesOf(mesh, a);
  return facesOf(mesh, b).find((f) => faces.includes(f)) ?? -1;
}

function facesOf(mesh: SurfaceMesh, p: SurfacePoint): number[] {
  const corner = cornerAt(p);
  if (corner >= 0) {
    const ring: number[] = [];
    ring.length = fillRing(mesh, 3 * p.face + corner, ring);
    return ring.map(faceOf);
  }
  const edge = edgeAt(p);
  const across = edge < 0 ? -1 : mesh.twin[edge];
  return across < 0 ? [p.face] : [p.face, faceOf(across)];
}
