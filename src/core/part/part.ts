/** The part as the stages after it see it. */
import type { RunContext } from '../base/run-context.ts';
import { buildMesh, MM_PER_UNIT } from '../mesh/build.ts';
import { buildQueries, type SurfaceQueries } from '../mesh/queries.ts';
import { readStl } from '../mesh/stl.ts';
import type { SurfaceMesh } from '../mesh/surface-mesh.ts';
import { buildNormals, type CornerNormals } from './normals.ts';

export interface Part {
  mesh: SurfaceMesh;
  queries: SurfaceQueries;
  normals: CornerNormals;
}

export type Units = keyof typeof MM_PER_UNIT;

/** @throws InputError from the STL reader */
export function loadPart(bytes: Uint8Array, file: string, units: Units, ctx: RunContext): Part {
  ctx.step('load', 0, 4);
  const soup = readStl(bytes, file, ctx);
  ctx.step('load', 1, 4);
  const mesh = buildMesh(soup, MM_PER_UNIT[units], ctx, file);
  ctx.step('load', 2, 4);
  const queries = buildQueries(mesh);
  ctx.step('load', 3, 4);
  const normals = buildNormals(mesh);
  ctx.step('load', 4, 4);
  return { mesh, queries, normals };
}
