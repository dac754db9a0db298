import { describe, expect, it } from 'vitest';
import { Fault } from '../../../src/core/base/news.ts';
import { distance, type Vec3 } from '../../../src/core/base/vec.ts';
import { logMap } from '../../../src/core/geodesic/log-map.ts';
import { WindowSolver } from '../../../src/core/geodesic/windows.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import { gridMesh, meshFrom, placeAt, plate, sphere, tube } from '../helpers/surfaces.ts';

const mapAbout = (mesh: SurfaceMesh, at: Vec3, radius: number) =>
  logMap(new WindowSolver(mesh), placeAt(mesh, at).surface, radius);
const limits = (mesh: SurfaceMesh, at: Vec3, radius: number) => mapAbout(mesh, at, radius).limits();
const kinds = (mesh: SurfaceMesh, at: Vec3, radius: number) => limits(mesh, at, radius).map((l) => l.kind);

/** Closed box from the origin to a corner, two facets a side. */
function box(w: number, d: number, h: number): SurfaceMesh {
  const v = (i: number): Vec3 => [i & 1 ? w : 0, i & 2 ? d : 0, i & 4 ? h : 0];
  const quad = (...c: number[]) => [c[0], c[1], c[2], c[0], c[2], c[3]].flatMap((i) => v(i));
  return meshFrom([
    ...quad(0, 2, 3, 1),
    ...quad(4, 5, 7, 6),
    ...quad(0, 1, 5, 4),
    ...quad(2, 6, 7, 3),
    ...quad(0, 4, 6, 2),
    ...quad(1, 3, 7, 5),
  ]);
}

/** Plate 40 × 30 about the origin with a square hole of side 6 about (5, 2). */
function holed(cells: number): SurfaceMesh {
  const xs = [-20, 2, 8, 20];
  const ys = [-15, -1, 5, 15];
  const out: number[] = [];
  for (let i = 0; i < 3; i++)
    for (let j = 0; j < 3; j++) {
      if (i === 1 && j === 1) continue;
      for (let k = 0; k < cells; k++)
        for (let l = 0; l < cells; l++) {
          const x = (t: number) => xs[i] + ((xs[i + 1] - xs[i]) * t) / cells;
          const y = (t: number) => ys[j] + ((ys[j + 1] - ys[j]) * t) / cells;
          const [a, b, c, d]: Vec3[] = [
            [x(k), y(l), 0],
            [x(k + 1), y(l), 0],
            [x(k + 1), y(l + 1), 0],
            [x(k), y(l + 1), 0],
          ];
          out.push(...a, ...b, ...c, ...a, ...c, ...d);
        }
    }
  return meshFrom(out);
}

describe('a map that covers its patch has no limits', () => {
  it.each([
    ['a plate', plate(40, 30, 5, 4), [3, 2, 0], 12],
    ['a plate of slivers', plate(40, 30, 900, 1), [3, 2, 0], 12],
    ['a cylinder, less than half round', tube(5, 60, 96, 1), [5, 0.2, 31], 15.6],
    ['a cylinder of slivers, less than half round', tube(5, 60, 720, 1), [5, 0.2, 31], 15.6],
    ['a coarse sphere, up to two thirds of the way to the other pole', sphere(30, 3), [20, 17, 9], 62],
    ['a fine sphere, up to nearly the other pole', sphere(30, 5), [20, 17, 9], 90],
    [
      'a saddle',
      gridMesh(24, 24, (i, j) => [i - 12, j - 12, ((i - 12) ** 2 - (j - 12) ** 2) / 24]),
      [1.3, -0.7, 0.05],
      9,
    ],
  ] as [string, SurfaceMesh, Vec3, number][])('%s', (_, mesh, at, radius) => {
    expect(limits(mesh, at, radius)).toEqual([]);
  });
});

describe('a map says where it cannot cover its patch', () => {
  it.each([1, 40])('the rim of a plate of %d cells, at its exact distance', (cells) => {
    const mesh = plate(40, 30, cells, 1, 0.4);
    const [c, s] = [Math.cos(0.4), Math.sin(0.4)];
    const found = limits(mesh, [7 * c, -3, -7 * s], 12.5);
    expect(found.map((l) => l.kind)).toEqual(['border']);
    expect(found[0].radius).toBeCloseTo(12, 3);
    expect(distance(found[0].at, [7 * c, -15, -7 * s])).toBeLessThan(0.2);
    expect(kinds(mesh, [7 * c, -3, -7 * s], 11.9)).toEqual([]);
  });

  it.each([1, 7])(
    'a hole, and behind it the place where the ways round either side meet (%d cells a block)',
    (cells) => {
      const mesh = holed(cells);
      const at: Vec3 = [-3, 2.4, 0];
      const found = limits(mesh, at, 14.9);
      expect(found.map((l) => l.kind)).toEqual(['border', 'cut locus']);
      expect(found[0].radius).toBeCloseTo(5, 3);
      // The ways over the corners (2, 5) and (2, -1) go on along the hole and meet on its far side, x = 8.
      const round = (y: number, corner: number) => Math.hypot(5, corner - 2.4) + 6 + Math.abs(y - corner);
      const meet = (-1 + 5 + Math.hypot(5, 2.6) - Math.hypot(5, 3.4)) / 2;
      expect(found[1].at[0]).toBeCloseTo(8, 1);
      expect(found[1].radius).toBeCloseTo(round(meet, 5), 1);
      expect(kinds(mesh, at, 13)).toEqual(['border']);
    },
  );

  it.each([96, 720])('a cylinder of %d slivers: behind it, at half the way round', (sides) => {
    const mesh = tube(5, 60, sides, 1);
    const found = limits(mesh, [5, 0.2, 31], 20);
    expect(found.map((l) => l.kind)).toEqual(['cut locus']);
    const round = sides * 5 * Math.sin(Math.PI / sides);
    expect(found[0].radius).toBeGreaterThanOrEqual(round * (1 - 1e-3));
    expect(found[0].radius).toBeLessThan(round * 1.01);
    expect(found[0].at[0]).toBeLessThan(-4.9);
  });

  it('a corner of a box, at its exact distance', () => {
    const at: Vec3 = [17, 13, 10];
    const found = limits(box(20, 16, 10), at, 6);
    expect(found.map((l) => l.kind)).toEqual(['cut locus']);
    expect(found[0].radius).toBeCloseTo(Math.hypot(3, 3), 9);
    expect(found[0].at).toEqual([20, 16, 10]);
  });

  it('no corner within reach: a patch that bends over one edge of a box is whole', () => {
    expect(kinds(box(20, 16, 10), [17, 8, 10], 6)).toEqual([]);
  });

  it('a sharp saddle vertex, where five quarter turns meet', () => {
    // Floor of an L-shaped step: five quarter turns meet at the origin.
    const mesh = meshFrom(
      [
        [
          [0, 0, 0],
          [9, 0, 0],
          [9, 9, 0],
          [0, 9, 0],
        ],
        [
          [0, 0, 0],
          [0, 9, 0],
          [-9, 9, 0],
          [-9, 0, 0],
        ],
        [
          [0, 0, 0],
          [-9, 0, 0],
          [-9, -9, 0],
          [0, -9, 0],
        ],
        [
          [0, 0, 0],
          [0, -9, 0],
          [0, -9, -9],
          [0, 0, -9],
        ],
        [
          [0, 0, 0],
          [0, 0, -9],
          [9, 0, -9],
          [9, 0, 0],
        ],
      ].flatMap(([a, b, c, d]) => [...a, ...b, ...c, ...a, ...c, ...d]),
    );
    const found = limits(mesh, [3, 2, 0], 6);
    expect(found.map((l) => l.kind)).toEqual(['saddle']);
    expect(found[0].radius).toBeCloseTo(Math.hypot(3, 2), 9);
  });

  it('by another measure: the place of the border that lies deepest in a slot along it', () => {
    const mesh = plate(40, 30, 3, 2);
    const map = logMap(new WindowSolver(mesh), placeAt(mesh, [7, 3, 0]).surface, 16, [1, 0, 0]);
    expect(map.limits()[0].at[1]).toBeCloseTo(15, 9);
    const [deepest] = map.limits(({ u, v }) => Math.hypot(u - 10, v));
    expect(deepest.at[0]).toBeCloseTo(20, 9);
    expect(deepest.measure).toBeCloseTo(3, 3);
  });
});

it('a map that is read after its solver ran again is a fault', () => {
  const mesh = plate(40, 30, 3, 2);
  const solver = new WindowSolver(mesh);
  const { surface, point } = placeAt(mesh, [7, 3, 0]);
  const map = logMap(solver, surface, 5);
  expect(map.at(surface.face, point)?.radius).toBeCloseTo(0, 12);
  logMap(solver, surface, 5);
  expect(() => map.at(surface.face, point)).toThrow(Fault);
});
