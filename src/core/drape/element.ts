/** What every kind of element does once its fields are known: patch, copper, outline. */
import type { Vec3 } from '../base/vec.ts';
import type { SurfaceMesh } from '../mesh/surface-mesh.ts';
import type { CopperElement, FieldPatch } from './copper.ts';
import { alongLine, type ClippedPatch, clipBelow, levelLines, patchArea } from './level-lines.ts';
import { type FieldValue, refine } from './refine.ts';

/** How straight a field must be along patch edges at the outline, mm, and where halving them ends: a sharp corner is cut by less than this. */
export const TRUE_TO = 0.0005;
export const FINE = 0.012;
/** Fields are known this far past the outline, mm: as far as patch triangles that hold copper reach. */
export const MARGIN = 0.1;

export interface Laid {
  field: FieldPatch;
  copper: ClippedPatch;
  outline: Float64Array[];
  area: number;
}

/**
 * @param faces    faces that may hold copper
 * @param evaluate fields at a place of a face
 * @param coarse   longest patch edge inside the copper, mm: the sampling step
 */
export function layOut(
  mesh: SurfaceMesh,
  faces: Iterable<number>,
  evaluate: (face: number, p: Vec3) => FieldValue,
  coarse: number,
): Laid {
  const field = refine(mesh, faces, evaluate, { fine: FINE, coarse, tolerance: TRUE_TO });
  const copper = clipBelow(field, field.edge, 0);
  const outline = levelLines(field, field.edge, 0).map((line) => {
    const points = alongLine(line, field.positions, 3);
    if (!line.closed) return points;
    const loop = new Float64Array(points.length + 3);
    loop.set(points);
    loop.set(points.subarray(0, 3), points.length);
    return loop;
  });
  return { field, copper, outline, area: patchArea(copper) };
}

/** Length of a run of points, 3 a point, mm. */
export function lineLength(points: Float64Array): number {
  let sum = 0;
  for (let i = 3; i < points.length; i += 3)
    sum += Math.hypot(
      points[i] - points[i - 3],
      points[i + 1] - points[i - 2],
      points[i + 2] - points[i - 1],
    );
  return sum;
}

/** What could not be laid on the part: news for the report, not an error of the file. */
export interface DrapeFinding {
  rule: 'no-way' | 'no-copper' | 'crossed' | 'beyond-map' | 'left-map' | 'not-evened';
  element: string;
  at: Vec3;
  text: string;
}

export type Draped =
  | { element: CopperElement; findings: DrapeFinding[] }
  | { element: null; findings: DrapeFinding[] };

/** A place as messages name it. */
export const told = (p: Vec3): string => `[${p.map((x) => Math.round(x * 1e3) / 1e3).join(', ')}]`;
