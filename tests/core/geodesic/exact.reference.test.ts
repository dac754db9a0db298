import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { quiet } from '../../../src/core/base/run-context.ts';
import { shortestWith } from '../../../src/core/geodesic/shortest.ts';
import { WindowSolver } from '../../../src/core/geodesic/windows.ts';
import { buildMesh } from '../../../src/core/mesh/build.ts';
import { readStl } from '../../../src/core/mesh/stl.ts';
import { positionOf, type SurfacePoint } from '../../../src/core/mesh/surface-point.ts';
import { source } from '../../reference/sources.ts';

const here = new URL('../../reference/geodesic/', import.meta.url);

interface Query {
  source: SurfacePoint & { point: [number, number, number] };
  target: SurfacePoint & { point: [number, number, number] };
  distance: number;
}

describe(source('exact-geodesics'), () => {
  it.each(['sphere', 'torus', 'cylinder', 'saddle', 'bracket', 'bunny'])(
    '%s: every distance agrees to 1e-9',
    (name) => {
      const mesh = buildMesh(readStl(readFileSync(new URL(`${name}.stl`, here)), name, quiet), 1, quiet);
      const solver = new WindowSolver(mesh);
      const { queries } = JSON.parse(readFileSync(new URL(`${name}.queries.json`, here), 'utf8')) as {
        queries: Query[];
      };
      expect(queries).toHaveLength(60);
      // The reader may drop or turn facets: its table leads from the file's facets to the mesh's faces.
      const place = (p: Query['source']): SurfacePoint => ({ face: mesh.faceOfFacet[p.face], bary: p.bary });
      for (const q of queries) {
        expect(
          Math.hypot(...positionOf(mesh, place(q.source)).map((x, k) => x - q.source.point[k])),
        ).toBeLessThan(1e-5);
        const path = shortestWith(solver, place(q.source), place(q.target));
        expect(Math.abs(path!.length / q.distance - 1)).toBeLessThan(1e-9);
      }
    },
  );
});
