/** A lopsided dome as STL bytes, and a project on it: nothing about it looks the same mirrored or turned. */

import { newProject } from '../../src/core/project/new-project.ts';
import type { Project } from '../../src/core/project/schema.ts';

/** Height over the plane, mm, out to radius 20; the bump stands off the middle. */
export function domeHeight(x: number, y: number): number {
  const r2 = x * x + y * y;
  return 14 * Math.max(0, 1 - r2 / 441) + 2.4 * Math.exp(-((x - 7) ** 2 + (y - 3) ** 2) / 16);
}

export function domeStl(rings = 30, spokes = 72): Uint8Array {
  const at = (i: number, j: number): [number, number, number] => {
    const r = (20 * i) / rings;
    const a = (2 * Math.PI * j) / spokes;
    const [x, y] = [r * Math.cos(a), r * Math.sin(a)];
    return [x, y, domeHeight(x, y)];
  };
  const facets: [number, number, number][][] = [];
  for (let j = 0; j < spokes; j++) {
    facets.push([at(0, 0), at(1, j), at(1, j + 1)]);
    for (let i = 1; i < rings; i++)
      facets.push([at(i, j), at(i + 1, j), at(i + 1, j + 1)], [at(i, j), at(i + 1, j + 1), at(i, j + 1)]);
    const [a, b] = [at(rings, j), at(rings, j + 1)];
    const down = (p: [number, number, number]): [number, number, number] => [p[0], p[1], -3];
    facets.push([a, down(a), down(b)], [a, down(b), b], [[0, 0, -3], down(b), down(a)]);
  }
  const bytes = new Uint8Array(84 + 50 * facets.length);
  const view = new DataView(bytes.buffer);
  view.setUint32(80, facets.length, true);
  for (const [i, f] of facets.entries())
    for (const [c, p] of f.entries())
      for (const [k, v] of p.entries()) view.setFloat32(84 + 50 * i + 12 + 12 * c + 4 * k, v, true);
  return bytes;
}

export function domeProject(partFile = 'dome.stl'): Project {
  const p = newProject(partFile, [
    [-20, -20, -3],
    [20, 20, 15],
  ]);
  const on = (x: number, y: number) => ({
    at: [x, y, Math.round(domeHeight(x, y) * 1e4) / 1e4] as [number, number, number],
  });
  const trace = (id: string, net: string, ...route: [number, number][]) => ({
    id,
    kind: 'trace' as const,
    net,
    width: 0.8,
    route: route.map(([x, y]) => on(x, y)),
  });
  p.name = 'lumpy dome';
  p.circuit.elements = [
    { id: 'p1', kind: 'pad', net: 'A', ...on(-15, -4), shape: { circle: 2 }, turn: 0 },
    { id: 'p2', kind: 'pad', net: 'B', ...on(12, 9), shape: { rect: [2.4, 1.4] }, turn: 20 },
    trace('t1', 'A', [-15, -4], [-4, 3], [6, -2]),
    trace('t2', 'B', [12, 9], [2, 12], [-9, 9]),
    trace('t3', 'C', [0, -16], [10, -9], [15.5, 1]),
  ];
  return p;
}
