/** Shop rule: traces no narrower than the shop can make (model.md §9; common practice, no published source). */
import type { CopperElement } from '../drape/copper.ts';
import type { RuleFinding } from '../project/report.ts';
import type { Limits } from '../project/schema.ts';

export function widthRule(elements: readonly CopperElement[], limits: Limits): RuleFinding[] {
  return elements.flatMap((e) => {
    if (e.kind !== 'trace' || e.width >= limits.safeWidth) return [];
    const error = e.width < limits.minWidth;
    return [
      {
        rule: 'width',
        level: error ? ('error' as const) : ('warning' as const),
        value: e.width,
        limit: error ? limits.minWidth : limits.safeWidth,
        elements: [e.id],
        at: e.anchor,
      },
    ];
  });
}
