/** A region: what shortest paths between its corners enclose, on the side that the corners run round counter-clockwise. */
import { distance, type Vec3 } from '../base/vec.ts';
import type { WindowSolver } from '../geodesic/windows.ts';
import { faceNormal } from '../mesh/surface-point.ts';
import type { Region } from '../project/schema.ts';
import { type Band, band } from './band.ts';
import { heldDistance } from './box-bound.ts';
import { type Draped, layOut, told } from './element.ts';
import { AREA_STEP } from './pad.ts';
import { joinRoute, type Place } from './route.ts';
import { selfCrossing } from './self-crossing.ts';

/** A region's inside may lie farther from its outline than the circle of its perimeter allows in the plane, by this factor on curved parts. */
const DEPTH = 1.6;

export function drapeRegion(
  solver: WindowSolver,
  baseline: WindowSolver,
  region: Region,
  places: readonly Place[],
): Draped {
  const corners = counterClockwise(solver, places) ? places : [...places].reverse();
  const route = joinRoute(solver, corners, true);
  if ('unreached' in route)
    return {
      element: null,
      findings: [
        {
          rule: 'no-way',
          element: region.id,
          at: corners[route.unreached % corners.length].point,
          text: `no way over the surface between ${told(corners[(route.unreached + corners.length - 1) % corners.length].point)} and ${told(corners[route.unreached % corners.length].point)}; draw a region on each piece of the part`,
        },
      ],
    };
  const { path } = route;
  if (path.faces.length < 2)
    return {
      element: null,
      findings: [
        { rule: 'no-copper', element: region.id, at: places[0].point, text: 'the outline encloses nothing' },
      ],
    };
  const crossed = selfCrossing(solver.mesh, path);
  if (crossed)
    return {
      element: null,
      findings: [{ rule: 'crossed', element: region.id, at: crossed, text: 'the outline crosses itself' }],
    };
  const depth = (path.length / (2 * Math.PI)) * DEPTH;
  // As far outside as inside: at a sharp corner the side that is nearer must be heard on both of its sides.
  const rim = band(solver, path, { left: depth, right: depth, closed: true, stops: route.stops });
  // Fill lines run along the longest line from corner to corner, and keep their distance from it.
  const lay = (reach: number) => {
    const hatch = hatchBand(baseline, corners, reach);
    let blind = false;
    const laid = layOut(
      solver.mesh,
      rim.faces,
      (face, p) => {
        const at = rim.at(face, p);
        if (!at || at.distance > depth)
          return { edge: heldDistance(null, depth, () => rim.far(p)), hatch: 0, along: 0 };
        const h = hatch?.at(face, p);
        if (!h && at.across > 0) blind = true;
        return { edge: at.across > 0 ? -at.distance : at.distance, hatch: h ? h.across : 0, along: 0 };
      },
      AREA_STEP,
    );
    return { laid, blind };
  };
  // A third of the outline is enough but for regions that wind about.
  let tried = lay(path.length / 3);
  if (tried.blind) tried = lay(path.length);
  const { laid } = tried;
  if (laid.copper.face.length === 0)
    return {
      element: null,
      findings: [
        { rule: 'no-copper', element: region.id, at: places[0].point, text: 'the outline encloses nothing' },
      ],
    };
  return {
    element: {
      id: region.id,
      kind: 'region',
      net: region.net,
      width: 0,
      anchor: middle(laid.copper.positions),
      ...laid,
      length: path.length,
      drawnLength: path.length,
      stretch: 0,
    },
    findings: [],
  };
}

/** Whether the corners run counter-clockwise about the mean of the normals where they lie. */
function counterClockwise(solver: WindowSolver, places: readonly Place[]): boolean {
  const n = [0, 0, 0];
  const area = [0, 0, 0];
  const o = places[0].point;
  places.forEach((place, i) => {
    const f = faceNormal(solver.mesh, place.surface.face);
    const q = places[(i + 1) % places.length].point;
    const a = [place.point[0] - o[0], place.point[1] - o[1], place.point[2] - o[2]];
    const b = [q[0] - o[0], q[1] - o[1], q[2] - o[2]];
    for (let k = 0; k < 3; k++) {
      n[k] += f[k];
      area[k] += a[(k + 1) % 3] * b[(k + 2) % 3] - a[(k + 2) % 3] * b[(k + 1) % 3];
    }
  });
  return n[0] * area[0] + n[1] * area[1] + n[2] * area[2] >= 0;
}

function hatchBand(solver: WindowSolver, corners: readonly Place[], reach: number): Band | null {
  let best: [Place, Place] = [corners[0], corners[1]];
  let longest = -1;
  for (let i = 0; i < corners.length; i++)
    for (let j = i + 1; j < corners.length; j++) {
      const d = distance(corners[i].point, corners[j].point);
      if (d > longest) {
        longest = d;
        best = [corners[i], corners[j]];
      }
    }
  const line = joinRoute(solver, best);
  return 'unreached' in line || line.path.faces.length === 0
    ? null
    : band(solver, line.path, { left: reach, right: reach, stops: line.stops });
}

function middle(positions: Float64Array): Vec3 {
  const n = positions.length / 3;
  const m = [0, 0, 0];
  for (let i = 0; i < positions.length; i++) m[i % 3] += positions[i] / n;
  return [m[0], m[1], m[2]];
}
