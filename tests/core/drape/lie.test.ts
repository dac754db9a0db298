import { describe, expect, it } from 'vitest';
import { quiet } from '../../../src/core/base/run-context.ts';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import { drapeCircuit } from '../../../src/core/drape/drape.ts';
import { drapePad, drawingU } from '../../../src/core/drape/pad.ts';
import { drapeTrace } from '../../../src/core/drape/trace.ts';
import { WindowSolver } from '../../../src/core/geodesic/windows.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import type { Pad, Project, Trace } from '../../../src/core/project/schema.ts';
import { gridMesh, meshFrom, partFrom, placeAt, plate, tube } from '../helpers/surfaces.ts';

/** An L, so that a mirrored or turned pad shows. */
const L: Pad = {
  id: 'p',
  kind: 'pad',
  net: '',
  at: [0, 0, 0],
  shape: {
    outline: [
      [-1, -1],
      [1, -1],
      [1, -0.5],
      [-0.5, -0.5],
      [-0.5, 2],
      [-1, 2],
    ],
  },
  turn: 0,
};
const covers = (points: Float64Array, near: Vec3): boolean => {
  for (let i = 0; i < points.length; i += 3)
    if (Math.hypot(points[i] - near[0], points[i + 1] - near[1], points[i + 2] - near[2]) < 0.15) return true;
  return false;
};

describe('how a pad lies', () => {
  it('u points to +X and v to +Y on a face that looks up', () => {
    const mesh = plate(20, 20, 3, 3);
    const { copper } = drapePad(new WindowSolver(mesh), L, placeAt(mesh, [2, 3, 0])).element!;
    expect(covers(copper.positions, [2.9, 2.2, 0])).toBe(true);
    expect(covers(copper.positions, [1.2, 4.9, 0])).toBe(true);
    expect(covers(copper.positions, [2.9, 4.9, 0])).toBe(false);
  });

  it('turn is counter-clockwise seen from outside', () => {
    const mesh = plate(20, 20, 3, 3);
    const { copper } = drapePad(new WindowSolver(mesh), { ...L, turn: 90 }, placeAt(mesh, [2, 3, 0]))
      .element!;
    // The long leg (-0.75, 2) turns to (-2, -0.75).
    expect(covers(copper.positions, [0.1, 2.2, 0])).toBe(true);
    expect(covers(copper.positions, [1.2, 4.9, 0])).toBe(false);
  });

  it('seen from outside it is not mirrored on a face that looks down', () => {
    // The same plate turned over about X: outside is -Z, u still points to +X, v = n × u points to -Y.
    const mesh = gridMesh(3, 3, (i, j) => [(20 * i) / 3 - 10, 10 - (20 * j) / 3, 0]);
    const { copper } = drapePad(new WindowSolver(mesh), L, placeAt(mesh, [2, 3, 0])).element!;
    expect(covers(copper.positions, [2.9, 3.8, 0])).toBe(true);
    expect(covers(copper.positions, [1.2, 1.1, 0])).toBe(true);
  });

  it('where the normal is within 10° of ±X, u points to +Y', () => {
    expect(drawingU([Math.cos(0.17), 0, Math.sin(0.17)])).toEqual([0, 1, 0]);
    const u = drawingU([Math.cos(0.18), 0, Math.sin(0.18)]);
    expect(u[0]).toBeGreaterThan(0);
    expect(u[1]).toBeCloseTo(0, 12);
  });

  it('it bends round a cylinder without changing size: a corner lies where unrolling puts it', () => {
    const r = 6;
    const mesh = tube(r, 30, 720, 1);
    const at: Vec3 = [r * Math.cos(-Math.PI / 2), r * Math.sin(-Math.PI / 2), 12];
    const { copper } = drapePad(new WindowSolver(mesh), { ...L, turn: 0 }, placeAt(mesh, at)).element!;
    // At the foot the normal is -Y: u = +X (counter-clockwise about z), v = n × u = +Z.
    const a = -Math.PI / 2 + 0.95 / r;
    expect(covers(copper.positions, [r * Math.cos(a), r * Math.sin(a), 12 - 0.75])).toBe(true);
    expect(
      covers(copper.positions, [
        r * Math.cos(-Math.PI / 2 - 0.75 / r),
        r * Math.sin(-Math.PI / 2 - 0.75 / r),
        13.9,
      ]),
    ).toBe(true);
  });
});

describe('a pad that the surface has no room for', () => {
  const circle = (d: number): Pad => ({ ...L, shape: { circle: d } });
  const lay = (mesh: SurfaceMesh, pad: Pad, at: Vec3) =>
    drapePad(new WindowSolver(mesh), pad, placeAt(mesh, at));

  it('over a rim keeps the copper that has a place, and says where the surface ends', () => {
    // A disc of radius 2 whose centre lies 1.2 from the rim: a circular segment is missing.
    const { element, findings } = lay(plate(20, 14, 3, 3), circle(4), [2, 5.8, 0]);
    expect(findings.map((f) => [f.rule, f.element])).toEqual([['beyond-map', 'p']]);
    expect(findings[0].at[1]).toBeCloseTo(7, 6);
    const half = Math.acos(0.6);
    expect(element!.area).toBeCloseTo(Math.PI * 4 - 4 * (half - 0.6 * Math.sin(half)), 2);
  });

  it('is no news where only the square about it reaches over the rim', () => {
    const slot: Pad = { ...L, shape: { slot: [8, 1] } };
    const mesh = plate(20, 14, 3, 3);
    expect(lay(mesh, slot, [2, 5.8, 0]).findings).toEqual([]);
    expect(lay(mesh, { ...slot, turn: 90 }, [2, 5.8, 0]).findings).toHaveLength(1);
  });

  it('round a thin post meets itself behind it', () => {
    const post = tube(1, 30, 720, 1);
    const behind = lay(post, { ...L, shape: { rect: [8, 2] } }, [0, -1, 14]);
    expect(behind.findings.map((f) => f.rule)).toEqual(['beyond-map']);
    expect(behind.findings[0].at[1]).toBeCloseTo(1, 3);
    // All of the post's turn, 2 mm high.
    expect(behind.element!.area).toBeCloseTo(2 * Math.PI * 2, 1);
    expect(lay(post, { ...L, shape: { rect: [6, 2] } }, [0, -1, 14]).findings).toEqual([]);
  });
});

describe('a trace', () => {
  const trace: Trace = { id: 't', kind: 'trace', net: '', width: 1, route: [] };
  const mesh = plate(20, 20, 3, 3);
  const bent = drapeTrace(
    new WindowSolver(mesh),
    trace,
    [
      [-5, 0, 0],
      [0, 0, 0],
      [0, 6, 0],
    ].map((p) => placeAt(mesh, p as unknown as Vec3)),
  ).element!;

  it('is round at a bend outside and sharp inside: 2 w L + π w² less the inner corner, plus the outer quarter', () => {
    // Two straight strips of lengths 5 and 6, a quarter disc outside the bend, a square overlap inside counted once.
    expect(bent.area).toBeCloseTo(5 + 6 + Math.PI * 0.25 - 0.25 + (Math.PI * 0.25) / 4, 2);
  });

  it('its hatch coordinate is the signed distance, positive on the left', () => {
    const { field } = bent;
    for (let v = 0; v < field.edge.length; v++) {
      const [x, y] = [field.positions[3 * v], field.positions[3 * v + 1]];
      if (x < -1 && x > -5) expect(field.hatch[v]).toBeCloseTo(y, 9);
      if (y > 1 && y < 6) expect(field.hatch[v]).toBeCloseTo(-x, 9);
      if (x > 0.01 && y < -0.01 && field.edge[v] < 0.05)
        expect(field.hatch[v]).toBeCloseTo(-Math.hypot(x, y), 9);
    }
  });

  it('its foot runs from 0 to the length along it', () => {
    const { field } = bent;
    for (let v = 0; v < field.edge.length; v++) {
      const [x, y] = [field.positions[3 * v], field.positions[3 * v + 1]];
      if (x < -1) expect(field.along[v]).toBeCloseTo(x + 5, 9);
      if (y > 1) expect(field.along[v]).toBeCloseTo(5 + y, 9);
    }
  });

  it('every patch triangle lies in the face it names, wound as the face', () => {
    const tri = tube(6, 30, 40, 1);
    const r = 6 * Math.cos(Math.PI / 40);
    const e = drapeTrace(new WindowSolver(tri), trace, [
      placeAt(tri, [r, 0.1, 5]),
      placeAt(tri, [0.1, r, 20]),
    ]).element!;
    const x = e.copper.positions;
    e.copper.face.forEach((f, t) => {
      const n = (p: Float64Array, a: number, b: number, c: number) => {
        const [u, v] = [
          [0, 1, 2].map((k) => p[3 * b + k] - p[3 * a + k]),
          [0, 1, 2].map((k) => p[3 * c + k] - p[3 * a + k]),
        ];
        return [u[1] * v[2] - u[2] * v[1], u[2] * v[0] - u[0] * v[2], u[0] * v[1] - u[1] * v[0]];
      };
      const mine = n(
        x,
        e.copper.triangles[3 * t],
        e.copper.triangles[3 * t + 1],
        e.copper.triangles[3 * t + 2],
      );
      const face = n(tri.positions, tri.triangles[3 * f], tri.triangles[3 * f + 1], tri.triangles[3 * f + 2]);
      const size = Math.hypot(...mine) * Math.hypot(...face);
      if (Math.hypot(...mine) > 1e-9)
        expect(mine.reduce((s, m, k) => s + m * face[k], 0) / size).toBeCloseTo(1, 6);
    });
  });
});

describe('bad places', () => {
  const project = (elements: unknown[]): Project =>
    ({ circuit: { elements, drapes: [] } }) as unknown as Project;
  const part = partFrom(plate(20, 20, 3, 3));

  it('a point 1.2 mm off the surface is bad input, named by its path, and so is the next', () => {
    const at = (z: number) => ({ at: [1, 1, z] });
    const bad = project([
      { id: 'a', kind: 'trace', net: '', width: 1, route: [at(0), at(1.2)] },
      { id: 'b', kind: 'pad', net: '', at: [0, 0, -3], shape: { circle: 1 }, turn: 0 },
    ]);
    expect(() => drapeCircuit(bad, 'x.drape.json', part, quiet)).toThrow(
      expect.objectContaining({
        problems: [
          expect.objectContaining({
            code: 'far-from-surface',
            file: 'x.drape.json',
            place: '$.circuit.elements[0].route[1].at',
          }),
          expect.objectContaining({ code: 'far-from-surface', place: '$.circuit.elements[1].at' }),
        ],
      }),
    );
  });

  it('0.9 mm off is pulled to the surface', () => {
    const ok = project([{ id: 'b', kind: 'pad', net: '', at: [3, -2, 0.9], shape: { circle: 1 }, turn: 0 }]);
    const [e] = drapeCircuit(ok, 'x', part, quiet).copper.elements;
    expect(e.anchor.map((v) => Math.round(v * 1e9) / 1e9)).toEqual([3, -2, 0]);
  });

  it('an outline that crosses itself is a finding that names the place', () => {
    const bow = project([
      {
        id: 'r',
        kind: 'region',
        net: '',
        outline: [
          [-4, -2, 0],
          [4, 2, 0],
          [4, -2, 0],
          [-4, 2, 0],
        ].map((at) => ({ at })),
      },
    ]);
    const { copper, findings } = drapeCircuit(bow, 'x', part, quiet);
    expect(copper.elements).toEqual([]);
    expect(findings.map((f) => [f.rule, f.element])).toEqual([['crossed', 'r']]);
    expect(Math.hypot(...findings[0].at)).toBeLessThan(1e-9);
  });

  it('no way over the surface is a finding that leaves the rest standing', () => {
    const two = partFrom(meshFrom([0, 0, 0, 4, 0, 0, 0, 4, 0, 9, 0, 0, 13, 0, 0, 9, 4, 0]));
    const lost = project([
      { id: 'a', kind: 'trace', net: '', width: 0.4, route: [{ at: [1, 1, 0] }, { at: [10, 1, 0] }] },
      { id: 'b', kind: 'trace', net: '', width: 0.4, route: [{ at: [10, 1, 0] }, { at: [11, 1, 0] }] },
    ]);
    const { copper, findings } = drapeCircuit(lost, 'x', two, quiet);
    expect(copper.elements.map((e) => e.id)).toEqual(['b']);
    expect(findings).toEqual([expect.objectContaining({ rule: 'no-way', element: 'a' })]);
  });
});
