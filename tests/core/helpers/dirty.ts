/** Meshes as bad as files can be, one a seed: what every query over the surface must live through. */
import { randomFrom } from '../../../src/core/base/random.ts';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import { barycentric, positionOf, type SurfacePoint } from '../../../src/core/mesh/surface-point.ts';
import { meshFrom } from './surfaces.ts';

type Facet = [Vec3, Vec3, Vec3];

export interface Dirty {
  seed: number;
  mesh: SurfaceMesh;
  /** Size of the part, mm. */
  size: number;
  random: () => number;
  /** What the mesh was made of, for the message of a failing test. */
  made: string;
}

/** Base shape by the seed, then one dirt or several on top, then a scale. */
export function dirtyMesh(seed: number): Dirty {
  const random = randomFrom(seed);
  const [shape, make] = SHAPES[seed % SHAPES.length];
  let facets = make(random);
  const dirts = DIRTS.filter(() => random() < 0.35);
  for (const [, soil] of dirts) facets = soil(facets, random);
  const scale = [1, 1, 1e-6, 1e4][Math.floor(random() * 4)];
  const mesh = meshFrom(facets.flat(2).map((x) => x * scale));
  const [lo, hi] = mesh.bounds;
  return {
    seed,
    mesh,
    size: Math.hypot(hi[0] - lo[0], hi[1] - lo[1], hi[2] - lo[2]),
    random,
    made: `${shape}${dirts.map(([name]) => `, ${name}`).join('')}, × ${scale}`,
  };
}

/** A place inside a face, on its rim or at a corner. */
export function anyPlace(mesh: SurfaceMesh, random: () => number): SurfacePoint {
  const face = Math.floor(random() * (mesh.triangles.length / 3));
  const [u, v] = [random(), random()].sort((a, b) => a - b);
  const kind = random();
  const i = Math.floor(random() * 3);
  const bary: [number, number, number] = [u, v - u, 1 - v];
  if (kind < 0.15) bary[i] = bary[(i + 1) % 3] = 0;
  else if (kind < 0.3) bary[i] = 0;
  const sum = bary[0] + bary[1] + bary[2];
  return { face, bary: [bary[0] / sum, bary[1] / sum, bary[2] / sum] };
}

/** How far a place is from a face, mm. */
export function offFace(mesh: SurfaceMesh, face: number, p: Vec3): number {
  const w = barycentric(mesh, face, p);
  const far = (q: Vec3): number => Math.hypot(p[0] - q[0], p[1] - q[1], p[2] - q[2]);
  if (w[0] >= 0 && w[1] >= 0 && w[2] >= 0) return far(positionOf(mesh, { face, bary: w }));
  const corner = (i: number): Vec3 =>
    positionOf(mesh, { face, bary: [0, 1, 2].map((k) => (k === i ? 1 : 0)) as unknown as Vec3 });
  return Math.min(
    ...[0, 1, 2].map((i) => {
      const [a, b] = [corner(i), corner((i + 1) % 3)];
      const d: Vec3 = [b[0] - a[0], b[1] - a[1], b[2] - a[2]];
      const t =
        ((p[0] - a[0]) * d[0] + (p[1] - a[1]) * d[1] + (p[2] - a[2]) * d[2]) /
        (d[0] ** 2 + d[1] ** 2 + d[2] ** 2);
      const s = Math.max(0, Math.min(1, t));
      return far([a[0] + s * d[0], a[1] + s * d[1], a[2] + s * d[2]]);
    }),
  );
}

const SHAPES: [string, (random: () => number) => Facet[]][] = [
  ['rough sheet', (r) => sheet(r, 1, (x, y) => 3 * Math.sin(0.7 * x) * Math.cos(0.5 * y))],
  ['torn sheet', (r) => sheet(r, 1, () => 2 * r())],
  ['creased sheet', (r) => sheet(r, 1, (x, y) => Math.abs(y - 4) * 2 + (x > 4 ? 3 * (x - 4) : 0))],
  ['sheet of slivers', (r) => sheet(r, 1e-4, (x) => 0.3 * Math.sin(x))],
  ['tube of slivers', (r) => tubeOf(60 + Math.floor(60 * r()), 0.05, 40, r)],
  ['thin wall', (r) => thinWall(r)],
  ['lumpy ball', (r) => ball(r, 0.25)],
  [
    'needle',
    (r) => ball(r, 0.1).map((f) => f.map(([x, y, z]): Vec3 => [x / 300, y / 300, z * 3]) as unknown as Facet),
  ],
];

/** Grid over 10 by 10 mm, its rows squeezed together by up to `squeeze`. */
function sheet(random: () => number, squeeze: number, height: (x: number, y: number) => number): Facet[] {
  const n = 4 + Math.floor(random() * 5);
  const at = Array.from({ length: n + 1 }, (_, i) =>
    Array.from({ length: n + 1 }, (_, j): Vec3 => {
      const x = (10 * i) / n + (i > 0 && i < n ? ((random() - 0.5) * 2.4) / n : 0);
      // Every second row a sliver.
      const y = squeeze < 1 ? 10 * (Math.ceil(j / 2) / n + Math.floor(j / 2) * squeeze) : (10 * j) / n;
      return [x, y, height(x, y)];
    }),
  );
  return cells(n, n, (i, j) => at[i][j], random);
}

function tubeOf(sides: number, r: number, height: number, random: () => number): Facet[] {
  return cells(
    sides,
    2,
    (i, j) => {
      const a = (2 * Math.PI * (i % sides)) / sides;
      return [r * Math.cos(a), r * Math.sin(a), (height * j) / 2 + (j === 1 ? 0.1 * Math.sin(3 * a) : 0)];
    },
    random,
  );
}

/** Closed plate with a wall from 10⁻⁴ to 10⁻² mm, bent. */
function thinWall(random: () => number): Facet[] {
  const n = 3 + Math.floor(random() * 4);
  const wall = 10 ** (-4 + 2 * random());
  const at =
    (up: number) =>
    (i: number, j: number): Vec3 => {
      const [x, y] = [(10 * i) / n, (7 * j) / n];
      return [x, y, 0.02 * x * y + 0.3 * Math.sin(x) + up];
    };
  const [top, under] = [at(wall), at(0)];
  const out = [
    ...cells(n, n, top, random),
    ...cells(n, n, under, random).map(([a, b, c]): Facet => [a, c, b]),
  ];
  for (let k = 0; k < n; k++)
    for (const [a, b] of [
      [
        [k, 0],
        [k + 1, 0],
      ],
      [
        [n, k],
        [n, k + 1],
      ],
      [
        [k + 1, n],
        [k, n],
      ],
      [
        [0, k + 1],
        [0, k],
      ],
    ]) {
      const [p, q, s, t] = [under(a[0], a[1]), under(b[0], b[1]), top(b[0], b[1]), top(a[0], a[1])];
      out.push([p, q, s], [p, s, t]);
    }
  return out;
}

function ball(random: () => number, lumps: number): Facet[] {
  const [n, m] = [6 + Math.floor(random() * 6), 4 + Math.floor(random() * 4)];
  const grid = Array.from({ length: n }, () =>
    Array.from({ length: m + 1 }, () => 5 * (1 + lumps * (random() - 0.5))),
  );
  const at = (i: number, j: number): Vec3 => {
    const [u, v] = [(2 * Math.PI * (i % n)) / n, (Math.PI * j) / m];
    const r = j === 0 || j === m ? 5 : grid[i % n][j];
    // At the poles all columns meet in one place.
    const s = j === 0 || j === m ? 0 : r * Math.sin(v);
    return [s * Math.cos(u), s * Math.sin(u), -r * Math.cos(v)];
  };
  return cells(n, m, at, random);
}

function cells(n: number, m: number, at: (i: number, j: number) => Vec3, random: () => number): Facet[] {
  const out: Facet[] = [];
  for (let i = 0; i < n; i++)
    for (let j = 0; j < m; j++) {
      const [a, b, c, d] = [at(i, j), at(i + 1, j), at(i + 1, j + 1), at(i, j + 1)];
      if (random() < 0.5) out.push([a, b, c], [a, c, d]);
      else out.push([a, b, d], [b, c, d]);
    }
  return out;
}

const DIRTS: [string, (facets: Facet[], random: () => number) => Facet[]][] = [
  ['holes', (f, r) => f.filter(() => r() > 0.08)],
  ['turned facets', (f, r) => f.map(([a, b, c]): Facet => (r() < 0.1 ? [a, c, b] : [a, b, c]))],
  [
    'double facets',
    (f, r) =>
      f.flatMap(([a, b, c]): Facet[] =>
        r() < 0.08
          ? [
              [a, b, c],
              [b, a, c],
            ]
          : [[a, b, c]],
      ),
  ],
  [
    'fins on edges of three',
    (f, r) =>
      f.flatMap(([a, b, c]): Facet[] =>
        r() < 0.06
          ? [
              [a, b, c],
              [a, b, [a[0] + 0.3, a[1] - 0.2, a[2] + 2]],
            ]
          : [[a, b, c]],
      ),
  ],
  ['T-junctions', (f, r) => f.flatMap((x) => (r() < 0.15 ? studded(x, r, 0) : [x]))],
  ['facets with hardly a height', (f, r) => f.flatMap((x) => (r() < 0.08 ? studded(x, r, 1e-5) : [x]))],
  ['needle facets', (f, r) => f.flatMap((x) => (r() < 0.08 ? needled(x, r) : [x]))],
  [
    'corners a hair apart',
    (f, r) => f.map((x) => x.map((p) => p.map((v) => v + 1e-7 * (r() - 0.5))) as unknown as Facet),
  ],
  [
    'several shells',
    (f) => [
      ...f,
      ...f.map((x) => x.map(([p, q, s]): Vec3 => [p + 3, q + 25, s - 1]) as unknown as Facet),
      ...f
        .slice(0, 40)
        .map(
          (x) => x.map(([p, q, s]): Vec3 => [p * 0.3 + 2, q * 0.3 + 3, s * 0.3 + 0.5]) as unknown as Facet,
        ),
    ],
  ],
];

/** A facet cut from a place on one side to the corner across; the neighbour knows nothing of it. */
function studded([a, b, c]: Facet, random: () => number, lift: number): Facet[] {
  const t = 0.1 + 0.8 * random();
  const v: Vec3 = [0, 1, 2].map((k) => a[k] + t * (b[k] - a[k]) + lift * (random() - 0.5)) as unknown as Vec3;
  // Lifted: with the facet between that makes up for it.
  return lift === 0
    ? [
        [a, v, c],
        [v, b, c],
      ]
    : [
        [a, v, c],
        [v, b, c],
        [a, b, v],
      ];
}

/** A facet parted by a corner very near one of its own. */
function needled([a, b, c]: Facet, random: () => number): Facet[] {
  const t = 10 ** (-3 - 2 * random());
  const v: Vec3 = [0, 1, 2].map((k) => a[k] + t * (b[k] + c[k] - 2 * a[k])) as unknown as Vec3;
  return [
    [a, b, v],
    [b, c, v],
    [c, a, v],
  ];
}
