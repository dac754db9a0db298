/** What each place of the copper looks like now, and how much of each there is. The shader in src/view follows the same rule. */

import type { Limits } from '../core/project/schema.ts';
import { REASONS, type Reason } from '../core/reach/result.ts';
import type { CopperPicture, PlanPicture, ReachPicture } from '../worker/pictures.ts';

export type Show = 'layers' | 'offset';

export interface Viewing {
  show: Show;
  /** Stage offset, mm. */
  offset: number;
  /** Usable depth where no reach is known yet, mm. */
  depth: number;
}

/** Reasons in the order in which they are told: one that no offset mends comes before focus. */
export const TOLD: readonly Reason[] = ['field', 'shade', 'incidence', 'dose', 'focus'];
const BIT: Record<Reason, number> = Object.fromEntries(REASONS.map((r, i) => [r, 1 << i])) as Record<
  Reason,
  number
>;

/** Usable depth: that of the beam once reach is known, before it what the project says outright, or 0. */
export const plainDepth = (limits: Limits, reach: ReachPicture | null): number => {
  if (reach) return reach.depth;
  return limits.depth.mode === 'distance'
    ? Math.max(0, limits.depth.halfDepth - limits.heightUncertainty)
    : 0;
};

/** Why triangle `t` is not copper-coloured, or null. */
export function reasonAt(
  copper: CopperPicture,
  t: number,
  heights: Float32Array,
  reach: ReachPicture | null,
  plan: PlanPicture | null,
  view: Viewing,
): Reason | null {
  const fails = reach ? reach.fails[t] : 0;
  for (const reason of TOLD) if (reason !== 'focus' && fails & BIT[reason]) return reason;
  if (view.show === 'layers' && plan) return plan.layerOf[t] === -1 ? 'focus' : null;
  if (view.show === 'layers') return null;
  return Math.abs(heightAt(copper, heights, t) + view.offset) > (reach ? reach.usable[t] : view.depth)
    ? 'focus'
    : null;
}

/** Bench height of the middle of triangle `t`. */
export const heightAt = (copper: CopperPicture, heights: Float32Array, t: number): number =>
  (heights[copper.corners[3 * t]] + heights[copper.corners[3 * t + 1]] + heights[copper.corners[3 * t + 2]]) /
  3;

export interface Count {
  /** Elements with such a place. */
  elements: number[];
  /** mm² */
  area: number;
}
export type Counts = Record<Reason | 'reached', Count>;

export function countLooks(
  copper: CopperPicture,
  setup: number,
  reach: ReachPicture | null,
  plan: PlanPicture | null,
  view: Viewing,
): Counts {
  const heights = copper.heights[setup] ?? copper.heights[0];
  const keys = ['reached', ...REASONS] as const;
  const counts = Object.fromEntries(
    keys.map((k) => [k, { elements: [] as number[], area: 0 }]),
  ) as unknown as Counts;
  for (let t = 0; t < copper.area.length; t++) {
    const c = counts[reasonAt(copper, t, heights, reach, plan, view) ?? 'reached'];
    const e = copper.element[t];
    if (c.elements[c.elements.length - 1] !== e) c.elements.push(e);
    c.area += copper.area[t];
  }
  return counts;
}
