/** An upper bound on the distance between two surface points: the shortest way along edges. */
import { distance } from '../../../src/core/base/vec.ts';
import { EdgeWays } from '../../../src/core/geodesic/edge-ways.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import { positionOf, type SurfacePoint } from '../../../src/core/mesh/surface-point.ts';

/** @returns length in mm; Infinity when no way over the surface joins them */
export function edgeBound(mesh: SurfaceMesh, from: SurfacePoint, to: SurfacePoint): number {
  if (from.face === to.face) return distance(positionOf(mesh, from), positionOf(mesh, to));
  return new EdgeWays(mesh).find(from, to)?.length ?? Infinity;
}
