/** The six parts of the geodesic reference set, read from their files (tests/reference/geodesic/README.md says what they are). */
import { readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';
import { quiet } from '../../../src/core/base/run-context.ts';
import { buildMesh } from '../../../src/core/mesh/build.ts';
import { checkMesh } from '../../../src/core/mesh/check-mesh.ts';
import { readStl } from '../../../src/core/mesh/stl.ts';
import { source } from '../../reference/sources.ts';

const FOLDER = new URL('../../reference/geodesic/', import.meta.url);
const load = (name: string) =>
  buildMesh(readStl(readFileSync(new URL(`${name}.stl`, FOLDER)), `${name}.stl`, quiet), 1, quiet);

describe(`the reference set is read as its README describes it (${source('exact-geodesics')})`, () => {
  const parts: [string, number, boolean, number][] = [
    // Name, triangles, closed, Euler number: sphere 2, torus 0, tube 0, sheet 1.
    ['sphere', 20480, true, 2],
    ['torus', 7680, true, 0],
    ['cylinder', 3840, false, 0],
    ['saddle', 7200, false, 1],
    ['bracket', 4896, true, 2],
    ['bunny', 3674, true, 2],
  ];
  for (const [name, triangles, closed, euler] of parts)
    test(name, () => {
      const mesh = load(name);
      expect(checkMesh(mesh)).toEqual([]);
      expect(mesh.mended).toEqual({
        welded: 0,
        degenerate: 0,
        duplicate: 0,
        flipped: 0,
        split: 0,
        nonManifoldEdges: 0,
      });
      expect(mesh.triangles.length / 3).toBe(triangles);
      expect(mesh.closed).toBe(closed);
      expect(mesh.pieces).toHaveLength(1);
      const edges = (mesh.twin.length + mesh.twin.filter((t) => t < 0).length) / 2;
      expect(mesh.positions.length / 3 - edges + triangles).toBe(euler);
    });
});

test('areas and volumes come near the smooth shapes and stay below them', () => {
  const sphere = load('sphere');
  const ideal = { area: 4 * Math.PI * 20 ** 2, volume: (4 / 3) * Math.PI * 20 ** 3 };
  expect(sphere.area / ideal.area).toBeGreaterThan(0.999);
  expect(sphere.area / ideal.area).toBeLessThan(1);
  expect(sphere.volume / ideal.volume).toBeGreaterThan(0.998);
  expect(sphere.volume / ideal.volume).toBeLessThan(1);
  const bracket = load('bracket');
  // L of two legs of 60, 12 thick, 30 wide: flat faces, so exact.
  expect(bracket.volume).toBeCloseTo((60 * 12 + 48 * 12) * 30, 2);
});
