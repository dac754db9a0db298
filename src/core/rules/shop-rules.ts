/** Every shop rule that looks at copper as it lies: what report and window show. */
import { quiet, type RunContext } from '../base/run-context.ts';
import { innerCornerRule } from '../copper/inner-corners.ts';
import type { CopperElement } from '../drape/copper.ts';
import type { DrapePart } from '../drape/drape.ts';
import type { RuleFinding } from '../project/report.ts';
import type { Limits } from '../project/schema.ts';
import { borderRule, sharpEdgeRule } from './edges.ts';
import { gapRule } from './gap.ts';
import { stretchRule } from './stretch.ts';
import { widthRule } from './width.ts';

/** @throws Cancelled by `ctx`, which is asked before each rule */
export function shopRules(
  part: DrapePart,
  elements: readonly CopperElement[],
  limits: Limits,
  ctx: RunContext = quiet,
): RuleFinding[] {
  const rules = [
    () => widthRule(part, elements, limits),
    () => gapRule(part, elements, limits),
    () => stretchRule(elements, limits),
    () => sharpEdgeRule(part.mesh, elements, limits),
    () => borderRule(part.mesh, elements, limits),
    () => innerCornerRule(elements, limits),
  ];
  return rules.flatMap((rule, i) => {
    ctx.step('drape', i, rules.length);
    return rule();
  });
}
