import { expect, test } from 'vitest';
import type { Vec3 } from '../../src/core/base/vec.ts';
import { drapeRegion } from '../../src/core/drape/region.ts';
import { WindowSolver } from '../../src/core/geodesic/windows.ts';
import { placeAt, tube } from '../core/helpers/surfaces.ts';

test('a region near the open end of a tube has no copper at the rim: behind a border vertex reached from a corner, sides go by the corner’s angle', () => {
  const mesh = tube(15, 40, 96, 20);
  const at = (deg: number, z: number): Vec3 => [
    15 * Math.cos((deg * Math.PI) / 180),
    15 * Math.sin((deg * Math.PI) / 180),
    z,
  ];
  const corners = [at(-100, 20), at(-80, 20), at(-80, 30), at(-100, 32)].map((p) => placeAt(mesh, p));
  const e = drapeRegion(
    new WindowSolver(mesh),
    new WindowSolver(mesh),
    { id: 'r1', kind: 'region', net: '', outline: [] },
    corners,
  ).element!;
  expect(e.outline).toHaveLength(1);
  for (let i = 2; i < e.copper.positions.length; i += 3) expect(e.copper.positions[i]).toBeLessThan(32.01);
  // Unrolled: a trapezium 20° wide with sides of 10 and 12 mm.
  const width = (15 * 20 * Math.PI) / 180;
  expect(Math.abs(e.area / (11 * width) - 1)).toBeLessThan(2e-3);
});
