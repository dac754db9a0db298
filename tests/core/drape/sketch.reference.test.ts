import { describe, expect, it } from 'vitest';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import { distance } from '../../../src/core/base/vec.ts';
import { mapPatch } from '../../../src/core/drape/map-patch.ts';
import { PatchWalk } from '../../../src/core/drape/patch-walk.ts';
import { sketchLines } from '../../../src/core/drape/sketch.ts';
import { WindowSolver } from '../../../src/core/geodesic/windows.ts';
import { source } from '../../reference/sources.ts';
import { placeAt, plate, sphere, tube } from '../helpers/surfaces.ts';

const pointsOf = (line: Float64Array): Vec3[] =>
  Array.from({ length: line.length / 3 }, (_, i) => [line[3 * i], line[3 * i + 1], line[3 * i + 2]]);

describe(source('do-carmo'), () => {
  it('on a flat plate lines lie where the drawing has them, turned and mirrored as model.md §10 says', () => {
    const mesh = plate(60, 50, 3, 2);
    const ends = (turn: number, mirror: boolean): Vec3[] => {
      const at = placeAt(mesh, [1, 2, 0]);
      const [line] = sketchLines(mesh, at, turn, mirror, [Float64Array.of(0, 0, 6, 1)]);
      return pointsOf(line).slice(-1);
    };
    const close = (p: Vec3, q: Vec3) => expect(distance(p, q)).toBeLessThan(0.003);
    close(ends(0, false)[0], [7, 3, 0]);
    close(ends(Math.PI / 2, false)[0], [0, 8, 0]);
    close(ends(0, true)[0], [-5, 3, 0]);
  });

  it('where the plate ends a line is broken off, and goes on where it comes back', () => {
    const mesh = plate(20, 20, 2, 2);
    const at = placeAt(mesh, [1, 0.5, 0]);
    const lines = sketchLines(mesh, at, 0, false, [Float64Array.of(2, 0, 14, 0, 14, 3, 2, 3)]);
    expect(lines).toHaveLength(2);
    for (const p of lines.flatMap(pointsOf)) expect(p[0]).toBeLessThanOrEqual(10 + 1e-9);
  });

  it('on a tube a line across the axis winds about it, at its true length', () => {
    const mesh = tube(8, 40, 96, 1);
    const at = placeAt(mesh, [8, 0.3, 17]);
    // Along the tube and around it, in whatever axes: every length holds.
    for (const [u, v] of [
      [9, 0],
      [0, 9],
      [6, -7],
    ]) {
      const [line] = sketchLines(mesh, at, 0.7, false, [Float64Array.of(0, 0, u, v)]);
      const p = pointsOf(line);
      const length = p.slice(1).reduce((sum, q, i) => sum + distance(p[i], q), 0);
      expect(Math.abs(length / Math.hypot(u, v) - 1)).toBeLessThan(1e-3);
    }
  });

  it('on a sphere every place is that of the laid drawing, to a thousandth of the radius', () => {
    const mesh = sphere(15, 5);
    const at = placeAt(mesh, [9, 4, 11]);
    const patch = mapPatch(new WindowSolver(mesh), at, 9, 0.4, true);
    const walk = new PatchWalk(patch);
    const line = Float64Array.of(-5, 2, 3, 6, 6, -4, -1, -7);
    const p = pointsOf(sketchLines(mesh, at, 0.4, true, [line])[0]);
    const laid = walk.line(line, false)!.path.points;
    const places = pointsOf(laid);
    for (const q of p) {
      let nearest = Infinity;
      for (let i = 1; i < places.length; i++)
        nearest = Math.min(nearest, toSegment(q, places[i - 1], places[i]));
      expect(nearest).toBeLessThan(9e-3);
    }
    expect(p.length).toBeGreaterThan(40);
  });
});

function toSegment(p: Vec3, a: Vec3, b: Vec3): number {
  const e = [b[0] - a[0], b[1] - a[1], b[2] - a[2]];
  const ee = e[0] ** 2 + e[1] ** 2 + e[2] ** 2;
  const t = Math.max(
    0,
    Math.min(1, ((p[0] - a[0]) * e[0] + (p[1] - a[1]) * e[1] + (p[2] - a[2]) * e[2]) / (ee || 1)),
  );
  return distance(p, [a[0] + t * e[0], a[1] + t * e[1], a[2] + t * e[2]]);
}
