import { describe, expect, it } from 'vitest';
import { quiet } from '../../../src/core/base/run-context.ts';
import { at3, type Vec3 } from '../../../src/core/base/vec.ts';
import { drapeCircuit } from '../../../src/core/drape/drape.ts';
import { shortestWith } from '../../../src/core/geodesic/shortest.ts';
import { WindowSolver } from '../../../src/core/geodesic/windows.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import type { Part } from '../../../src/core/part/part.ts';
import type { Limits, Project } from '../../../src/core/project/schema.ts';
import { gapRule } from '../../../src/core/rules/gap.ts';
import { gridMesh, meshFrom, partFrom, placeAt, plate, sphere, tube } from '../helpers/surfaces.ts';

const lay = (part: Part, ...elements: object[]) => {
  const project = { circuit: { elements, drapes: [] } } as unknown as Project;
  return drapeCircuit(project, 'x', part, quiet).copper.elements;
};
const trace = (id: string, net: string, ...at: number[][]) => ({
  id,
  kind: 'trace',
  net,
  width: 0.4,
  route: at.map((p) => ({ at: p })),
});
const pad = (id: string, net: string, at: number[], d: number) => ({
  id,
  kind: 'pad',
  net,
  at,
  shape: { circle: d },
  turn: 0,
});
const limits = { minGap: 0.25, safeGap: 0.6 } as Limits;
const gaps = (mesh: SurfaceMesh, ...elements: object[]) => {
  const part = partFrom(mesh);
  return gapRule(part, lay(part, ...elements), limits);
};

/** A closed box of the given corners, outside out. */
function box(lo: Vec3, hi: Vec3): number[] {
  const c = (i: number): number[] => [i & 1 ? hi[0] : lo[0], i & 2 ? hi[1] : lo[1], i & 4 ? hi[2] : lo[2]];
  const sides = [
    [0, 2, 3, 1],
    [4, 5, 7, 6],
    [0, 1, 5, 4],
    [2, 6, 7, 3],
    [0, 4, 6, 2],
    [1, 3, 7, 5],
  ];
  return sides.flatMap(([a, b, d, e]) => [...c(a), ...c(b), ...c(d), ...c(a), ...c(d), ...c(e)]);
}

describe('gaps over the surface', () => {
  it('on a plate it is the straight distance between outlines, an error below the least and a warning below the safe one', () => {
    const rows = (y: number) =>
      gaps(
        plate(30, 20, 3, 2),
        trace('a', 'A', [-8, 0, 0], [7, 0, 0]),
        trace('b', 'B', [-5, y, 0], [9, y, 0]),
      );
    const [near] = rows(0.6);
    expect(near).toMatchObject({ rule: 'gap', level: 'error', limit: 0.25, elements: ['a', 'b'] });
    expect(near.value).toBeCloseTo(0.2, 3);
    const wide = rows(0.9);
    expect(wide).toHaveLength(1);
    expect(wide[0]).toMatchObject({ rule: 'gap', level: 'warning', limit: 0.6 });
    expect(wide[0].value).toBeCloseTo(0.5, 3);
    expect(rows(1.1)).toEqual([]);
  });

  it('copper of one net may be as near as it likes; copper without a net is a net of its own', () => {
    const rows = (net: string) =>
      gaps(
        plate(30, 20, 3, 2),
        trace('a', net, [-8, 0, 0], [7, 0, 0]),
        trace('b', net, [-5, 0.6, 0], [9, 0.6, 0]),
      );
    expect(rows('A')).toEqual([]);
    expect(rows('')).toHaveLength(1);
  });

  it('around a thin rod it is the arc and not the chord', () => {
    const mesh = tube(2, 30, 240, 1);
    const along = (a: number) => [
      [2 * Math.cos(a), 2 * Math.sin(a), 6],
      [2 * Math.cos(a), 2 * Math.sin(a), 21],
    ];
    const arc = 0.55;
    const angle = (arc + 0.4) / 2;
    const found = gaps(mesh, trace('a', 'A', ...along(0.3)), trace('b', 'B', ...along(0.3 + angle)));
    expect(found.map((f) => f.rule)).toEqual(['gap']);
    // The chord would be 4 sin(arc / 4) = 0.5483.
    expect(Math.abs(found[0].value - arc)).toBeLessThan(0.001);
  });

  it('is the least of all ways between the two outlines, on a sphere', () => {
    const mesh = sphere(3, 4);
    const part = partFrom(mesh);
    const laid = lay(part, pad('a', 'A', [1, 2, 2], 1.3), pad('b', 'B', [2.3, 1.4, 1.3], 0.9));
    const wide = { minGap: 0.1, safeGap: 3 } as Limits;
    const [found] = gapRule(part, laid, wide);
    const solver = new WindowSolver(mesh);
    let least = Infinity;
    const points = (e: (typeof laid)[number], every: number) => {
      const loop = e.outline[0];
      return Array.from({ length: Math.floor(loop.length / 3 / every) }, (_, i) => at3(loop, i * every));
    };
    for (const p of points(laid[0], 5))
      for (const q of points(laid[1], 5)) {
        const [a, b] = [placeAt(mesh, p), placeAt(mesh, q)];
        least = Math.min(least, shortestWith(solver, a.surface, b.surface)!.length);
      }
    expect(found.rule).toBe('gap');
    // Every fifth point: the brute one may be a little longer.
    expect(found.value).toBeLessThan(least * 1.001);
    expect(found.value).toBeGreaterThan(least * 0.98);
  });
});

describe('thin walls and slots', () => {
  it('copper on both sides of a thin wall is far apart, though it lies 0.3 mm through the wall', () => {
    const mesh = meshFrom(box([-10, -0.3, 0], [10, 0, 15]));
    const wall = [
      trace('out', 'A', [-6, 0, 7], [5, 0, 8]),
      trace('in', 'B', [-5, -0.3, 7.2], [6, -0.3, 7.5]),
    ];
    expect(gaps(mesh, ...wall)).toEqual([]);
  });

  it('over the rim of a thin wall it is the way around', () => {
    const mesh = meshFrom(box([-10, -0.3, 0], [10, 0, 15]));
    const found = gaps(
      mesh,
      trace('out', 'A', [-6, 0, 14.75], [5, 0, 14.75]),
      trace('in', 'B', [-5, -0.3, 14.7], [6, -0.3, 14.7]),
    );
    // 0.05 and 0.1 mm down either side, and the rim of 0.3 mm.
    expect(found.map((f) => f.rule)).toEqual(['gap']);
    expect(found[0].value).toBeCloseTo(0.45, 3);
  });

  /** A sheet with a slot 0.4 mm wide and 3 mm deep along x = 0. */
  const slotted = gridMesh(
    5,
    2,
    (i, j) => [[-8, -0.2, -0.2, 0.2, 0.2, 7][i], 9 * j - 9, i === 2 || i === 3 ? -3 : 0],
    false,
  );

  it('across a slot the air is what counts, and the way over the surface does not', () => {
    const found = gaps(
      slotted,
      trace('a', 'A', [-0.45, -6, 0], [-0.45, 5, 0]),
      trace('b', 'B', [0.45, -5, 0], [0.45, 7, 0]),
    );
    expect(found.map((f) => [f.rule, f.level])).toEqual([['air-gap', 'warning']]);
    expect(found[0].value).toBeCloseTo(0.5, 3);
  });

  it('on the two walls of a slot copper faces copper', () => {
    const found = gaps(
      slotted,
      trace('a', 'A', [-0.2, -6, -1.2], [-0.2, 5, -1.2]),
      trace('b', 'B', [0.2, -5, -1.3], [0.2, 7, -1.3]),
    );
    expect(found.map((f) => [f.rule, f.level])).toEqual([['air-gap', 'warning']]);
    // They overlap along the slot's depth: straight across.
    expect(found[0].value).toBeCloseTo(0.4, 3);
  });
});
