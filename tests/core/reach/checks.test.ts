import { describe, expect, it } from 'vitest';
import { quiet } from '../../../src/core/base/run-context.ts';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import { drapeCircuit } from '../../../src/core/drape/drape.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import { type Project, projectSchema, type Setup } from '../../../src/core/project/schema.ts';
import { collision } from '../../../src/core/reach/collision.ts';
import { bit, reachElement } from '../../../src/core/reach/reach.ts';
import { exampleHead } from '../helpers/proof-scene.ts';
import { meshFrom, partFrom, plate, sphere } from '../helpers/surfaces.ts';

const project = (
  elements: unknown[],
  head: object = {},
  limits: object = {},
  move: Vec3 = [0, 0, 0],
): Project =>
  projectSchema.parse({
    format: 'beamdrape',
    version: 1,
    name: 'test',
    part: { file: 'x.stl' },
    head: { ...exampleHead, ...head },
    material: { activationFluence: 0.4, damageFluence: 6 },
    limits,
    setups: [{ name: 'top', pose: { rotate: [0, 0, 0, 1], move } }],
    circuit: { elements },
  });
const pad = (at: Vec3, d = 1): object => ({
  id: 'p',
  kind: 'pad',
  net: '',
  at,
  shape: { circle: d },
  turn: 0,
});
const reachOf = (mesh: SurfaceMesh, p: Project, defocus?: (n: number) => Float64Array) => {
  const part = partFrom(mesh);
  const [element] = drapeCircuit(p, 'x', part, quiet).copper.elements;
  return {
    element,
    reach: reachElement(p, (p.setups as Setup[])[0], part, element, defocus?.(element.copper.face.length)),
  };
};
const deg = (rad: number) => (rad * 180) / Math.PI;

describe('incidence', () => {
  it('on a sphere under a telecentric head is the angle from the pole', () => {
    const R = 20;
    for (const polar of [5, 30, 55]) {
      const a = (polar * Math.PI) / 180;
      const at: Vec3 = [R * Math.sin(a) * 0.6, R * Math.sin(a) * 0.8, R * Math.cos(a)];
      const { element, reach } = reachOf(sphere(R, 5), project([pad(at, 0.4)], { pivot: null }));
      for (let t = 0; t < element.copper.face.length; t++) {
        const v = element.copper.triangles[3 * t];
        const p = [0, 1, 2].map((k) => element.copper.positions[3 * v + k]);
        const exact = deg(Math.acos(p[2] / Math.hypot(...p)));
        expect(Math.abs(deg(reach.incidence[t]) - exact)).toBeLessThan(0.5);
      }
    }
  });

  it("the beam's own tilt counts: ± 30° faces at command (30, −20) give 39.40° and 21.92°", () => {
    for (const [tilt, exact] of [
      [30, 39.402833],
      [-30, 21.918925],
    ]) {
      const a = (tilt * Math.PI) / 180;
      const p = project([pad([0, 0, 0], 0.2)], {}, {}, [30, -20, 0]);
      const { reach } = reachOf(plate(20, 20, 4, 3, a), p);
      const mean = reach.incidence.reduce((s, x) => s + x, 0) / reach.incidence.length;
      expect(deg(mean)).toBeCloseTo(exact, 1);
    }
  });

  it('beyond maxIncidence it fails, and only there', () => {
    const a = (50 * Math.PI) / 180;
    const ok = reachOf(
      plate(20, 20, 4, 3, a),
      project([pad([0, 0, 0])], { pivot: null }, { maxIncidence: 51 }),
    ).reach;
    const bad = reachOf(
      plate(20, 20, 4, 3, a),
      project([pad([0, 0, 0])], { pivot: null }, { maxIncidence: 49 }),
    ).reach;
    expect(ok.fails.every((f) => f === 0)).toBe(true);
    expect(bad.fails.every((f) => f === bit('incidence'))).toBe(true);
  });
});

/** A plate with a lopsided roof over x > 2, 6 mm above it. */
const roofed = (): SurfaceMesh => {
  const quad = (a: Vec3, b: Vec3, c: Vec3, d: Vec3): number[] => [...a, ...b, ...c, ...a, ...c, ...d];
  return meshFrom([
    ...quad([-10, -10, 0], [10, -10, 0], [10, 10, 0], [-10, 10, 0]),
    ...quad([2, -9, 6], [9, -9, 6], [9, 9, 6], [2, 9, 6]),
  ]);
};

describe('shade', () => {
  it('a roof shades what lies under it, by the edge of its shadow', () => {
    const { element, reach } = reachOf(
      roofed(),
      project(
        [{ id: 't', kind: 'trace', net: '', width: 0.5, route: [{ at: [-6, 1, 0] }, { at: [7, 1, 0] }] }],
        { pivot: null },
      ),
    );
    let shaded = 0;
    for (let t = 0; t < reach.blocked.length; t++) {
      const x = [0, 1, 2]
        .map((i) => element.copper.positions[3 * element.copper.triangles[3 * t + i]])
        .reduce((s, v) => s + v / 3, 0);
      expect(reach.blocked[t]).toBe(x > 2 ? 1 : 0);
      if (reach.fails[t] & bit('shade')) shaded++;
    }
    expect(shaded).toBeGreaterThan(100);
  });

  it("off the axis the shadow moves by the roof's height times the beam's slope", () => {
    // Moved by 40 mm in x, the beam leans toward the axis: at x = 42 its slope is 42/190 for each mm of height.
    const p = project(
      [{ id: 't', kind: 'trace', net: '', width: 0.5, route: [{ at: [-6, 1, 0] }, { at: [7, 1, 0] }] }],
      {},
      {},
      [40, 0, 0],
    );
    const { element, reach } = reachOf(roofed(), p);
    for (let t = 0; t < reach.blocked.length; t++) {
      const x = [0, 1, 2]
        .map((i) => element.copper.positions[3 * element.copper.triangles[3 * t + i]])
        .reduce((s, v) => s + v / 3, 0);
      // A place at x sees past the roof's edge at x = 2 when x - 6 (x + 40)/190 < 2.
      const past = x - (6 * (x + 40)) / 190 < 2;
      const margin = Math.abs(x - (6 * (x + 40)) / 190 - 2);
      if (margin > 1e-3) expect(reach.blocked[t]).toBe(past ? 0 : 1);
    }
  });

  it('with the whole cone half of the power is blocked under the edge', () => {
    const p = project([pad([2, 0, 0], 0.05)], { pivot: null }, { cone: true, maxBlocked: 0.1 });
    const { reach } = reachOf(roofed(), p);
    for (const b of reach.blocked) expect(Math.abs(b - 0.5)).toBeLessThan(0.3);
  });
});

describe('field and dose', () => {
  it('the command counts, not the position: a place 2 mm low inside the field may be off it', () => {
    // At d = -2 the place x is hit by X = x / (1 + 2/190): nearer the middle. Before planning d = 0 counts.
    const { reach } = reachOf(plate(20, 20, 4, 3), project([pad([0, 0, 0], 0.2)], {}, {}, [55.2, 0, 0]));
    expect(reach.fails.every((f) => f & bit('field'))).toBe(true);
    const low = reachOf(plate(20, 20, 4, 3), project([pad([0, 0, 0], 0.2)], {}, {}, [55.2, 0, 0]), (n) =>
      new Float64Array(n).fill(-2),
    ).reach;
    expect(low.fails.every((f) => (f & bit('field')) === 0)).toBe(true);
    expect(low.fails.every((f) => f & bit('focus'))).toBe(true);
  });

  it('fluence below activation with its margin fails as dose', () => {
    const dim = reachOf(plate(20, 20, 4, 3), project([pad([0, 0, 0])], { averagePower_W: 0.1 })).reach;
    expect(dim.fails.every((f) => f === bit('dose'))).toBe(true);
    const hot = reachOf(plate(20, 20, 4, 3), project([pad([0, 0, 0])], { averagePower_W: 2 })).reach;
    expect(hot.fails.every((f) => f === bit('dose'))).toBe(true);
  });
});

describe('collision', () => {
  const p = project([]);
  const tower = meshFrom([0, 0, 0, 2, 0, 0, 0, 2, 160, 50, 0, 0, 52, 0, 0, 50, 2, 170]);
  it('a place under the lens body above its clearance is named', () => {
    const hit = collision(tower, { rotate: [0, 0, 0, 1], move: [0, 0, 0] }, 0, p.head, p.limits);
    expect(hit).toEqual({ height: 160, at: [0, 2, 160] });
  });
  it('lowered out of its way, or beside the body, nothing is', () => {
    expect(collision(tower, { rotate: [0, 0, 0, 1], move: [0, 0, 0] }, -6, p.head, p.limits)).toBeNull();
    expect(collision(tower, { rotate: [0, 0, 0, 1], move: [60, 0, 0] }, 0, p.head, p.limits)).toBeNull();
  });
});
