/**
 * Intrinsic triangulation whose edges may be flipped: triangles with the surface's own lengths whose sides need not be sides
 * of its faces. N. Sharp, Y. Soliman, K. Crane, "Navigating intrinsic triangulations", ACM Trans. Graph. 38 (2019) 55:
 * each half-edge knows its length and its direction at its start, as an angle from a half-edge of the surface, from which
 * it can be walked over the faces (`flip-trace.ts`).
 *
 * Faces are taken over from the surface only when a flip comes near them. The table from the surface's half-edges to those
 * here is never cleared: an entry counts only if the half-edge it names says so too (P. Briggs and L. Torczon, "An
 * efficient representation for sparse sets", 1993), so that starting afresh costs nothing.
 */
import { faceOf, next, type SurfaceMesh } from '../mesh/surface-mesh.ts';
import { positionOf, type SurfacePoint } from '../mesh/surface-point.ts';
import { FaceGeometry } from './face-geometry.ts';
import { cornerAt, edgeAt } from './roots.ts';
import { toVertex } from './vertex-lengths.ts';

/** `base` of half-edges that start at an inserted point. */
export const AT_POINT = -3;
/** `base` of half-edges that have no face. */
export const NONE = -1;
const NOT_TAKEN = -2;

/** A point put into a face or on an edge. Its directions are counted from half-edge `half`: in that face first, then in the one across. */
export interface Inserted {
  at: SurfacePoint;
  half: number;
  onEdge: boolean;
  /** A half-edge here that starts at it. */
  out: number;
}

export class FlipMesh {
  readonly mesh: SurfaceMesh;
  readonly geometry: FaceGeometry;
  count = 0;
  /** Vertex at which the half-edge starts; from `vertices` on they are inserted points. */
  tail = new Int32Array(256);
  /** Next half-edge of the face, counter-clockwise; -1 beside a border, where there is no face. */
  next = new Int32Array(256);
  length = new Float64Array(256);
  /** Direction at the start: `turn` radians counter-clockwise from half-edge `base` of the surface. */
  base = new Int32Array(256);
  turn = new Float64Array(256);
  /** Corner angles already asked for, -1 where not. */
  private corners = new Float64Array(256);
  private twins = new Int32Array(256);
  /** Half-edge of the surface this was taken from, -1 where none. */
  private origin = new Int32Array(256);
  private readonly slot: Int32Array;
  readonly vertices: number;
  readonly inserted: Inserted[] = [];

  constructor(mesh: SurfaceMesh) {
    this.mesh = mesh;
    this.geometry = new FaceGeometry(mesh);
    this.slot = new Int32Array(mesh.triangles.length);
    this.vertices = mesh.positions.length / 3;
  }

  /** The surface as it is. */
  reset(): void {
    this.count = 0;
    this.inserted.length = 0;
  }

  /** Half-edge here for half-edge h of the surface, whose face is taken over if it was not. Only before flips nearby. */
  take(h: number): number {
    const known = this.slot[h];
    if (known < this.count && this.origin[known] === h) return known;
    const f = 3 * faceOf(h);
    const first = this.count;
    for (let i = 0; i < 3; i++) {
      const k = this.push(this.mesh.triangles[f + i], this.edge(f + i), f + i, 0);
      this.origin[k] = f + i;
      this.slot[f + i] = k;
      this.next[k] = first + ((i + 1) % 3);
      const t = this.mesh.twin[f + i];
      this.twins[k] = t < 0 ? NONE : NOT_TAKEN;
      if (t < 0) continue;
      const other = this.slot[t];
      if (other >= this.count || this.origin[other] !== t) continue;
      this.twins[k] = other;
      this.twins[other] = k;
    }
    return first + (h - f);
  }

  /** The same edge from its other end. Beside a border it has no face, and `next` is -1. */
  twin(k: number): number {
    const t = this.twins[k];
    if (t >= 0) return t;
    if (t === NOT_TAKEN) {
      this.take(this.mesh.twin[this.origin[k]]);
      return this.twins[k];
    }
    const ghost = this.push(this.tail[this.next[k]], this.length[k], NONE, 0);
    this.next[ghost] = NONE;
    this.pair(k, ghost);
    return ghost;
  }

  head(k: number): number {
    return this.tail[this.twin(k)];
  }

  previous(k: number): number {
    return this.next[this.next[k]];
  }

  /** Angle of the face at the start of half-edge k, radians. */
  corner(k: number): number {
    const known = this.corners[k];
    if (known >= 0) return known;
    const n = this.next[k];
    return (this.corners[k] = angle(this.length[k], this.length[this.next[n]], this.length[n]));
  }

  /** Puts a point where it is no vertex into the triangulation. @returns its vertex number, or that of the vertex it lies on */
  insert(at: SurfacePoint): number {
    const on = cornerAt(at);
    if (on >= 0) return this.mesh.triangles[3 * at.face + on];
    const edge = edgeAt(at);
    const v = this.vertices + this.inserted.length;
    const half = edge >= 0 ? edge : 3 * at.face;
    const k = this.take(half);
    const out = edge >= 0 ? this.splitEdge(v, k, at) : this.splitFace(v, k, at);
    this.inserted.push({ at, half, onEdge: edge >= 0, out });
    return v;
  }

  private splitFace(v: number, k0: number, at: SurfacePoint): number {
    const k1 = this.next[k0];
    const k2 = this.next[k1];
    const sides = [k0, k1, k2];
    const far = sides.map((k) => this.toPoint(at, this.tail[k]));
    const out: number[] = [];
    const back: number[] = [];
    // Directions at the point, counted from half-edge k0 of the face.
    let turn = Math.PI + angle(this.length[k0], far[0], far[1]);
    for (let i = 0; i < 3; i++) {
      const k = sides[i];
      const j = (i + 1) % 3;
      const corner = angle(this.length[k], far[i], far[j]);
      back[i] = this.push(this.tail[k], far[i], this.base[k], this.turn[k] + corner);
      out[i] = this.push(v, far[i], AT_POINT, turn % (2 * Math.PI));
      turn += angle(far[i], far[j], this.length[k]);
      this.pair(back[i], out[i]);
    }
    for (let i = 0; i < 3; i++) {
      const j = (i + 1) % 3;
      this.link(sides[i], back[j], out[i]);
    }
    return out[0];
  }

  /** Half-edge k of a → b becomes a → v. */
  private splitEdge(v: number, k: number, at: SurfacePoint): number {
    const t = this.twin(k);
    const [a, b] = [this.tail[k], this.tail[t]];
    const toA = this.toPoint(at, a);
    const toB = this.toPoint(at, b);
    const onward = this.push(v, toB, AT_POINT, 0);
    const home = this.push(v, toA, AT_POINT, Math.PI);
    this.splitSide(v, k, onward, at, 0);
    if (this.next[t] >= 0) this.splitSide(v, t, home, at, Math.PI);
    else this.next[home] = NONE;
    this.length[k] = toA;
    this.length[t] = toB;
    for (const h of [k, t, onward, home]) this.corners[h] = -1;
    this.pair(k, home);
    this.pair(t, onward);
    return onward;
  }

  /** Cuts the face of k, which now ends at v, from v to its far corner; `rest` goes on from v. */
  private splitSide(v: number, k: number, rest: number, at: SurfacePoint, zero: number): void {
    const n = this.next[k];
    const p = this.next[n];
    const far = this.tail[p];
    const cut = this.toPoint(at, far);
    const out = this.push(v, cut, AT_POINT, zero + angle(this.length[rest], cut, this.length[n]));
    const atFar = angle(this.length[p], cut, this.toPoint(at, this.tail[k]));
    const back = this.push(far, cut, this.base[p], this.turn[p] + atFar);
    this.pair(out, back);
    this.link(k, out, p);
    this.link(rest, n, back);
  }

  /** Whether the two triangles beside k are two, so that there is another diagonal. */
  canFlip(k: number): boolean {
    const t = this.twin(k);
    if (this.next[k] < 0 || this.next[t] < 0) return false;
    return this.next[k] !== t && this.previous(k) !== t;
  }

  /**
   * Turns the edge into the other diagonal of its two triangles, laid flat. The numbers of all half-edges stay.
   * Only where the diagonals cross: the angles at either end of the edge, both sides together, are below π.
   */
  flip(k: number): void {
    const j = this.twin(k);
    const kn = this.next[k];
    const kp = this.next[kn];
    const jn = this.next[j];
    const jp = this.next[jn];
    const l = this.length[k];
    // a at the origin, b on the x axis, c above, d below.
    const [kc, kb] = [this.length[kp], this.length[kn]];
    const [ja, jb] = [this.length[jn], this.length[jp]];
    const cx = (l * l + kc * kc - kb * kb) / (2 * l);
    const cy = height(kc, kb, l);
    const dx = (l * l + ja * ja - jb * jb) / (2 * l);
    const dy = -height(ja, jb, l);
    const length = Math.sqrt((cx - dx) * (cx - dx) + (cy - dy) * (cy - dy));
    // At d from b to c, at c from a to d.
    const atD = Math.atan2((l - dx) * (cy - dy) + dy * (cx - dx), (l - dx) * (cx - dx) - dy * (cy - dy));
    const atC = Math.atan2(-cx * (dy - cy) + cy * (dx - cx), -cx * (dx - cx) - cy * (dy - cy));
    this.tail[k] = this.tail[jp];
    this.base[k] = this.base[jp];
    this.turn[k] = this.turn[jp] + atD;
    this.tail[j] = this.tail[kp];
    this.base[j] = this.base[kp];
    this.turn[j] = this.turn[kp] + atC;
    this.length[k] = this.length[j] = length;
    this.link(k, kp, jn);
    this.link(j, jp, kn);
  }

  private push(tail: number, length: number, base: number, turn: number): number {
    const k = this.count++;
    if (k === this.tail.length) this.grow();
    this.tail[k] = tail;
    this.length[k] = length;
    this.base[k] = base;
    this.turn[k] = turn;
    this.twins[k] = NONE;
    this.origin[k] = NONE;
    this.corners[k] = -1;
    return k;
  }

  private pair(k: number, t: number): void {
    this.twins[k] = t;
    this.twins[t] = k;
  }

  private link(a: number, b: number, c: number): void {
    this.next[a] = b;
    this.next[b] = c;
    this.next[c] = a;
    this.corners[a] = this.corners[b] = this.corners[c] = -1;
  }

  private edge(h: number): number {
    const { positions, triangles: t } = this.mesh;
    return toVertex(positions, t[h], t[next(h)]);
  }

  private toPoint(at: SurfacePoint, v: number): number {
    const p = positionOf(this.mesh, at);
    const x = this.mesh.positions;
    return Math.hypot(x[3 * v] - p[0], x[3 * v + 1] - p[1], x[3 * v + 2] - p[2]);
  }

  private grow(): void {
    const ints = (a: Int32Array) => {
      const b = new Int32Array(2 * a.length);
      b.set(a);
      return b;
    };
    const doubles = (a: Float64Array) => {
      const b = new Float64Array(2 * a.length);
      b.set(a);
      return b;
    };
    this.tail = ints(this.tail);
    this.next = ints(this.next);
    this.length = doubles(this.length);
    this.base = ints(this.base);
    this.turn = doubles(this.turn);
    this.corners = doubles(this.corners);
    this.twins = ints(this.twins);
    this.origin = ints(this.origin);
  }
}

/** Angle between sides a and b, opposite to c: the half-angle form, which keeps its digits in slivers (W. Kahan, "Miscalculating area and angles of a needle-like triangle"). */
export function angle(a: number, b: number, c: number): number {
  const hi = Math.max(a, b);
  const lo = Math.min(a, b);
  const mu = c <= lo ? c - (hi - lo) : lo - (hi - c);
  if (!(mu > 0)) return 0;
  const top = (hi - lo + c) * mu;
  const bottom = (hi + (lo + c)) * (hi - c + lo);
  return bottom > 0 ? 2 * Math.atan2(Math.sqrt(top), Math.sqrt(bottom)) : Math.PI;
}

/** Height of a triangle over its side l, from its other sides p and q: Heron's formula in Kahan's order. */
function height(p: number, q: number, l: number): number {
  const a = Math.max(p, q, l);
  const c = Math.min(p, q, l);
  const b = p + q + l - a - c;
  const product = (a + (b + c)) * (c - (a - b)) * (c + (a - b)) * (a + (b - c));
  return product > 0 ? Math.sqrt(product) / (2 * l) : 0;
}
