/**
 * Copper as chains of samples in the order in which cuts may fall: along a trace, or up the heights of a pad or region.
 */
import type { Vec3 } from '../base/vec.ts';
import type { CopperElement } from '../drape/copper.ts';
import type { ElementReach } from '../reach/result.ts';
import { type CutPlace, cutPlaces } from './cut-places.ts';
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
  const by = element.kind === 'trace' ? 'along' : 'height';
  const places = cutPlaces(element, by, reach, writable, options.up);
  let least = Infinity;
  let most = -Infinity;
  for (const p of places)
    for (const c of p.at) {
      least = Math.min(least, c);
      most = Math.max(most, c);
    }
  if (least > most) return [];
  const bins = new Bins(least, most, by === 'along' ? options.step : HEIGHT_STEP);
  for (const p of places) bins.add(p, reach.usable[p.triangle]);
  const samples = bins.samples((steep) => (options.stitch / 2) * (by === 'along' ? 1 : steep));
  return splitAtGaps(samples).map((piece) => ({
    element: index,
    by,
    samples: element.kind === 'pad' ? (asOne(piece) ?? neighbours(piece)) : neighbours(piece),
  }));
}

/** Equal bins of the cut coordinate, each with the heights of the copper in it. */
class Bins {
  private readonly least: number;
  private readonly count: number;
  private readonly size: number;
  private readonly low: Float64Array;
  private readonly high: Float64Array;
  private readonly usable: Float64Array;
  private readonly steep: Float64Array;

  constructor(least: number, most: number, step: number) {
    this.least = least;
    // Bins no smaller than the step: one that is a hair smaller than half a stitch would bring in a second neighbour.
    this.count = Math.max(1, Math.floor((most - least) / step));
    this.size = (most - least) / this.count || step;
    this.low = new Float64Array(this.count).fill(Infinity);
    this.high = new Float64Array(this.count).fill(-Infinity);
    this.usable = new Float64Array(this.count).fill(Infinity);
    this.steep = new Float64Array(this.count);
  }

  private at(c: number): number {
    return Math.min(this.count - 1, Math.max(0, Math.floor((c - this.least) / this.size)));
  }

  /** Adds the part of a triangle that each bin holds: heights are linear in it, so its ends and the bin's borders tell all. */
  add(p: CutPlace, usable: number): void {
    const { at, height } = p;
    const last = this.at(Math.max(...at));
    for (let i = this.at(Math.min(...at)); i <= last; i++) {
      const from = this.least + i * this.size;
      const to = from + this.size;
      for (let k = 0; k < at.length; k++) {
        const n = (k + 1) % at.length;
        this.side(i, from, to, at[k], height[k], at[n], height[n]);
      }
      this.usable[i] = Math.min(this.usable[i], usable);
      this.steep[i] = Math.max(this.steep[i], p.steep);
    }
  }

  /** Heights of the side (c, z) → (d, y) between the borders of bin i. */
  private side(i: number, from: number, to: number, c: number, z: number, d: number, y: number): void {
    const t0 = c < from ? (from - c) / (d - c) : c > to ? (to - c) / (d - c) : 0;
    const t1 = d < from ? (from - c) / (d - c) : d > to ? (to - c) / (d - c) : 1;
    if (!(t0 <= 1 && t1 >= 0)) return;
    for (const t of [t0, t1]) {
      const h = z + t * (y - z);
      this.low[i] = Math.min(this.low[i], h);
      this.high[i] = Math.max(this.high[i], h);
    }
  }

  samples(halfStitch: (steep: number) => number): ChainSample[] {
    return Array.from({ length: this.count }, (_, i) => ({
      from: this.least + i * this.size,
      to: this.least + (i + 1) * this.size,
      low: this.low[i],
      high: this.high[i],
      lo: this.high[i] - this.usable[i],
      hi: this.low[i] + this.usable[i],
      halfStitch: halfStitch(this.steep[i]),
    }));
  }
}

/** A pad that one height can write whole is one sample; null when none can. */
function asOne(samples: ChainSample[]): ChainSample[] | null {
  let { lo, hi, low, high } = samples[0];
  for (const s of samples) {
    lo = Math.max(lo, s.lo);
    hi = Math.min(hi, s.hi);
    low = Math.min(low, s.low);
    high = Math.max(high, s.high);
  }
  if (lo > hi) return null;
  return [{ from: samples[0].from, to: samples[samples.length - 1].to, lo, hi, low, high, halfStitch: 0 }];
}

/** Borders of bins that differ by rounding are one, mm. */
const SAME = 1e-9;

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
    for (let k = i - 1; k >= 0 && samples[k].to > s.from - s.halfStitch + SAME; k--) take(samples[k]);
    for (let k = i + 1; k < samples.length && samples[k].from < s.to + s.halfStitch - SAME; k++)
      take(samples[k]);
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
