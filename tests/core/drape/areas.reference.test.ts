import { describe, expect, it } from 'vitest';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import { TRUE_TO } from '../../../src/core/drape/element.ts';
import { drapePad } from '../../../src/core/drape/pad.ts';
import { drapeRegion } from '../../../src/core/drape/region.ts';
import { drapeTrace } from '../../../src/core/drape/trace.ts';
import { WindowSolver } from '../../../src/core/geodesic/windows.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import type { Pad, Region, Trace } from '../../../src/core/project/schema.ts';
import { source } from '../../reference/sources.ts';
import { placeAt, plate, sphere, tube } from '../helpers/surfaces.ts';

const trace = (width: number): Trace => ({ id: 't', kind: 'trace', net: 'N', width, route: [] });
const pad = (shape: Pad['shape'], turn = 0): Pad => ({
  id: 'p',
  kind: 'pad',
  net: 'N',
  at: [0, 0, 0],
  shape,
  turn,
});
const region: Region = { id: 'r', kind: 'region', net: 'N', outline: [] };
const rad = (deg: number): number => (deg * Math.PI) / 180;
const onSphere = (r: number, lat: number, lon: number): Vec3 => [
  r * Math.cos(rad(lat)) * Math.cos(rad(lon)),
  r * Math.cos(rad(lat)) * Math.sin(rad(lon)),
  r * Math.sin(rad(lat)),
];
const lay = (mesh: SurfaceMesh, width: number, ...points: Vec3[]) =>
  drapeTrace(
    new WindowSolver(mesh),
    trace(width),
    points.map((p) => placeAt(mesh, p)),
  ).element!;
const layPad = (mesh: SurfaceMesh, shape: Pad['shape'], at: Vec3, turn = 0) =>
  drapePad(new WindowSolver(mesh), pad(shape, turn), placeAt(mesh, at)).element!;

describe(source('gray-tubes'), () => {
  it('a strip on a plane covers 2 w L + π w²', () => {
    const e = lay(plate(40, 30, 3, 2), 0.6, [-13, -6, 0], [11, 7, 0]);
    const length = Math.hypot(24, 13);
    expect(e.length).toBeCloseTo(length, 9);
    expect(e.area / (0.6 * length + Math.PI * 0.09)).toBeCloseTo(1, 4);
    expect(e.outline).toHaveLength(1);
  });

  it('a strip along a helix on a cylinder of slivers covers the same', () => {
    const r = 15;
    const e = lay(tube(r, 60, 360, 1), 1.2, [r, 0, 11], [r * Math.cos(2), r * Math.sin(2), 34]);
    expect(e.area / (1.2 * e.length + Math.PI * 0.36)).toBeCloseTo(1, 4);
  });

  it.each([
    [1, 0.0013],
    [3, 0.0013],
  ])(
    'a strip of half-width %d on a sphere of R 30 covers 2 L R sin(w/R) and two round ends',
    (w, tolerance) => {
      const R = 30;
      const e = lay(sphere(R, 5), 2 * w, onSphere(R, 12, 5), onSphere(R, 40, 50));
      const exact = 2 * e.length * R * Math.sin(w / R) + 2 * Math.PI * R * R * (1 - Math.cos(w / R));
      expect(Math.abs(e.area / exact - 1)).toBeLessThan(tolerance);
    },
  );
});

describe(source('do-carmo'), () => {
  it.each([
    [5, 78.358179464],
    [10, 311.26113556],
  ])('a round pad of radius %d on a sphere of R 30 is a geodesic disc', (r, area) => {
    const e = layPad(sphere(30, 5), { circle: 2 * r }, onSphere(30, 37, 21));
    expect(Math.abs(e.area / area - 1)).toBeLessThan(1.5e-3);
    expect(Math.abs(e.length / (2 * Math.PI * 30 * Math.sin(r / 30)) - 1)).toBeLessThan(1e-3);
    expect(e.stretch).toBeCloseTo(1 - Math.sin(r / 30) / (r / 30), 3);
  });

  it.each([
    [60, 70.528779366, 496.157038589],
    [30, 62.347904392, 110.642387852],
  ])('Gauss–Bonnet: a region inside an equilateral triangle of sides %d° on R 30', (side, angle, area) => {
    // Corners by the law of cosines on the sphere, from one corner with the given angle between its sides.
    const corner = (azimuth: number): Vec3 => onSphere(30, 90 - side, azimuth);
    const turn = (p: Vec3): Vec3 => [p[2], p[0], p[1]];
    const mesh = sphere(30, 5);
    const places = [[0, 0, 30] as Vec3, corner(20), corner(20 + angle)].map((p) => placeAt(mesh, turn(p)));
    const e = drapeRegion(new WindowSolver(mesh), new WindowSolver(mesh), region, places).element!;
    const around = 3 * 30 * rad(side);
    // Lengths on the polyhedron are true to second order of its edge h, so a shortest line may lie off the smooth one to first
    // order; what it lies off sideways shows in the area.
    const h = (30 * Math.PI) / 2 / 32;
    expect(Math.abs(e.area - area)).toBeLessThan(0.01 * h * around);
    expect(Math.abs(e.length / around - 1)).toBeLessThan(1e-3);
    expect(e.outline).toHaveLength(1);
  });

  it('which way round the corners are given makes no difference', () => {
    const mesh = sphere(30, 4);
    const corners = [onSphere(30, 10, 0), onSphere(30, 14, 20), onSphere(30, 31, 12)].map((p) =>
      placeAt(mesh, p),
    );
    const area = (list: typeof corners) =>
      drapeRegion(new WindowSolver(mesh), new WindowSolver(mesh), region, list).element!.area;
    expect(area([...corners].reverse())).toBeCloseTo(area(corners), 6);
  });
});

describe('pads in closed form on a plane', () => {
  const flat = plate(20, 20, 4, 3);
  it.each([
    ['circle', { circle: 3 }, Math.PI * 2.25, 3 * Math.PI],
    ['rect', { rect: [3, 1.2] }, 3.6, 8.4],
    ['slot', { slot: [4, 1] }, 3 + Math.PI / 4, 6 + Math.PI],
    [
      'outline',
      {
        outline: [
          [0, 0],
          [3, 0],
          [3, 2],
          [1, 1],
        ],
      },
      3.5,
      3 + 2 + Math.hypot(2, 1) + Math.SQRT2,
    ],
  ] as const)('%s', (_, shape, area, around) => {
    const e = layPad(flat, shape as unknown as Pad['shape'], [1.3, -0.7, 0], 25);
    // The outline may run this far inside the true one, and cuts each sharp corner.
    expect(Math.abs(e.area - area)).toBeLessThan(TRUE_TO * around);
    expect(Math.abs(e.length - around)).toBeLessThan(0.02);
    expect(e.drawnLength).toBeCloseTo(around, 9);
  });
});
