/** Lumpy icospheres: 20 · 4ᵏ triangles of much the same size over hills and hollows, as facets of a part. */
import { quiet } from '../../src/core/base/run-context.ts';
import type { Vec3 } from '../../src/core/base/vec.ts';
import { buildMesh } from '../../src/core/mesh/build.ts';
import type { Soup } from '../../src/core/mesh/stl.ts';
import type { SurfaceMesh } from '../../src/core/mesh/surface-mesh.ts';

/** Radius of the sphere under the lumps, mm. */
export const RADIUS = 30;

/** The lumps: six waves in fixed, lopsided directions, together up to about a tenth of the radius. */
const WAVES: readonly (readonly [number, number, number, number, number])[] = [
  [2.1, 0.7, -1.3, 0.4, 0.03],
  [-1.1, 2.6, 0.9, 1.9, 0.025],
  [3.3, -2.2, 1.7, 2.7, 0.02],
  [0.6, 3.9, -3.1, 0.9, 0.015],
  [-4.4, 1.2, 4.1, 5.1, 0.01],
  [5.7, 4.3, -2.9, 3.3, 0.006],
];

/** Surface point in the direction of `d`. */
export function lumpy(d: Vec3): Vec3 {
  const l = Math.hypot(d[0], d[1], d[2]);
  const [x, y, z] = [d[0] / l, d[1] / l, d[2] / l];
  let r = 1;
  for (const [a, b, c, phase, height] of WAVES) r += height * Math.sin(a * x + b * y + c * z + phase);
  return [RADIUS * r * x, RADIUS * r * y, RADIUS * r * z];
}

/** @param level  20 · 4^level facets */
export function lumpySoup(level: number): Soup {
  const g = (1 + Math.sqrt(5)) / 2;
  const corners: Vec3[] = [
    [-1, g, 0],
    [1, g, 0],
    [-1, -g, 0],
    [1, -g, 0],
    [0, -1, g],
    [0, 1, g],
    [0, -1, -g],
    [0, 1, -g],
    [g, 0, -1],
    [g, 0, 1],
    [-g, 0, -1],
    [-g, 0, 1],
  ];
  const faces = [
    0, 11, 5, 0, 5, 1, 0, 1, 7, 0, 7, 10, 0, 10, 11, 1, 5, 9, 5, 11, 4, 11, 10, 2, 10, 7, 6, 7, 1, 8, 3, 9, 4,
    3, 4, 2, 3, 2, 6, 3, 6, 8, 3, 8, 9, 4, 9, 5, 2, 4, 11, 6, 2, 10, 8, 6, 7, 9, 8, 1,
  ];
  const n = 2 ** level;
  const out = new Float64Array(20 * n * n * 9);
  let at = 0;
  const put = (p: Vec3): void => {
    // float32, as a file would have it
    for (const x of p) out[at++] = Math.fround(x);
  };
  for (let f = 0; f < 60; f += 3) {
    const [a, b, c] = [corners[faces[f]], corners[faces[f + 1]], corners[faces[f + 2]]];
    // The same sum in the same order from both sides of an edge would be too much to ask: round directions first.
    const point = (i: number, j: number): Vec3 => {
      const [u, v, w] = [n - i - j, i, j];
      return lumpy([
        round((u * a[0] + v * b[0] + w * c[0]) / n),
        round((u * a[1] + v * b[1] + w * c[1]) / n),
        round((u * a[2] + v * b[2] + w * c[2]) / n),
      ]);
    };
    for (let j = 0; j < n; j++)
      for (let i = 0; i < n - j; i++) {
        const [p, q, r] = [point(i, j), point(i + 1, j), point(i, j + 1)];
        put(p);
        put(q);
        put(r);
        if (i + j < n - 1) {
          put(q);
          put(point(i + 1, j + 1));
          put(r);
        }
      }
  }
  return { corners: out, trailingBytes: 0 };
}

const round = (x: number): number => Math.round(x * 2 ** 40) / 2 ** 40;

export const lumpyMesh = (level: number): SurfaceMesh => buildMesh(lumpySoup(level), 1, quiet);
