/** Meshes with closed forms, and places on them. */
import { quiet } from '../../../src/core/base/run-context.ts';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import type { Place } from '../../../src/core/drape/route.ts';
import { buildMesh } from '../../../src/core/mesh/build.ts';
import { buildQueries } from '../../../src/core/mesh/queries.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import { barycentric, positionOf } from '../../../src/core/mesh/surface-point.ts';
import { buildNormals } from '../../../src/core/part/normals.ts';
import type { Part } from '../../../src/core/part/part.ts';

/** Mesh of facets given by their corners, 9 numbers each, in double precision. */
export function meshFrom(corners: readonly number[]): SurfaceMesh {
  return buildMesh(
    { corners: Float64Array.from(corners), trailingBytes: 0 } as Parameters<typeof buildMesh>[0],
    1,
    quiet,
  );
}

export const partFrom = (mesh: SurfaceMesh): Part => ({
  mesh,
  queries: buildQueries(mesh),
  normals: buildNormals(mesh),
});

/** Open grid of a map (i, j) → place; i along the first side. Cells are cut along alternating diagonals. */
export function gridMesh(
  n: number,
  m: number,
  at: (i: number, j: number) => Vec3,
  alternate = true,
): SurfaceMesh {
  const out: number[] = [];
  for (let j = 0; j < m; j++)
    for (let i = 0; i < n; i++) {
      const [a, b, c, d] = [at(i, j), at(i + 1, j), at(i + 1, j + 1), at(i, j + 1)];
      if (!alternate || (i + j) % 2 === 0) out.push(...a, ...b, ...c, ...a, ...c, ...d);
      else out.push(...a, ...b, ...d, ...b, ...c, ...d);
    }
  return meshFrom(out);
}

/** Flat plate in the plane through the origin with the given unit normal tilt about Y, `w` by `h` mm, upward. */
export function plate(w: number, h: number, n: number, m: number, tilt = 0): SurfaceMesh {
  const [c, s] = [Math.cos(tilt), Math.sin(tilt)];
  return gridMesh(n, m, (i, j) => {
    const [x, y] = [(w * i) / n - w / 2, (h * j) / m - h / 2];
    return [x * c, y, -x * s];
  });
}

/** Octahedron split `level` times and pushed onto the sphere of radius r. */
export function sphere(r: number, level: number): SurfaceMesh {
  const axis: Vec3[] = [
    [1, 0, 0],
    [0, 1, 0],
    [-1, 0, 0],
    [0, -1, 0],
    [0, 0, 1],
    [0, 0, -1],
  ];
  let faces: [Vec3, Vec3, Vec3][] = [0, 1, 2, 3].flatMap((k): [Vec3, Vec3, Vec3][] => [
    [axis[k], axis[(k + 1) % 4], axis[4]],
    [axis[(k + 1) % 4], axis[k], axis[5]],
  ]);
  const middle = (a: Vec3, b: Vec3): Vec3 => {
    const m: Vec3 = [a[0] + b[0], a[1] + b[1], a[2] + b[2]];
    const l = Math.hypot(...m);
    return [m[0] / l, m[1] / l, m[2] / l];
  };
  for (let i = 0; i < level; i++)
    faces = faces.flatMap(([a, b, c]): [Vec3, Vec3, Vec3][] => {
      const [p, q, s] = [middle(a, b), middle(b, c), middle(c, a)];
      return [
        [a, p, s],
        [p, b, q],
        [s, q, c],
        [p, q, s],
      ];
    });
  return meshFrom(faces.flat(2).map((x) => x * r));
}

/** Open tube of `sides` flats about the z axis, one long quad a side when `bands` is 1. */
export const tube = (r: number, height: number, sides: number, bands: number): SurfaceMesh =>
  gridMesh(sides, bands, (i, j) => {
    const a = (2 * Math.PI * (i % sides)) / sides;
    return [r * Math.cos(a), r * Math.sin(a), (height * j) / bands];
  });

/** Surface place nearest to a point, by trying every face: the slow, obvious way. */
export function placeAt(mesh: SurfaceMesh, p: Vec3): Place {
  let best = { d: Infinity, face: 0, bary: [1, 0, 0] as Vec3 };
  for (let f = 0; f < mesh.triangles.length / 3; f++) {
    const b = barycentric(mesh, f, p).map((x) => Math.max(0, x));
    const sum = b[0] + b[1] + b[2];
    const bary: Vec3 = [b[0] / sum, b[1] / sum, b[2] / sum];
    const q = positionOf(mesh, { face: f, bary });
    const d = Math.hypot(q[0] - p[0], q[1] - p[1], q[2] - p[2]);
    if (d < best.d) best = { d, face: f, bary };
  }
  const surface = { face: best.face, bary: best.bary };
  return { surface, point: positionOf(mesh, surface) };
}
