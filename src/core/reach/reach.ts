/** Copper + head → what the beam can write, sample by sample and with margins (model.md §4). */

import { benchPoint, partPoint, radiansFromDegrees } from '../base/brands.ts';
import { poseFrame } from '../base/pose.ts';
import type { RunContext } from '../base/run-context.ts';
import { cosine } from '../base/trig.ts';
import type { Vec3 } from '../base/vec.ts';
import { focusedBeam, peakFluence, spotRadius, usableDepth } from '../beam/beam.ts';
import { type ConeRay, coneRays } from '../beam/cone.ts';
import { beamDirection, landing } from '../beam/landing.ts';
import type { Copper, CopperElement } from '../drape/copper.ts';
import { faceNormal } from '../mesh/surface-point.ts';
import { normalAt } from '../part/normals.ts';
import type { Part } from '../part/part.ts';
import type { Project, Setup } from '../project/schema.ts';
import { doseHolds } from './dose.ts';
import { fieldShare } from './field.ts';
import { incidenceAngle } from './incidence.ts';
import { type ElementReach, REASONS, type Reason, type SetupReach } from './result.ts';
import { blockedShare } from './shade.ts';

export const bit = (reason: Reason): number => 1 << REASONS.indexOf(reason);

/**
 * Checks every sample of every element in every setup. Before layers are planned the checks are taken at d = 0,
 * so **focus** cannot fail here.
 * @param defocus  d of the sample in the layer that writes it; default 0 everywhere
 */
export function checkReach(
  project: Project,
  setups: readonly Setup[],
  part: Part,
  copper: Copper,
  ctx: RunContext,
): SetupReach[] {
  return setups.map((setup, i) => ({
    setup: i,
    name: setup.name,
    elements: copper.elements.map((element, k) => {
      ctx.step('reach', i * copper.elements.length + k, setups.length * copper.elements.length);
      return reachElement(project, setup, part, element);
    }),
  }));
}

/**
 * One element in one setup.
 * @param defocus  d of each sample, mm, for the layer that writes it; left out before there is a plan
 */
export function reachElement(
  project: Project,
  setup: Setup,
  part: Part,
  element: CopperElement,
  defocus?: Float64Array,
): ElementReach {
  const { head, material, limits } = project;
  const { mesh, queries, normals } = part;
  const frame = poseFrame(setup.pose);
  const beam = focusedBeam(head);
  const cone: ConeRay[] = limits.cone ? coneRays(head) : [];
  const maxIncidence = radiansFromDegrees(limits.maxIncidence);
  const { copper } = element;
  const n = copper.face.length;
  const out: ElementReach = {
    height: new Float64Array(n),
    low: new Float64Array(n),
    high: new Float64Array(n),
    incidence: new Float64Array(n),
    blocked: new Float64Array(n),
    command: new Float64Array(2 * n),
    fluence: new Float64Array(n),
    usable: new Float64Array(n),
    activation: material.activationFluence,
    fails: new Uint8Array(n),
  };
  const heights = new Float64Array(copper.positions.length / 3);
  for (let v = 0; v < heights.length; v++)
    heights[v] = frame.point(
      partPoint([copper.positions[3 * v], copper.positions[3 * v + 1], copper.positions[3 * v + 2]]),
    )[2];
  for (let t = 0; t < n; t++) {
    const [a, b, c] = [copper.triangles[3 * t], copper.triangles[3 * t + 1], copper.triangles[3 * t + 2]];
    const face = copper.face[t];
    const x = copper.positions;
    const middle: Vec3 = [0, 1, 2].map(
      (k) => (x[3 * a + k] + x[3 * b + k] + x[3 * c + k]) / 3,
    ) as unknown as Vec3;
    const at = frame.point(partPoint(middle));
    const d = defocus ? defocus[t] : 0;
    const command = landing(benchPoint([at[0], at[1], d]), head);
    const u = beamDirection(command, head);
    const smooth = frame.direction(normalAt(mesh, normals, face, middle));
    const theta = incidenceAngle(smooth, u);
    const cos = cosine(theta);
    const blocked = blockedShare(
      queries,
      frame,
      middle,
      faceNormal(mesh, face),
      u,
      head.workingDistance - d,
      cone,
    );
    const fluence = cos > 0 ? peakFluence(beam, spotRadius(beam, d, u[2]), cos) : 0;
    const usable = usableDepth(beam, limits, material, Math.max(0, cos));
    out.height[t] = at[2];
    out.low[t] = Math.min(heights[a], heights[b], heights[c]);
    out.high[t] = Math.max(heights[a], heights[b], heights[c]);
    out.incidence[t] = theta;
    out.blocked[t] = blocked;
    out.command[2 * t] = command[0];
    out.command[2 * t + 1] = command[1];
    out.fluence[t] = fluence;
    out.usable[t] = usable;
    out.fails[t] =
      (defocus && Math.abs(d) > usable ? bit('focus') : 0) |
      (theta > maxIncidence ? bit('incidence') : 0) |
      (blocked > (limits.cone ? limits.maxBlocked : 0) ? bit('shade') : 0) |
      (fieldShare(command[0], command[1], head) > 1 ? bit('field') : 0) |
      (!doseHolds(fluence, material) || (limits.depth.mode === 'dose' && usable === 0) ? bit('dose') : 0);
  }
  return out;
}
