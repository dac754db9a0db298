/** The invariants of a plan, checked on the copper itself: ships, so that a plan moved by hand can be looked at too. */
import type { Copper } from '../drape/copper.ts';
import type { Project } from '../project/schema.ts';
import type { SetupReach } from '../reach/result.ts';
import { layerOfSamples } from './assign.ts';
import type { SetupPlan } from './plan.ts';
import { canGo, heightGrid } from './plan-layers.ts';

/** A height may be off the stage's grid, and a sample off its depth, by rounding of this size, mm. */
const ROUNDING = 1e-6;

/** @returns a sentence for each thing that does not hold; none for a good plan */
export function checkPlan(project: Project, copper: Copper, reach: SetupReach, plan: SetupPlan): string[] {
  const out: string[] = [];
  const grid = heightGrid(project.stage);
  plan.layers.forEach((layer, i) => {
    const h = layer.focusHeight;
    if (layer.index !== i + 1) out.push(`Layer ${i + 1} carries the number ${layer.index}.`);
    if (i > 0 && h <= plan.layers[i - 1].focusHeight)
      out.push(`Layer ${layer.index} stands no higher than the one before it.`);
    if (Math.abs(layer.stageOffset + h) > ROUNDING)
      out.push(`Layer ${layer.index}: the stage offset is not the focus height turned round.`);
    if (grid.step > 0 && Math.abs(h / grid.step - Math.round(h / grid.step)) * grid.step > ROUNDING)
      out.push(`Layer ${layer.index} stands off the stage's steps.`);
    if (h < grid.least - ROUNDING || h > grid.most + ROUNDING)
      out.push(`Layer ${layer.index} stands outside the stage's range.`);
  });
  const lost = new Set(plan.unreached.map((u) => u.element));
  for (const e of plan.elements) {
    const element = copper.elements[e];
    const r = reach.elements[e];
    let unwritten = 0;
    let deep = 0;
    layerOfSamples(plan, element, e, r, (t) => canGo(r, t)).forEach((k, t) => {
      if (!canGo(r, t)) return;
      if (k < 0) unwritten++;
      else {
        const h = plan.layers[k].focusHeight;
        if (Math.max(r.high[t] - h, h - r.low[t]) > r.usable[t] + ROUNDING) deep++;
      }
    });
    if (unwritten > 0 && !lost.has(e))
      out.push(`${element.id}: ${unwritten} samples are in no layer, and nothing says so.`);
    if (deep > 0) out.push(`${element.id}: ${deep} samples are written beyond their depth.`);
  }
  return out;
}
