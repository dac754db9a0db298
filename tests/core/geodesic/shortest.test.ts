import { describe, expect, it } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import { shortestPath, shortestWith } from '../../../src/core/geodesic/shortest.ts';
import { WindowSolver } from '../../../src/core/geodesic/windows.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import { barycentric, positionOf, type SurfacePoint } from '../../../src/core/mesh/surface-point.ts';
import { edgeBound } from '../helpers/edge-bound.ts';
import { gridMesh, meshFrom, placeAt, plate } from '../helpers/surfaces.ts';

/** A lopsided bump with hills, hollows and a saddle. */
const bump = (i: number, j: number): Vec3 => {
  const [x, y] = [i * 1.3, j];
  return [x, y, 2.5 * Math.sin(0.7 * x) * Math.cos(0.45 * y) + 0.15 * x * y * 0.1];
};
const bumpy = (): SurfaceMesh => gridMesh(14, 12, bump);

const randomPoint = (mesh: SurfaceMesh, random: () => number): SurfacePoint => {
  const face = Math.floor(random() * (mesh.triangles.length / 3));
  const [u, v] = [random(), random()].sort((a, b) => a - b);
  return { face, bary: [u, v - u, 1 - v] };
};

/** Rotation by a lopsided quaternion, and a shift. */
const moved = (p: Vec3): Vec3 => {
  const [x, y, z, w] = [0.18257418583505536, 0.3651483716701107, 0.5477225575051661, 0.7302967433402214];
  const t: Vec3 = [2 * (y * p[2] - z * p[1]), 2 * (z * p[0] - x * p[2]), 2 * (x * p[1] - y * p[0])];
  return [
    p[0] + w * t[0] + y * t[2] - z * t[1] + 5,
    p[1] + w * t[1] + z * t[0] - x * t[2] - 3,
    p[2] + w * t[2] + x * t[1] - y * t[0] + 11,
  ];
};

describe('shortest path', () => {
  it('there and back are equally long, seed 11', () => {
    const mesh = bumpy();
    const random = randomFrom(11);
    const solver = new WindowSolver(mesh);
    for (let k = 0; k < 40; k++) {
      const [a, b] = [randomPoint(mesh, random), randomPoint(mesh, random)];
      expect(shortestWith(solver, a, b)!.length).toBeCloseTo(shortestWith(solver, b, a)!.length, 10);
    }
  });

  it('the triangle inequality holds, seed 12', () => {
    const mesh = bumpy();
    const random = randomFrom(12);
    const solver = new WindowSolver(mesh);
    for (let k = 0; k < 30; k++) {
      const [a, b, c] = [randomPoint(mesh, random), randomPoint(mesh, random), randomPoint(mesh, random)];
      const d = (p: SurfacePoint, q: SurfacePoint) => shortestWith(solver, p, q)!.length;
      expect(d(a, c)).toBeLessThanOrEqual(d(a, b) + d(b, c) + 1e-9);
    }
  });

  it('turning and moving the part changes no length, seed 13', () => {
    const mesh = bumpy();
    const other = gridMesh(14, 12, (i, j) => moved(bump(i, j)));
    const random = randomFrom(13);
    for (let k = 0; k < 20; k++) {
      const [a, b] = [randomPoint(mesh, random), randomPoint(mesh, random)];
      expect(shortestPath(other, a, b)!.length).toBeCloseTo(shortestPath(mesh, a, b)!.length, 9);
    }
  });

  it('the order of the facets changes no length, seed 14', () => {
    const random = randomFrom(14);
    const corners: number[][] = [];
    const mesh = bumpy();
    for (let f = 0; f < mesh.triangles.length / 3; f++)
      corners.push(
        [0, 1, 2].flatMap((i) => [0, 1, 2].map((k) => mesh.positions[3 * mesh.triangles[3 * f + i] + k])),
      );
    for (let i = corners.length - 1; i > 0; i--) {
      const j = Math.floor(random() * (i + 1));
      [corners[i], corners[j]] = [corners[j], corners[i]];
    }
    const shuffled = meshFrom(corners.flat());
    for (let k = 0; k < 20; k++) {
      const [a, b] = [randomPoint(mesh, random), randomPoint(mesh, random)];
      const there = [a, b].map((p) => placeAt(shuffled, positionOf(mesh, p)).surface);
      expect(shortestPath(shuffled, there[0], there[1])!.length).toBeCloseTo(
        shortestPath(mesh, a, b)!.length,
        8,
      );
    }
  });

  it('is never longer than any way along edges, nor shorter than the straight line, seed 15', () => {
    const mesh = bumpy();
    const random = randomFrom(15);
    for (let k = 0; k < 40; k++) {
      const [a, b] = [randomPoint(mesh, random), randomPoint(mesh, random)];
      const [p, q] = [positionOf(mesh, a), positionOf(mesh, b)];
      const { length } = shortestPath(mesh, a, b)!;
      expect(length).toBeLessThanOrEqual(edgeBound(mesh, a, b) + 1e-9);
      expect(length).toBeGreaterThanOrEqual(Math.hypot(p[0] - q[0], p[1] - q[1], p[2] - q[2]) - 1e-9);
    }
  });

  it('each piece lies in the face it names, pieces join, and add up to the length, seed 16', () => {
    const mesh = bumpy();
    const random = randomFrom(16);
    for (let k = 0; k < 30; k++) {
      const [a, b] = [randomPoint(mesh, random), randomPoint(mesh, random)];
      const path = shortestPath(mesh, a, b)!;
      const at = (i: number): Vec3 => [path.points[3 * i], path.points[3 * i + 1], path.points[3 * i + 2]];
      let sum = 0;
      path.faces.forEach((face, i) => {
        for (const p of [at(i), at(i + 1)]) {
          const w = barycentric(mesh, face, p);
          expect(Math.min(...w)).toBeGreaterThan(-1e-9);
          expect(Math.hypot(...positionOf(mesh, { face, bary: w }).map((x, n) => x - p[n]))).toBeLessThan(
            1e-9,
          );
        }
        sum += Math.hypot(...at(i).map((x, n) => x - at(i + 1)[n]));
      });
      expect(sum).toBeCloseTo(path.length, 9);
      expect(at(0)).toEqual(positionOf(mesh, a));
      expect(at(path.faces.length)).toEqual(positionOf(mesh, b));
    }
  });

  it('runs round a hole over its rim', () => {
    // A plate with its middle cell missing: the straight way is barred.
    const corners: number[] = [];
    for (let j = 0; j < 3; j++)
      for (let i = 0; i < 3; i++)
        if (i !== 1 || j !== 1)
          corners.push(i, j, 0, i + 1, j, 0, i + 1, j + 1, 0, i, j, 0, i + 1, j + 1, 0, i, j + 1, 0);
    const mesh = meshFrom(corners);
    const path = shortestPath(
      mesh,
      placeAt(mesh, [0.5, 1.4, 0]).surface,
      placeAt(mesh, [2.5, 1.4, 0]).surface,
    )!;
    // Below the hole, by way of its two lower corners (1, 1) and (2, 1).
    expect(path.length).toBeCloseTo(2 * Math.hypot(0.5, 0.4) + 1, 12);
  });

  it('between separate pieces there is no way, and that is an answer', () => {
    const mesh = meshFrom([0, 0, 0, 1, 0, 0, 0, 1, 0, 5, 0, 0, 6, 0, 0, 5, 1, 0]);
    const third: Vec3 = [1 / 3, 1 / 3, 1 / 3];
    expect(shortestPath(mesh, { face: 0, bary: third }, { face: 1, bary: third })).toBeNull();
  });

  it('a place to itself is no way at all', () => {
    const mesh = plate(10, 10, 3, 3);
    const p = placeAt(mesh, [1, 2, 0]).surface;
    expect(shortestPath(mesh, p, p)!.length).toBe(0);
  });
});
