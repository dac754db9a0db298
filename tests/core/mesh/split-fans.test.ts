import { describe, expect, it } from 'vitest';
import { shortestPath } from '../../../src/core/geodesic/shortest.ts';
import { meshFrom, placeAt } from '../helpers/surfaces.ts';

describe('fans that meet in a point', () => {
  /** A plate of 5 × 4 cells without (1, 1) and (2, 2), which touch at (2, 2); `gap` moves the one side of that point away. */
  const pinched = (gap: number): number[] => {
    const out: number[] = [];
    const at = (i: number, j: number, upper: boolean) =>
      i === 2 && j === 2 && upper ? [2, 2 + gap, 0] : [i, j, 0];
    for (let j = 0; j < 4; j++)
      for (let i = 0; i < 5; i++) {
        if ((i === 1 && j === 1) || (i === 2 && j === 2)) continue;
        const upper = i === 1 && j === 2;
        const [a, b, c, d] = [
          at(i, j, upper),
          at(i + 1, j, upper),
          at(i + 1, j + 1, upper),
          at(i, j + 1, upper),
        ];
        out.push(...a, ...b, ...c, ...a, ...c, ...d);
      }
    return out;
  };

  it('have a vertex each, at the same place', () => {
    const mesh = meshFrom(pinched(0));
    const there = [];
    for (let v = 0; v < mesh.positions.length / 3; v++)
      if (mesh.positions[3 * v] === 2 && mesh.positions[3 * v + 1] === 2) there.push(v);
    expect(there).toHaveLength(2);
    expect(mesh.pieces).toHaveLength(1);
  });

  it('leak no distance: a path bends at the point as if the fan that reaches it sooner were not there', () => {
    // A disc of sixteen sectors. The inner ones next to sector 0 are missing, so that it touches the others in the middle
    // only; on one side the outer one is missing too, so that the way to the far sectors leads round the other side.
    const corners = (gap: number): number[] => {
      const at = (r: number, k: number): number[] => [
        r * Math.cos((k * Math.PI) / 8),
        r * Math.sin((k * Math.PI) / 8),
        0,
      ];
      const out: number[] = [];
      for (let k = 0; k < 16; k++) {
        if (k !== 1 && k !== 15)
          out.push(...(k === 0 ? [gap, 0, 0] : [0, 0, 0]), ...at(1, k), ...at(1, k + 1));
        if (k !== 15)
          out.push(...at(1, k), ...at(3, k), ...at(3, k + 1), ...at(1, k), ...at(3, k + 1), ...at(1, k + 1));
      }
      return out;
    };
    const [mesh, apart] = [meshFrom(corners(0)), meshFrom(corners(1e-4))];
    const length = (m: typeof mesh) =>
      shortestPath(m, placeAt(m, [1.1, 0.2, 0]).surface, placeAt(m, [0.1, -0.25, 0]).surface)!.length;
    expect(length(mesh)).toBeCloseTo(length(apart), 9);
    // By the corner of sector 1 and the middle.
    const [x, y] = [Math.cos(Math.PI / 4), Math.sin(Math.PI / 4)];
    expect(length(mesh)).toBeGreaterThan(Math.hypot(x, y) + Math.hypot(0.1, 0.25));
  });
});
