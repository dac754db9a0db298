/** A trace: the strip of half its width around the shortest path through its route points. */
import type { WindowSolver } from '../geodesic/windows.ts';
import type { Trace } from '../project/schema.ts';
import { band } from './band.ts';
import { heldDistance } from './box-bound.ts';
import type { CopperElement } from './copper.ts';
import { type Draped, layOut, MARGIN, told } from './element.ts';
import { lengthen } from './lengthen.ts';
import { mitreCurvature } from './mitre-curvature.ts';
import { joinRoute, type Place } from './route.ts';
import { mitred, type Strip, stripDistance, stripHatch, stripReach } from './strip.ts';

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
          text: `no way over the surface between ${told(places[route.unreached - 1].point)} and ${told(places[route.unreached].point)}; draw a trace on each piece of the part`,
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
  const strip: Strip = {
    half,
    ends: trace.ends ?? 'round',
    bends: trace.bends ?? 'round',
    length: path.length,
  };
  const reach = half + MARGIN;
  // A square end is that of a longer strip.
  const {
    path: middle,
    lead,
    pieces,
  } = strip.ends === 'square' ? lengthen(solver.mesh, path, half) : { path, lead: 0, pieces: 0 };
  let farthest = half;
  const field = band(solver, middle, {
    left: reach,
    right: reach,
    stops: route.stops.map((i) => i + pieces),
    start: -lead,
    ...(strip.bends === 'round'
      ? {}
      : {
          bendReach: (turn) => {
            const most = stripReach(strip, turn);
            farthest = Math.max(farthest, most);
            return most + MARGIN;
          },
        }),
  });
  const bends = field.bends.map((bend) => ({
    ...bend,
    curvature: mitred(strip, bend.turn) ? mitreCurvature(solver.mesh, middle, field, bend, half) : 0,
  }));
  const laid = layOut(
    solver.mesh,
    field.faces,
    (face, p) => {
      const at = field.at(face, p);
      const seen = at && stripDistance(strip, at, bends);
      const edge = heldDistance(seen, reach, () => field.far(p) - (farthest - half)) - half;
      return at
        ? { edge, hatch: stripHatch(strip, at, bends), along: at.along }
        : { edge, hatch: 0, along: 0 };
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
