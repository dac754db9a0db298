import { describe, expect, it } from 'vitest';
import { quiet } from '../../../src/core/base/run-context.ts';
import { innerCornerRule } from '../../../src/core/copper/inner-corners.ts';
import { drapeCircuit } from '../../../src/core/drape/drape.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import type { Limits, Project } from '../../../src/core/project/schema.ts';
import { partFrom, plate, tube } from '../helpers/surfaces.ts';

const lay = (mesh: SurfaceMesh, ...elements: object[]) =>
  drapeCircuit({ circuit: { elements, drapes: [] } } as unknown as Project, 'x', partFrom(mesh), quiet).copper
    .elements;
const trace = (id: string, net: string, ...at: number[][]) => ({
  id,
  kind: 'trace',
  net,
  width: 0.4,
  route: at.map((p) => ({ at: p })),
});
const flat = plate(30, 20, 3, 2);
const corners = (...elements: object[]) =>
  innerCornerRule(lay(flat, ...elements), {} as Limits).map((f) => ({
    ...f,
    at: f.at.map((x) => Math.round(x * 10) / 10),
  }));
const toward = (deg: number, far: number): number[] => [
  far * Math.cos((deg * Math.PI) / 180),
  far * Math.sin((deg * Math.PI) / 180),
  0,
];

describe('acute inner corners', () => {
  it('of a bend are told with the angle between its legs; right and wide ones are not', () => {
    for (const angle of [20, 45, 70]) {
      const found = corners(trace('t', 'A', toward(10, 8), [0, 0, 0], toward(10 + angle, 7)));
      expect(found).toHaveLength(1);
      expect(found[0]).toMatchObject({ rule: 'inner-corner', level: 'warning', limit: 80, elements: ['t'] });
      expect(Math.abs(found[0].value - angle)).toBeLessThan(4);
      // Where the inner sides cross: half the width over the sine of half the angle away from the bend.
      const far = 0.2 / Math.sin((angle * Math.PI) / 360);
      const at = toward(10 + angle / 2, far);
      expect(Math.hypot(found[0].at[0] - at[0], found[0].at[1] - at[1])).toBeLessThan(0.15);
    }
    for (const angle of [90, 135])
      expect(corners(trace('t', 'A', toward(10, 8), [0, 0, 0], toward(10 + angle, 7)))).toEqual([]);
  });

  it('where two elements of one net run together both are named; of two nets there is no corner', () => {
    const bar = (net: string) => trace('a', net, [-8, 0, 0], [8, 0, 0]);
    const leg = (net: string, deg: number) => trace('b', net, [0.5, 0, 0], toward(deg, 7));
    const found = corners(bar('A'), leg('A', 50));
    expect(found.map((f) => f.elements)).toEqual([['a', 'b']]);
    expect(Math.abs(found[0].value - 52)).toBeLessThan(5);
    expect(corners(bar('A'), leg('A', 92))).toEqual([]);
    expect(corners(bar('A'), leg('B', 50))).toEqual([]);
  });

  it('outer corners are none, however sharp', () => {
    const tip = {
      id: 'r',
      kind: 'region',
      net: 'A',
      outline: [
        [-6, -1, 0],
        [7, 0.4, 0],
        [-6, 2, 0],
      ].map((at) => ({ at })),
    };
    expect(corners(tip)).toEqual([]);
  });

  it('around a tube they are those of the flat drawing', () => {
    const mesh = tube(6, 30, 90, 1);
    const on = (u: number, v: number) => [6 * Math.cos(u / 6), 6 * Math.sin(u / 6), 15 + v];
    const found = innerCornerRule(lay(mesh, trace('t', 'A', on(7, 0), on(0.4, 0.3), on(5, 5))), {} as Limits);
    expect(found).toHaveLength(1);
    const drawn = (180 / Math.PI) * (Math.atan2(4.7, 4.6) - Math.atan2(-0.3, 6.6));
    expect(Math.abs(found[0].value - drawn)).toBeLessThan(4);
  });
});
