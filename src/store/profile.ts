/** How much copper lies at each bench height: the height strip's outline. */
import type { CopperPicture } from '../worker/pictures.ts';

export interface Profile {
  /** Height of the first bin's lower edge, mm. */
  from: number;
  /** Width of a bin, mm. */
  bin: number;
  /** mm² in each bin. */
  area: Float64Array;
  /** Least and greatest height of the copper. */
  range: [number, number];
}

/** @returns null without copper */
export function heightProfile(copper: CopperPicture, setup: number): Profile | null {
  const heights = copper.heights[setup] ?? copper.heights[0];
  if (!heights || heights.length === 0) return null;
  let lo = Infinity;
  let hi = -Infinity;
  for (const z of heights) {
    if (z < lo) lo = z;
    if (z > hi) hi = z;
  }
  const bin = niceStep(Math.max(hi - lo, 0.5) / 90);
  const from = Math.floor(lo / bin) * bin;
  const area = new Float64Array(Math.max(1, Math.ceil((hi - from) / bin + 1e-9)));
  for (let t = 0; t < copper.area.length; t++) {
    // A triangle's area is spread evenly over its heights: exact enough at a tenth of a layer's depth.
    const z = [0, 1, 2].map((c) => heights[copper.corners[3 * t + c]]);
    const [a, b] = [Math.min(...z), Math.max(...z)];
    const [i, j] = [binOf(a), binOf(b)];
    if (i === j) area[i] += copper.area[t];
    else
      for (let k = i; k <= j; k++) {
        const share = (Math.min(b, from + (k + 1) * bin) - Math.max(a, from + k * bin)) / (b - a);
        area[k] += copper.area[t] * share;
      }
  }
  return { from, bin, area, range: [lo, hi] };

  function binOf(z: number): number {
    return Math.min(area.length - 1, Math.max(0, Math.floor((z - from) / bin)));
  }
}

/** The next of 1, 2, 5 · 10ⁿ. */
export function niceStep(x: number): number {
  const p = 10 ** Math.floor(Math.log10(x));
  const m = x / p;
  return (m <= 1 ? 1 : m <= 2 ? 2 : m <= 5 ? 5 : 10) * p;
}
