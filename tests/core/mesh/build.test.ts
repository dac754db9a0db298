import { describe, expect, test } from 'vitest';
import { Cancelled, type InputError } from '../../../src/core/base/news.ts';
import { randomFrom } from '../../../src/core/base/random.ts';
import { quiet } from '../../../src/core/base/run-context.ts';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import { buildMesh, MM_PER_UNIT } from '../../../src/core/mesh/build.ts';
import { checkMesh } from '../../../src/core/mesh/check-mesh.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import { box, type Facet, flip, lumpyRing, moved, soupOf, tetra, twistedStrip } from './parts.ts';

const NOTHING = { welded: 0, degenerate: 0, duplicate: 0, flipped: 0, split: 0, nonManifoldEdges: 0 };

function build(facets: readonly Facet[], scale = 1): SurfaceMesh {
  const mesh = buildMesh(soupOf(facets), scale, quiet);
  expect(checkMesh(mesh)).toEqual([]);
  return mesh;
}

describe('closed forms', () => {
  test('a box of 3 × 4 × 5 has volume 60, area 94, 8 vertices, and is closed', () => {
    const mesh = build(box(3, 4, 5));
    expect(mesh.volume).toBeCloseTo(60, 12);
    expect(mesh.area).toBeCloseTo(94, 12);
    expect(mesh.positions.length / 3).toBe(8);
    expect(mesh.pieces).toHaveLength(1);
    expect(mesh.closed).toBe(true);
    expect(mesh.bounds).toEqual([
      [0, 0, 0],
      [3, 4, 5],
    ]);
    expect(mesh.mended).toEqual(NOTHING);
  });
  test('a tetrahedron with legs 2, 3, 7 has volume 7', () =>
    expect(build(tetra(2, 3, 7)).volume).toBeCloseTo(7, 12));
  test('a tetrahedron far from the origin keeps its volume', () =>
    expect(build(moved(tetra(2, 3, 7), [4096, -8192, 2048])).volume).toBeCloseTo(7, 9));
  test('an inch is 25.4 mm: lengths scale once, areas twice, volumes three times', () => {
    const mesh = build(box(1, 2, 3), MM_PER_UNIT.inch);
    expect(mesh.bounds[1]).toEqual([25.4, 50.8, 3 * 25.4]);
    expect(mesh.area).toBeCloseTo(22 * 25.4 ** 2, 9);
    expect(mesh.volume).toBeCloseTo(6 * 25.4 ** 3, 8);
  });
});

describe('mending', () => {
  test('a part wound inside out is turned, and every facet counted', () => {
    const mesh = build(box(3, 4, 5).map(flip));
    expect(mesh.volume).toBeCloseTo(60, 12);
    expect(mesh.mended).toEqual({ ...NOTHING, flipped: 12 });
  });
  test('three facets turned the wrong way are turned back, the others stay as they are', () => {
    const facets = box(3, 4, 5).map((f, i) => ([2, 5, 11].includes(i) ? flip(f) : f));
    const mesh = build(facets);
    expect(mesh.volume).toBeCloseTo(60, 12);
    expect(mesh.mended).toEqual({ ...NOTHING, flipped: 3 });
  });
  test('facets drawn twice are left out, whichever way the second is wound and starts', () => {
    const b = box(3, 4, 5);
    const again: Facet[] = [[b[4][1], b[4][2], b[4][0]], flip(b[7])];
    const mesh = build([...b, ...again]);
    expect(mesh.volume).toBeCloseTo(60, 12);
    expect(mesh.mended).toEqual({ ...NOTHING, duplicate: 2 });
    expect([...mesh.faceOfFacet.slice(12)]).toEqual([-1, -1]);
  });
  test('facets with two equal corners are left out', () => {
    const b = box(3, 4, 5);
    const mesh = build([[b[0][0], b[0][1], b[0][0]], ...b]);
    expect(mesh.mended).toEqual({ ...NOTHING, degenerate: 1 });
    expect(mesh.faceOfFacet[0]).toBe(-1);
    expect(mesh.facetOfFace[0]).toBe(1);
    expect(mesh.closed).toBe(true);
  });
  test('a facet of three corners on one line leaves no crack: its neighbour is split there', () => {
    // The edge from corner 1 to corner 5 of the box gets a corner in its middle on one side only, and a cap between.
    const b = box(3, 4, 5);
    const [p, q]: Vec3[] = [
      [3, 0, 0],
      [3, 0, 5],
    ];
    const middle: Vec3 = [3, 0, 2];
    const has = (f: Facet, v: Vec3): boolean => f.some((c) => c.join() === v.join());
    const at = b.findIndex((f) => has(f, p) && has(f, q));
    const replaced = (f: Facet, from: Vec3, to: Vec3): Facet =>
      f.map((c) => (c.join() === from.join() ? to : c)) as Facet;
    for (const cap of [[p, middle, q] as Facet, [q, middle, p] as Facet]) {
      const facets = [...b, replaced(b[at], q, middle), cap];
      facets[at] = replaced(b[at], p, middle);
      const mesh = build(facets);
      expect(mesh.closed).toBe(true);
      expect(mesh.volume).toBeCloseTo(60, 12);
      expect(mesh.area).toBeCloseTo(94, 12);
      expect(mesh.triangles.length / 3).toBe(14);
      expect(mesh.mended.degenerate).toBe(1);
      expect(mesh.mended.nonManifoldEdges).toBe(0);
      expect(mesh.faceOfFacet[facets.length - 1]).toBe(-1);
    }
  });
  test('a row of caps in one crack is mended whatever the order of the facets (seeds 1 to 20)', () => {
    // Side A C of the lid has corners on its one side only; caps between, as a fan from A.
    const [a, c, top, low]: Vec3[] = [
      [0, 0, 0],
      [8, 0, 0],
      [3, 5, 1],
      [4, -6, 2],
    ];
    const n = 6;
    const on = (i: number): Vec3 => [(8 * i) / n, 0, 0];
    const facets: Facet[] = [[a, c, top]];
    for (let i = 0; i < n; i++) facets.push([on(i + 1), on(i), low]);
    for (let i = 1; i < n; i++) facets.push([a, on(i), on(i + 1)]);
    for (let seed = 1; seed <= 20; seed++) {
      const random = randomFrom(seed);
      const mixed = facets.map((f) => ({ f, r: random() })).sort((u, v) => u.r - v.r);
      const mesh = build(mixed.map(({ f }) => f));
      expect(mesh.mended.degenerate).toBe(n - 1);
      expect(mesh.triangles.length / 3).toBe(2 * n);
      expect([...mesh.twin].filter((t) => t < 0)).toHaveLength(4);
      expect(mesh.pieces).toHaveLength(1);
    }
  });
  test('–0 and +0 are one place', () => {
    const facets = box(3, 4, 5).map((f, i) =>
      i % 2 ? (f.map((p) => p.map((v) => (v === 0 ? -0 : v))) as unknown as Facet) : f,
    );
    const mesh = build(facets);
    expect(mesh.positions.length / 3).toBe(8);
    expect(mesh.mended).toEqual(NOTHING);
    expect(mesh.positions.some((v) => Object.is(v, -0))).toBe(false);
  });
  test('corners one float32 step apart are joined and counted', () => {
    const step = 2 ** -21;
    const facets = box(3, 4, 5);
    facets[3] = facets[3].map((p) => [p[0] + step, p[1], p[2]] as Vec3) as unknown as Facet;
    const mesh = build(facets);
    expect(mesh.closed).toBe(true);
    expect(mesh.mended.welded).toBe(3);
  });
  test('corners a thousand float32 steps apart stay apart', () => {
    const facets = box(3, 4, 5);
    facets[3] = facets[3].map((p) => [p[0] + 1000 * 2 ** -21, p[1], p[2]] as Vec3) as unknown as Facet;
    const mesh = build(facets);
    expect(mesh.closed).toBe(false);
    expect(mesh.mended.welded).toBe(0);
  });
  test('an open part keeps the winding that most of its facets have', () => {
    const lid = box(3, 4, 5).slice(2);
    const mesh = build(lid.map((f, i) => (i === 1 || i === 4 ? flip(f) : f)));
    expect(mesh.mended.flipped).toBe(2);
    expect(mesh.closed).toBe(false);
    expect(mesh.volume).toBe(0);
    const other = build(lid.map((f, i) => (i === 1 || i === 4 ? f : flip(f))));
    expect(other.mended.flipped).toBe(2);
    expect(other.triangles).not.toEqual(mesh.triangles);
  });
  test('facets of no area are all there is: an error, not an empty part', () => {
    const line: Facet = [
      [0, 0, 0],
      [1, 1, 1],
      [2, 2, 2],
    ];
    try {
      build([line]);
      expect.unreachable();
    } catch (e) {
      expect((e as InputError).code).toBe('no-area');
    }
  });
});

describe('edges', () => {
  test('an edge of three facets is a border in all three and counted once', () => {
    const fin: Facet = [
      [0, 0, 0],
      [3, 0, 0],
      [1, -2, -1],
    ];
    const mesh = build([...box(3, 4, 5), fin]);
    expect(mesh.mended.nonManifoldEdges).toBe(1);
    expect([...mesh.twin].filter((t) => t < 0)).toHaveLength(3 + 2);
    expect(mesh.pieces).toHaveLength(2);
    expect(mesh.closed).toBe(false);
  });
  test('a strip with one half turn is cut at one edge, which is counted', () => {
    const mesh = build(twistedStrip(16, 1));
    expect(mesh.mended.nonManifoldEdges).toBe(1);
    expect(mesh.pieces).toHaveLength(1);
    expect([...mesh.twin].filter((t) => t < 0)).toHaveLength(32 + 2);
  });
  test('a strip with two half turns needs no cut', () => {
    const mesh = build(twistedStrip(16, 2));
    expect(mesh.mended).toEqual(NOTHING);
    expect([...mesh.twin].filter((t) => t < 0)).toHaveLength(32);
  });
  test('two parts that touch in one vertex are two pieces, each with a vertex there', () => {
    const mesh = build([...tetra(2, 3, 7), ...tetra(-2, -3, -7).map(flip)]);
    expect(mesh.pieces.map((p) => p.closed)).toEqual([true, true]);
    expect(mesh.positions.length / 3).toBe(8);
    expect(mesh.volume).toBeCloseTo(14, 12);
  });
  test('a fan of 3000 facets around one vertex is paired', () => {
    const n = 3000;
    const at = (i: number): Vec3 => [
      20 * Math.cos((2 * Math.PI * i) / n),
      20 * Math.sin((2 * Math.PI * i) / n),
      0,
    ];
    const facets: Facet[] = [];
    for (let i = 0; i < n; i++)
      facets.push([[0, 0, 9], at(i), at((i + 1) % n)], [[0, 0, 0], at((i + 1) % n), at(i)]);
    expect(build(facets).closed).toBe(true);
  });
});

describe('pieces inside pieces', () => {
  const cavity = moved(box(1, 2, 3), [1, 1, 1]);
  for (const [name, inner] of [
    ['outward', cavity],
    ['inward', cavity.map(flip)],
  ] as const)
    test(`the wall of a cavity faces inward, though the file has it ${name}`, () => {
      const mesh = build([...box(5, 6, 7), ...inner]);
      expect(mesh.pieces.map((p) => Math.round(p.volume * 1e9) / 1e9)).toEqual([210, -6]);
      expect(mesh.volume).toBeCloseTo(204, 9);
      expect(mesh.closed).toBe(true);
    });
  test('a body inside a cavity faces outward again', () => {
    const mesh = build([
      ...moved(box(0.5, 0.5, 0.5), [1.25, 1.25, 1.25]),
      ...cavity,
      ...box(5, 6, 7).map(flip),
    ]);
    expect(mesh.pieces.map((p) => Math.sign(p.volume))).toEqual([1, -1, 1]);
  });
  test('a body beside another one faces outward, also where one reaches into the other', () => {
    expect(
      build([...box(5, 6, 7), ...moved(box(1, 2, 3), [4.5, 1, 1])]).pieces.map((p) => Math.sign(p.volume)),
    ).toEqual([1, 1]);
    expect(
      build([...lumpyRing(24, 12), ...moved(box(2, 3, 4), [-1, -1, -1])]).pieces.map((p) =>
        Math.sign(p.volume),
      ),
    ).toEqual([1, 1]);
  });
});

describe('theorems', () => {
  test('facet order and starting corner change nothing that can be measured (seed 11)', () => {
    const facets = lumpyRing(20, 14);
    const mesh = build(facets);
    const random = randomFrom(11);
    const shuffled = facets
      .map((f) => ({ f, r: random() }))
      .sort((a, b) => a.r - b.r)
      .map(({ f, r }): Facet => (r < 0.5 ? [f[1], f[2], f[0]] : f));
    const other = build(shuffled);
    expect(other.area).toBeCloseTo(mesh.area, 8);
    expect(other.volume).toBeCloseTo(mesh.volume, 8);
    expect(other.positions.length).toBe(mesh.positions.length);
    expect(other.bounds).toEqual(mesh.bounds);
  });
  test('a closed ring has Euler number 0: vertices - edges + faces', () => {
    const mesh = build(lumpyRing(20, 14));
    expect(mesh.positions.length / 3 - mesh.twin.length / 2 + mesh.triangles.length / 3).toBe(0);
    expect(mesh.volume).toBeGreaterThan(0);
  });
  test('any random turning over of facets is undone (seed 5)', () => {
    const random = randomFrom(5);
    const facets = lumpyRing(20, 14);
    const mesh = build(facets);
    const turn = facets.map(() => random() < 0.4);
    const turned = turn.filter((t) => t).length;
    const other = build(facets.map((f, i) => (turn[i] ? flip(f) : f)));
    expect(other.volume).toBeCloseTo(mesh.volume, 8);
    expect(other.mended.flipped).toBe(turned);
  });
});

test('building can be stopped', () => {
  const stopping = {
    step: () => {
      throw new Cancelled();
    },
  };
  expect(() => buildMesh(soupOf(box(1, 2, 3)), 1, stopping)).toThrow(Cancelled);
});

describe('checkMesh finds what is broken', () => {
  const broken = (change: (m: { -readonly [K in keyof SurfaceMesh]: SurfaceMesh[K] }) => void): string[] => {
    const mesh = build(box(3, 4, 5));
    const copy = {
      ...mesh,
      triangles: mesh.triangles.slice(),
      twin: mesh.twin.slice(),
      positions: mesh.positions.slice(),
    };
    change(copy);
    return checkMesh(copy);
  };
  test('a twin that is not mutual', () =>
    expect(broken((m) => (m.twin[4] = -1)).join()).toMatch(/twin of its twin/));
  test('a face wound against its neighbours', () =>
    expect(broken((m) => m.triangles.set([m.triangles[0], m.triangles[2], m.triangles[1]])).join()).toMatch(
      /opposite ways/,
    ));
  test('a vertex number out of range', () =>
    expect(broken((m) => (m.triangles[7] = 99)).join()).toMatch(/not there/));
  test('two equal corners', () =>
    expect(broken((m) => (m.triangles[0] = m.triangles[1])).join()).toMatch(/equal corners/));
  test('a coordinate that is no number', () =>
    expect(broken((m) => (m.positions[5] = Number.NaN)).join()).toMatch(/not finite/));
  test('a piece that says open', () =>
    expect(broken((m) => (m.pieces = [{ ...m.pieces[0], closed: false, volume: 0 }])).join()).toMatch(
      /says open/,
    ));
});
