import { describe, expect, it } from 'vitest';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import { shortestPath } from '../../../src/core/geodesic/shortest.ts';
import { source } from '../../reference/sources.ts';
import { gridMesh, placeAt, sphere, tube } from '../helpers/surfaces.ts';

const rad = (deg: number): number => (deg * Math.PI) / 180;
const onSphere = (r: number, lat: number, lon: number): Vec3 => [
  r * Math.cos(rad(lat)) * Math.cos(rad(lon)),
  r * Math.cos(rad(lat)) * Math.sin(rad(lon)),
  r * Math.sin(rad(lat)),
];
const between = (mesh: Parameters<typeof placeAt>[0], a: Vec3, b: Vec3): number =>
  shortestPath(mesh, placeAt(mesh, a).surface, placeAt(mesh, b).surface)!.length;

describe(source('do-carmo'), () => {
  const pairs: [string, Vec3, Vec3, number][] = [
    ['(0,0)–(0,90)', onSphere(30, 0, 0), onSphere(30, 0, 90), 47.123889804],
    ['(10,20)–(50,80)', onSphere(30, 10, 20), onSphere(30, 50, 80), 33.136604593],
    ['(−30,0)–(60,150)', onSphere(30, -30, 0), onSphere(30, 60, 150), 75.347025659],
    ['(45,0)–(45,90)', onSphere(30, 45, 0), onSphere(30, 45, 90), 31.415926536],
    ['(89,0)–(89,180) over the pole', onSphere(30, 89, 0), onSphere(30, 89, 180), 1.047197551],
  ];
  it.each(pairs)('great circle %s: the error falls as the square of the edge', (_, a, b, exact) => {
    const errors = [3, 4, 5].map((level) => Math.abs(between(sphere(30, level), a, b) - exact));
    expect(errors[2] / exact).toBeLessThan(1.2e-3);
    // Second order: two halvings of the edge take at least ten from the error, sixteen in the limit.
    expect(errors[0] / errors[2]).toBeGreaterThan(10);
  });

  it.each([
    ['a helix', 15, 90, 40, 46.423757362],
    ['a helix that goes the other way', 15, 200, 10, 43.065024532],
    ['a falling helix', 10, 120, -25, 32.613633414],
  ])('%s on a cylinder of long slivers', (_, r, dphi, dz, exact) => {
    const mesh = tube(r, 60, 720, 1);
    const z = dz < 0 ? 40 : 10;
    const from = rad(7.3);
    const a: Vec3 = [r * Math.cos(from), r * Math.sin(from), z];
    const to = from + rad(dphi);
    const b: Vec3 = [r * Math.cos(to), r * Math.sin(to), z + dz];
    // A tube of 720 flats is shorter around than the cylinder by (π/720)²/6.
    expect(Math.abs(between(mesh, a, b) / exact - 1)).toBeLessThan(1e-5);
  });

  it.each([
    [30, 20, 30, 100, 22.992495914],
    [20, 25, 40, 150, 31.21853618],
    [45, 10, 10, 170, 17.338644249],
  ])('a cone of half-angle %d: law of cosines on the unrolled sector', (beta, l1, l2, dphi, exact) => {
    const [s, c] = [Math.sin(rad(beta)), Math.cos(rad(beta))];
    const at = (l: number, phi: number): Vec3 => [l * s * Math.cos(phi), l * s * Math.sin(phi), -l * c];
    const mesh = gridMesh(720, 1, (i, j) => at(j === 0 ? 50 : 0.5, (2 * Math.PI * (i % 720)) / 720));
    expect(Math.abs(between(mesh, at(l1, rad(3.1)), at(l2, rad(3.1 + dphi))) / exact - 1)).toBeLessThan(2e-5);
  });
});
