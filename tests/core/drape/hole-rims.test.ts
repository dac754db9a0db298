import { expect, test } from 'vitest';
import { drapeDrawing } from '../../../src/core/drape/drape-drawing.ts';
import type { Area, Drawing, Hole } from '../../../src/core/drawing/drawing.ts';
import { WindowSolver } from '../../../src/core/geodesic/windows.ts';
import type { Drape } from '../../../src/core/project/schema.ts';
import { placeAt, plate, tube } from '../helpers/surfaces.ts';

const drape = (more: Partial<Drape> = {}): Drape => ({
  id: 'd',
  drawing: 'x.drl',
  anchor: [0, 0, 0],
  origin: [1, -2],
  turn: 90,
  mirror: false,
  evenLengths: true,
  drawingLayers: {},
  nets: {},
  ...more,
});
const hole = (at: [number, number], diameter: number, to = at): Hole => ({
  at,
  to,
  diameter,
  plated: null,
  place: '',
});
const drawing = (holes: Hole[], ...areas: number[][]): Drawing => ({
  file: 'x',
  layers: [],
  notes: [],
  holes,
  shapes: areas.map((ring, i) => ({
    id: `s${i}`,
    layer: '',
    net: null,
    pin: null,
    role: 'region' as const,
    figure: { kind: 'area', rings: [Float64Array.from(ring)] } as Area,
    place: '',
  })),
});
const corners = (rim: Float64Array): number[][] =>
  Array.from({ length: rim.length / 3 }, (_, i) => [...rim.subarray(3 * i, 3 * i + 3)]);

test('a hole of a drill file alone lies as a circle about its place, turned with the drawing', () => {
  const mesh = plate(40, 30, 3, 2);
  // 4 right and 1 up of the origin; turned by 90° that is 1 left and 4 up on the plate.
  const { elements, rims } = drapeDrawing(
    new WindowSolver(mesh),
    drape(),
    drawing([hole([5, -1], 1.6)]),
    placeAt(mesh, [2, 3, 0]),
  );
  expect(elements).toEqual([]);
  expect(rims).toHaveLength(1);
  const points = corners(rims[0]);
  expect(points.length).toBeGreaterThan(30);
  for (const [x, y, z] of points) {
    // A chord of 32 corners is 0.5 % inside of its circle.
    expect(Math.abs(Math.hypot(x - 1, y - 7) - 0.8)).toBeLessThan(0.005 * 0.8 + 1e-9);
    expect(z).toBe(0);
  }
  expect(Math.hypot(...points[0].map((x, k) => x - points[points.length - 1][k]))).toBeLessThan(1e-9);
});

test('a slot has straight sides and round ends', () => {
  const mesh = plate(40, 30, 3, 2);
  const { rims } = drapeDrawing(
    new WindowSolver(mesh),
    drape({ turn: 0, origin: [0, 0] }),
    drawing([hole([1, 1], 2, [4, 5])]),
    placeAt(mesh, [0, 0, 0]),
  );
  // Distance from the segment (1, 1) to (4, 5), 5 mm long.
  for (const [x, y] of corners(rims[0])) {
    const t = Math.max(0, Math.min(1, ((x - 1) * 3 + (y - 1) * 4) / 25));
    const d = Math.hypot(x - 1 - 3 * t, y - 1 - 4 * t);
    expect(Math.abs(d - 1)).toBeLessThan(0.006);
  }
});

test('on a tube a rim stands on the edge of the copper that keeps out of its hole', () => {
  const mesh = tube(10, 40, 60, 16);
  const square = [-4, -5, 5, -5, 5, 4, -4, 4];
  const { elements, rims } = drapeDrawing(
    new WindowSolver(mesh),
    drape({ origin: [0, 0], turn: 20 }),
    drawing([hole([1.5, -1], 2)], square),
    placeAt(mesh, [10, 0, 3]),
  );
  const loops = elements[0].outline;
  expect(loops).toHaveLength(2);
  const inner = loops.reduce((a, b) => (a.length < b.length ? a : b));
  for (const p of corners(rims[0])) {
    const near = Math.min(...corners(inner).map((q) => Math.hypot(p[0] - q[0], p[1] - q[1], p[2] - q[2])));
    expect(near).toBeLessThan(0.12);
  }
});

test('of a hole that the drawing’s surface does not reach there is no rim', () => {
  const mesh = plate(40, 30, 3, 2);
  const { rims } = drapeDrawing(
    new WindowSolver(mesh),
    drape({ origin: [0, 0], turn: 0 }),
    drawing([hole([300, 0], 1), hole([1, 1], 1)], [0, 0, 3, 0, 3, 3, 0, 3]),
    placeAt(mesh, [0, 0, 0]),
  );
  expect(rims).toHaveLength(1);
});
