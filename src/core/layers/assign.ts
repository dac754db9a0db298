/** Which layer writes each sample: the plan read back onto the copper. */
import type { CopperElement } from '../drape/copper.ts';
import type { ElementReach } from '../reach/result.ts';
import { middleAlong } from './cut-places.ts';
import type { SetupPlan } from './plan.ts';

/** Arc lengths that differ by less than this between triangles and cuts are one, mm. */
const AT_CUT = 1e-6;

/** Place of a layer in `plan.layers` for each sample of the element, -1 where no layer writes it. */
export function layerOfSamples(
  plan: SetupPlan,
  element: CopperElement,
  index: number,
  reach: ElementReach,
  writable: (t: number) => boolean,
): Int16Array {
  const n = element.copper.face.length;
  const out = new Int16Array(n).fill(-1);
  const trace = element.kind === 'trace';
  const runs = plan.layers.flatMap((layer, k) =>
    layer.runs.filter((r) => r.element === index).map((r) => ({ ...r, layer: k })),
  );
  for (let t = 0; t < n; t++) {
    if (!writable(t)) continue;
    const c = trace ? middleAlong(element, t) : reach.height[t];
    const run = runs.find((r) => c >= r.cutFrom - AT_CUT && c <= r.cutTo + AT_CUT);
    if (run) out[t] = run.layer;
  }
  return out;
}
