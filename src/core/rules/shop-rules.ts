/** Every shop rule that looks at copper as it lies: what report and window show. */
import { innerCornerRule } from '../copper/inner-corners.ts';
import type { CopperElement } from '../drape/copper.ts';
import type { DrapePart } from '../drape/drape.ts';
import type { RuleFinding } from '../project/report.ts';
import type { Limits } from '../project/schema.ts';
import { borderRule, sharpEdgeRule } from './edges.ts';
import { gapRule } from './gap.ts';
import { stretchRule } from './stretch.ts';
import { widthRule } from './width.ts';

export const shopRules = (
  part: DrapePart,
  elements: readonly CopperElement[],
  limits: Limits,
): RuleFinding[] => [
  ...widthRule(part, elements, limits),
  ...gapRule(part, elements, limits),
  ...stretchRule(elements, limits),
  ...sharpEdgeRule(part.mesh, elements, limits),
  ...borderRule(part.mesh, elements, limits),
  ...innerCornerRule(elements, limits),
];
