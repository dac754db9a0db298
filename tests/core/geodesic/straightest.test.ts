import { describe, expect, it } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import { at3, distance, dot, normalize, sub, type Vec3 } from '../../../src/core/base/vec.ts';
import { type StraightLine, straightest } from '../../../src/core/geodesic/straightest.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import {
  barycentric,
  faceNormal,
  positionOf,
  type SurfacePoint,
} from '../../../src/core/mesh/surface-point.ts';
import { gridMesh, meshFrom, placeAt, plate, sphere } from '../helpers/surfaces.ts';

/** A lopsided bump with hills, hollows and a saddle. */
const bump = (i: number, j: number): Vec3 => {
  const [x, y] = [i * 1.3, j];
  return [x, y, 2.5 * Math.sin(0.7 * x) * Math.cos(0.45 * y) + 0.015 * x * y];
};

/** Rotation by a lopsided quaternion, without and with a shift. */
const turned = (p: Vec3): Vec3 => {
  const [x, y, z, w] = [0.18257418583505536, 0.3651483716701107, 0.5477225575051661, 0.7302967433402214];
  const t: Vec3 = [2 * (y * p[2] - z * p[1]), 2 * (z * p[0] - x * p[2]), 2 * (x * p[1] - y * p[0])];
  return [
    p[0] + w * t[0] + y * t[2] - z * t[1],
    p[1] + w * t[1] + z * t[0] - x * t[2],
    p[2] + w * t[2] + x * t[1] - y * t[0],
  ];
};
const moved = (p: Vec3): Vec3 => {
  const q = turned(p);
  return [q[0] + 5, q[1] - 3, q[2] + 11];
};

const randomPoint = (mesh: SurfaceMesh, random: () => number): SurfacePoint => {
  const face = Math.floor(random() * (mesh.triangles.length / 3));
  const [u, v] = [random(), random()].sort((a, b) => a - b);
  return { face, bary: [u, v - u, 1 - v] };
};
const randomDirection = (random: () => number): Vec3 => [random() - 0.5, random() - 0.5, random() - 0.5];
const back = ({ direction: d }: StraightLine): Vec3 => [-d[0], -d[1], -d[2]];

/** Facets around one vertex at the origin, over a closed ring of places. */
const fanOf = (ring: readonly Vec3[]): SurfaceMesh =>
  meshFrom(ring.flatMap((r, i) => [0, 0, 0, ...r, ...ring[(i + 1) % ring.length]]));
const angleBetween = (a: Vec3, b: Vec3): number =>
  2 *
  Math.atan2(
    distance(normalize(a), normalize(b)),
    Math.hypot(...normalize(a).map((x, k) => x + normalize(b)[k])),
  );

const rings: [string, Vec3[]][] = [
  [
    'the corner of a lopsided box',
    [
      [3, 0, 0],
      [0, 4, 0],
      [0, 0, 5],
    ],
  ],
  [
    'a blunt tip',
    [
      [3, 0, -1],
      [1, 4, -1],
      [-5, 1, -1],
      [-1, -3, -1],
    ],
  ],
  [
    'a needle',
    [
      [0.3, 0, -10],
      [0.1, 0.4, -10],
      [-0.2, -0.3, -10],
    ],
  ],
  [
    'a saddle',
    [
      [3, 0, 2],
      [2, 3, -2],
      [-1, 4, 2],
      [-4, 0.5, -3],
      [-2, -3, 2],
      [1, -4, -2],
    ],
  ],
  [
    'a flat place',
    [
      [3, 0, 0],
      [1, 4, 0],
      [-5, 1, 0],
      [-1, -3, 0],
    ],
  ],
];

describe('through a vertex', () => {
  it.each(rings)('%s: the angles left and right are equal (seed 21)', (_, ring) => {
    const mesh = fanOf(ring);
    const random = randomFrom(21);
    const before = [0];
    ring.forEach((r, i) => {
      before.push(before[i] + angleBetween(r, ring[(i + 1) % ring.length]));
    });
    const total = before[ring.length];
    const angleOf = (face: number, p: Vec3): number => {
      const facet = mesh.facetOfFace[face];
      return before[facet] + angleBetween(ring[facet], p);
    };
    for (let k = 0; k < 60; k++) {
      const facet = Math.floor(random() * ring.length);
      const face = mesh.faceOfFacet[facet];
      const t = random();
      const [a, b] = [ring[facet], ring[(facet + 1) % ring.length]];
      const s = 0.05 + 0.9 * random();
      const p: Vec3 = [0, 1, 2].map((i) => s * (a[i] + t * (b[i] - a[i]))) as unknown as Vec3;
      const line = straightest(
        mesh,
        { face, bary: barycentric(mesh, face, p) },
        [-p[0], -p[1], -p[2]],
        Math.hypot(...p) + 0.05,
      );
      expect(line.stopped).toBeNull();
      expect(line.path.faces).toHaveLength(2);
      expect(at3(line.path.points, 1)).toEqual([0, 0, 0]);
      const left = Math.abs(angleOf(line.path.faces[1], at3(line.path.points, 2)) - angleOf(face, p));
      expect(left).toBeCloseTo(total / 2, 9);
    }
  });

  it('from a vertex into the corner of its face the angle is what it is', () => {
    const ring = rings[3][1];
    const mesh = fanOf(ring);
    const face = mesh.faceOfFacet[2];
    const corner = [0, 1, 2].find((i) => mesh.positions[3 * mesh.triangles[3 * face + i]] === 0)!;
    const bary: Vec3 = [0, 0, 0].map((_, i) => (i === corner ? 1 : 0)) as unknown as Vec3;
    const to: Vec3 = [0, 1, 2].map((i) => 0.3 * ring[2][i] + 0.7 * ring[3][i]) as unknown as Vec3;
    const line = straightest(mesh, { face, bary }, to, 1.5);
    expect(
      distance(positionOf(mesh, line.end), normalize(to).map((x) => 1.5 * x) as unknown as Vec3),
    ).toBeLessThan(1e-14);
  });

  it('from a vertex in any direction there is a line, one after the other around it', () => {
    for (const [, ring] of rings) {
      const mesh = fanOf(ring);
      const corner = [0, 1, 2].find((i) => Math.hypot(...at3(mesh.positions, mesh.triangles[i])) === 0)!;
      const start: SurfacePoint = {
        face: 0,
        bary: [0, 1, 2].map((i) => (i === corner ? 1 : 0)) as unknown as Vec3,
      };
      const n = faceNormal(mesh, 0);
      const x = normalize(at3(mesh.positions, mesh.triangles[(corner + 1) % 3]));
      const y: Vec3 = [n[1] * x[2] - n[2] * x[1], n[2] * x[0] - n[0] * x[2], n[0] * x[1] - n[1] * x[0]];
      let facet = 0;
      let changes = 0;
      for (let k = 0; k < 720; k++) {
        const a = ((k + 0.5) * Math.PI) / 360;
        const d: Vec3 = [0, 1, 2].map((i) => Math.cos(a) * x[i] + Math.sin(a) * y[i]) as unknown as Vec3;
        const line = straightest(mesh, start, d, 0.05);
        expect(line.stopped).toBeNull();
        expect(Math.hypot(...positionOf(mesh, line.end))).toBeCloseTo(0.05, 12);
        const now = mesh.facetOfFace[line.end.face];
        if (now !== facet) changes++;
        expect([facet, facet + 1]).toContain(now);
        facet = now;
      }
      expect(changes).toBe(ring.length - 1);
    }
  });
});

describe('in a plane', () => {
  it('the line is the straight line, whatever edges and vertices it crosses (seed 22)', () => {
    const mesh = plate(40, 30, 8, 6);
    const random = randomFrom(22);
    for (let k = 0; k < 200; k++) {
      // Every second one from vertex to vertex, through vertices and along edges.
      const grid = k % 2 === 0;
      const pick = (n: number, step: number) =>
        (grid ? Math.floor(random() * (n - 1) + 1) * step : random() * n * step) - (n * step) / 2;
      const [a, b]: Vec3[] = [0, 0].map(() => [pick(8, 5), pick(6, 5), 0]);
      const length = distance(a, b);
      if (length === 0) continue;
      const line = straightest(mesh, placeAt(mesh, a).surface, sub(b, a), length);
      expect(line.stopped).toBeNull();
      expect(distance(positionOf(mesh, line.end), b)).toBeLessThan(1e-12);
      expect(distance(line.direction, normalize(sub(b, a)))).toBeLessThan(1e-12);
      for (let i = 0; i + 2 < line.path.points.length / 3; i++)
        expect(distance(at3(line.path.points, i), at3(line.path.points, i + 1))).toBeGreaterThan(0);
    }
  });

  it('at the border it stops and says where', () => {
    const mesh = plate(40, 30, 8, 6);
    const line = straightest(mesh, placeAt(mesh, [1, 2, 0]).surface, [3, 1, 0], 500);
    const at: Vec3 = [20, 2 + 19 / 3, 0];
    expect(distance(line.stopped!.at, at)).toBeLessThan(1e-13);
    expect(distance(positionOf(mesh, line.end), at)).toBeLessThan(1e-13);
    expect(line.path.length).toBeCloseTo(Math.hypot(19, 19 / 3), 12);
    expect(distance(line.direction, normalize([3, 1, 0]))).toBeLessThan(1e-13);
  });

  it('at a border vertex it stops, also when it came along the border', () => {
    const mesh = plate(40, 30, 8, 6);
    for (const [from, d, at] of [
      [
        [10, 5, 0],
        [1, 1, 0],
        [20, 15, 0],
      ],
      [
        [12, 15, 0],
        [1, 0, 0],
        [15, 15, 0],
      ],
      [
        [-20, -15, 0],
        [0, 1, 0],
        [-20, -10, 0],
      ],
    ] as [Vec3, Vec3, Vec3][]) {
      const line = straightest(mesh, placeAt(mesh, from).surface, d, 500);
      expect(distance(line.stopped!.at, at)).toBeLessThan(1e-13);
      expect(line.path.length).toBeCloseTo(distance(from, at), 12);
    }
  });

  it('from a border edge or vertex there is a way in and none out', () => {
    const mesh = plate(40, 30, 8, 6);
    for (const [from, d, on] of [
      [[20, 3, 0], [-1, 0.2, 0], true],
      [[20, 3, 0], [1, 0.2, 0], false],
      [[20, 5, 0], [-1, 3, 0], true],
      [[20, 5, 0], [-1, -3, 0], true],
      [[20, 5, 0], [1, 3, 0], false],
      [[20, 15, 0], [-1, -2, 0], true],
      [[20, 15, 0], [-2, -1, 0], true],
      [[20, 15, 0], [1, -2, 0], false],
    ] as [Vec3, Vec3, boolean][]) {
      const line = straightest(mesh, placeAt(mesh, from).surface, d, 4);
      expect(line.stopped === null).toBe(on);
      expect(line.path.length).toBeCloseTo(on ? 4 : 0, 12);
      const to = normalize(d);
      const end: Vec3 = on ? [from[0] + 4 * to[0], from[1] + 4 * to[1], 0] : from;
      expect(distance(positionOf(mesh, line.end), end)).toBeLessThan(1e-13);
    }
  });

  it('a line shorter than its face, and one of no length, end where they should', () => {
    const mesh = plate(40, 30, 8, 6);
    const from = placeAt(mesh, [1.1, 2.7, 0]).surface;
    const short = straightest(mesh, from, [0, 1, 5], 1e-5);
    expect(distance(positionOf(mesh, short.end), [1.1, 2.70001, 0])).toBeLessThan(1e-14);
    expect([...short.path.faces]).toEqual([from.face]);
    for (const at of [
      [1.1, 2.7, 0],
      [5, 5, 0],
      [5, 6, 0],
      [20, 15, 0],
    ] as Vec3[]) {
      const none = straightest(mesh, placeAt(mesh, at).surface, [1, 0.3, 0], 0);
      expect(none.stopped).toBeNull();
      expect(none.path.length).toBe(0);
      expect(none.path.points).toHaveLength(6);
      expect(distance(positionOf(mesh, none.end), at)).toBeLessThan(1e-14);
    }
  });

  it('a length that is none, and a direction straight off the surface, are faults of the caller', () => {
    const mesh = plate(40, 30, 8, 6);
    const from = placeAt(mesh, [1, 2, 0]).surface;
    expect(() => straightest(mesh, from, [1, 0, 0], Number.NaN)).toThrow(/length NaN/);
    expect(() => straightest(mesh, from, [1, 0, 0], -1)).toThrow(/length -1/);
    expect(() => straightest(mesh, from, [0, 0, 1], 1)).toThrow(/no foot/);
    expect(() => straightest(mesh, from, [0, 0, 0], 1)).toThrow(/no foot/);
  });
});

/** Fluted tube of slivers, 10⁴ times as long as wide. */
const slivers = (): SurfaceMesh =>
  gridMesh(300, 2, (i, j) => {
    const a = (2 * Math.PI * (i % 300)) / 300;
    const r = i % 2 === 0 ? 0.3 : 0.302;
    return [r * Math.cos(a), r * Math.sin(a), 70 * j + (j === 1 ? 0.01 * (i % 3) : 0)];
  });

/** With the longest line, as a share of the size: between slivers there is an edge every few µm. */
const surfaces: [string, SurfaceMesh, number][] = [
  ['a bumpy plate', gridMesh(14, 12, bump), 1],
  ['a sphere', sphere(7, 3), 1],
  ['a fluted tube of slivers of aspect 10⁴', slivers(), 0.1],
  [
    'a bumpy plate of 10⁻⁵ mm',
    gridMesh(14, 12, (i, j) => bump(i, j).map((x) => 1e-6 * x) as unknown as Vec3),
    1,
  ],
  [
    'a bumpy plate of 10⁵ mm',
    gridMesh(14, 12, (i, j) => bump(i, j).map((x) => 1e4 * x) as unknown as Vec3),
    1,
  ],
];

describe('theorems', () => {
  it.each(surfaces)(
    'on %s: there and back again is the start, each piece in its face (seed 23)',
    (_, mesh, share) => {
      const random = randomFrom(23);
      const size = distance(mesh.bounds[0] as Vec3, mesh.bounds[1] as Vec3);
      let whole = 0;
      for (let k = 0; k < 100; k++) {
        const from = randomPoint(mesh, random);
        // Every third one from an edge, every fifth from a vertex.
        const start: SurfacePoint =
          k % 5 === 0
            ? { face: from.face, bary: [0, 1, 0] }
            : k % 3 === 0
              ? { face: from.face, bary: [1 - from.bary[1], from.bary[1], 0] }
              : from;
        const line = straightest(mesh, start, randomDirection(random), share * size * random());
        const { path } = line;
        expect([...path.points].every(Number.isFinite)).toBe(true);
        expect(Math.hypot(...line.direction)).toBeCloseTo(1, 12);
        expect(dot(line.direction, faceNormal(mesh, line.end.face))).toBeCloseTo(0, 9);
        expect(path.points.length).toBe(3 * path.faces.length + 3);
        let [outside, off] = [0, 0];
        path.faces.forEach((face, i) => {
          for (const p of [at3(path.points, i), at3(path.points, i + 1)]) {
            const w = barycentric(mesh, face, p);
            outside = Math.max(outside, -Math.min(...w));
            off = Math.max(off, distance(positionOf(mesh, { face, bary: w }), p));
          }
        });
        expect(outside).toBeLessThan(1e-7);
        expect(off).toBeLessThan(1e-12 * size);
        if (line.stopped === null) whole++;
        const home = straightest(mesh, line.end, back(line), path.length);
        expect(distance(positionOf(mesh, home.end), positionOf(mesh, start))).toBeLessThan(1e-9 * size);
      }
      expect(whole).toBeGreaterThan(20);
    },
  );

  it('turning and moving the part moves the line with it (seed 24)', () => {
    const mesh = gridMesh(14, 12, bump);
    const other = gridMesh(14, 12, (i, j) => moved(bump(i, j)));
    const random = randomFrom(24);
    for (let k = 0; k < 60; k++) {
      const from = randomPoint(mesh, random);
      const d = randomDirection(random);
      const length = 20 * random();
      const [a, b] = [straightest(mesh, from, d, length), straightest(other, from, turned(d), length)];
      expect(distance(moved(positionOf(mesh, a.end)), positionOf(other, b.end))).toBeLessThan(1e-10);
      expect(distance(turned(a.direction), b.direction)).toBeLessThan(1e-10);
      expect(b.stopped === null).toBe(a.stopped === null);
    }
  });

  it('a line walked in two parts is the line walked at once (seed 25)', () => {
    const mesh = sphere(7, 3);
    const random = randomFrom(25);
    for (let k = 0; k < 60; k++) {
      const from = randomPoint(mesh, random);
      const d = randomDirection(random);
      const [one, two] = [20 * random(), 20 * random()];
      const first = straightest(mesh, from, d, one);
      const second = straightest(mesh, first.end, first.direction, two);
      const whole = straightest(mesh, from, d, one + two);
      expect(distance(positionOf(mesh, whole.end), positionOf(mesh, second.end))).toBeLessThan(1e-10);
    }
  });

  it('lines aimed at vertices and along edges end, whatever rounding says (seed 26)', () => {
    const random = randomFrom(26);
    for (const [, mesh, share] of surfaces) {
      const size = share * distance(mesh.bounds[0] as Vec3, mesh.bounds[1] as Vec3);
      for (let k = 0; k < 120; k++) {
        const face = Math.floor(random() * (mesh.triangles.length / 3));
        const corner = (i: number): Vec3 => at3(mesh.positions, mesh.triangles[3 * face + (i % 3)]);
        const i = Math.floor(random() * 3);
        const t = random();
        const near = [0, 1e-16, 1e-13, 1e-10, 1e-7][k % 5];
        const bary = [0, 0, 0].map((_, n) =>
          n === i ? 1 - t - near : n === (i + 1) % 3 ? t : near,
        ) as unknown as Vec3;
        const d = sub(corner(i + 1), corner(i)).map(
          (x) => x * (1 + near * (random() - 0.5)),
        ) as unknown as Vec3;
        const line = straightest(mesh, { face, bary }, d, size);
        expect(line.path.points.every(Number.isFinite)).toBe(true);
        if (line.stopped === null) expect(line.path.length / size).toBeCloseTo(1, 9);
        const aimed = straightest(
          mesh,
          { face, bary: [0.2, 0.5, 0.3] },
          sub(corner(i), positionOf(mesh, { face, bary: [0.2, 0.5, 0.3] })),
          size,
        );
        expect(aimed.path.points.every(Number.isFinite)).toBe(true);
        if (aimed.stopped === null) expect(aimed.path.length / size).toBeCloseTo(1, 9);
      }
    }
  });
});
