/** Stretches → layers with their runs: where exactly copper is cut, and how far the two sides overlap (model.md §5). */
import type { Chain } from './chains.ts';
import type { Layer, Run } from './plan.ts';
import type { Intervals, Stretch } from './runs.ts';

/**
 * @param intervals  allowed heights of each chain's samples
 * @param runs       stretches of each chain, from `fewestRuns`
 * @param heights    focus heights that the stretches name
 * @returns          layers from the lowest up; a height that writes nothing makes none
 */
export function cutChains(
  chains: readonly Chain[],
  intervals: readonly Intervals[],
  runs: readonly (readonly Stretch[])[],
  heights: readonly number[],
): Layer[] {
  const layers = heights.map(
    (h): Layer => ({ index: 0, focusHeight: h, stageOffset: h === 0 ? 0 : -h, runs: [], worstDefocus: 0 }),
  );
  chains.forEach((chain, c) => {
    const cuts = cutsOf(intervals[c], runs[c], heights);
    runs[c].forEach((stretch, r) => {
      const layer = layers[stretch.height];
      const [first, last] = [cuts[r], cuts[r + 1] - 1];
      for (let i = first; i <= last; i++) {
        const { low, high } = chain.samples[i];
        layer.worstDefocus = Math.max(layer.worstDefocus, high - layer.focusHeight, layer.focusHeight - low);
      }
      layer.runs.push(runOf(chain, first, last));
    });
  });
  return layers
    .filter((l) => l.runs.length > 0)
    .sort((a, b) => a.focusHeight - b.focusHeight)
    .map((l, i) => ({ ...l, index: i + 1 }));
}

/** First sample of each stretch, and the count of samples: each cut in the middle of where both its layers may write. */
function cutsOf(intervals: Intervals, stretches: readonly Stretch[], heights: readonly number[]): number[] {
  const cuts = [0];
  for (let r = 0; r + 1 < stretches.length; r++) {
    const next = heights[stretches[r + 1].height];
    // The stretch before ends as late as it can; the one after may begin earlier, but leaves its neighbour a sample.
    const late = stretches[r].last + 1;
    let early = late;
    while (early - 1 > cuts[r] && intervals[early - 1][0] <= next && next <= intervals[early - 1][1]) early--;
    cuts.push(Math.ceil((early + late) / 2));
  }
  cuts.push(intervals.length);
  return cuts;
}

/** Half a stitch is added at a cut, none at the ends of the chain. */
function runOf(chain: Chain, first: number, last: number): Run {
  const { samples, element, by } = chain;
  const cutFrom = samples[first].from;
  const cutTo = samples[last].to;
  return {
    element,
    by,
    from: first === 0 ? cutFrom : cutFrom - samples[first].halfStitch,
    to: last === samples.length - 1 ? cutTo : cutTo + samples[last].halfStitch,
    cutFrom,
    cutTo,
  };
}
