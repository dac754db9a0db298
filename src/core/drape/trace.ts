/** A trace: the strip of half its width around the shortest path through its route points, with round ends. */
import type { WindowSolver } from '../geodesic/windows.ts';
import type { Trace } from '../project/schema.ts';
import { band } from './band.ts';
import type { CopperElement } from './copper.ts';
import { type Draped, layOut, MARGIN } from './element.ts';
import { boxBound, heldDistance } from './lower-bound.ts';
import { joinRoute, type Place } from './route.ts';

/** Longest patch edge inside a trace, mm: model.md §5's step. */
export const traceStep = (width: number): number => Math.min(0.1, width / 4);

export function drapeTrace(solver: WindowSolver, trace: Trace, places: readonly Place[]): Draped {
  const route = joinRoute(solver, places);
  if ('unreached' in route)
    return {
      element: null,
      findings: [
        {
          rule: 'no-way',
          element: trace.id,
          at: places[route.unreached].point,
          text: `no way over the surface between route points ${route.unreached - 1} and ${route.unreached}`,
        },
      ],
    };
  const { path } = route;
  if (path.faces.length === 0)
    return {
      element: null,
      findings: [
        { rule: 'no-copper', element: trace.id, at: places[0].point, text: 'all route points are one place' },
      ],
    };
  const half = trace.width / 2;
  const reach = half + MARGIN;
  const field = band(solver, path, { left: reach, right: reach, stops: route.stops });
  const far = boxBound(path.points);
  const laid = layOut(
    solver.mesh,
    field.faces,
    (face, p) => {
      const at = field.at(face, p);
      const edge = heldDistance(at?.distance ?? null, reach, () => far(p)) - half;
      return at ? { edge, hatch: at.across, along: at.along } : { edge, hatch: 0, along: 0 };
    },
    traceStep(trace.width),
  );
  const element: CopperElement = {
    id: trace.id,
    kind: 'trace',
    net: trace.net,
    width: trace.width,
    path,
    anchor: places[0].point,
    ...laid,
    length: path.length,
    drawnLength: path.length,
    stretch: 0,
  };
  return { element, findings: [] };
}
