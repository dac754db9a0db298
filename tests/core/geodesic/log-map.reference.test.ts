import { describe, expect, it } from 'vitest';
import { distance, type Vec3 } from '../../../src/core/base/vec.ts';
import { type LogMap, logMap } from '../../../src/core/geodesic/log-map.ts';
import { WindowSolver } from '../../../src/core/geodesic/windows.ts';
import { buildQueries } from '../../../src/core/mesh/queries.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import { barycentric } from '../../../src/core/mesh/surface-point.ts';
import { source } from '../../reference/sources.ts';
import { gridMesh, placeAt, plate, sphere, tube } from '../helpers/surfaces.ts';

type Flat = [number, number];
const rad = (deg: number): number => (deg * Math.PI) / 180;

/** Largest miss of the map at places of the surface, against their flat coordinates. */
function worst(map: LogMap, mesh: SurfaceMesh, places: readonly { p: Vec3; flat: Flat }[]): number {
  const queries = buildQueries(mesh);
  return Math.max(
    ...places.map(({ p, flat }) => {
      const hit = queries.nearest(p)!;
      const at = map.at(hit.face, hit.point);
      return at ? Math.hypot(at.u - flat[0], at.v - flat[1]) : Infinity;
    }),
  );
}

/** Places on a spiral that fills a disc of the radius, a golden angle apart. */
const disc = (radius: number, n: number): Flat[] =>
  Array.from({ length: n }, (_, i) => {
    const [r, a] = [radius * Math.sqrt((i + 0.5) / n), i * Math.PI * (3 - Math.sqrt(5))];
    return [r * Math.cos(a), r * Math.sin(a)];
  });

describe(`${source('do-carmo')}: developable surfaces of long slivers unroll`, () => {
  const RADIUS = 9;
  /** Relative to the radius: what the windows' own cracks and rounding leave. */
  const EXACT = 1e-6;

  it.each([
    [720, 1e-3],
    [96, 1e-3],
  ])('a cylinder of %d sides', (sides, tolerance) => {
    const r = 15;
    const mesh = tube(r, 60, sides, 1);
    const step = (2 * Math.PI) / sides;
    const flatSide = 2 * r * Math.sin(step / 2);
    /** Place of the prism at a length round it, counted from side 0, and a height. */
    const onPrism = (s: number, z: number): Vec3 => {
      const i = Math.floor(s / flatSide);
      const t = s / flatSide - i;
      const [a, b] = [i * step, (i + 1) * step];
      return [
        r * ((1 - t) * Math.cos(a) + t * Math.cos(b)),
        r * ((1 - t) * Math.sin(a) + t * Math.sin(b)),
        z,
      ];
    };
    const [s0, z0] = [14.137, 26.3];
    const centre = placeAt(mesh, onPrism(s0, z0));
    const a0 = (Math.floor(s0 / flatSide) + 0.5) * step;
    const map = logMap(new WindowSolver(mesh), centre.surface, RADIUS, [-Math.sin(a0), Math.cos(a0), 0]);
    const flats = disc(RADIUS * 0.999, 400);
    const prism = flats.map(([u, v]) => ({ p: onPrism(s0 + u, z0 + v), flat: [u, v] as Flat }));
    expect(worst(map, mesh, prism) / RADIUS).toBeLessThan(EXACT);
    const round = flats.map(([u, v]) => {
      const flat: Flat = [0.99 * u, 0.99 * v];
      const a = (s0 / flatSide) * step + flat[0] / r;
      return { p: [r * Math.cos(a), r * Math.sin(a), z0 + flat[1]] as Vec3, flat };
    });
    expect(worst(map, mesh, round) / RADIUS).toBeLessThan(tolerance);
  });

  it('a cone of 700 slivers', () => {
    // Half-angle 30°: unrolled, an angle about the axis becomes half of it about the tip.
    const [low, high, beta] = [12, 50, rad(30)];
    const onCone = (l: number, phi: number): Vec3 => [
      l * Math.sin(beta) * Math.cos(phi),
      l * Math.sin(beta) * Math.sin(phi),
      -l * Math.cos(beta),
    ];
    const sides = 700;
    const mesh = gridMesh(sides, 1, (i, j) =>
      onCone(j === 0 ? high : low, (2 * Math.PI * (i % sides)) / sides),
    );
    const [l0, phi0] = [29, 1.234];
    const centre = placeAt(mesh, onCone(l0, phi0));
    const map = logMap(new WindowSolver(mesh), centre.surface, RADIUS, [-Math.sin(phi0), Math.cos(phi0), 0]);
    const places = disc(RADIUS * 0.99, 400).map((flat) => {
      // u runs round the cone, v towards the tip: counter-clockwise seen from outside.
      const [x, y] = [l0 - flat[1], flat[0]];
      const l = Math.hypot(x, y);
      return { p: onCone(l, phi0 + Math.atan2(y, x) / Math.sin(beta)), flat };
    });
    expect(worst(map, mesh, places) / RADIUS).toBeLessThan(1e-3);
  });

  it('a plate bent along a parabola, by arc length', () => {
    // y = x² / 20: arc length (x √(1 + x²/100) + 10 asinh(x/10)) / 2.
    const arc = (x: number): number => (x * Math.sqrt(1 + x * x * 0.01) + 10 * Math.asinh(x / 10)) / 2;
    const n = 600;
    const mesh = gridMesh(1, n, (i, j) => {
      const x = (32 * j) / n - 13;
      return [x, i === 0 ? 40 : -20, -(x * x) / 20];
    });
    const [x0, y0] = [2.7, 11];
    const centre = placeAt(mesh, [x0, y0, -(x0 * x0) / 20]);
    const slope = Math.hypot(1, x0 / 10);
    const map = logMap(new WindowSolver(mesh), centre.surface, RADIUS, [1 / slope, 0, -x0 / 10 / slope]);
    const places = Array.from({ length: 300 }, (_, i) => {
      const x = x0 - 6 + (12 * ((i * 37) % 300)) / 300;
      const v = -5 + (10 * i) / 300;
      return { p: [x, y0 + v, -(x * x) / 20] as Vec3, flat: [arc(x) - arc(x0), v] as Flat };
    });
    expect(worst(map, mesh, places) / RADIUS).toBeLessThan(1e-3);
  });

  it('a flat of slivers of aspect 10⁴', () => {
    const mesh = plate(60, 60, 10000, 1, 0.3);
    const at = ([u, v]: Flat): Vec3 => [(3.3 + u) * Math.cos(0.3), -4.1 + v, -(3.3 + u) * Math.sin(0.3)];
    const patch = 0.6;
    const map = logMap(new WindowSolver(mesh), placeAt(mesh, at([0, 0])).surface, patch, [
      Math.cos(0.3),
      0,
      -Math.sin(0.3),
    ]);
    const places = disc(patch * 0.999, 200).map((flat) => ({ p: at(flat), flat }));
    expect(worst(map, mesh, places) / patch).toBeLessThan(EXACT);
  });
});

const R = 30;
/** A centre on the sphere off every symmetry, and unit tangents there: `north` is a quarter turn on from `east`. */
const n: Vec3 = [0.48, 0.6, 0.64];
const east: Vec3 = [-0.6 / Math.hypot(0.48, 0.6), 0.48 / Math.hypot(0.48, 0.6), 0];
const north: Vec3 = [
  n[1] * east[2] - n[2] * east[1],
  n[2] * east[0] - n[0] * east[2],
  n[0] * east[1] - n[1] * east[0],
];
const onSphere = ([u, v]: Flat): Vec3 => {
  const r = Math.hypot(u, v);
  const [c, s] = [R * Math.cos(r / R), r > 0 ? (R * Math.sin(r / R)) / r : 1];
  return [0, 1, 2].map((k) => c * n[k] + s * (u * east[k] + v * north[k])) as unknown as Vec3;
};
const sphereMap = (mesh: SurfaceMesh, angle: number) => {
  const map = logMap(new WindowSolver(mesh), placeAt(mesh, onSphere([0, 0])).surface, R * angle * 1.01, east);
  const queries = buildQueries(mesh);
  return (p: Vec3) => {
    const hit = queries.nearest(p)!;
    return map.at(hit.face, hit.point)!;
  };
};

describe(`${source('do-carmo')}: great circles`, () => {
  it('on a sphere radii come nearer by the square of the edge over three refinements, places by its power 1.5', () => {
    const angle = rad(50);
    const flats = disc(R * angle, 500);
    const errors = [3, 4, 5, 6].map((level) => {
      const map = sphereMap(sphere(R, level), angle);
      let radius = 0;
      let square = 0;
      for (const flat of flats) {
        const at = map(onSphere(flat));
        radius = Math.max(radius, Math.abs(at.radius - Math.hypot(...flat)));
        square += (at.u - flat[0]) ** 2 + (at.v - flat[1]) ** 2;
      }
      return { radius, place: Math.sqrt(square / flats.length) };
    });
    for (let i = 1; i < 4; i++) expect(errors[i - 1].radius / errors[i].radius).toBeGreaterThan(3.7);
    // Curvature sits at the vertices: how many of them a way passes on either side is a matter of the mesh, so that
    // directions keep an error of the order of a vertex's curvature times the root of their number.
    expect(errors[0].place / errors[3].place).toBeGreaterThan(2 ** (1.5 * 3));
    expect(errors[3].radius / (R * angle)).toBeLessThan(2e-4);
    expect(errors[3].place / (R * angle)).toBeLessThan(1e-3);
  });
});

describe(source('milnor-1969'), () => {
  /** Fine grid over a cap, laid out in the stereographic picture a little off the cap's centre. */
  const cap = (alpha: number): SurfaceMesh => {
    const half = Math.tan(alpha / 2) * 1.15;
    return gridMesh(120, 120, (i, j) => {
      const [x, y] = [half * (i / 60 - 1.02), half * (j / 60 - 0.97)];
      const stretch = (2 * R * Math.atan(Math.hypot(x, y))) / Math.hypot(x, y);
      return onSphere([x * stretch, y * stretch]);
    });
  };
  it.each([
    [10, 0.005082122, 0.00506923],
    [20, 0.020390954, 0.020184464],
    [30, 0.046117597, 0.045070341],
    [45, 0.105009115, 0.099683684],
    [60, 0.189958633, 0.173006657],
  ])('a cap of %d°: the distortion of the log map is the least there is', (alpha, distortion, stretch) => {
    const map = sphereMap(cap(rad(alpha)), rad(alpha));
    // Eight rings of 24 places each, and the centre. All pairs.
    const flats: Flat[] = [[0, 0]];
    for (let ring = 1; ring <= 8; ring++)
      for (let k = 0; k < 24; k++) {
        const [r, a] = [(R * rad(alpha) * ring) / 8, rad(15 * k + 4 * ring)];
        flats.push([r * Math.cos(a), r * Math.sin(a)]);
      }
    const places = flats.map((flat) => {
      const p = onSphere(flat);
      return { p, ...map(p) };
    });
    let [low, high] = [Infinity, 0];
    places.forEach((a, i) => {
      for (const b of places.slice(0, i)) {
        const ratio = Math.hypot(a.u - b.u, a.v - b.v) / (2 * R * Math.asin(distance(a.p, b.p) / (2 * R)));
        low = Math.min(low, ratio);
        high = Math.max(high, ratio);
      }
    });
    // Places nearest to each other lie 15° apart on a ring: the largest ratio of the whole cap is 1.7 % farther from 1.
    expect(Math.abs(Math.log(high / low) / distortion - 1)).toBeLessThan(0.015);
    expect(Math.abs((1 - low / high) / stretch - 1)).toBeLessThan(0.015);
  });
});

describe('a saddle, z = (x² - y²) / 24', () => {
  it('the map comes nearer to that of the finest mesh, for all the shadows behind saddle vertices', () => {
    const height = (x: number, y: number): number => (x * x - y * y) / 24;
    const mapOf = (cells: number) => {
      const mesh = gridMesh(cells, cells, (i, j) => {
        const [x, y] = [(24 * i) / cells - 12, (24 * j) / cells - 12];
        return [x, y, height(x, y)];
      });
      const queries = buildQueries(mesh);
      const hit = queries.nearest([1.3, -0.7, height(1.3, -0.7)])!;
      const centre = { face: hit.face, bary: barycentric(mesh, hit.face, hit.point) };
      const map = logMap(new WindowSolver(mesh), centre, 12, [1, 0, 1.3 / 12]);
      return (x: number, y: number) => {
        const q = queries.nearest([x, y, height(x, y)])!;
        return map.at(q.face, q.point);
      };
    };
    // Vertices of the coarsest mesh are vertices of all.
    const grid = Array.from({ length: 11 * 11 }, (_, k) => [2 * (k % 11) - 10, 2 * Math.floor(k / 11) - 10]);
    const [a, b, c, finest] = [12, 24, 48, 96].map(mapOf);
    const miss = [a, b, c].map((map) => {
      let square = 0;
      let count = 0;
      let radius = 0;
      for (const [x, y] of grid) {
        const [here, there] = [map(x, y), finest(x, y)];
        if (!here || !there || there.radius > 10) continue;
        square += (here.u - there.u) ** 2 + (here.v - there.v) ** 2;
        radius = Math.max(radius, Math.abs(here.radius - there.radius));
        count++;
      }
      expect(count).toBeGreaterThan(60);
      return { place: Math.sqrt(square / count), radius };
    });
    for (let i = 1; i < 3; i++) {
      expect(miss[i - 1].radius / miss[i].radius).toBeGreaterThan(3.5);
      expect(miss[i - 1].place / miss[i].place).toBeGreaterThan(1.8);
    }
    expect(miss[0].place / miss[2].place).toBeGreaterThan(8);
    expect(miss[2].place / 10).toBeLessThan(1e-3);
  });
});
