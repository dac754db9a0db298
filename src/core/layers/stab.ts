/**
 * Fewest focus heights that meet every interval, and among those the smallest largest |defocus|.
 *
 * The greedy by right ends is optimal for stabbing intervals (J. Kleinberg and É. Tardos, *Algorithm Design*, 2006,
 * ch. 4; M. Golumbic, *Algorithmic Graph Theory and Perfect Graphs*, 1980); it stays so on a grid, where each
 * interval shrinks to the grid heights inside it. The largest defocus is then found by bisection: allowing more never
 * needs more heights.
 */

/** What a sample asks of the height that writes it. Heights mm. */
export interface Demand {
  /** Allowed heights. */
  lo: number;
  hi: number;
  /** Bench heights that the sample spans: its |defocus| at h is max(high - h, h - low). */
  low: number;
  high: number;
}

/** Heights that can be set: h = k·step within [least, most]; step 0 is any height. */
export interface HeightGrid {
  step: number;
  least: number;
  most: number;
}

/** Slack for reading a height as a grid height, in steps: decimal steps such as 0.01 are not exact in binary. */
const ON_GRID = 1e-6;
/** Halvings of the largest defocus: 10 mm shrink below 1e-14. */
const HALVINGS = 52;

export function gridCeil(x: number, grid: HeightGrid): number {
  const y = Math.max(x, grid.least);
  return grid.step > 0 ? Math.ceil(y / grid.step - ON_GRID) * grid.step : y;
}

export function gridFloor(x: number, grid: HeightGrid): number {
  const y = Math.min(x, grid.most);
  return grid.step > 0 ? Math.floor(y / grid.step + ON_GRID) * grid.step : y;
}

/** The demand with at most `d` of defocus, on the grid; empty when lo > hi. */
export function within(demand: Demand, d: number, grid: HeightGrid): readonly [number, number] {
  return [
    gridCeil(Math.max(demand.lo, demand.high - d), grid),
    gridFloor(Math.min(demand.hi, demand.low + d), grid),
  ];
}

/**
 * Fewest heights for intervals, each as far right as it may be; null when an interval is empty or more than `most`
 * heights are needed.
 */
export function stabRight(
  intervals: readonly (readonly [number, number])[],
  most = Infinity,
): number[] | null {
  const order = intervals
    .map((_, i) => i)
    .sort((a, b) => intervals[a][1] - intervals[b][1] || intervals[a][0] - intervals[b][0]);
  const heights: number[] = [];
  let last = -Infinity;
  for (const i of order) {
    const [lo, hi] = intervals[i];
    if (lo > hi) return null;
    if (lo > last) {
      last = hi;
      heights.push(hi);
      if (heights.length > most) return null;
    }
  }
  return heights;
}

/** The same, each as far left as it may be, ascending. */
export function stabLeft(intervals: readonly (readonly [number, number])[]): number[] | null {
  const heights = stabRight(intervals.map(([lo, hi]) => [-hi, -lo] as const));
  return heights ? heights.map((h) => (h === 0 ? 0 : -h)).reverse() : null;
}

export interface Fewest {
  count: number;
  /** Smallest largest |defocus| with that count, mm. */
  worst: number;
  /** Demands with that bound, on the grid. */
  intervals: (readonly [number, number])[];
}

/** @param demands  none of them empty on the grid */
export function fewestHeights(demands: readonly Demand[], grid: HeightGrid): Fewest | null {
  const free = demands.map((x) => within(x, Infinity, grid));
  const greedy = stabRight(free);
  if (!greedy) return null;
  const count = greedy.length;
  const tightest = (d: number) => demands.map((x) => within(x, d, grid));
  let good = 0;
  for (const x of demands) good = Math.max(good, x.hi - x.low, x.high - x.lo);
  let bad = 0;
  if (stabRight(tightest(0), count)) good = 0;
  for (let i = 0; i < HALVINGS && good > 0; i++) {
    const d = (good + bad) / 2;
    if (d <= bad || d >= good) break;
    if (stabRight(tightest(d), count)) good = d;
    else bad = d;
  }
  // The bound that bisection ends at is a hair off: the plan it allows has a largest defocus of its own.
  const worst = largestDefocus(demands, tightest(good), stabRight(tightest(good), count)!);
  return { count, worst, intervals: tightest(worst) };
}

/** Largest |defocus| when each demand takes the best of the heights in its interval. */
function largestDefocus(
  demands: readonly Demand[],
  intervals: readonly (readonly [number, number])[],
  heights: readonly number[],
): number {
  let worst = 0;
  demands.forEach((x, i) => {
    const [lo, hi] = intervals[i];
    let best = Infinity;
    for (const h of heights) if (h >= lo && h <= hi) best = Math.min(best, Math.max(x.high - h, h - x.low));
    worst = Math.max(worst, best);
  });
  return worst;
}
