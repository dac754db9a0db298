/**
 * Cuts a triangle of an intrinsic triangulation where circles say: refinement by circumcentres (L. Chew, 1989; J. Ruppert,
 * J. Algorithms 18 (1995) 548), over edge lengths alone as N. Sharp, Y. Soliman and K. Crane, ACM Trans. Graph. 38 (2019) 55.
 */
import { before, heron, type IntrinsicMesh, next } from './intrinsic.ts';

/** A centre nearer to the middle of a side than this share of its length goes into the side. */
const NEAR_SIDE = 0.1;
/** Triangles that a walk to a centre may pass: Delaunay's are few. */
const FAR = 64;

/**
 * Puts a vertex where the circle through a triangle's corners has its centre, walking there over flattened triangles; into
 * the middle of an edge that is in the way, or that has the centre within its own circle while nothing lies beyond it.
 * @returns the edges that came about or whose triangles changed
 */
export function cutTriangle(mesh: IntrinsicMesh, t: number): number[] {
  const { length, edge, twin } = mesh;
  const corner = flat(length[edge[3 * t]], length[edge[3 * t + 1]], length[edge[3 * t + 2]]);
  const o = circumcentre(corner);
  let at = t;
  for (let step = 0; step < FAR; step++) {
    // Of each side: how far the centre lies inside of it, as a share of its length, and how far along.
    const seen = [0, 1, 2].map((k) => along(corner, k, o));
    const out = seen.reduce((best, s, k) => (s.inside < seen[best].inside ? k : best), 0);
    for (let k = 0; k < 3; k++) {
      const { inside, share } = seen[k];
      const lies = k === out && inside < NEAR_SIDE && share > 0.25 && share < 0.75 && inside > -NEAR_SIDE;
      const encroached = !mesh.isInner(3 * at + k) && inside * inside < share * (1 - share);
      if (lies || encroached) return mesh.split(edge[3 * at + k]);
    }
    if (seen[out].inside > 0) return mesh.insert(at, corner, o);
    const s = 3 * at + out;
    if (!mesh.isInner(s)) return mesh.split(edge[s]);
    // Over the side: the neighbour rolled out into the plane of the walk.
    const g = twin[s];
    const [bx, by, ax, ay] = [
      corner[2 * ((out + 1) % 3)],
      corner[2 * ((out + 1) % 3) + 1],
      corner[2 * out],
      corner[2 * out + 1],
    ];
    const l = length[edge[s]];
    const [lx, , , , qx, qy] = flat(l, length[edge[next(g)]], length[edge[before(g)]]);
    const [ux, uy] = [(ax - bx) / l, (ay - by) / l];
    const q = [bx + (qx - lx) * ux - qy * uy, by + (qx - lx) * uy + qy * ux];
    const k = g % 3;
    corner[2 * k] = bx;
    corner[2 * k + 1] = by;
    corner[2 * ((k + 1) % 3)] = ax;
    corner[2 * ((k + 1) % 3) + 1] = ay;
    corner[2 * ((k + 2) % 3)] = q[0];
    corner[2 * ((k + 2) % 3) + 1] = q[1];
    at = (g / 3) | 0;
  }
  return mesh.split(longest(mesh, t));
}

function longest({ edge, length }: IntrinsicMesh, t: number): number {
  const sides = [edge[3 * t], edge[3 * t + 1], edge[3 * t + 2]];
  return sides.reduce((best, e) => (length[e] > length[best] ? e : best));
}

/** Corners of a triangle in the plane, counter-clockwise: the first side from the origin along x. */
function flat(a: number, b: number, c: number): number[] {
  const x = (a * a + c * c - b * b) / (2 * a);
  return [0, 0, a, 0, x, (2 * heron(a, b, c)) / a];
}

function circumcentre([, , bx, , cx, cy]: readonly number[]): [number, number] {
  return [bx / 2, (cx * cx + cy * cy - bx * cx) / (2 * cy)];
}

/** Where a place lies along side k, and how far on its left, both as shares of its length. */
function along(
  corner: readonly number[],
  k: number,
  [x, y]: readonly [number, number],
): { share: number; inside: number } {
  const [a, b] = [2 * k, 2 * ((k + 1) % 3)];
  const [dx, dy] = [corner[b] - corner[a], corner[b + 1] - corner[a + 1]];
  const [px, py] = [x - corner[a], y - corner[a + 1]];
  const l = dx * dx + dy * dy;
  return { share: (px * dx + py * dy) / l, inside: (dx * py - dy * px) / l };
}
