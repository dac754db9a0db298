import { expect, test } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import { quiet } from '../../../src/core/base/run-context.ts';
import { dot, normalize, type Vec3 } from '../../../src/core/base/vec.ts';
import { pull } from '../../../src/core/drape/route.ts';
import { buildMesh } from '../../../src/core/mesh/build.ts';
import { buildQueries } from '../../../src/core/mesh/queries.ts';
import { roundedPlace } from '../../../src/core/mesh/rounded.ts';
import { faceNormal, positionOf } from '../../../src/core/mesh/surface-point.ts';
import { box, flip, moved, soupOf } from './parts.ts';

/** A turned, hollow box with walls of `t` mm: nothing in it is a round number. */
function hollow(t: number) {
  const [a, b, c] = [13.123457, 9.765433, 7.333331];
  const [co, si] = [Math.cos(0.7), Math.sin(0.7)];
  const facets = [...box(a, b, c), ...moved(box(a - 2 * t, b - 2 * t, c - 2 * t), [t, t, t]).map(flip)].map(
    (f) =>
      f.map(
        ([x, y, z]): Vec3 => [
          x * co - y * si,
          x * si * co + y * co * co - z * si,
          (x * si + y * co) * si + z * co,
        ],
      ),
  );
  const mesh = buildMesh(soupOf(facets as ReturnType<typeof box>), 1, quiet);
  expect(mesh.pieces.map((p) => [p.closed, Math.sign(p.volume)])).toEqual([
    [true, 1],
    [true, -1],
  ]);
  return { mesh, queries: buildQueries(mesh) };
}
/** Rays from all round that meet the outer wall. */
function* picks(part: ReturnType<typeof hollow>, seed: number, count: number) {
  const random = randomFrom(seed);
  const middle = [0, 1, 2].map((k) => (part.mesh.bounds[0][k] + part.mesh.bounds[1][k]) / 2);
  for (let i = 0; i < count; i++) {
    const d = normalize([random() - 0.5, random() - 0.5, random() - 0.5]);
    const o = d.map((x, k) => middle[k] - 60 * x + 4 * (random() - 0.5)) as unknown as Vec3;
    const hit = part.queries.firstHit(o, d);
    if (hit) yield { ...hit, direction: d, normal: faceNormal(part.mesh, hit.face) };
  }
}

test.each([1e-3, 1e-4, 1e-5])(
  'a place picked from outside on a wall of %d mm stays outside, rounded to 1 µm (seed 41)',
  (t) => {
    const part = hollow(t);
    let inside = 0;
    for (const { point, direction, face, normal } of picks(part, 41, 500)) {
      expect(part.mesh.pieceOf[face]).toBe(0);
      const rounded = point.map((x) => Math.round(x * 1000) / 1000) as unknown as Vec3;
      if (part.mesh.pieceOf[part.queries.nearest(rounded)!.face] === 1) inside++;
      for (const facing of [normal, direction.map((x) => -x) as unknown as Vec3]) {
        const hit = part.queries.nearest(rounded, 0.01, facing)!;
        expect(part.mesh.pieceOf[hit.face]).toBe(0);
        expect(dot(faceNormal(part.mesh, hit.face), facing)).toBeGreaterThan(0);
      }
    }
    // Without a facing many go through; a wall of 1 µm is just thick enough for some not to.
    expect(inside).toBeGreaterThan(t < 1e-3 ? 100 : 0);
  },
);

test('a facing that no face has, near enough, finds none; the nearest of all is as before', () => {
  const part = hollow(1e-4);
  for (const { point, normal, face } of picks(part, 42, 50)) {
    const back = normal.map((x) => -x) as unknown as Vec3;
    expect(part.queries.nearest(point, 1e-6, back)).toBeNull();
    expect(part.mesh.pieceOf[part.queries.nearest(point, 1e-3, back)!.face]).toBe(1);
    expect(part.queries.nearest(point, 1e-6)!.face).toBe(face);
  }
});

test.each([1, 1e-3, 1e-4, 1e-5])(
  'a place as a project keeps it goes back to the wall of %d mm that was picked (seed 43)',
  (t) => {
    const part = hollow(t);
    let [longer, count] = [0, 0];
    for (const { point, face, normal } of picks(part, 43, 500)) {
      const at = roundedPlace(part.queries, point, normal);
      const place = pull(part.queries, part.mesh, JSON.parse(JSON.stringify(at)), { file: 'f', place: 'p' });
      expect(part.mesh.pieceOf[place.surface.face]).toBe(0);
      expect(dot(faceNormal(part.mesh, place.surface.face), normal)).toBeGreaterThan(0.99);
      expect(Math.hypot(...positionOf(part.mesh, place.surface).map((x, k) => x - point[k]))).toBeLessThan(
        1e-4,
      );
      expect(face).toBeLessThan(12);
      count++;
      if (at.some((x) => Math.abs(x * 1e4 - Math.round(x * 1e4)) > 1e-6)) longer++;
    }
    // Four digits where they do: everywhere on walls that can be made.
    if (t > 1e-4) expect(longer).toBe(0);
    if (t < 1e-4) expect(longer).toBeGreaterThan(count / 3);
  },
);
