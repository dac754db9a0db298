import { describe, expect, it } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import { followWith, shortestWith } from '../../../src/core/geodesic/shortest.ts';
import { waypoints } from '../../../src/core/geodesic/waypoints.ts';
import { WindowSolver } from '../../../src/core/geodesic/windows.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import { barycentric, type SurfacePoint } from '../../../src/core/mesh/surface-point.ts';
import { gridMesh, meshFrom } from '../helpers/surfaces.ts';

/** Block of 30 × 30 × 10 with a square hole through it, 10 wide and off the middle. */
function holedBlock(): SurfaceMesh {
  const [x, y] = [
    [-15, -4, 6, 15],
    [-15, -7, 3, 15],
  ];
  const out: number[] = [];
  const quad = (a: Vec3, b: Vec3, c: Vec3, d: Vec3): void =>
    void out.push(...a, ...b, ...c, ...a, ...c, ...d);
  for (let i = 0; i < 3; i++)
    for (let j = 0; j < 3; j++) {
      if (i === 1 && j === 1) continue;
      const [p, q, r, s] = [x[i], x[i + 1], y[j], y[j + 1]];
      quad([p, r, 5], [q, r, 5], [q, s, 5], [p, s, 5]);
      quad([p, r, -5], [p, s, -5], [q, s, -5], [q, r, -5]);
    }
  const wall = (a: readonly [number, number], b: readonly [number, number]): void =>
    quad([a[0], a[1], -5], [b[0], b[1], -5], [b[0], b[1], 5], [a[0], a[1], 5]);
  for (let k = 0; k < 3; k++) {
    wall([x[k], -15], [x[k + 1], -15]);
    wall([15, y[k]], [15, y[k + 1]]);
    wall([x[3 - k], 15], [x[2 - k], 15]);
    wall([-15, y[3 - k]], [-15, y[2 - k]]);
  }
  wall([x[1], y[2]], [x[2], y[2]]);
  wall([x[2], y[2]], [x[2], y[1]]);
  wall([x[2], y[1]], [x[1], y[1]]);
  wall([x[1], y[1]], [x[1], y[2]]);
  return meshFrom(out);
}

const torus = (n: number, m: number): SurfaceMesh =>
  gridMesh(n, m, (i, j) => {
    const [u, v] = [(2 * Math.PI * (i % n)) / n, (2 * Math.PI * (j % m)) / m];
    return [(20 + 7 * Math.cos(v)) * Math.cos(u), (20 + 7 * Math.cos(v)) * Math.sin(u), 7 * Math.sin(v)];
  });

const parts: [string, SurfaceMesh][] = [
  ['a block with a hole', holedBlock()],
  ['a torus', torus(24, 14)],
];

const randomPlace = (mesh: SurfaceMesh, random: () => number): SurfacePoint => {
  const face = Math.floor(random() * (mesh.triangles.length / 3));
  const [u, v] = [random(), random()].sort((a, b) => a - b);
  return { face, bary: [u, v - u, 1 - v] };
};

describe.each(parts)('paths that follow far jumps on %s', (_, mesh) => {
  const { closed } = mesh;

  it('end, and are never longer than the old path and the jump together, seeds 1 to 400', () => {
    expect(closed).toBe(true);
    let followed = 0;
    for (let seed = 1; seed <= 400; seed++) {
      const random = randomFrom(seed);
      const solver = new WindowSolver(mesh);
      const from = randomPlace(mesh, random);
      let at = randomPlace(mesh, random);
      let path = shortestWith(solver, from, at)!;
      for (let jump = 0; jump < 4; jump++) {
        const to = randomPlace(mesh, random);
        const next = followWith(solver, path, from, to);
        const shortest = shortestWith(solver, from, to)!;
        if (next) {
          followed++;
          expect(next.length).toBeGreaterThanOrEqual(shortest.length * (1 - 1e-9));
          const detour = solver.propagate([{ at, source: 0, radius: Infinity }], [], {
            at: to,
            bound: Infinity,
          });
          // The jump is joined on by a way that may be a little longer than the shortest.
          expect(next.length).toBeLessThanOrEqual(path.length + 1.5 * detour.distance + 1e-9);
        }
        path = next ?? shortest;
        at = to;
      }
    }
    expect(followed).toBeGreaterThan(800);
  });

  it('pins hold a held path: shortest ways between them are as long, seeds 1 to 120', () => {
    let [held, kept] = [0, 0];
    for (let seed = 1; seed <= 120; seed++) {
      const random = randomFrom(seed);
      const solver = new WindowSolver(mesh);
      const from = randomPlace(mesh, random);
      let path = shortestWith(solver, from, randomPlace(mesh, random))!;
      let to = from;
      for (let jump = 0; jump < 2; jump++) {
        to = randomPlace(mesh, random);
        path = followWith(solver, path, from, to) ?? shortestWith(solver, from, to)!;
      }
      const pins = waypoints(solver, path);
      if (pins.length === 0) continue;
      held++;
      const stops = [
        from,
        ...pins.map((p): SurfacePoint => ({ face: p.face, bary: barycentric(mesh, p.face, p.point) })),
        to,
      ];
      let sum = 0;
      for (let i = 0; i + 1 < stops.length; i++) sum += shortestWith(solver, stops[i], stops[i + 1])!.length;
      if (Math.abs(sum / path.length - 1) < 1e-5) kept++;
    }
    expect(held).toBeGreaterThan(8);
    // A path that crosses itself may stay bent (flip-path.ts): no shortest ways make that up.
    expect(kept / held).toBeGreaterThan(0.85);
  });
});

describe('two ways of one length', () => {
  it('the one that is held gets a pin, and is laid on its side then', () => {
    // A plate with a square hole in its middle; the ends opposite each other, as far from one side as from the other.
    const corners: number[] = [];
    for (let j = 0; j < 5; j++)
      for (let i = 0; i < 5; i++)
        if (i !== 2 || j !== 2)
          corners.push(i, j, 0, i + 1, j, 0, i + 1, j + 1, 0, i, j, 0, i + 1, j + 1, 0, i, j + 1, 0);
    const mesh = meshFrom(corners);
    const solver = new WindowSolver(mesh);
    const at = (x: number, y: number): SurfacePoint => {
      const cell = Math.floor(y) * 5 + Math.floor(x) - (Math.floor(y) * 5 + Math.floor(x) > 12 ? 1 : 0);
      const [u, v] = [x - Math.floor(x), y - Math.floor(y)];
      return u >= v
        ? { face: 2 * cell, bary: [1 - u, u - v, v] }
        : { face: 2 * cell + 1, bary: [1 - v, u, v - u] };
    };
    for (const side of [0.7, 4.3]) {
      const first = shortestWith(solver, at(0.5, 2.5), at(2.5, side))!;
      const held = followWith(solver, first, at(0.5, 2.5), at(4.5, 2.5))!;
      expect(held.length).toBeCloseTo(2 * Math.hypot(1.5, 0.5) + 1, 9);
      const pins = waypoints(solver, held);
      expect(pins.length).toBeLessThanOrEqual(1);
      const through = (pins[0]?.point ??
        shortestWith(solver, at(0.5, 2.5), at(4.5, 2.5))!.points.subarray(3, 6))[1];
      expect(through < 2.5).toBe(side < 2.5);
    }
  });
});
