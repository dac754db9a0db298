/** A pad: its flat shape laid on the surface in polar coordinates about its centre (model.md §10). */
import { radiansFromDegrees } from '../base/brands.ts';
import type { Vec3 } from '../base/vec.ts';
import { polarAngle, SurfaceField } from '../geodesic/surface-field.ts';
import type { WindowSolver } from '../geodesic/windows.ts';
import { faceNormal } from '../mesh/surface-point.ts';
import type { Pad } from '../project/schema.ts';
import { type Draped, layOut, lineLength, MARGIN } from './element.ts';
import { boxBound, heldDistance } from './lower-bound.ts';
import type { Place } from './route.ts';
import { circumradius, type FlatShape, flatDistance, perimeter } from './shapes.ts';

/** Longest patch edge inside pads and regions, mm: model.md §5's step. */
export const AREA_STEP = 0.1;
/** cos 10°: nearer to ±X than this, +X says too little about a direction in the tangent plane. */
const NEAR_X = Math.cos((10 * Math.PI) / 180);

/** Direction of u at a place with unit normal n: +X in the tangent plane, +Y where the normal is within 10° of ±X. */
export function drawingU(n: Vec3): Vec3 {
  const e: Vec3 = Math.abs(n[0]) > NEAR_X ? [0, 1, 0] : [1, 0, 0];
  const k = e[0] * n[0] + e[1] * n[1] + e[2] * n[2];
  const u: Vec3 = [e[0] - k * n[0], e[1] - k * n[1], e[2] - k * n[2]];
  const l = Math.hypot(u[0], u[1], u[2]);
  return [u[0] / l, u[1] / l, u[2] / l];
}

export function drapePad(solver: WindowSolver, pad: Pad, centre: Place): Draped {
  const shape = pad.shape as FlatShape;
  const reach = circumradius(shape) + MARGIN;
  const { face } = centre.surface;
  solver.propagate([
    { at: centre.surface, source: 0, radius: reach, zero: drawingU(faceNormal(solver.mesh, face)) },
  ]);
  const field = new SurfaceField(solver);
  const turn = radiansFromDegrees(pad.turn);
  const far = boxBound(Float64Array.from(centre.point));
  // Hatch across the shorter side: fewer, longer lines.
  const tall = sizeOf(shape);
  const laid = layOut(
    solver.mesh,
    field.faces,
    (f, p) => {
      const seen = field.nearest(f, p);
      if (!seen || seen.distance > reach)
        return { edge: heldDistance(null, reach, () => far(p)) - circumradius(shape), hatch: 0, along: 0 };
      const angle = polarAngle(seen) - turn;
      const u = seen.distance * Math.cos(angle);
      const v = seen.distance * Math.sin(angle);
      return { edge: flatDistance(shape, u, v), hatch: tall ? u : v, along: 0 };
    },
    AREA_STEP,
  );
  if (laid.copper.face.length === 0)
    return {
      element: null,
      findings: [
        {
          rule: 'no-copper',
          element: pad.id,
          at: centre.point,
          text: 'nothing of the pad lies on the surface',
        },
      ],
    };
  const length = laid.outline.reduce((sum, loop) => sum + lineLength(loop), 0);
  const drawnLength = perimeter(shape);
  return {
    element: {
      id: pad.id,
      kind: 'pad',
      net: pad.net,
      width: 0,
      anchor: centre.point,
      ...laid,
      length,
      drawnLength,
      stretch: Math.abs(length / drawnLength - 1),
    },
    findings: [],
  };
}

const sizeOf = (shape: FlatShape): boolean =>
  'rect' in shape ? shape.rect[1] > shape.rect[0] : 'slot' in shape ? shape.slot[1] > shape.slot[0] : false;
