/**
 * Copper as chains of samples in the order in which cuts may fall: along a trace, or up the heights of a pad or region.
 */
import type { Vec3 } from '../base/vec.ts';
import type { CopperElement } from '../drape/copper.ts';
import type { ElementReach } from '../reach/result.ts';
import type { Demand } from './stab.ts';

/** A chain's sample: a short stretch of the cut coordinate, the whole copper across it. */
export interface ChainSample extends Demand {
  /** Cut coordinate at its ends, mm. */
  from: number;
  to: number;
  /** Half a stitch here, in the cut coordinate, mm. */
  halfStitch: number;
}

export interface Chain {
  /** Index into `Copper.elements`. */
  element: number;
  by: 'along' | 'height';
  /** Ascending and gapless. */
  samples: ChainSample[];
}

/** Heights of a pad or region are binned at this step, mm: the plan loses no more than it in depth. */
const HEIGHT_STEP = 0.02;

export interface ChainOptions {
  /** Sampling step along traces, mm. */
  step: number;
  /** Overlap of two runs at a cut, on the surface, mm. */
  stitch: number;
  /** The bench's +Z in the part frame, unit. */
  up: Vec3;
}

/**
 * @param writable  whether the beam can go to a sample of the copper at all
 * @returns chains; where copper that cannot be written interrupts an element, one for each rest
 */
export function chainsOf(
  element: CopperElement,
  index: number,
  reach: ElementReach,
  writable: (t: number) => boolean,
  options: ChainOptions,
): Chain[] {
  const trace = element.kind === 'trace';
  const pad = element.kind === 'pad';
  const step = trace ? options.step : HEIGHT_STEP;
  const n = element.copper.face.length;
  const ranges = (t: number): readonly (readonly [number, number])[] =>
    trace ? alongRange(element, t) : [[reach.low[t], reach.high[t]]];
  let least = Infinity;
  let most = -Infinity;
  for (let t = 0; t < n; t++) {
    if (!writable(t)) continue;
    for (const [a, b] of ranges(t)) {
      least = Math.min(least, a);
      most = Math.max(most, b);
    }
  }
  if (least > most) return [];
  const count = Math.max(1, Math.ceil((most - least) / step));
  const size = (most - least) / count || step;
  const low = new Float64Array(count).fill(Infinity);
  const high = new Float64Array(count).fill(-Infinity);
  const usable = new Float64Array(count).fill(Infinity);
  const steep = new Float64Array(count);
  for (let t = 0; t < n; t++) {
    if (!writable(t)) continue;
    const slope = trace ? 0 : slopeOf(element, t, options.up);
    for (const [a, b] of ranges(t)) {
      const first = Math.min(count - 1, Math.max(0, Math.floor((a - least) / size)));
      const last = Math.min(count - 1, Math.max(0, Math.floor((b - least) / size)));
      for (let i = first; i <= last; i++) {
        // A region's bin holds only the part of the triangle at its heights.
        low[i] = Math.min(low[i], trace ? reach.low[t] : Math.max(reach.low[t], least + i * size));
        high[i] = Math.max(high[i], trace ? reach.high[t] : Math.min(reach.high[t], least + (i + 1) * size));
        usable[i] = Math.min(usable[i], reach.usable[t]);
        steep[i] = Math.max(steep[i], slope);
      }
    }
  }
  const samples: ChainSample[] = [];
  for (let i = 0; i < count; i++) {
    samples.push({
      from: least + i * size,
      to: least + (i + 1) * size,
      low: low[i],
      high: high[i],
      lo: high[i] - usable[i],
      hi: low[i] + usable[i],
      halfStitch: trace ? options.stitch / 2 : (options.stitch / 2) * steep[i],
    });
  }
  const pieces = splitAtGaps(samples);
  return pieces.map((piece) => ({
    element: index,
    by: trace ? ('along' as const) : ('height' as const),
    samples: pad ? (asOne(piece) ?? neighbours(piece)) : neighbours(piece),
  }));
}

/** A pad that one height can write whole is one sample; null when none can. */
function asOne(samples: ChainSample[]): ChainSample[] | null {
  const lo = Math.max(...samples.map((s) => s.lo));
  const hi = Math.min(...samples.map((s) => s.hi));
  if (lo > hi) return null;
  const low = Math.min(...samples.map((s) => s.low));
  const high = Math.max(...samples.map((s) => s.high));
  return [{ from: samples[0].from, to: samples[samples.length - 1].to, lo, hi, low, high, halfStitch: 0 }];
}

/** Each sample takes on the demands of its neighbours within half a stitch, so that a cut may fall at it (model.md §5). */
function neighbours(samples: ChainSample[]): ChainSample[] {
  return samples.map((s, i) => {
    let { lo, hi, low, high } = s;
    const take = (o: ChainSample) => {
      lo = Math.max(lo, o.lo);
      hi = Math.min(hi, o.hi);
      low = Math.min(low, o.low);
      high = Math.max(high, o.high);
    };
    for (let k = i - 1; k >= 0 && samples[k].to > s.from - s.halfStitch; k--) take(samples[k]);
    for (let k = i + 1; k < samples.length && samples[k].from < s.to + s.halfStitch; k++) take(samples[k]);
    return { ...s, lo, hi, low, high };
  });
}

function splitAtGaps(samples: ChainSample[]): ChainSample[][] {
  const pieces: ChainSample[][] = [];
  let current: ChainSample[] = [];
  for (const s of samples) {
    if (s.low > s.high) {
      if (current.length > 0) pieces.push(current);
      current = [];
    } else current.push(s);
  }
  if (current.length > 0) pieces.push(current);
  return pieces;
}

/** Arc lengths that a triangle stands for: a range, or its corners' own where the foot jumps (inner bends, crossings). */
function alongRange(element: CopperElement, t: number): readonly (readonly [number, number])[] {
  const { field, copper } = element;
  // The field's triangle holds the copper's: its range is the wider one.
  const s = 3 * copper.source[t];
  const [a, b, c] = [field.triangles[s], field.triangles[s + 1], field.triangles[s + 2]];
  const [sa, sb, sc] = [field.along[a], field.along[b], field.along[c]];
  const lo = Math.min(sa, sb, sc);
  const hi = Math.max(sa, sb, sc);
  const x = field.positions;
  const longest = Math.max(side(x, 3 * a, 3 * b), side(x, 3 * b, 3 * c), side(x, 3 * c, 3 * a));
  if (hi - lo <= JUMP * longest) return [[lo, hi]];
  return [
    [sa, sa],
    [sb, sb],
    [sc, sc],
  ];
}

/** The foot moves at most as fast as the place, but for curvature: more than this times a triangle's side is a jump. */
const JUMP = 2;

/** Sine of a triangle's slope against the bench: height gained for each mm walked straight up it. */
function slopeOf(element: CopperElement, t: number, up: Vec3): number {
  const { positions: x, triangles } = element.copper;
  const a = 3 * triangles[3 * t],
    b = 3 * triangles[3 * t + 1],
    c = 3 * triangles[3 * t + 2];
  const ux = x[b] - x[a],
    uy = x[b + 1] - x[a + 1],
    uz = x[b + 2] - x[a + 2];
  const vx = x[c] - x[a],
    vy = x[c + 1] - x[a + 1],
    vz = x[c + 2] - x[a + 2];
  const nx = uy * vz - uz * vy,
    ny = uz * vx - ux * vz,
    nz = ux * vy - uy * vx;
  const l = Math.hypot(nx, ny, nz);
  if (l === 0) return 0;
  const cos = (nx * up[0] + ny * up[1] + nz * up[2]) / l;
  return Math.sqrt(Math.max(0, 1 - cos * cos));
}

const side = (x: Float64Array, a: number, b: number): number =>
  Math.hypot(x[a] - x[b], x[a + 1] - x[b + 1], x[a + 2] - x[b + 2]);
