/**
 * Exact distances over a polyhedron by window propagation.
 *
 * J. Chen and Y. Han, "Shortest paths on a polyhedron", SoCG 1990, with the pruning of S.-Q. Xin and
 * G.-J. Wang, "Improving Chen and Han's algorithm on the discrete geodesic problem", ACM Trans. Graph.
 * 28 (2009) 104: windows leave a priority queue in order of their least distance, and one that a vertex
 * already beats (their filtering theorem) is dropped. Besides points the sources here may be segments
 * of a path, whose windows carry parallel rays; the theorem needs only that the distance seen through a
 * window is 1-Lipschitz, which holds for both. With segment sources the result is the exact distance
 * to a path, its foot on it and its side.
 */

import { Fault } from '../base/news.ts';
import { cosine, sine } from '../base/trig.ts';
import { dot, type Vec3 } from '../base/vec.ts';
import { faceOf, next, previous, type SurfaceMesh } from '../mesh/surface-mesh.ts';
import { positionOf, type SurfacePoint } from '../mesh/surface-point.ts';
import { FaceGeometry } from './face-geometry.ts';
import type { LowerBound } from './lower-bound.ts';
import {
  clipToStrip,
  cornerAt,
  fanRoots,
  type PointSource,
  pointRoots,
  type Root,
  rootDistance,
  SEEN,
  type SegmentSource,
  type Start,
  segmentRoots,
} from './roots.ts';
import { crossing, leastBroken, leastDistance, leastLinear, pointDistance } from './window-geometry.ts';
import { KeyHeap, WindowStore } from './window-store.ts';

/** A window shorter than this share of its edge is below the rounding of its own ends. */
const NO_WIDTH = 1e-12;
/** Share of a distance that rounding may have cost after thousands of unfoldings. */
const ROUNDING = 1e-12;
/** What `bending` knows of a vertex; 0 where nobody has asked. */
const STRAIGHT = 1;
const BENDS = 2;

/** Only paths shorter than `bound` are of use: stops a search for one target early. For one point source. */
export interface Target {
  at: SurfacePoint;
  /** Length of a known path, or Infinity. */
  bound: number;
  /** Lower bounds of the ways from vertices to the target, where the straight line says too little. */
  toGo?: LowerBound | null;
}

interface Aim {
  at: SurfacePoint;
  p: Vec3;
  vertex: number;
  best: Arrival;
  toGo: LowerBound | null;
}

/** What ended at the target: a window, a corner of its face, or the root itself; -1 where it was another. */
export interface Arrival {
  distance: number;
  window: number;
  root: number;
  /** Corner of the target's face from which the last piece runs, -1 where none. */
  vertex: number;
}

/**
 * Prepared for one mesh; each run starts afresh. Arrays as long as the mesh's vertices are zeros until a run comes near
 * (and cost no memory before), and are never cleared: a run touches only what its windows reach.
 */
export class WindowSolver {
  readonly mesh: SurfaceMesh;
  private readonly geometry: FaceGeometry;
  windows = new WindowStore();
  roots: Root[] = [];
  private heap = new KeyHeap();
  /** Shortest distance known at a vertex; valid where its stamp is the run's. */
  private readonly dist: Float64Array;
  private readonly stamp: Int32Array;
  /** What gave that distance: window number, or -1 - root. */
  private readonly via: Int32Array;
  private run = 0;
  /**
   * 3 a half-edge: its length, and the third corner of its face in its frame; zeros where nobody has asked. Always from the
   * positions: handed on from face to face, the rounding of one sliver would end up in the next.
   */
  private readonly shapes: Float64Array;
  /** Whether shortest paths may bend at a vertex. */
  private readonly bending: Uint8Array;
  /** Distance at which a vertex last sent windows out, so that it does so once. */
  private readonly fanned = new Map<number, number>();
  private target: Aim | null = null;

  constructor(mesh: SurfaceMesh) {
    this.mesh = mesh;
    this.geometry = new FaceGeometry(mesh);
    const n = mesh.positions.length / 3;
    this.dist = new Float64Array(n);
    this.stamp = new Int32Array(n);
    this.via = new Int32Array(n);
    this.bending = new Uint8Array(n);
    this.shapes = new Float64Array(3 * mesh.triangles.length);
  }

  /**
   * Sends windows out from the sources until their radii or the target stop them.
   * @returns how the target was reached, `distance` Infinity when it was not (or when none was asked)
   */
  propagate(
    points: readonly PointSource[],
    segments: readonly SegmentSource[] = [],
    target?: Target,
  ): Arrival {
    this.run++;
    this.windows.count = 0;
    this.roots = [];
    this.heap.size = 0;
    this.fanned.clear();
    this.target = target
      ? {
          at: target.at,
          p: positionOf(this.mesh, target.at),
          vertex: this.vertexAt(target.at),
          best: { distance: target.bound, window: -1, root: -1, vertex: -1 },
          toGo: target.toGo ?? null,
        }
      : null;
    for (const s of points) this.startPoint(s);
    for (const s of segments) this.start(segmentRoots(this.geometry, s));
    const { windows, heap } = this;
    while (heap.size > 0) {
      if (this.target && heap.least >= this.target.best.distance) break;
      const item = heap.pop();
      if (item < 0) this.startVertex(-1 - item);
      else if (windows.alive[item]) this.advance(item);
    }
    const best = this.target?.best;
    return best && (best.window >= 0 || best.root >= 0 || best.vertex >= 0)
      ? best
      : { distance: Infinity, window: -1, root: -1, vertex: -1 };
  }

  /** Distance known at a vertex, Infinity where no window came. */
  vertexDistance(v: number): number {
    return this.stamp[v] === this.run ? this.dist[v] : Infinity;
  }

  /** Window number that reached the vertex, or -1 - root. */
  vertexVia(v: number): number {
    return this.via[v];
  }

  // ---- sources ----------------------------------------------------------------------------------

  private startPoint(s: PointSource): void {
    const corner = cornerAt(s.at);
    if (corner >= 0) {
      // The fan is this vertex's own: no second one as a pseudo-source.
      const v = this.mesh.triangles[3 * s.at.face + corner];
      this.dist[v] = 0;
      this.stamp[v] = this.run;
      this.fanned.set(v, 0);
      if (this.target?.vertex === v) this.target.best = { distance: 0, window: -1, root: -1, vertex: v };
    }
    this.start(pointRoots(this.geometry, s));
  }

  /** Pseudo-source: a vertex around which shortest paths bend. */
  private startVertex(v: number): void {
    const sigma = this.dist[v];
    if (this.fanned.get(v) === sigma) return;
    this.fanned.set(v, sigma);
    if (this.target && sigma + this.vertexToGo(v) > this.target.best.distance * (1 + ROUNDING)) return;
    const via = this.via[v];
    const { from, half, q, back } = via >= 0 ? this.enteredBy(via) : this.enteredFrom(-1 - via, v);
    this.start(
      fanRoots(
        this.geometry,
        half,
        {
          source: from.source,
          at: this.position(v),
          sigma,
          vertex: v,
          side: from.kind === 'segment' || from.vertex >= 0 ? from.side : q[1] < 0 ? -1 : 1,
          start: from.kind === 'segment' ? from.start + q[0] : from.start,
          bearing: from.vertex >= 0 ? from.bearing : (from.offset + Math.atan2(q[1], q[0])) * from.scale,
          radius: from.radius,
        },
        undefined,
        back,
      ),
    );
  }

  /** How the apex of window w was reached: half-edge that starts there, place in the root's frame, angle from it to the way back. */
  private enteredBy(w: number) {
    const { num } = this.windows;
    const o = 8 * w;
    const from = this.roots[this.windows.root[w]];
    const half = previous(this.windows.half[w]);
    const [cx, cy] = this.geometry.apex(this.windows.half[w], num[o + 7]);
    const [sx, sy, cos, sin] = [num[o + 2], num[o + 3], num[o + 4], num[o + 5]];
    const [px, py] = [cx - sx, cy - sy];
    const [bx, by] = from.kind === 'point' ? [-px, -py] : [-sin * from.side, -cos * from.side];
    const q: [number, number] = [cos * px - sin * py, sin * px + cos * py];
    return { from, half, q, back: Math.atan2(-cx * by + cy * bx, -cx * bx - cy * by) };
  }

  /** The same for vertex v of a root's own face. */
  private enteredFrom(rootIndex: number, v: number) {
    const from = this.roots[rootIndex];
    const f = 3 * from.face;
    const half = [f, f + 1, f + 2].find((h) => this.mesh.triangles[h] === v);
    if (half === undefined) throw new Fault(`vertex ${v} was not reached through a face that holds it`);
    const q = this.inRoot(from, this.position(v));
    const e = this.geometry.edgeDirection(half);
    const [ex, ey] = [dot(e, from.x), dot(e, from.y)];
    const [bx, by] = from.kind === 'point' ? [-q[0], -q[1]] : [0, -from.side];
    return { from, half, q, back: Math.atan2(ex * by - ey * bx, ex * bx + ey * by) };
  }

  private start(starts: readonly Start[]): void {
    for (const s of starts) this.seeFromRoot(this.roots.push(s.root) - 1, s);
  }

  /** Gives the root's face its vertices, the target if it is there, and a first window on each half-edge it looks through. */
  private seeFromRoot(rootIndex: number, { halves, wedge }: Start): void {
    const root = this.roots[rootIndex];
    const { mesh } = this;
    for (let i = 0; i < 3; i++) {
      const v = mesh.triangles[3 * root.face + i];
      if (v === root.vertex) continue;
      const [qx, qy] = this.inRoot(root, this.position(v));
      const d = rootDistance(root, qx, qy);
      if (d < this.vertexDistance(v) && d <= root.radius)
        this.reachVertex(v, d, -1 - rootIndex, 3 * root.face + i);
    }
    if (this.target && this.target.at.face === root.face) {
      const [qx, qy] = this.inRoot(root, this.target.p);
      const d = rootDistance(root, qx, qy);
      if (d < this.target.best.distance)
        this.target.best = { distance: d, window: -1, root: rootIndex, vertex: -1 };
    }
    for (const h of halves) {
      const t = mesh.twin[h];
      if (t < 0) continue;
      // The twin runs the other way: its start is the end of h.
      const [ax, ay] = this.inRoot(root, this.position(mesh.triangles[t]));
      const [bx, by] = this.inRoot(root, this.position(mesh.triangles[next(t)]));
      const len = this.shape(t, 0);
      const ex = (bx - ax) / len;
      const ey = (by - ay) / len;
      let b0 = 0;
      let b1 = len;
      if (root.kind === 'segment') {
        const clip = clipToStrip(ax, ay, bx, by, root.length, root.side, len);
        if (!clip) continue;
        [b0, b1] = clip;
      } else if (wedge) {
        b0 = crossing(-ax, -ay, cosine(wedge[1]), sine(wedge[1]), ex, ey, 0);
        b1 = crossing(-ax, -ay, cosine(wedge[0]), sine(wedge[0]), ex, ey, len);
      }
      // p in the root frame is q = A + x e + y e⊥, so s = -Rᵀ A.
      this.open(t, rootIndex, -1, b0, b1, -(ax * ex + ay * ey), -(ay * ex - ax * ey), ex, ey, len);
    }
  }

  // ---- windows ----------------------------------------------------------------------------------

  /** Adds a window unless it is out of reach or a vertex beats it, and queues it. */
  private open(
    half: number,
    rootIndex: number,
    parent: number,
    b0: number,
    b1: number,
    sx: number,
    sy: number,
    cos: number,
    sin: number,
    len: number,
  ): void {
    if (b0 < 0) b0 = 0;
    if (b1 > len) b1 = len;
    if (b1 - b0 <= NO_WIDTH * len) return;
    const root = this.roots[rootIndex];
    const least = leastDistance(root, b0, b1, sx, sy, cos, sin);
    if (least > root.radius) return;
    const t = this.target;
    if (t && (least >= t.best.distance || this.missesTarget(t, half, root, b0, b1, sx, sy, len))) return;
    if (this.beaten(half, root, b0, b1, sx, sy, cos, sin, len)) return;
    const w = this.windows.push(half, rootIndex, parent);
    const n = this.windows.num;
    const o = 8 * w;
    n[o] = b0;
    n[o + 1] = b1;
    n[o + 2] = sx;
    n[o + 3] = sy;
    n[o + 4] = cos;
    n[o + 5] = sin;
    n[o + 6] = least;
    n[o + 7] = len;
    if (t && t.at.face === faceOf(half)) {
      const d = this.seen(w, t.p);
      if (d < t.best.distance) t.best = { distance: d, window: w, root: rootIndex, vertex: -1 };
    }
    this.heap.push(w, least);
  }

  /** Whether no way through the window can be shorter than the one known. Only point sources are asked for a target. */
  private missesTarget(
    t: Aim,
    half: number,
    root: Root,
    b0: number,
    b1: number,
    sx: number,
    sy: number,
    len: number,
  ): boolean {
    const { positions: x, triangles } = this.mesh;
    const most = t.best.distance * (1 + ROUNDING) - root.sigma;
    const va = triangles[half];
    const vb = triangles[next(half)];
    if (t.toGo) {
      const fa = t.toGo.at(va);
      const fb = t.toGo.at(vb);
      if (fa + fb === Infinity) return true;
      // Close to the target the sum is NaN, and the straight line says more.
      if (fa + fb >= 0) return leastLinear(b0, b1, sx, sy, fa, fb, len) > most;
    }
    const a = 3 * va;
    const b = 3 * vb;
    const px = t.p[0] - x[a],
      py = t.p[1] - x[a + 1],
      pz = t.p[2] - x[a + 2];
    const ux = x[b] - x[a],
      uy = x[b + 1] - x[a + 1],
      uz = x[b + 2] - x[a + 2];
    // By the cross product: the target may lie on the edge itself, where a difference of squares has no digits left.
    const nx = uy * pz - uz * py,
      ny = uz * px - ux * pz,
      nz = ux * py - uy * px;
    const tx = (px * ux + py * uy + pz * uz) / len;
    const ty = Math.sqrt(nx * nx + ny * ny + nz * nz) / len;
    return leastBroken(b0, b1, sx, sy, tx, ty) > most;
  }

  /** Xin and Wang's filtering theorem for the two ends of the edge: is all that the window sees nearer by way of a vertex? */
  private beaten(
    half: number,
    root: Root,
    b0: number,
    b1: number,
    sx: number,
    sy: number,
    cos: number,
    sin: number,
    len: number,
  ): boolean {
    const { triangles } = this.mesh;
    const d0 = this.vertexDistance(triangles[half]);
    const d1 = this.vertexDistance(triangles[next(half)]);
    const at0 = pointDistance(root, b0, 0, sx, sy, cos, sin);
    const at1 = pointDistance(root, b1, 0, sx, sy, cos, sin);
    const slack = ROUNDING * (at0 + at1 + len);
    return d0 + b1 < at1 - slack || d1 + (len - b0) < at0 - slack;
  }

  /** Cuts a window at the two far edges of the face it enters. */
  private advance(w: number): void {
    const { windows, mesh } = this;
    const o = 8 * w;
    const n = windows.num;
    const b0 = n[o],
      b1 = n[o + 1],
      sx = n[o + 2],
      sy = n[o + 3],
      cos = n[o + 4],
      sin = n[o + 5],
      len = n[o + 7];
    const half = windows.half[w];
    const root = this.roots[windows.root[w]];
    if (this.beaten(half, root, b0, b1, sx, sy, cos, sin, len)) {
      windows.alive[w] = 0;
      return;
    }
    const hr = next(half);
    const hl = previous(half);
    const cx = this.shape(half, 1);
    const cy = this.shapes[3 * half + 2];
    if (!(cy > 0)) return;
    // Bounding rays.
    let d0x: number, d0y: number, d1x: number, d1y: number;
    if (root.kind === 'point') {
      d0x = b0 - sx;
      d0y = -sy;
      d1x = b1 - sx;
      d1y = -sy;
    } else {
      d0x = d1x = sin * root.side;
      d0y = d1y = cos * root.side;
    }
    const left = d0x * cy - d0y * (cx - b0); // > 0: the apex lies left of the left ray
    const right = d1x * cy - d1y * (cx - b1); // < 0: right of the right ray
    const reach0 = ROUNDING * (Math.abs(d0x) + Math.abs(d0y)) * (cy + len);
    const reach1 = ROUNDING * (Math.abs(d1x) + Math.abs(d1y)) * (cy + len);
    if (left <= reach0 && right >= -reach1) {
      const d = pointDistance(root, cx, cy, sx, sy, cos, sin);
      if (d < this.vertexDistance(mesh.triangles[hl]) && d <= root.radius)
        this.reachVertex(mesh.triangles[hl], d, w, hl);
    }
    if (left <= 0 && mesh.twin[hl] >= 0) {
      // Some rays pass left of the apex: onto the edge from a to c. The end nearer to a is the one that b may beat.
      const l = this.shape(mesh.twin[hl], 0);
      const ex = cx / l,
        ey = cy / l;
      const t0 = b0 <= 0 ? 0 : crossing(b0, 0, d0x, d0y, ex, ey, 0);
      const t1 = right >= 0 ? l : crossing(b1, 0, d1x, d1y, ex, ey, l);
      if (!this.endBeaten(w, hr, t0 * ex - len, t0 * ey, t0 * ex, t0 * ey))
        this.passOn(w, mesh.twin[hl], t0, t1, sx, sy, ex, ey, l);
    }
    if (right >= 0 && mesh.twin[hr] >= 0) {
      // Some pass right of it: onto the edge from c to b. The end nearer to b is the one that a may beat.
      const l = this.shape(mesh.twin[hr], 0);
      const ex = (len - cx) / l,
        ey = -cy / l;
      const t0 = left <= 0 ? 0 : crossing(b0 - cx, -cy, d0x, d0y, ex, ey, 0);
      const t1 = b1 >= len ? l : crossing(b1 - cx, -cy, d1x, d1y, ex, ey, l);
      const x = cx + t1 * ex,
        y = cy + t1 * ey;
      if (!this.endBeaten(w, half, x, y, x, y))
        this.passOn(w, mesh.twin[hr], t0, t1, sx - cx, sy - cy, ex, ey, l);
    }
  }

  /**
   * Xin and Wang's filter for the third vertex of the face: whether the vertex at which half-edge h starts, (dx, dy) away
   * from the end (x, y) of the new window, gives that end a shorter way than window w does.
   */
  private endBeaten(w: number, h: number, dx: number, dy: number, x: number, y: number): boolean {
    const { num, root } = this.windows;
    const o = 8 * w;
    const d = pointDistance(this.roots[root[w]], x, y, num[o + 2], num[o + 3], num[o + 4], num[o + 5]);
    const by = this.vertexDistance(this.mesh.triangles[h]) + Math.sqrt(dx * dx + dy * dy);
    return by < d - ROUNDING * (d + num[o + 7]);
  }

  /** Opens the part of window w that falls on half-edge t, whose frame has its x axis along (ex, ey) and the root at (px, py) from its start. */
  private passOn(
    w: number,
    t: number,
    t0: number,
    t1: number,
    px: number,
    py: number,
    ex: number,
    ey: number,
    length: number,
  ): void {
    const cos = this.windows.num[8 * w + 4];
    const sin = this.windows.num[8 * w + 5];
    this.open(
      t,
      this.windows.root[w],
      w,
      t0,
      t1,
      px * ex + py * ey,
      py * ex - px * ey,
      cos * ex - sin * ey,
      sin * ex + cos * ey,
      length,
    );
  }

  /** Number i of what `shapes` holds of a half-edge. */
  private shape(half: number, i: number): number {
    const o = 3 * half;
    if (this.shapes[o] === 0) {
      const len = this.geometry.edgeLength(half);
      const [cx, cy] = this.geometry.apex(half, len);
      this.shapes[o] = len;
      this.shapes[o + 1] = cx;
      this.shapes[o + 2] = cy;
    }
    return this.shapes[o + i];
  }

  private reachVertex(v: number, d: number, via: number, corner: number): void {
    this.dist[v] = d;
    this.stamp[v] = this.run;
    this.via[v] = via;
    const t = this.target;
    if (t) {
      if (t.vertex === v && d < t.best.distance) t.best = { distance: d, window: -1, root: -1, vertex: v };
      else if (t.vertex < 0 && this.cornerOf(t.at.face, v)) {
        // By way of the corner: never shorter than the true distance, and there whatever rounding does to windows.
        const p = this.position(v);
        const last = Math.hypot(p[0] - t.p[0], p[1] - t.p[1], p[2] - t.p[2]);
        if (d + last < t.best.distance) t.best = { distance: d + last, window: -1, root: -1, vertex: v };
      }
    }
    if (this.bends(v, corner)) this.heap.push(-1 - v, d);
  }

  private bends(v: number, corner: number): boolean {
    this.bending[v] ||= this.geometry.bends(corner) ? BENDS : STRAIGHT;
    return this.bending[v] === BENDS;
  }

  private vertexToGo(v: number): number {
    const t = this.target!;
    const p = this.position(v);
    const straight = Math.hypot(p[0] - t.p[0], p[1] - t.p[1], p[2] - t.p[2]);
    const bound = t.toGo ? t.toGo.at(v) : 0;
    return Number.isNaN(bound) ? straight : Math.max(bound, straight);
  }

  private cornerOf(face: number, v: number): boolean {
    const { triangles } = this.mesh;
    return triangles[3 * face] === v || triangles[3 * face + 1] === v || triangles[3 * face + 2] === v;
  }

  // ---- seeing -----------------------------------------------------------------------------------

  /** Distance to `p` (in the face the window enters) through window w; Infinity when w does not see it. */
  seen(w: number, p: Vec3): number {
    const q = this.look(w, p);
    return q ? rootDistance(this.roots[this.windows.root[w]], q[0], q[1]) : Infinity;
  }

  /** Where window w sees `p`, in its root's frame; null when it does not. */
  look(w: number, p: Vec3, tolerance = SEEN): [number, number] | null {
    const { windows } = this;
    const n = windows.num;
    const o = 8 * w;
    const [x, y] = this.geometry.inHalf(windows.half[w], p, n[o + 7]);
    const sx = n[o + 2],
      sy = n[o + 3],
      cos = n[o + 4],
      sin = n[o + 5];
    const root = this.roots[windows.root[w]];
    // Where the ray to p crosses the edge.
    let cross: number;
    if (root.kind === 'point') cross = y - sy > 0 ? sx + ((x - sx) * -sy) / (y - sy) : x;
    else {
      const dy = cos * root.side;
      if (dy <= 0) return null;
      cross = x - (sin * root.side * y) / dy;
    }
    const slack = tolerance * n[o + 7];
    if (cross < n[o] - slack || cross > n[o + 1] + slack) return null;
    const px = x - sx,
      py = y - sy;
    return [cos * px - sin * py, sin * px + cos * py];
  }

  /** Coordinates of `p` in the root's frame, for a p in the root's face. */
  inRoot(root: Root, p: Vec3): [number, number] {
    const dx = p[0] - root.at[0],
      dy = p[1] - root.at[1],
      dz = p[2] - root.at[2];
    return [
      dx * root.x[0] + dy * root.x[1] + dz * root.x[2],
      dx * root.y[0] + dy * root.y[1] + dz * root.y[2],
    ];
  }

  /** Place on window w's edge where the straight line to root-frame point (qx, qy) crosses it, as a length from the edge's start. */
  crossingTo(w: number, qx: number, qy: number): number {
    const n = this.windows.num;
    const o = 8 * w;
    const sx = n[o + 2],
      sy = n[o + 3],
      cos = n[o + 4],
      sin = n[o + 5];
    const px = cos * qx + sin * qy,
      py = -sin * qx + cos * qy; // p - s
    const root = this.roots[this.windows.root[w]];
    let x: number;
    if (root.kind === 'point') x = py > 0 ? sx + (px * -sy) / py : sx + px;
    else x = sx + px - (sin / cos) * (py + sy);
    return Math.min(n[o + 1], Math.max(n[o], x));
  }

  position(v: number): Vec3 {
    return this.geometry.position(v);
  }

  private vertexAt(p: SurfacePoint): number {
    const corner = cornerAt(p);
    return corner < 0 ? -1 : this.mesh.triangles[3 * p.face + corner];
  }
}
