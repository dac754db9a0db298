/** The part in numbers, as the report has it. */
import type { Vec3 } from '../base/vec.ts';
import type { Mended, SurfaceMesh } from './surface-mesh.ts';

export interface PartSummary {
  triangles: number;
  vertices: number;
  pieces: number;
  closed: boolean;
  /** mm² */
  area: number;
  /** mm³ */
  volume: number;
  bounds: [Vec3, Vec3];
  mended: Mended;
}

export const partReport = (mesh: SurfaceMesh): PartSummary => ({
  triangles: mesh.triangles.length / 3,
  vertices: mesh.positions.length / 3,
  pieces: mesh.pieces.length,
  closed: mesh.closed,
  area: mesh.area,
  volume: mesh.volume,
  bounds: [
    [mesh.bounds[0][0], mesh.bounds[0][1], mesh.bounds[0][2]],
    [mesh.bounds[1][0], mesh.bounds[1][1], mesh.bounds[1][2]],
  ],
  mended: { ...mesh.mended },
});
