/** A lumpy stone of any number of triangles, as a binary STL, and a circuit that lies on its upper side. */
import type { Vec3 } from '../../src/core/base/vec.ts';
import { newProject } from '../../src/core/project/new-project.ts';
import { readProject } from '../../src/core/project/read.ts';
import type { Project } from '../../src/core/project/schema.ts';

/** Surface point at longitude u and angle v from the top, radians; nothing about the stone is the same mirrored. */
export function stone(u: number, v: number): Vec3 {
  const r = 1 + 0.04 * Math.sin(3 * u + 0.5) * Math.sin(v) ** 2 + 0.03 * Math.cos(4 * v - u) * Math.sin(v);
  return [28 * r * Math.sin(v) * Math.cos(u), 22 * r * Math.sin(v) * Math.sin(u), 12 * r * Math.cos(v)];
}

/** @returns the file, with as many triangles as is possible below or at `triangles` */
export function stoneStl(triangles: number): Uint8Array {
  const rows = Math.max(4, Math.floor(Math.sqrt(triangles / 4)));
  const columns = Math.floor(triangles / (2 * (rows - 1)));
  const count = 2 * columns * (rows - 1);
  const bytes = new Uint8Array(84 + 50 * count);
  const view = new DataView(bytes.buffer);
  view.setUint32(80, count, true);
  let at = 84;
  const facet = (...corners: Vec3[]): void => {
    at += 12;
    for (const p of corners)
      for (const c of p) {
        view.setFloat32(at, c, true);
        at += 4;
      }
    at += 2;
  };
  const point = (i: number, j: number): Vec3 =>
    j === 0
      ? stone(0, 0)
      : j === rows
        ? stone(0, Math.PI)
        : stone((2 * Math.PI * (i % columns)) / columns, (Math.PI * j) / rows);
  for (let j = 0; j < rows; j++)
    for (let i = 0; i < columns; i++) {
      const [a, b, c, d] = [point(i, j), point(i, j + 1), point(i + 1, j + 1), point(i + 1, j)];
      if (j < rows - 1) facet(a, b, c);
      if (j > 0) facet(a, c, d);
    }
  return bytes;
}

/** Three traces of 25 to 45 mm, a pad at each end, a region: the same circuit whatever the number of triangles. */
export function stoneProject(): Project {
  const at = (u: number, v: number): { at: Vec3 } => ({ at: stone(u, v) });
  const runs: [number, number][][] = [
    [
      [0.3, 0.75],
      [0.9, 0.2],
      [2.9, 0.6],
    ],
    [
      [1.2, 0.7],
      [1.9, 0.8],
      [2.6, 0.75],
    ],
    [
      [3.7, 0.8],
      [4.6, 0.4],
      [5.8, 0.7],
    ],
  ];
  const elements = runs.flatMap((run, i) => [
    { id: `t${i}`, kind: 'trace', net: `N${i}`, width: 0.6, route: run.map(([u, v]) => at(u, v)) },
    { id: `a${i}`, kind: 'pad', net: `N${i}`, ...at(...run[0]), shape: { circle: 1.6 } },
    { id: `b${i}`, kind: 'pad', net: `N${i}`, ...at(...run[2]), shape: { rect: [1.6, 2.2] }, turn: 20 },
  ]);
  const corners: [number, number][] = [
    [4.2, 0.75],
    [4.5, 0.75],
    [4.5, 0.95],
    [4.2, 0.95],
  ];
  const region = { id: 'r', kind: 'region', net: 'GUARD', outline: corners.map(([u, v]) => at(u, v)) };
  const text = JSON.stringify({
    ...newProject('stone.stl', null),
    name: 'lumpy stone',
    setups: [{ name: 'top', pose: { rotate: [0, 0, 0, 1], move: [1, -2, -8] } }],
    circuit: { elements: [...elements, region] },
  });
  return readProject(text, 'stone.drape.json').project;
}
