/**
 * Given the heights of the layers, the fewest runs: each chain is walked from its start, and the layer that reaches
 * farthest takes each stretch (the greedy for covering a line with the fewest intervals; Kleinberg and Tardos, ch. 4).
 */

/** Allowed heights of a chain's samples, ascending order of the samples. */
export type Intervals = readonly (readonly [number, number])[];

/** A stretch of samples that one height writes; `last` is included. */
export interface Stretch {
  height: number;
  first: number;
  last: number;
}

/** Fewest stretches over one chain, or null when some sample meets no height. Ties go to the lowest height. */
export function fewestRuns(intervals: Intervals, heights: readonly number[]): Stretch[] | null {
  const out: Stretch[] = [];
  let i = 0;
  while (i < intervals.length) {
    let best = -1;
    let reach = i - 1;
    heights.forEach((h, k) => {
      let j = i;
      while (j < intervals.length && intervals[j][0] <= h && h <= intervals[j][1]) j++;
      if (j - 1 > reach) {
        reach = j - 1;
        best = k;
      }
    });
    if (best < 0) return null;
    out.push({ height: best, first: i, last: reach });
    i = reach + 1;
  }
  return out;
}

/** Number of runs over all chains; Infinity when some sample meets no height. */
export function countRuns(chains: readonly Intervals[], heights: readonly number[]): number {
  let sum = 0;
  for (const c of chains) {
    const runs = fewestRuns(c, heights);
    if (!runs) return Infinity;
    sum += runs.length;
  }
  return sum;
}

/** Combinations tried one by one before the search turns to one height at a time. */
const EXHAUSTIVE = 2000;
const ROUNDS = 8;

/**
 * Heights with the fewest runs. Only heights where some interval begins or ends, and one between each two, can
 * make a difference; all combinations are tried when they are few, and otherwise one height at a time until nothing
 * improves (coordinate descent: then fewest is not promised, and `exact` says so).
 * @param ranges  for each layer the least and greatest height that the smallest count allows
 */
export function bestHeights(
  chains: readonly Intervals[],
  ranges: readonly (readonly [number, number])[],
  snap: (h: number) => number,
): { heights: number[]; runs: number; exact: boolean } {
  const thin = chains.map(distinct);
  const candidates = ranges.map(([lo, hi]) => candidateHeights(thin, lo, hi, snap));
  let heights = ranges.map(([lo, hi]) => snap((lo + hi) / 2));
  let runs = countRuns(thin, heights);
  const total = candidates.reduce((p, c) => p * c.length, 1);
  if (total <= EXHAUSTIVE) {
    const pick = new Array<number>(ranges.length).fill(0);
    for (let n = 0; n < total; n++) {
      let rest = n;
      for (let k = 0; k < pick.length; k++) {
        pick[k] = candidates[k][rest % candidates[k].length];
        rest = Math.floor(rest / candidates[k].length);
      }
      const r = countRuns(thin, pick);
      if (r < runs) {
        runs = r;
        heights = [...pick];
      }
    }
    return { heights, runs, exact: true };
  }
  if (runs === Infinity) {
    heights = ranges.map(([, hi]) => hi);
    runs = countRuns(thin, heights);
  }
  for (let round = 0; round < ROUNDS; round++) {
    const before = runs;
    for (let k = 0; k < heights.length; k++)
      for (const h of sparse(candidates[k])) {
        const tried = [...heights];
        tried[k] = h;
        const r = countRuns(thin, tried);
        if (r < runs) {
          runs = r;
          heights = tried;
        }
      }
    if (runs === before) break;
  }
  return { heights, runs, exact: false };
}

/** Runs of equal intervals say nothing new. */
function distinct(chain: Intervals): Intervals {
  return chain.filter((x, i) => i === 0 || x[0] !== chain[i - 1][0] || x[1] !== chain[i - 1][1]);
}

function candidateHeights(
  chains: readonly Intervals[],
  lo: number,
  hi: number,
  snap: (h: number) => number,
): number[] {
  const ends = new Set<number>([lo, hi]);
  for (const c of chains)
    for (const [a, b] of c) {
      if (a >= lo && a <= hi) ends.add(a);
      if (b >= lo && b <= hi) ends.add(b);
    }
  const sorted = [...ends].sort((a, b) => a - b);
  const all = new Set(sorted);
  for (let i = 1; i < sorted.length; i++) all.add(snap((sorted[i - 1] + sorted[i]) / 2));
  return [...all].filter((h) => h >= lo && h <= hi).sort((a, b) => a - b);
}

/** At most this many candidates of one height are tried in one round. */
const SPARSE = 200;
const sparse = (list: readonly number[]): readonly number[] =>
  list.length <= SPARSE
    ? list
    : Array.from({ length: SPARSE }, (_, i) => list[Math.round((i * (list.length - 1)) / (SPARSE - 1))]);
