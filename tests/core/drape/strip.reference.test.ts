import { describe, expect, it } from 'vitest';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import type { CopperElement } from '../../../src/core/drape/copper.ts';
import { drapeTrace } from '../../../src/core/drape/trace.ts';
import { WindowSolver } from '../../../src/core/geodesic/windows.ts';
import { buildQueries } from '../../../src/core/mesh/queries.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import { barycentric } from '../../../src/core/mesh/surface-point.ts';
import type { Trace } from '../../../src/core/project/schema.ts';
import { source } from '../../reference/sources.ts';
import { gridMesh, meshFrom, plate, sphere, tube } from '../helpers/surfaces.ts';

type Finish = Pick<Trace, 'ends' | 'bends'>;

function lay(mesh: SurfaceMesh, width: number, finish: Finish, route: readonly Vec3[]): CopperElement {
  const queries = buildQueries(mesh);
  const places = route.map((p) => {
    const { face, point } = queries.nearest(p)!;
    return { surface: { face, bary: barycentric(mesh, face, point) }, point };
  });
  const trace: Trace = { id: 't', kind: 'trace', net: 'N', width, route: [], ...finish };
  return drapeTrace(new WindowSolver(mesh), trace, places).element!;
}

const points = (e: CopperElement): Vec3[] =>
  e.outline.flatMap((line) =>
    Array.from({ length: line.length / 3 }, (_, i): Vec3 => [line[3 * i], line[3 * i + 1], line[3 * i + 2]]),
  );

describe(source('svg-2'), () => {
  // Two legs a and b, turned by φ: inside they overlap in a kite w² tan(φ/2), counted once; outside lies a sector,
  // a kite, or a triangle.
  const [a, b] = [4, 5.5];
  const outside = {
    round: (w: number, turn: number) => (turn * w * w) / 2,
    miter: (w: number, turn: number) =>
      1 / Math.cos(turn / 2) <= 4 ? w * w * Math.tan(turn / 2) : (w * w * Math.sin(turn)) / 2,
  };
  const ends = { round: (w: number) => Math.PI * w * w, square: (w: number) => 4 * w * w, butt: () => 0 };
  const cases = (['round', 'square', 'butt'] as const).flatMap((end) =>
    (['round', 'miter'] as const).flatMap((bend) =>
      [35, 90, 140, 160].map((turn) => [end, bend, turn] as const),
    ),
  );

  it.each(cases)('%s ends, %s bend of %d° on a plane: the area of the union, once', (end, bend, deg) => {
    const w = 0.35;
    const turn = (deg * Math.PI) / 180;
    const at = (along: number, dir: number): Vec3 => [
      along * Math.cos(dir) + 0.7,
      along * Math.sin(dir) - 1.1,
      0,
    ];
    const e = lay(plate(20, 20, 5, 3), 2 * w, { ends: end, bends: bend }, [
      at(-a, 0.4),
      at(0, 0),
      at(b, 0.4 - turn),
    ]);
    const area = 2 * w * (a + b) - w * w * Math.tan(turn / 2) + outside[bend](w, turn) + ends[end](w);
    // The outline may run this far inside the true one, and cuts each sharp corner.
    expect(Math.abs(e.area - area)).toBeLessThan(0.0006 * 2 * (a + b));
    expect(e.outline).toHaveLength(1);
  });

  it.each(cases.filter(([, , deg]) => deg <= 90))(
    '%s ends, %s bend of %d° across a cube edge: the same, for the flats unroll',
    (end, bend, deg) => {
      const w = 0.35;
      const turn = (deg * Math.PI) / 180;
      // Two flats that meet at right angles along x = 0: x > 0 goes down.
      const fold = ([x, y]: readonly [number, number]): Vec3 => (x > 0 ? [0, y, -x] : [x, y, 0]);
      const quad = (p: readonly [number, number][]) => {
        const [q0, q1, q2, q3] = p.map(fold);
        return [...q0, ...q1, ...q2, ...q0, ...q2, ...q3];
      };
      const mesh = meshFrom([
        ...quad([
          [-10, -10],
          [0, -10],
          [0, 10],
          [-10, 10],
        ]),
        ...quad([
          [0, -10],
          [10, -10],
          [10, 10],
          [0, 10],
        ]),
      ]);
      // The bend lies 0.1 before the edge, so that its outer corner lies across it.
      const at = (along: number, dir: number) =>
        fold([along * Math.cos(dir) - 0.1, along * Math.sin(dir) + 0.3]);
      const e = lay(mesh, 2 * w, { ends: end, bends: bend }, [
        at(-a, turn / 2),
        at(0, 0),
        at(b, Math.PI + turn / 2 - Math.PI - turn),
      ]);
      const area = 2 * w * (a + b) - w * w * Math.tan(turn / 2) + outside[bend](w, turn) + ends[end](w);
      expect(Math.abs(e.area - area)).toBeLessThan(0.0006 * 2 * (a + b));
    },
  );
});

const TRUE = 0.01;
const widths = [0.25, 0.5] as const;
const R = 2;

describe(`${source('do-carmo')}: outlines are true to 0.01 mm where the surface bends with a radius of 2 mm`, () => {
  it.each(widths)('a mitred bend and square ends on a cylinder, half-width %d, unrolled', (w) => {
    const at = (s: number, z: number): Vec3 => [R * Math.cos(s / R), R * Math.sin(s / R), z];
    const route = [at(-2.2, 12), at(0.4, 12), at(0.4, 15.5)];
    const e = lay(tube(R, 30, 720, 1), 2 * w, { ends: 'square', bends: 'miter' }, route);
    const misses = points(e).map(([x, y, z]) => {
      const s = R * Math.atan2(y, x);
      // Two boxes, the first as long as its mitre.
      return Math.min(
        Math.max(-2.2 - w - s, s - 0.4 - w, Math.abs(z - 12) - w),
        Math.max(12 - w - z, z - 15.5 - w, Math.abs(s - 0.4) - w),
      );
    });
    expect(Math.max(...misses.map(Math.abs))).toBeLessThan(TRUE);
    expect(e.area / (2 * w * (2.6 + 3.5 + 2 * w))).toBeCloseTo(1, 3);
  });

  const onSphere = (lat: number, lon: number): Vec3 => [
    R * Math.cos(lat) * Math.cos(lon),
    R * Math.cos(lat) * Math.sin(lon),
    R * Math.sin(lat),
  ];
  /** Fermi coordinates about the great circle from p towards q. */
  const fermi = (p: Vec3, q: Vec3) => {
    const n = unit(cross(p, q));
    const t = cross(n, unit(p));
    const along = (x: Vec3) => R * Math.atan2(dot(x, t), dot(x, unit(p)));
    return { length: along(q), along, across: (x: Vec3) => R * Math.asin(dot(unit(x), n)) };
  };
  const fine = sphere(R, 6);

  it.each(widths.flatMap((w) => [0.75, 0.15, -0.15].map((lon) => [w, lon] as const)))(
    'a mitred bend and square ends on a sphere, half-width %d, second leg towards longitude %d',
    (w, lon) => {
      const route = [onSphere(0.1, -0.3), onSphere(0.1, 0.6), onSphere(0.9, lon)];
      const e = lay(fine, 2 * w, { ends: 'square', bends: 'miter' }, route);
      const [one, two] = [fermi(route[0], route[1]), fermi(route[1], route[2])];
      const misses = points(e).map((p) => {
        const [a, b] = [one.along(p), two.along(p)];
        const [y, z] = [Math.abs(one.across(p)), Math.abs(two.across(p))];
        // Both legs from end to bend, and the mitre: past the first, before the second, within the sides of both.
        return Math.min(
          Math.max(y - w, -w - a, a - one.length),
          Math.max(z - w, -b, b - two.length - w),
          Math.max(y - w, z - w, one.length - a, b),
        );
      });
      expect(Math.max(...misses.map(Math.abs))).toBeLessThan(TRUE);
    },
  );

  it.each(widths)('round ends and a butt end on a sphere, half-width %d, and the area of Gray', (w) => {
    const route = [onSphere(0.1, -0.3), onSphere(0.5, 1.1)];
    const leg = fermi(route[0], route[1]);
    const strip = 2 * leg.length * R * Math.sin(w / R);
    const caps = 2 * Math.PI * R * R * (1 - Math.cos(w / R));
    const round = lay(fine, 2 * w, {}, route);
    const miss = points(round).map((p) => {
      const [a, y] = [leg.along(p), Math.abs(leg.across(p))];
      if (a >= 0 && a <= leg.length) return y - w;
      return R * Math.acos(dot(unit(p), unit(route[a < 0 ? 0 : 1]))) - w;
    });
    expect(Math.max(...miss.map(Math.abs))).toBeLessThan(TRUE);
    expect(Math.abs(round.area / (strip + caps) - 1)).toBeLessThan(2e-3);
    const butt = lay(fine, 2 * w, { ends: 'butt' }, route);
    expect(Math.abs(butt.area / strip - 1)).toBeLessThan(2e-3);
    const square = lay(fine, 2 * w, { ends: 'square' }, route);
    expect(Math.abs(square.area / (strip * (1 + (2 * w) / leg.length)) - 1)).toBeLessThan(2e-3);
  });

  it.each(widths)('a strip along the tube of a torus, half-width %d, by integrating its geodesics', (w) => {
    // Tube of radius 2 about a circle of radius 5. θ runs round the tube (0 outside), φ round the axis.
    const ring = 5;
    const at = (theta: number, phi: number): Vec3 => {
      const rho = ring + R * Math.cos(theta);
      return [rho * Math.cos(phi), rho * Math.sin(phi), R * Math.sin(theta)];
    };
    const n = 120;
    const mesh = gridMesh(n, n, (i, j) => at(-0.6 + (4.2 * j) / n, -0.5 + i / n));
    // From near the outer equator over the top to near the inner one, along a meridian: a geodesic, from where the
    // curvature is +1/14 to where it is -1/6.
    const e = lay(mesh, 2 * w, { ends: 'butt' }, [at(0.1, 0.03), at(2.9, 0.03)]);
    const outline = e.outline[0];
    let worst = 0;
    for (let k = 1; k < 14; k++)
      for (const side of [1, -1]) {
        const end = shoot(ring, 0.1 + 0.2 * k, 0.03, side, w);
        worst = Math.max(worst, toLine(at(...end), outline));
      }
    expect(worst).toBeLessThan(TRUE);
  });
});

/** End of the geodesic that leaves a meridian squarely: θ'' = -(ρ sin θ / R) φ'², (ρ² φ')' = 0, ρ = ring + R cos θ. RK4. */
function shoot(ring: number, theta: number, phi: number, side: number, length: number): [number, number] {
  const rho = (t: number): number => ring + R * Math.cos(t);
  const turn = side * rho(theta);
  const slope = ([t, , v]: number[]): number[] => {
    const spin = turn / rho(t) ** 2;
    return [v, spin, -((rho(t) * Math.sin(t)) / R) * spin * spin];
  };
  const steps = 200;
  const h = length / steps;
  let y = [theta, phi, 0];
  const plus = (a: number[], k: number, b: number[]): number[] => a.map((x, i) => x + k * b[i]);
  for (let i = 0; i < steps; i++) {
    const k1 = slope(y);
    const k2 = slope(plus(y, h / 2, k1));
    const k3 = slope(plus(y, h / 2, k2));
    const k4 = slope(plus(y, h, k3));
    y = y.map((x, j) => x + (h / 6) * (k1[j] + 2 * k2[j] + 2 * k3[j] + k4[j]));
  }
  return [y[0], y[1]];
}

function toLine(p: Vec3, line: Float64Array): number {
  let best = Infinity;
  for (let i = 0; i + 3 < line.length; i += 3) {
    const a = [0, 1, 2].map((k) => p[k] - line[i + k]) as unknown as Vec3;
    const b = [0, 1, 2].map((k) => line[i + 3 + k] - line[i + k]) as unknown as Vec3;
    const t = Math.min(1, Math.max(0, dot(a, b) / (dot(b, b) || 1)));
    best = Math.min(best, Math.hypot(a[0] - t * b[0], a[1] - t * b[1], a[2] - t * b[2]));
  }
  return best;
}

const dot = (a: Vec3, b: Vec3): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
const cross = (a: Vec3, b: Vec3): Vec3 => [
  a[1] * b[2] - a[2] * b[1],
  a[2] * b[0] - a[0] * b[2],
  a[0] * b[1] - a[1] * b[0],
];
const unit = (a: Vec3): Vec3 => {
  const l = Math.hypot(...a);
  return [a[0] / l, a[1] / l, a[2] / l];
};
