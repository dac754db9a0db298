/** A pad: its flat shape laid on the surface in polar coordinates about its centre (model.md §10). */

import { radiansFromDegrees } from '../base/brands.ts';
import { cosine, sine } from '../base/trig.ts';
import type { Vec3 } from '../base/vec.ts';
import { type LogPlace, logMap } from '../geodesic/log-map.ts';
import type { MapLimit } from '../geodesic/map-limits.ts';
import type { WindowSolver } from '../geodesic/windows.ts';
import { faceNormal } from '../mesh/surface-point.ts';
import type { Pad } from '../project/schema.ts';
import { boxBound, heldDistance } from './box-bound.ts';
import { type Draped, layOut, lineLength, MARGIN, TRUE_TO } from './element.ts';
import type { Place } from './route.ts';
import { circumradius, type FlatShape, flatDistance, perimeter } from './shapes.ts';

/** Longest patch edge inside pads and regions, mm: model.md §5's step. */
export const AREA_STEP = 0.1;
/** cos 10°: nearer to ±X than this, +X says too little about a direction in the tangent plane. */
const NEAR_X = cosine((10 * Math.PI) / 180);

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
  const zero = drawingU(faceNormal(solver.mesh, centre.surface.face));
  const map = logMap(solver, centre.surface, reach, zero);
  const turn = radiansFromDegrees(pad.turn);
  const flat = ({ radius, angle }: LogPlace): [number, number] => [
    radius * cosine(angle - turn),
    radius * sine(angle - turn),
  ];
  const far = boxBound(Float64Array.from(centre.point));
  // Hatch across the shorter side: fewer, longer lines.
  const tall = sizeOf(shape);
  const laid = layOut(
    solver.mesh,
    map.faces,
    (f, p) => {
      const at = map.at(f, p);
      if (!at)
        return { edge: heldDistance(null, reach, () => far(p)) - circumradius(shape), hatch: 0, along: 0 };
      const [u, v] = flat(at);
      return { edge: flatDistance(shape, u, v), hatch: tall ? u : v, along: 0 };
    },
    AREA_STEP,
  );
  const limits = map.limits((at) => flatDistance(shape, ...flat(at)));
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
    findings: limits
      .filter((limit) => limit.measure < -TRUE_TO)
      .map((limit) => ({ rule: 'beyond-map', element: pad.id, at: limit.at, text: BEYOND[limit.kind] })),
  };
}

/** What lies inside the pad where the map of the surface stops being one to one. The copper that has a place is kept. */
const BEYOND: Record<MapLimit['kind'], string> = {
  border: 'the surface ends inside the pad: some of its copper has no place',
  'cut locus': 'ways over the surface from either side meet inside the pad: it is torn there',
  saddle: 'a sharp inner corner lies inside the pad: its copper is squeezed behind it',
};

const sizeOf = (shape: FlatShape): boolean =>
  'rect' in shape ? shape.rect[1] > shape.rect[0] : 'slot' in shape ? shape.slot[1] > shape.slot[0] : false;
