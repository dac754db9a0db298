/** The drawn copper as a dust of points, each standing for a small area: what the burn is counted on. */
import type { Copper } from '../drape/copper.ts';
import type { SurfaceMesh } from '../mesh/surface-mesh.ts';
import { type CornerNormals, normalAt } from '../part/normals.ts';
import { bisect } from './bisect.ts';

/**
 * Longest edge of a piece, mm. A piece's middle lies a third of a median, at most a third of this, from the middle of
 * each edge, so neighbours are at most two thirds of it apart: 0.02 mm, under half the width that a pulse activates.
 */
export const SAMPLE_EDGE = 0.03;

export interface Samples {
  count: number;
  /** Part frame, mm, 3 a sample. 32 bits hold a place to 4 nm at 100 mm. */
  position: Float32Array;
  /** Outward unit normal, smoothed over the face as model.md §4 says, 3 a sample. */
  normal: Float32Array;
  /** mm² */
  area: Float32Array;
  /** Index into `copper.elements`. */
  element: Int32Array;
  /** Drawn area of each element, mm². */
  elementArea: Float64Array;
}

export function sampleCopper(copper: Copper, mesh: SurfaceMesh, normals: CornerNormals): Samples {
  let size = 4096;
  let count = 0;
  let position = new Float32Array(3 * size);
  let normal = new Float32Array(3 * size);
  let area = new Float32Array(size);
  let element = new Int32Array(size);
  const elementArea = new Float64Array(copper.elements.length);
  const corners = new Float64Array(9);
  copper.elements.forEach((e, number) => {
    const { positions, triangles, face } = e.copper;
    for (let t = 0; t < face.length; t++) {
      for (let i = 0; i < 3; i++)
        for (let c = 0; c < 3; c++) corners[3 * i + c] = positions[3 * triangles[3 * t + i] + c];
      bisect(corners, SAMPLE_EDGE, (flat, at) => {
        const piece = areaOf(flat, at);
        if (piece === 0) return;
        if (count === size) {
          size *= 2;
          position = wider(position, 3 * size);
          normal = wider(normal, 3 * size);
          area = wider(area, size);
          const more = new Int32Array(size);
          more.set(element);
          element = more;
        }
        const x = (flat[at] + flat[at + 3] + flat[at + 6]) / 3;
        const y = (flat[at + 1] + flat[at + 4] + flat[at + 7]) / 3;
        const z = (flat[at + 2] + flat[at + 5] + flat[at + 8]) / 3;
        const n = normalAt(mesh, normals, face[t], [x, y, z]);
        position[3 * count] = x;
        position[3 * count + 1] = y;
        position[3 * count + 2] = z;
        normal[3 * count] = n[0];
        normal[3 * count + 1] = n[1];
        normal[3 * count + 2] = n[2];
        area[count] = piece;
        element[count++] = number;
        elementArea[number] += Math.fround(piece); // the sum of what stands in `area`, so that all of it is 1
      });
    }
  });
  return {
    count,
    position: position.slice(0, 3 * count),
    normal: normal.slice(0, 3 * count),
    area: area.slice(0, count),
    element: element.slice(0, count),
    elementArea,
  };
}

/** Area of the triangle whose 9 numbers begin at `at`. */
export function areaOf(p: ArrayLike<number>, at: number): number {
  const ux = p[at + 3] - p[at],
    uy = p[at + 4] - p[at + 1],
    uz = p[at + 5] - p[at + 2];
  const vx = p[at + 6] - p[at],
    vy = p[at + 7] - p[at + 1],
    vz = p[at + 8] - p[at + 2];
  const nx = uy * vz - uz * vy;
  const ny = uz * vx - ux * vz;
  const nz = ux * vy - uy * vx;
  return Math.sqrt(nx * nx + ny * ny + nz * nz) / 2;
}

function wider(from: Float32Array<ArrayBuffer>, size: number): Float32Array<ArrayBuffer> {
  const to = new Float32Array(size);
  to.set(from);
  return to;
}
