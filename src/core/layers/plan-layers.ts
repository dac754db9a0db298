/** Reach → plan: which focus heights, and what each of them writes (model.md §5). */
import { poseFrame } from '../base/pose.ts';
import type { RunContext } from '../base/run-context.ts';
import type { Copper, CopperElement } from '../drape/copper.ts';
import type { Project, Setup, Stage } from '../project/schema.ts';
import type { ElementReach, SetupReach } from '../reach/result.ts';
import { REASONS } from '../reach/result.ts';
import { type Chain, chainsOf } from './chains.ts';
import { cutChains } from './cuts.ts';
import type { Layer, SetupPlan } from './plan.ts';
import { bestHeights, fewestRuns } from './runs.ts';
import { fewestHeights, gridCeil, gridFloor, type HeightGrid, stabLeft, stabRight, within } from './stab.ts';

/** Reasons for which the beam cannot go to a place at all: it would burn something else, or turn past its field. */
const CANNOT_GO = (1 << REASONS.indexOf('shade')) | (1 << REASONS.indexOf('field'));

/**
 * Whether the beam can go to a sample and activate anything there. What is merely weak (beyond `maxIncidence`, or without its
 * dose margin) is written all the same, and reported.
 * @param reach  as before planning, at d = 0: in focus the light is strongest
 */
export const canGo = (reach: ElementReach, t: number): boolean =>
  (reach.fails[t] & CANNOT_GO) === 0 && reach.fluence[t] >= reach.activation;

/** Heights that the stage can bring into focus: s = -h within its range, in its steps. */
export const heightGrid = (stage: Stage): HeightGrid => ({
  step: stage.step,
  least: -stage.range[1],
  most: -stage.range[0],
});

/** Sampling step along a trace, mm (model.md §5). */
const stepOf = (element: CopperElement): number => Math.min(0.1, element.width > 0 ? element.width / 4 : 0.1);

/**
 * @param reach  one a setup, from `checkReach`
 * @returns one plan a setup; an element is written in the setup that can write most of it, the first of equals
 */
export function planLayers(
  project: Project,
  setups: readonly Setup[],
  copper: Copper,
  reach: readonly SetupReach[],
  ctx: RunContext,
): SetupPlan[] {
  const home = copper.elements.map((_, e) => bestSetup(reach.map((r) => r.elements[e])));
  return setups.map((setup, i) => {
    ctx.step('layers', i, setups.length);
    const mine = home.flatMap((s, e) => (s === i ? [e] : []));
    return planSetup(project, setup, i, copper, reach[i], mine);
  });
}

/** The setup that can write most samples of an element, the first of equals. @param reaches  of the element, one a setup */
export function bestSetup(reaches: readonly ElementReach[]): number {
  let best = 0;
  let most = -1;
  reaches.forEach((reach, i) => {
    let n = 0;
    for (const fails of reach.fails) if (fails === 0) n++;
    if (n > most) {
      most = n;
      best = i;
    }
  });
  return best;
}

function planSetup(
  project: Project,
  setup: Setup,
  index: number,
  copper: Copper,
  reach: SetupReach,
  mine: readonly number[],
): SetupPlan {
  const grid = heightGrid(project.stage);
  const up = poseFrame(setup.pose).directionToPart([0, 0, 1]);
  const given = setup.focusHeights ? [...new Set(setup.focusHeights)].sort((a, b) => a - b) : null;
  const unreached: SetupPlan['unreached'] = [];
  const chains: Chain[] = [];
  for (const e of mine) {
    const element = copper.elements[e];
    const r = reach.elements[e];
    unreached.push(...cannotGo(element, e, r));
    for (const chain of chainsOf(element, e, r, (t) => canGo(r, t), {
      step: stepOf(element),
      stitch: project.scan.stitch,
      up,
    })) {
      // What no height of the stage brings into focus is a finding; the rest goes on.
      let keep: Chain['samples'] = [];
      const flush = () => {
        if (keep.length > 0) chains.push({ ...chain, samples: keep });
        keep = [];
      };
      for (const s of chain.samples) {
        const [lo, hi] = within(s, Infinity, grid);
        if (given ? given.some((h) => s.lo <= h && h <= s.hi) : lo <= hi) keep.push(s);
        else {
          flush();
          const last = unreached[unreached.length - 1];
          if (last?.element === e && last.reason === 'focus' && last.to === s.from) {
            last.to = last.cutTo = s.to;
            last.length += s.to - s.from;
          } else
            unreached.push({
              element: e,
              by: chain.by,
              from: s.from,
              to: s.to,
              cutFrom: s.from,
              cutTo: s.to,
              length: s.to - s.from,
              reason: 'focus',
            });
        }
      }
      flush();
    }
  }
  const layers = chains.length === 0 ? [] : given ? layersAt(chains, given) : layersOf(chains, grid);
  return { setup: index, name: setup.name, layers, elements: [...mine], unreached };
}

function layersOf(chains: readonly Chain[], grid: HeightGrid): Layer[] {
  const demands = chains.flatMap((c) => c.samples);
  const fewest = fewestHeights(demands, grid)!;
  // The bound in the chains' own order.
  const intervals: (readonly [number, number])[][] = [];
  let k = 0;
  for (const c of chains) intervals.push(c.samples.map(() => fewest.intervals[k++]));
  const right = stabRight(fewest.intervals)!;
  const left = stabLeft(fewest.intervals)!;
  const snap = (h: number) => (grid.step > 0 ? Math.round(h / grid.step) * grid.step : h);
  const { heights } = bestHeights(
    intervals,
    left.map((lo, i) => [lo, right[i]] as const),
    snap,
  );
  const runs = intervals.map((list) => fewestRuns(list, heights)!);
  // What is still free takes the middle of its range.
  const settled = heights.map((h, layer) => {
    let lo = -Infinity;
    let hi = Infinity;
    runs.forEach((stretches, c) => {
      for (const s of stretches)
        if (s.height === layer)
          for (let i = s.first; i <= s.last; i++) {
            lo = Math.max(lo, intervals[c][i][0]);
            hi = Math.min(hi, intervals[c][i][1]);
          }
    });
    if (lo === -Infinity) return h;
    const middle = (lo + hi) / 2;
    return Math.min(Math.max(snapDown(middle, grid), lo), hi);
  });
  return cutChains(chains, intervals, runs, settled);
}

/** Layers at heights chosen by hand: the fewest runs that they allow. Every sample meets one of them. */
function layersAt(chains: readonly Chain[], heights: readonly number[]): Layer[] {
  const intervals = chains.map((c) => c.samples.map((s) => [s.lo, s.hi] as const));
  return cutChains(
    chains,
    intervals,
    intervals.map((list) => fewestRuns(list, heights)!),
    heights,
  );
}

/** Nearest grid height; halfway goes down, so that the same job always gives the same plan. */
function snapDown(h: number, grid: HeightGrid): number {
  if (grid.step === 0) return h;
  const down = gridFloor(h, grid);
  const up = gridCeil(h, grid);
  return up - h < h - down ? up : down;
}

/** Stretches that the beam cannot go to, with the reason that most of their copper has. */
function cannotGo(element: CopperElement, index: number, reach: ElementReach): SetupPlan['unreached'] {
  let n = 0;
  let shaded = 0;
  let off = 0;
  let turned = 0;
  for (let t = 0; t < element.copper.face.length; t++) {
    if (canGo(reach, t)) continue;
    n++;
    if (reach.fails[t] & (1 << REASONS.indexOf('shade'))) shaded++;
    else if (reach.fails[t] & (1 << REASONS.indexOf('field'))) off++;
    else if (reach.fails[t] & (1 << REASONS.indexOf('incidence'))) turned++;
  }
  if (n === 0) return [];
  const share = n / element.copper.face.length;
  return [
    {
      element: index,
      by: element.kind === 'trace' ? 'along' : 'height',
      from: -Infinity,
      to: Infinity,
      cutFrom: -Infinity,
      cutTo: Infinity,
      length: share * element.length,
      reason: mostOf({ shade: shaded, field: off, incidence: turned, dose: n - shaded - off - turned }),
    },
  ];
}

/** The reason with the largest count, the first of equals. */
function mostOf<K extends string>(counts: Record<K, number>): K {
  const names = Object.keys(counts) as K[];
  return names.reduce((best, k) => (counts[k] > counts[best] ? k : best), names[0]);
}
