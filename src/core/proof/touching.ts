/** Which elements of one net touch in the drawing: where they do, the copper must hang together. */
import type { Vec3 } from '../base/vec.ts';
import type { Copper, CopperElement } from '../drape/copper.ts';
import type { SurfaceMesh } from '../mesh/surface-mesh.ts';
import { faceNormal } from '../mesh/surface-point.ts';
import { type CopperGrid, distanceToCopper } from './copper-grid.ts';
import type { Samples } from './samples.ts';

/** mm: patches that share an edge in the drawing come back to the surface with rounding, never this far apart. */
const TOUCH = 0.002;

/**
 * @returns pairs of indices, lower first, in order
 */
export function touchingPairs(
  copper: Copper,
  mesh: SurfaceMesh,
  samples: Samples,
  grid: CopperGrid,
): [number, number][] {
  const { elements } = copper;
  const boxes = elements.map(boxOf);
  const from = sampleRanges(samples, elements.length);
  const out: [number, number][] = [];
  for (let e = 0; e < elements.length; e++)
    for (let f = e + 1; f < elements.length; f++) {
      if (elements[e].net === '' || elements[e].net !== elements[f].net || !meet(boxes[e], boxes[f]))
        continue;
      if (
        cornersTouch(elements[e], f, boxes[f], mesh, grid) ||
        cornersTouch(elements[f], e, boxes[e], mesh, grid) ||
        samplesTouch(samples, from[e], from[e + 1], f, boxes[f], grid)
      )
        out.push([e, f]);
    }
  return out;
}

type Box = [number, number, number, number, number, number];

function boxOf(e: CopperElement): Box {
  const p = e.copper.positions;
  const box: Box = [Infinity, Infinity, Infinity, -Infinity, -Infinity, -Infinity];
  for (let i = 0; i < p.length; i++) {
    const c = i % 3;
    box[c] = Math.min(box[c], p[i] - TOUCH);
    box[3 + c] = Math.max(box[3 + c], p[i] + TOUCH);
  }
  return box;
}

const meet = (a: Box, b: Box): boolean => [0, 1, 2].every((c) => a[c] <= b[3 + c] && b[c] <= a[3 + c]);
const within = (b: Box, p: Vec3): boolean => [0, 1, 2].every((c) => p[c] >= b[c] && p[c] <= b[3 + c]);

/** Samples stand element by element: where each begins. */
function sampleRanges(samples: Samples, elements: number): Uint32Array {
  const from = new Uint32Array(elements + 1);
  for (let s = 0; s < samples.count; s++) from[samples.element[s] + 1]++;
  for (let e = 0; e < elements; e++) from[e + 1] += from[e];
  return from;
}

function cornersTouch(
  e: CopperElement,
  other: number,
  box: Box,
  mesh: SurfaceMesh,
  grid: CopperGrid,
): boolean {
  const { positions, triangles, face } = e.copper;
  for (let i = 0; i < triangles.length; i++) {
    const v = 3 * triangles[i];
    const p: Vec3 = [positions[v], positions[v + 1], positions[v + 2]];
    if (!within(box, p)) continue;
    if (distanceToCopper(grid, p[0], p[1], p[2], faceNormal(mesh, face[(i / 3) | 0]), TOUCH, other) <= TOUCH)
      return true;
  }
  return false;
}

/** Two bars that cross have no corner in each other. */
function samplesTouch(
  samples: Samples,
  from: number,
  to: number,
  other: number,
  box: Box,
  grid: CopperGrid,
): boolean {
  for (let s = from; s < to; s++) {
    const p: Vec3 = [samples.position[3 * s], samples.position[3 * s + 1], samples.position[3 * s + 2]];
    if (!within(box, p)) continue;
    const n: Vec3 = [samples.normal[3 * s], samples.normal[3 * s + 1], samples.normal[3 * s + 2]];
    if (distanceToCopper(grid, p[0], p[1], p[2], n, TOUCH, other) <= TOUCH) return true;
  }
  return false;
}
