/**
 * Ray and nearest-point queries on a surface. The only room that knows three-mesh-bvh, which divides the faces into a
 * tree of boxes. The tree only says where to look: points and distances are computed here, in doubles, from the mesh.
 */
import { BufferAttribute, BufferGeometry } from 'three';
import { MeshBVH } from 'three-mesh-bvh';
import { Fault } from '../base/news.ts';
import type { Vec3 } from '../base/vec.ts';
import type { SurfaceMesh } from './surface-mesh.ts';

export interface NearestHit {
  point: Vec3;
  face: number;
  distance: number;
}

export interface RayHit {
  point: Vec3;
  face: number;
  distance: number;
}

export interface SurfaceQueries {
  /**
   * Surface point nearest to `p`, or null when none lies within `within` mm.
   * Equal distances go to the lowest face number, so that the answer never depends on the tree.
   * @param facing  any length; only faces whose outside is turned that way count, by less than a right angle: so a place
   *                seen from outside never goes to the other side of a thin wall
   */
  nearest(p: Vec3, within?: number, facing?: Vec3): NearestHit | null;
  /** First face met by the ray from `origin` along the unit `direction`, from either side; null when none within `far` mm. */
  firstHit(origin: Vec3, direction: Vec3, far?: number): RayHit | null;
  /** Whether anything stands on the segment: quicker than `firstHit`. */
  blocked(origin: Vec3, direction: Vec3, far?: number): boolean;
}

/** The tree as plain arrays, for sending to another thread; they may lie in shared memory. */
export interface SurfaceTree {
  /** Boxes, 6 a node: least x y z, greatest x y z. A parent stands before its children, the first child right after it. */
  boxes: Float32Array;
  /** 2 a node: for a leaf the start in `order` and the count of faces; otherwise the second child and 0. */
  links: Uint32Array;
  /** Face numbers, leaf after leaf. */
  order: Uint32Array;
}

const trees = new WeakMap<SurfaceQueries, SurfaceTree>();

export const buildQueries = (mesh: SurfaceMesh): SurfaceQueries => restoreQueries(mesh, buildTree(mesh));

/** The same arrays that the queries use, not copies. */
export function serializeQueries(queries: SurfaceQueries): SurfaceTree {
  const tree = trees.get(queries);
  if (!tree) throw new Fault('these queries were not made by buildQueries');
  return tree;
}

/** @param tree  from `serializeQueries` of queries on the same mesh */
export function restoreQueries(mesh: SurfaceMesh, tree: SurfaceTree): SurfaceQueries {
  const walk = walker(mesh, tree);
  const queries: SurfaceQueries = {
    nearest: (p, within = Infinity, facing) => {
      const face = walk.nearest(p[0], p[1], p[2], within, facing);
      return face < 0
        ? null
        : { point: [walk.foot[0], walk.foot[1], walk.foot[2]], face, distance: Math.sqrt(walk.foot[3]) };
    },
    firstHit: (o, d, far = Infinity) => {
      const face = walk.ray(o, d, far, false);
      const t = walk.foot[3];
      return face < 0
        ? null
        : { point: [o[0] + t * d[0], o[1] + t * d[1], o[2] + t * d[2]], face, distance: t };
    },
    blocked: (o, d, far = Infinity) => walk.ray(o, d, far, true) >= 0,
  };
  trees.set(queries, tree);
  return queries;
}

function buildTree(mesh: SurfaceMesh): SurfaceTree {
  const geometry = new BufferGeometry();
  geometry.setAttribute('position', new BufferAttribute(Float32Array.from(mesh.positions), 3));
  geometry.setIndex(new BufferAttribute(mesh.triangles, 1));
  const bvh = new MeshBVH(geometry, {
    indirect: true,
    targetLeafSize: 6,
    maxDepth: 60,
    verbose: false,
    setBoundingBox: false,
  });
  const { indirectBuffer } = MeshBVH.serialize(bvh, { cloneBuffers: false });
  if (!indirectBuffer) throw new Fault('the tree has no order of faces');
  const order = Uint32Array.from(indirectBuffer);
  const links: number[] = [];
  const parents: number[] = [];
  bvh.traverse((depth, isLeaf, _box, offset, count) => {
    const node = links.length / 2;
    // Children come after their parent, the left one at once; any other newcomer at this depth is a right child.
    if (depth > 0 && parents[depth - 1] !== node - 1) links[2 * parents[depth - 1]] = node;
    parents[depth] = node;
    links.push(isLeaf ? (offset as number) : 0, isLeaf ? (count as number) : 0);
  });
  const tree = { boxes: new Float32Array(3 * links.length), links: Uint32Array.from(links), order };
  fitBoxes(mesh, tree);
  return tree;
}

/** In float32 steps at the size of the largest coordinate: boxes must hold their faces however a number was rounded. */
const BOX_PAD_ULPS = 4;

/** Boxes from the mesh itself: the tree was made from rounded positions. */
function fitBoxes(mesh: SurfaceMesh, { boxes, links, order }: SurfaceTree): void {
  const { positions: x, triangles: t } = mesh;
  const largest = Math.max(...mesh.bounds[0].map(Math.abs), ...mesh.bounds[1].map(Math.abs));
  const pad = largest * BOX_PAD_ULPS * 2 ** -23;
  for (let node = links.length / 2 - 1; node >= 0; node--) {
    const b = 6 * node;
    const [start, count] = [links[2 * node], links[2 * node + 1]];
    for (let k = 0; k < 3; k++) {
      let lo = Infinity;
      let hi = -Infinity;
      if (count > 0) {
        for (let i = 3 * start; i < 3 * (start + count); i++) {
          const v = x[3 * t[3 * order[(i / 3) | 0] + (i % 3)] + k];
          if (v < lo) lo = v;
          if (v > hi) hi = v;
        }
        lo -= pad;
        hi += pad;
      } else {
        lo = Math.min(boxes[b + 6 + k], boxes[6 * start + k]);
        hi = Math.max(boxes[b + 9 + k], boxes[6 * start + 3 + k]);
      }
      boxes[b + k] = lo;
      boxes[b + 3 + k] = hi;
    }
  }
}

/** The slab test's bound on rounding (Ize 2013, "Robust BVH Ray Traversal", eq. 4): 1 + 2 γ₃ with γ₃ = 3 u / (1 - 3 u). */
const SLAB_SLOP = 1 + (6 * 2 ** -53) / (1 - 3 * 2 ** -53);

/** Walks the tree; keeps what it needs between calls, so that a query makes no garbage. */
function walker(mesh: SurfaceMesh, { boxes, links, order }: SurfaceTree) {
  const { positions: x, triangles: t } = mesh;
  const stack = new Uint32Array(128);
  /** Best place x y z, and its squared distance (nearest) or distance (ray). */
  const foot = new Float64Array(4);
  const near = new Float64Array(4);

  function boxDistance2(node: number, px: number, py: number, pz: number): number {
    const b = 6 * node;
    const dx = Math.max(boxes[b] - px, 0, px - boxes[b + 3]);
    const dy = Math.max(boxes[b + 1] - py, 0, py - boxes[b + 4]);
    const dz = Math.max(boxes[b + 2] - pz, 0, pz - boxes[b + 5]);
    return dx * dx + dy * dy + dz * dz;
  }

  function nearest(px: number, py: number, pz: number, within: number, facing?: Vec3): number {
    let best = within * within;
    let face = -1;
    let depth = 0;
    stack[depth++] = 0;
    while (depth > 0) {
      const node = stack[--depth];
      if (boxDistance2(node, px, py, pz) > best) continue;
      const count = links[2 * node + 1];
      const start = links[2 * node];
      if (count === 0) {
        const nearFirst = boxDistance2(node + 1, px, py, pz) <= boxDistance2(start, px, py, pz);
        stack[depth++] = nearFirst ? start : node + 1;
        stack[depth++] = nearFirst ? node + 1 : start;
        continue;
      }
      for (let i = start; i < start + count; i++) {
        const f = order[i];
        nearestOnFace(x, 3 * t[3 * f], 3 * t[3 * f + 1], 3 * t[3 * f + 2], px, py, pz, near);
        if (near[3] < best || (near[3] === best && (face < 0 || f < face))) {
          if (facing && !turnedTo(x, 3 * t[3 * f], 3 * t[3 * f + 1], 3 * t[3 * f + 2], facing)) continue;
          best = near[3];
          face = f;
          foot.set(near);
        }
      }
    }
    return face;
  }

  /**
   * Ray and face by Woop, Benthin and Wald 2013, "Watertight Ray/Triangle Intersection": corners are sheared so that the
   * ray runs along one axis; then the sign of each edge function is the same for both faces of an edge, and nothing
   * slips between them. An edge or a vertex counts as hit.
   */
  function ray(o: Vec3, d: Vec3, far: number, any: boolean): number {
    const [ox, oy, oz] = o;
    const [dx, dy, dz] = d;
    const [ax, ay, az] = [Math.abs(dx), Math.abs(dy), Math.abs(dz)];
    if (!(ax + ay + az > 0)) throw new Fault('a ray needs a direction');
    const kz = ax > ay ? (ax > az ? 0 : 2) : ay > az ? 1 : 2;
    const kx = (kz + 1) % 3;
    const ky = (kz + 2) % 3;
    const sx = d[kx] / d[kz];
    const sy = d[ky] / d[kz];
    const sz = 1 / d[kz];
    const ix = 1 / dx;
    const iy = 1 / dy;
    const iz = 1 / dz;
    let best = far;
    let face = -1;
    let depth = 0;
    stack[depth++] = 0;
    while (depth > 0) {
      const node = stack[--depth];
      const b = 6 * node;
      let enter = 0;
      let leave = best;
      // Along an axis the ray does not move on it is in the slab always or never: 0 · ∞ must not be asked.
      if (dx !== 0) {
        const u = (boxes[b] - ox) * ix;
        const v = (boxes[b + 3] - ox) * ix;
        enter = Math.max(enter, Math.min(u, v));
        leave = Math.min(leave, Math.max(u, v) * SLAB_SLOP);
      } else if (ox < boxes[b] || ox > boxes[b + 3]) continue;
      if (dy !== 0) {
        const u = (boxes[b + 1] - oy) * iy;
        const v = (boxes[b + 4] - oy) * iy;
        enter = Math.max(enter, Math.min(u, v));
        leave = Math.min(leave, Math.max(u, v) * SLAB_SLOP);
      } else if (oy < boxes[b + 1] || oy > boxes[b + 4]) continue;
      if (dz !== 0) {
        const u = (boxes[b + 2] - oz) * iz;
        const v = (boxes[b + 5] - oz) * iz;
        enter = Math.max(enter, Math.min(u, v));
        leave = Math.min(leave, Math.max(u, v) * SLAB_SLOP);
      } else if (oz < boxes[b + 2] || oz > boxes[b + 5]) continue;
      if (!(enter <= leave)) continue;
      const count = links[2 * node + 1];
      const start = links[2 * node];
      if (count === 0) {
        // The child on the side the ray comes from is looked at first: the one whose box begins earlier along the ray.
        const leftFirst = startsEarlier(node + 1, start, kz, d[kz]);
        stack[depth++] = leftFirst ? start : node + 1;
        stack[depth++] = leftFirst ? node + 1 : start;
        continue;
      }
      for (let i = start; i < start + count; i++) {
        const f = order[i];
        const [a, c, e] = [3 * t[3 * f], 3 * t[3 * f + 1], 3 * t[3 * f + 2]];
        const az0 = x[a + kz] - o[kz];
        const bz0 = x[c + kz] - o[kz];
        const cz0 = x[e + kz] - o[kz];
        const Ax = x[a + kx] - o[kx] - sx * az0;
        const Ay = x[a + ky] - o[ky] - sy * az0;
        const Bx = x[c + kx] - o[kx] - sx * bz0;
        const By = x[c + ky] - o[ky] - sy * bz0;
        const Cx = x[e + kx] - o[kx] - sx * cz0;
        const Cy = x[e + ky] - o[ky] - sy * cz0;
        const u = Cx * By - Cy * Bx;
        const v = Ax * Cy - Ay * Cx;
        const w = Bx * Ay - By * Ax;
        if ((u < 0 || v < 0 || w < 0) && (u > 0 || v > 0 || w > 0)) continue;
        const sum = u + v + w;
        if (sum === 0) continue;
        const at = (sz * (u * az0 + v * bz0 + w * cz0)) / sum;
        if (!(at >= 0)) continue;
        if (at < best || (at === best && (face < 0 || f < face))) {
          best = at;
          face = f;
          if (any) return f;
        }
      }
    }
    foot[3] = best;
    return face;
  }

  function startsEarlier(left: number, right: number, axis: number, direction: number): boolean {
    return direction > 0
      ? boxes[6 * left + axis] <= boxes[6 * right + axis]
      : boxes[6 * left + 3 + axis] >= boxes[6 * right + 3 + axis];
  }

  return { nearest, ray, foot };
}

/** Whether the outside of a triangle is turned toward a direction. Corners are offsets into `x`. */
function turnedTo(x: Float64Array, a: number, b: number, c: number, facing: Vec3): boolean {
  const ux = x[b] - x[a],
    uy = x[b + 1] - x[a + 1],
    uz = x[b + 2] - x[a + 2];
  const vx = x[c] - x[a],
    vy = x[c + 1] - x[a + 1],
    vz = x[c + 2] - x[a + 2];
  return (
    (uy * vz - uz * vy) * facing[0] + (uz * vx - ux * vz) * facing[1] + (ux * vy - uy * vx) * facing[2] > 0
  );
}

/**
 * Nearest place of a triangle, by the region of its plane that the point is over (Ericson 2005, "Real-Time Collision
 * Detection", 5.1.5). Corners are offsets into `x`. Writes x y z and the squared distance.
 */
function nearestOnFace(
  x: Float64Array,
  a: number,
  b: number,
  c: number,
  px: number,
  py: number,
  pz: number,
  out: Float64Array,
): void {
  const ax = x[a],
    ay = x[a + 1],
    az = x[a + 2];
  const ux = x[b] - ax,
    uy = x[b + 1] - ay,
    uz = x[b + 2] - az;
  const vx = x[c] - ax,
    vy = x[c + 1] - ay,
    vz = x[c + 2] - az;
  let qx = px - ax,
    qy = py - ay,
    qz = pz - az;
  const d1 = ux * qx + uy * qy + uz * qz;
  const d2 = vx * qx + vy * qy + vz * qz;
  const uu = ux * ux + uy * uy + uz * uz;
  const uv = ux * vx + uy * vy + uz * vz;
  const vv = vx * vx + vy * vy + vz * vz;
  const d3 = d1 - uu;
  const d4 = d2 - uv;
  const d5 = d1 - uv;
  const d6 = d2 - vv;
  let s = 0;
  let r = 0;
  const vc = d1 * d4 - d3 * d2;
  const vb = d5 * d2 - d1 * d6;
  const va = d3 * d6 - d5 * d4;
  if (d1 <= 0 && d2 <= 0) s = r = 0;
  else if (d3 >= 0 && d4 <= d3) s = 1;
  else if (vc <= 0 && d1 >= 0 && d3 <= 0) s = d1 / (d1 - d3);
  else if (d6 >= 0 && d5 <= d6) r = 1;
  else if (vb <= 0 && d2 >= 0 && d6 <= 0) r = d2 / (d2 - d6);
  else if (va <= 0 && d4 - d3 >= 0 && d5 - d6 >= 0) {
    r = (d4 - d3) / (d4 - d3 + (d5 - d6));
    s = 1 - r;
  } else {
    const sum = va + vb + vc;
    s = vb / sum;
    r = vc / sum;
  }
  qx = ax + s * ux + r * vx;
  qy = ay + s * uy + r * vy;
  qz = az + s * uz + r * vz;
  out[0] = qx;
  out[1] = qy;
  out[2] = qz;
  out[3] = (qx - px) ** 2 + (qy - py) ** 2 + (qz - pz) ** 2;
}
