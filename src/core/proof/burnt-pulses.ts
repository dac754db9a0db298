/** All pulses of a set of files that activate anything, gathered in the part frame in a fixed order. */
import { benchPoint } from '../base/brands.ts';
import { poseFrame } from '../base/pose.ts';
import type { LayerBurn, LayerPlace } from './burn.ts';
import { beamAt, towardHead } from './forward.ts';
import type { LayerPulses } from './trace.ts';

export interface BurntPulses {
  count: number;
  /** Where it lands, part frame, mm, 3 a pulse. */
  hit: Float64Array;
  /** Unit vector toward the head, part frame, 3 a pulse. */
  toward: Float32Array;
  face: Int32Array;
  /** Activated half-width across the tilt, mm, above 0. */
  halfWidth: Float32Array;
  cos: Float32Array;
  /** mm from where it landed to the nearest copper sample that it may touch; Infinity when there is none. */
  nearest: Float32Array;
  /** 1/e² radius, mm. */
  radius: Float32Array;
  /** Elements of which pulse i activates a sample: `element[start[i]] … element[start[i + 1] − 1]`. */
  start: Uint32Array;
  element: Int32Array;
}

export function gatherPulses(
  layers: readonly { pulses: LayerPulses; burn: LayerBurn; place: LayerPlace }[],
): BurntPulses {
  let [count, tags] = [0, 0];
  for (const { burn } of layers) {
    for (const a of burn.halfWidth) if (a > 0) count++;
    tags += burn.element.length;
  }
  const hit = new Float64Array(3 * count);
  const toward = new Float32Array(3 * count);
  const face = new Int32Array(count);
  const halfWidth = new Float32Array(count);
  const cos = new Float32Array(count);
  const nearest = new Float32Array(count);
  const radius = new Float32Array(count);
  const start = new Uint32Array(count + 1);
  const element = new Int32Array(tags);
  let [n, t] = [0, 0];
  for (const { pulses, burn, place } of layers) {
    const frame = poseFrame(place.pose);
    for (let i = 0; i < pulses.d.length; i++) {
      if (!(burn.halfWidth[i] > 0)) continue;
      const X = pulses.command[2 * i];
      const Y = pulses.command[2 * i + 1];
      const at = beamAt(place.lean, X, Y, pulses.d[i]);
      const p = frame.pointToPart(benchPoint([at[0], at[1], at[2] - place.offset]));
      const u = frame.directionToPart(towardHead(place.lean, X, Y));
      for (let c = 0; c < 3; c++) {
        hit[3 * n + c] = p[c];
        toward[3 * n + c] = u[c];
      }
      face[n] = pulses.face[i];
      halfWidth[n] = burn.halfWidth[i];
      cos[n] = pulses.cos[i];
      nearest[n] = burn.nearest[i];
      radius[n] = burn.radius[i];
      start[n] = t;
      for (let k = burn.start[i]; k < burn.start[i + 1]; k++) element[t++] = burn.element[k];
      n++;
    }
  }
  start[n] = t;
  return {
    count: n,
    hit,
    toward,
    face,
    halfWidth,
    cos,
    nearest,
    radius,
    start,
    element: element.slice(0, t),
  };
}
