/**
 * An upper bound on the distance between two surface points: the shortest way along edges.
 * E. W. Dijkstra, "A note on two problems in connexion with graphs", 1959, led by the straight-line
 * distance to the target (Hart, Nilsson, Raphael 1968), so that it stays between the two.
 */
import type { Vec3 } from '../base/vec.ts';
import { next, previous, type SurfaceMesh } from '../mesh/surface-mesh.ts';
import { positionOf, type SurfacePoint } from '../mesh/surface-point.ts';
import { KeyHeap } from './window-store.ts';

/** @returns length in mm; Infinity when no way over the surface joins them */
export function edgeBound(mesh: SurfaceMesh, from: SurfacePoint, to: SurfacePoint): number {
  const { positions: x, triangles, twin } = mesh;
  const target = positionOf(mesh, to);
  const start = positionOf(mesh, from);
  let best =
    from.face === to.face
      ? Math.hypot(start[0] - target[0], start[1] - target[1], start[2] - target[2])
      : Infinity;
  const dist = new Map<number, number>();
  const done = new Set<number>();
  const leaves = new Map<number, number>();
  const heap = new KeyHeap();
  const apart = (v: number, p: Vec3) => Math.hypot(x[3 * v] - p[0], x[3 * v + 1] - p[1], x[3 * v + 2] - p[2]);
  const goals = new Set([0, 1, 2].map((i) => triangles[3 * to.face + i]));
  const reach = (h: number, d: number) => {
    const v = triangles[h];
    if (d < (dist.get(v) ?? Infinity)) {
      dist.set(v, d);
      leaves.set(v, h);
      heap.push(v, d + apart(v, target));
    }
  };
  for (let i = 0; i < 3; i++) reach(3 * from.face + i, apart(triangles[3 * from.face + i], start));
  while (heap.size > 0 && heap.least < best) {
    const v = heap.pop();
    if (done.has(v)) continue;
    done.add(v);
    const d = dist.get(v)!;
    if (goals.has(v)) best = Math.min(best, d + apart(v, target));
    const p: Vec3 = [x[3 * v], x[3 * v + 1], x[3 * v + 2]];
    // Once around the vertex, both ways from where it was entered when a border stops the walk.
    const h0 = leaves.get(v)!;
    let h = h0;
    do {
      reach(next(h), d + apart(triangles[next(h)], p));
      reach(previous(h), d + apart(triangles[previous(h)], p));
      h = twin[previous(h)];
    } while (h >= 0 && h !== h0);
    if (h < 0)
      for (let t = twin[h0]; t >= 0; t = twin[next(t)]) {
        const k = next(t);
        reach(next(k), d + apart(triangles[next(k)], p));
        reach(previous(k), d + apart(triangles[previous(k)], p));
      }
  }
  return best;
}
