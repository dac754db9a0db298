import { describe, expect, it } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import { EdgeWays } from '../../../src/core/geodesic/edge-ways.ts';
import { FlipPaths, sharedFace } from '../../../src/core/geodesic/flip-path.ts';
import type { GeodesicPath } from '../../../src/core/geodesic/geodesic-path.ts';
import { LowerBound } from '../../../src/core/geodesic/lower-bound.ts';
import { followWith, shortestWith } from '../../../src/core/geodesic/shortest.ts';
import { WindowSolver } from '../../../src/core/geodesic/windows.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import { barycentric, positionOf, type SurfacePoint } from '../../../src/core/mesh/surface-point.ts';
import { gridMesh, meshFrom, placeAt, sphere, tube } from '../helpers/surfaces.ts';

/** A lopsided field of hills, hollows and saddles. */
const bump = (i: number, j: number): Vec3 => {
  const [x, y] = [i * 1.3, j];
  return [x, y, 2.5 * Math.sin(0.7 * x) * Math.cos(0.45 * y) + 0.15 * x * y * 0.1];
};
/** The same drawn out: triangles a hundred times as long as high. */
const slivers = (): SurfaceMesh => gridMesh(40, 3, (i, j) => bump(i * 0.35, j * 4));

const meshes: [string, SurfaceMesh][] = [
  ['hills', gridMesh(14, 12, bump)],
  ['slivers', slivers()],
  ['a sphere', sphere(20, 3)],
  ['a flat', gridMesh(9, 11, (i, j) => [i, j * 0.7, 0], false)],
];

/** Inside a face, on an edge or on a vertex. */
const randomPlace = (mesh: SurfaceMesh, random: () => number): SurfacePoint => {
  const face = Math.floor(random() * (mesh.triangles.length / 3));
  const kind = random();
  const [u, v] = [random(), random()].sort((a, b) => a - b);
  if (kind < 0.2) return { face, bary: [0, 1, 0] };
  if (kind < 0.4) return { face, bary: [u, 0, 1 - u] };
  return { face, bary: [u, v - u, 1 - v] };
};

const point = (path: GeodesicPath, i: number): Vec3 => [
  path.points[3 * i],
  path.points[3 * i + 1],
  path.points[3 * i + 2],
];
const minus = (a: Vec3, b: Vec3): Vec3 => [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
const dot = (a: Vec3, b: Vec3): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
const angle = (a: Vec3, b: Vec3): number =>
  Math.acos(Math.max(-1, Math.min(1, dot(a, b) / Math.hypot(...a) / Math.hypot(...b))));

/**
 * Least angle that the path makes on either side at its inner points, by the slow, obvious way: around a vertex all corner
 * angles of the faces there, at an edge the angles to the edge on both sides. π is straight; more is a saddle passed by.
 */
function sharpest(mesh: SurfaceMesh, path: GeodesicPath): number {
  const { triangles: t, positions: x } = mesh;
  const vertex = (v: number): Vec3 => [x[3 * v], x[3 * v + 1], x[3 * v + 2]];
  let least = Infinity;
  for (let i = 1; i + 1 < path.points.length / 3; i++) {
    const at = point(path, i);
    const back = minus(point(path, i - 1), at);
    const on = minus(point(path, i + 1), at);
    const near = Math.min(Math.hypot(...back), Math.hypot(...on));
    const [f, g] = [path.faces[i - 1], path.faces[i]];
    const corners = [0, 1, 2].map((k) => t[3 * f + k]);
    const hub = corners.find((v) => Math.hypot(...minus(vertex(v), at)) < 1e-9);
    if (hub !== undefined) {
      // Walk around the vertex from the piece after to the piece before.
      let h = [0, 1, 2].map((k) => 3 * g + k).find((k) => t[k] === hub)!;
      const nextOf = (k: number) => (k % 3 === 2 ? k - 2 : k + 1);
      const prevOf = (k: number) => (k % 3 === 0 ? k + 2 : k - 1);
      const edge = (k: number) => minus(vertex(t[nextOf(k)]), vertex(hub));
      let left = f === g ? angle(on, back) : angle(on, minus(vertex(t[prevOf(h)]), vertex(hub)));
      let total = angle(edge(h), minus(vertex(t[prevOf(h)]), vertex(hub)));
      const first = h;
      let passed = f === g;
      for (;;) {
        h = mesh.twin[prevOf(h)];
        if (h < 0 || h === first) break;
        const corner = angle(edge(h), minus(vertex(t[prevOf(h)]), vertex(hub)));
        total += corner;
        if (!passed) left += Math.floor(h / 3) === f ? angle(edge(h), back) : corner;
        if (Math.floor(h / 3) === f) passed = true;
      }
      if (h >= 0 && f !== g) least = Math.min(least, left, total - left);
      continue;
    }
    if (near < 1e-7 || f === g) continue;
    const shared = corners.filter((v) => [0, 1, 2].some((k) => t[3 * g + k] === v));
    const along = minus(vertex(shared[1]), vertex(shared[0]));
    least = Math.min(least, angle(back, along) + angle(along, on));
    least = Math.min(least, 2 * Math.PI - (angle(back, along) + angle(along, on)));
  }
  return least;
}

describe.each(meshes)('paths pulled taut by flips on %s', (_, mesh) => {
  const ways = new EdgeWays(mesh);
  const paths = new FlipPaths(mesh);
  const solver = new WindowSolver(mesh);
  const pairs = (seed: number, count: number): [SurfacePoint, SurfacePoint][] => {
    const random = randomFrom(seed);
    return Array.from({ length: count }, () => [randomPlace(mesh, random), randomPlace(mesh, random)]);
  };

  it('are straight across edges and turn nowhere inward at vertices, each piece in its face, seed 31', () => {
    let pulled = 0;
    for (const [a, b] of pairs(31, 150)) {
      const taut = paths.tauten(a, b, ways.find(a, b, 1.5)!);
      if (!taut) {
        expect(sharedFace(mesh, a, b)).toBeGreaterThanOrEqual(0);
        continue;
      }
      pulled++;
      expect(sharpest(mesh, taut)).toBeGreaterThan(Math.PI - 1e-5);
      expect(Math.hypot(...minus(point(taut, 0), positionOf(mesh, a)))).toBe(0);
      expect(Math.hypot(...minus(point(taut, taut.faces.length), positionOf(mesh, b)))).toBe(0);
      taut.faces.forEach((face, i) => {
        for (const p of [point(taut, i), point(taut, i + 1)])
          expect(Math.min(...barycentric(mesh, face, p))).toBeGreaterThan(-1e-9);
      });
    }
    expect(pulled).toBeGreaterThan(120);
  });

  it('are no longer than the way along edges and no shorter than the shortest, seed 32', () => {
    let shortest = 0;
    for (const [a, b] of pairs(32, 150)) {
      const way = ways.find(a, b)!;
      const taut = paths.tauten(a, b, way);
      if (!taut) continue;
      const { distance } = solver.propagate([{ at: a, source: 0, radius: Infinity }], [], {
        at: b,
        bound: Infinity,
      });
      expect(taut.length).toBeLessThanOrEqual(way.length * (1 + 1e-12));
      expect(taut.length).toBeGreaterThanOrEqual(distance * (1 - 1e-12));
      if (taut.length < distance * (1 + 1e-10)) shortest++;
    }
    // Most ways along edges are on the right side of things to begin with.
    expect(shortest).toBeGreaterThan(75);
  });

  it('shortest paths led by them and by lower bounds are as short as with no bound at all, seed 33', () => {
    const toGo = new LowerBound(mesh);
    for (const [a, b] of pairs(33, 120)) {
      const from = [{ at: a, source: 0, radius: Infinity }];
      const free = solver.propagate(from, [], { at: b, bound: Infinity }).distance;
      expect(Math.abs(shortestWith(solver, a, b)!.length - free)).toBeLessThan(1e-10 * free + 1e-12);
      const bound = free * (1 + 1e-9) + 1e-12;
      toGo.aim(a, b, bound);
      const led = solver.propagate(from, [], { at: b, bound, toGo }).distance;
      expect(Math.abs(led - free)).toBeLessThan(1e-10 * free + 1e-12);
    }
  });

  it('what is still to go is never more than the way from any vertex that a path may pass, seed 34', () => {
    const toGo = new LowerBound(mesh);
    let told = 0;
    for (const [a, b] of pairs(34, 30)) {
      const path = shortestWith(solver, a, b)!;
      const length = path.length * 1.05;
      toGo.aim(a, b, length);
      solver.propagate([{ at: b, source: 0, radius: Infinity }]);
      const back: number[] = [];
      for (let v = 0; v < mesh.positions.length / 3; v++) back.push(solver.vertexDistance(v));
      solver.propagate([{ at: a, source: 0, radius: Infinity }]);
      back.forEach((d, v) => {
        const bound = toGo.at(v);
        // Vertices that a path of that length passes over are never shut out.
        if (solver.vertexDistance(v) + d <= length) expect(bound).not.toBe(Infinity);
        if (!(bound < Infinity)) return;
        expect(bound).toBeLessThanOrEqual(d * (1 + 1e-9));
        told += Number(bound > 0.5 * d);
      });
    }
    expect(told).toBeGreaterThan(20);
  });
});

describe('a path followed while its end is dragged', () => {
  it('winds on around a tube as far as it is pulled: a helix of more than half a turn, then of more than a whole one', () => {
    const [r, sides] = [15, 96];
    const mesh = tube(r, 60, sides, 20);
    const solver = new WindowSolver(mesh);
    const at = (turn: number, z: number): Vec3 => [r * Math.cos(turn), r * Math.sin(turn), z];
    const from = placeAt(mesh, at(0.013, 5)).surface;
    // The unrolled prism: sides of width 2 r sin(π / n); the place nearest to one on the circle is its foot on a side.
    const unrolled = (turn: number): number => {
      const step = (2 * Math.PI) / sides;
      const k = Math.floor(turn / step);
      const inside = r * Math.sin(turn - (k + 0.5) * step) + r * Math.sin(step / 2);
      return k * 2 * r * Math.sin(step / 2) + inside;
    };
    let path = shortestWith(solver, from, placeAt(mesh, at(0.5, 15)).surface)!;
    for (let turn = 0.5; turn < 8; turn += 0.21) {
      const to = placeAt(mesh, at(turn, 15 + turn)).surface;
      path = followWith(solver, path, from, to)!;
      const z = positionOf(mesh, to)[2] - 5;
      expect(path.length).toBeCloseTo(Math.hypot(unrolled(turn) - unrolled(0.013), z), 8);
    }
    // The shortest way is the other way round by now.
    expect(shortestWith(solver, from, placeAt(mesh, at(4.7, 20)).surface)!.length).toBeLessThan(30);
  });

  it('keeps its side of a hole, where the shortest way changes sides', () => {
    // A plate of 9 × 9 cells without its middle nine.
    const corners: number[] = [];
    for (let j = 0; j < 9; j++)
      for (let i = 0; i < 9; i++)
        if (i < 3 || i > 5 || j < 3 || j > 5)
          corners.push(i, j, 0, i + 1, j, 0, i + 1, j + 1, 0, i, j, 0, i + 1, j + 1, 0, i, j + 1, 0);
    const mesh = meshFrom(corners);
    const solver = new WindowSolver(mesh);
    const from = placeAt(mesh, [1.3, 4.1, 0]).surface;
    let path = shortestWith(solver, from, placeAt(mesh, [7.6, 3.9, 0]).surface)!;
    const below = (y: number, x: number): number =>
      Math.hypot(3 - 1.3, 4.1 - 3) + 3 + Math.hypot(x - 6, y - 3);
    const above = (y: number, x: number): number =>
      Math.hypot(3 - 1.3, 6 - 4.1) + 3 + Math.hypot(x - 6, 6 - y);
    expect(path.length).toBeCloseTo(below(3.9, 7.6), 12);
    for (const y of [4.2, 4.6, 5.1, 5.5]) {
      const to = placeAt(mesh, [7.6, y, 0]).surface;
      path = followWith(solver, path, from, to)!;
      expect(path.length).toBeCloseTo(below(y, 7.6), 12);
    }
    const direct = shortestWith(solver, from, placeAt(mesh, [7.6, 5.5, 0]).surface)!;
    expect(direct.length).toBeCloseTo(above(5.5, 7.6), 12);
    expect(direct.length).toBeLessThan(path.length);
  });
});

describe('what a path touches', () => {
  it('is its neighbourhood: as many windows on a part of 1800 triangles as on one of 45,000 around the same place', () => {
    const hills = (n: number): SurfaceMesh =>
      gridMesh(n, n, (i, j) => {
        const [x, y] = [i - n / 2, j - n / 2];
        return [x, y, 1.5 * Math.sin(0.5 * x + 0.3) * Math.cos(0.4 * y)];
      });
    const windows = (n: number): number[] => {
      const mesh = hills(n);
      const solver = new WindowSolver(mesh);
      // The cell whose lower corner is at (x, y), whatever the size of the part.
      const at = (x: number, y: number): SurfacePoint => ({
        face: 2 * ((y + n / 2) * n + x + n / 2),
        bary: [0.3, 0.2, 0.5],
      });
      const ends: [SurfacePoint, SurfacePoint][] = [
        [at(-4, -3), at(5, 4)],
        [at(2, 1), at(-5, 3)],
        [at(0, 6), at(1, -6)],
      ];
      return ends.map(([a, b]) => {
        shortestWith(solver, a, b);
        return solver.windows.count;
      });
    };
    const small = windows(30);
    expect(Math.min(...small)).toBeGreaterThan(0);
    expect(windows(150)).toEqual(small);
  });
});
