import { describe, expect, test } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import { quiet } from '../../../src/core/base/run-context.ts';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import { buildMesh } from '../../../src/core/mesh/build.ts';
import { checkMesh } from '../../../src/core/mesh/check-mesh.ts';
import { cornersAlong, cornerTree } from '../../../src/core/mesh/corner-tree.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import { box, type Facet, flip, lumpyRing, moved, soupOf } from './parts.ts';

function build(facets: readonly Facet[]): SurfaceMesh {
  const mesh = buildMesh(soupOf(facets), 1, quiet);
  expect(checkMesh(mesh)).toEqual([]);
  return mesh;
}
const borders = (mesh: SurfaceMesh): number => [...mesh.twin].filter((t) => t < 0).length;
const round = (p: readonly number[]): Vec3 => p.map(Math.fround) as unknown as Vec3;
const between = (a: Vec3, b: Vec3, t: number): Vec3 => round(a.map((x, k) => x + t * (b[k] - x)));

/** A facet with further corners on its sides, at shares along them, triangulated without regard for the neighbours. */
function studded([a, b, c]: Facet, shares: readonly (readonly number[])[]): Facet[] {
  const ring = [a, ...on(a, b, shares[0]), b, ...on(b, c, shares[1]), c, ...on(c, a, shares[2])];
  const middle = round([0, 1, 2].map((k) => (a[k] + b[k] + c[k]) / 3));
  return ring.map((p, i): Facet => [middle, p, ring[(i + 1) % ring.length]]);
}
const on = (a: Vec3, b: Vec3, shares: readonly number[]): Vec3[] => shares.map((t) => between(a, b, t));

describe('a corner of one facet on the side of another', () => {
  const facets = box(3, 4, 5);

  test('leaves no crack: the side is split there, and counted', () => {
    const mesh = build([...studded(facets[4], [[0.3], [], []]), ...facets.filter((_, i) => i !== 4)]);
    expect(mesh.closed).toBe(true);
    expect(mesh.volume).toBeCloseTo(60, 5);
    expect(mesh.area).toBeCloseTo(94, 5);
    expect(mesh.triangles.length / 3).toBe(4 + 11 + 1);
    expect(mesh.mended).toEqual({
      welded: 0,
      degenerate: 0,
      duplicate: 0,
      flipped: 0,
      split: 1,
      nonManifoldEdges: 0,
    });
  });

  test('a facet that became several names the first of them, and each of them the facet', () => {
    const mesh = build([
      ...facets.filter((_, i) => i !== 4),
      ...studded(facets[4], [[0.2, 0.5, 0.9], [0.5], [0.5]]),
    ]);
    expect(mesh.closed).toBe(true);
    expect(mesh.mended.split).toBe(3);
    expect(mesh.triangles.length / 3).toBe(11 + 8 + 5);
    const times = new Map<number, number[]>();
    mesh.facetOfFace.forEach((facet, face) => {
      times.set(facet, [...(times.get(facet) ?? []), face]);
    });
    expect([...times.values()].map((f) => f.length).sort()).toEqual([...new Array(16).fill(1), 2, 2, 4]);
    for (const [facet, faces] of times) expect(mesh.faceOfFacet[facet]).toBe(Math.min(...faces));
  });

  test('corners on both sides of one edge, none of them the same, are all used', () => {
    const [f, g] = [facets[4], facets[5]];
    const shared = f.filter((p) => g.some((q) => q.join() === p.join()));
    const sharesOf = (facet: Facet, at: number[]) =>
      facet.map((p, i) => {
        const q = facet[(i + 1) % 3];
        if (![p, q].every((v) => shared.some((s) => s.join() === v.join()))) return [];
        return p.join() === shared[0].join() ? at : at.map((t) => 1 - t).reverse();
      });
    const mesh = build([
      ...facets.filter((_, i) => i !== 4 && i !== 5),
      ...studded(f, sharesOf(f, [0.11, 0.4, 0.8])),
      ...studded(g, sharesOf(g, [0.3, 0.35, 0.61, 0.9])),
    ]);
    expect(mesh.closed).toBe(true);
    expect(mesh.volume).toBeCloseTo(60, 5);
    // Of 4 + 5 stretches those from 0 to 0.11, 0.3 to 0.35 and 0.9 to 1 hold no corner of the other side.
    expect(mesh.mended.split).toBe(3 + 3);
  });

  test('a facet with corners on all sides, and its neighbours wound any way, closes', () => {
    const studs = facets.flatMap((f, i) => (i % 3 === 0 ? studded(f, [[0.5, 0.77], [0.2], [0.6]]) : [f]));
    const mesh = build(studs.map((f, i) => (i % 4 === 1 ? flip(f) : f)));
    expect(mesh.closed).toBe(true);
    expect(mesh.volume).toBeCloseTo(60, 5);
  });

  test('a corner a thousand float32 steps beside the edge is beside it, and the crack stays', () => {
    const off = 1000 * 2 ** -22;
    const studs = studded(facets[4], [[0.3], [], []]);
    const stud = between(facets[4][0], facets[4][1], 0.3);
    const aside: Vec3 = [stud[0], stud[1] - off, stud[2]];
    const mesh = build([
      ...studs.map((f) => f.map((p) => (p.join() === stud.join() ? aside : p)) as Facet),
      ...facets.filter((_, i) => i !== 4),
    ]);
    expect(mesh.closed).toBe(false);
    expect(mesh.mended.split).toBe(0);
    expect(borders(mesh)).toBe(3);
  });

  test('nothing is split where the surface merely ends', () => {
    const plates = [...facets.slice(0, 2), ...moved(facets.slice(0, 2), [0, 4, 0.5])];
    const mesh = build(plates);
    expect(mesh.mended.split).toBe(0);
    expect(borders(mesh)).toBe(8);
  });
});

describe('theorems', () => {
  for (const [name, far] of [
    ['at the origin', [0, 0, 0]],
    ['far from it', [900, -700, 300]],
  ] as [string, Vec3][])
    test(`a closed ring ${name} stays closed, whatever corners lie on its sides in whatever order (seeds 1 to 12)`, () => {
      const ring = moved(lumpyRing(14, 9), far).map((f) => f.map(round) as unknown as Facet);
      const whole = build(ring);
      for (let seed = 1; seed <= 12; seed++) {
        const random = randomFrom(seed);
        const shares = () =>
          Array.from({ length: Math.floor(random() * 3) }, () => 0.05 + 0.9 * random()).sort((a, b) => a - b);
        const facets = ring
          .flatMap((f) => (random() < 0.4 ? studded(f, [shares(), shares(), shares()]) : [f]))
          .map((f) => ({ f: random() < 0.1 ? flip(f) : f, r: random() }))
          .sort((a, b) => a.r - b.r)
          .map(({ f }) => f);
        const mesh = build(facets);
        expect(mesh.mended.split).toBeGreaterThan(50);
        expect(mesh.closed).toBe(true);
        expect(mesh.pieces).toHaveLength(1);
        expect(mesh.mended.nonManifoldEdges).toBe(0);
        expect(mesh.volume / whole.volume).toBeCloseTo(1, 4);
        expect(mesh.area / whole.area).toBeCloseTo(1, 4);
        expect(build(facets)).toEqual(mesh);
      }
    });

  test('any heap of facets on a coarse grid keeps every rule of a mesh (seeds 1 to 400)', () => {
    let split = 0;
    for (let seed = 1; seed <= 400; seed++) {
      const random = randomFrom(seed);
      const size = 2 + Math.floor(random() * 4);
      const place = (): Vec3 =>
        [0, 1, 2].map((k) => Math.floor(random() * (k === 2 && seed % 2 ? 1 : size))) as unknown as Vec3;
      const facets = Array.from(
        { length: 3 + Math.floor(random() * 20) },
        (): Facet => [place(), place(), place()],
      );
      facets.push([
        [0, 0, 0],
        [7, 0, 0],
        [3, 9, 1],
      ]);
      split += build(facets).mended.split;
    }
    expect(split).toBeGreaterThan(400);
  });

  test('a third facet is never put on an edge that two share, and no facet made twice', () => {
    const [a, b, c, v]: Vec3[] = [
      [0, 0, 0],
      [8, 0, 0],
      [3, 5, 0],
      [5, 0, 0],
    ];
    // The halves lie there already, over the whole facet and turned over: three sides in common.
    const lens = build([
      [a, b, c],
      [v, a, c],
      [b, v, c],
    ]);
    expect(lens.mended).toMatchObject({ split: 0, nonManifoldEdges: 0 });
    // A fin on an edge of three facets with a corner on it.
    const fin = build([
      [a, b, c],
      [b, a, [3, -5, 0]],
      [a, b, [3, 0, 5]],
      [a, v, [2, -1, -4]],
    ]);
    expect(fin.mended).toMatchObject({ split: 0, nonManifoldEdges: 1 });
    // Two share the edge from the corner on: the side of the third over it stays whole.
    const third = build([
      [a, v, [2, -6, 1]],
      [v, a, [2, 6, 2]],
      [a, b, [4, 0, 6]],
    ]);
    expect(third.mended).toMatchObject({ split: 0, nonManifoldEdges: 0 });
    expect(borders(third)).toBe(7);
  });
});

test('corners along a segment are those that a look at every corner finds, in order (seed 31)', () => {
  const random = randomFrom(31);
  const n = 3000;
  // Clusters, planes and lines: where a tree could go wrong.
  const x = Float64Array.from({ length: 3 * n }, (_, i) => {
    const kind = Math.floor(i / 3) % 4;
    if (kind === 1 && i % 3 === 2) return 4;
    if (kind === 2) return 5 + 0.01 * random();
    if (kind === 3) return Math.floor(random() * 11);
    return 10 * random();
  });
  const asked = Uint32Array.from({ length: n / 2 }, (_, i) => 2 * i);
  const tree = cornerTree(x, asked);
  let found = 0;
  for (let k = 0; k < 400; k++) {
    const [a, b] = [Math.floor(random() * n), Math.floor(random() * n)];
    const d = [0, 1, 2].map((i) => x[3 * b + i] - x[3 * a + i]);
    const length = Math.hypot(...d);
    if (length === 0) continue;
    const distance = [1e-9, 0.02, 0.5][k % 3];
    const slow = [...asked]
      .map((v) => {
        const q = [0, 1, 2].map((i) => x[3 * v + i] - x[3 * a + i]);
        const along = (q[0] * d[0] + q[1] * d[1] + q[2] * d[2]) / length;
        return { v, along, off: Math.hypot(...q.map((c, i) => c - (along / length) * d[i])) };
      })
      .filter(({ along, off }) => along > distance && length - along > distance && off <= distance)
      .sort((p, q) => p.along - q.along || p.v - q.v)
      .map(({ v }) => v);
    found += slow.length;
    expect(cornersAlong(tree, a, b, distance)).toEqual(slow);
  }
  expect(found).toBeGreaterThan(1000);
});
