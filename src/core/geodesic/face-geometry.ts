/** Flat geometry of single faces and of the faces around a vertex: what unfolding needs. Nothing is kept between calls. */
import { dot, type Vec3 } from '../base/vec.ts';
import { faceOf, next, previous, type SurfaceMesh } from '../mesh/surface-mesh.ts';

/** A vertex whose angles sum to this much over 2π bends shortest paths around it. */
const SADDLE = 1e-9;

/** Axes in the plane of a face, part-frame unit vectors; y is a quarter turn on from x, seen from outside. */
export interface FaceAxes {
  x: Vec3;
  y: Vec3;
}

/** The faces around a vertex, counter-clockwise from a border if there is one. */
export interface Fan {
  /** Half-edge that starts at the vertex, one a face. */
  halves: number[];
  /** Sum of the angles before each face, radians. */
  angles: number[];
  total: number;
  border: boolean;
}

export class FaceGeometry {
  readonly mesh: SurfaceMesh;

  constructor(mesh: SurfaceMesh) {
    this.mesh = mesh;
  }

  position(v: number): Vec3 {
    const x = this.mesh.positions;
    return [x[3 * v], x[3 * v + 1], x[3 * v + 2]];
  }

  edgeDirection(h: number): Vec3 {
    const a = this.position(this.mesh.triangles[h]);
    const b = this.position(this.mesh.triangles[next(h)]);
    return [b[0] - a[0], b[1] - a[1], b[2] - a[2]];
  }

  edgeLength(h: number): number {
    const { positions: x, triangles: t } = this.mesh;
    const a = 3 * t[h],
      b = 3 * t[next(h)];
    const dx = x[b] - x[a],
      dy = x[b + 1] - x[a + 1],
      dz = x[b + 2] - x[a + 2];
    return Math.sqrt(dx * dx + dy * dy + dz * dz);
  }

  /** Third corner in the local frame of half-edge h. */
  apex(h: number, len: number): [number, number] {
    const { positions: x, triangles: t } = this.mesh;
    const a = 3 * t[h],
      b = 3 * t[next(h)],
      c = 3 * t[previous(h)];
    const ux = x[b] - x[a],
      uy = x[b + 1] - x[a + 1],
      uz = x[b + 2] - x[a + 2];
    const vx = x[c] - x[a],
      vy = x[c + 1] - x[a + 1],
      vz = x[c + 2] - x[a + 2];
    const nx = uy * vz - uz * vy,
      ny = uz * vx - ux * vz,
      nz = ux * vy - uy * vx;
    return [(ux * vx + uy * vy + uz * vz) / len, Math.hypot(nx, ny, nz) / len];
  }

  /** `p` of the face of h in h's local frame. */
  inHalf(h: number, p: Vec3, len: number): [number, number] {
    const { positions: x, triangles: t } = this.mesh;
    const a = 3 * t[h],
      b = 3 * t[next(h)],
      c = 3 * t[previous(h)];
    const ux = (x[b] - x[a]) / len,
      uy = (x[b + 1] - x[a + 1]) / len,
      uz = (x[b + 2] - x[a + 2]) / len;
    const vx = x[c] - x[a],
      vy = x[c + 1] - x[a + 1],
      vz = x[c + 2] - x[a + 2];
    const along = ux * vx + uy * vy + uz * vz;
    let wx = vx - along * ux,
      wy = vy - along * uy,
      wz = vz - along * uz;
    const l = Math.hypot(wx, wy, wz);
    wx /= l;
    wy /= l;
    wz /= l;
    const px = p[0] - x[a],
      py = p[1] - x[a + 1],
      pz = p[2] - x[a + 2];
    return [px * ux + py * uy + pz * uz, px * wx + py * wy + pz * wz];
  }

  cornerAngle(h: number): number {
    const { positions: x, triangles: t } = this.mesh;
    const a = 3 * t[h],
      b = 3 * t[next(h)],
      c = 3 * t[previous(h)];
    const ux = x[b] - x[a],
      uy = x[b + 1] - x[a + 1],
      uz = x[b + 2] - x[a + 2];
    const vx = x[c] - x[a],
      vy = x[c + 1] - x[a + 1],
      vz = x[c + 2] - x[a + 2];
    const nx = uy * vz - uz * vy,
      ny = uz * vx - ux * vz,
      nz = ux * vy - uy * vx;
    return Math.atan2(Math.hypot(nx, ny, nz), ux * vx + uy * vy + uz * vz);
  }

  /** Axes in the face's plane: x along `direction`, y a quarter turn on, seen from outside. */
  axes(face: number, direction: Vec3): FaceAxes {
    const u = this.edgeDirection(3 * face);
    const v = this.edgeDirection(3 * face + 2);
    const nx = v[1] * u[2] - v[2] * u[1],
      ny = v[2] * u[0] - v[0] * u[2],
      nz = v[0] * u[1] - v[1] * u[0];
    const nl = Math.hypot(nx, ny, nz);
    const n: Vec3 = [nx / nl, ny / nl, nz / nl];
    const off = dot(direction, n);
    const dx = direction[0] - off * n[0],
      dy = direction[1] - off * n[1],
      dz = direction[2] - off * n[2];
    const dl = Math.hypot(dx, dy, dz);
    const x: Vec3 = [dx / dl, dy / dl, dz / dl];
    return { x, y: [n[1] * x[2] - n[2] * x[1], n[2] * x[0] - n[0] * x[2], n[0] * x[1] - n[1] * x[0]] };
  }

  /** Axes of the face of h, turned into the face across h. */
  unfold(h: number, axes: FaceAxes): FaceAxes {
    const t = this.mesh.twin[h];
    const here = this.axes(faceOf(h), this.edgeDirection(h));
    const e = this.edgeDirection(h);
    const there = this.axes(faceOf(t), e);
    const turn = (v: Vec3): Vec3 => {
      const a = dot(v, here.x),
        b = dot(v, here.y);
      return [
        a * there.x[0] + b * there.y[0],
        a * there.x[1] + b * there.y[1],
        a * there.x[2] + b * there.y[2],
      ];
    };
    return { x: turn(axes.x), y: turn(axes.y) };
  }

  /** Faces around the vertex at which half-edge `h` starts, as far as they join edge to edge. */
  fan(h: number): Fan {
    const { twin } = this.mesh;
    // Clockwise to a border, or once around.
    let first = h;
    let border = false;
    for (;;) {
      const t = twin[first];
      if (t < 0) {
        border = true;
        break;
      }
      first = next(t);
      if (first === h) break;
    }
    const halves: number[] = [];
    const angles: number[] = [];
    let total = 0;
    for (let k = first; ; ) {
      halves.push(k);
      angles.push(total);
      total += this.cornerAngle(k);
      const t = twin[previous(k)];
      if (t < 0 || t === first) break;
      k = t;
    }
    return { halves, angles, total, border };
  }

  /** Whether shortest paths may turn at the vertex where half-edge `h` starts: a saddle, or on a border. */
  bends(h: number): boolean {
    const { twin } = this.mesh;
    let total = 0;
    let k = h;
    do {
      total += this.cornerAngle(k);
      k = twin[previous(k)];
      if (k < 0) return true;
    } while (k !== h);
    return total > 2 * Math.PI + SADDLE;
  }
}
