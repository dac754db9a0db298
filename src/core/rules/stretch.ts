/** Shop rule: lengths on the part near those drawn (model.md §9; common practice, no published source). */
import type { CopperElement } from '../drape/copper.ts';
import type { RuleFinding } from '../project/report.ts';
import type { Limits } from '../project/schema.ts';

/** `value` and `limit` are shares of the drawn length. */
export function stretchRule(elements: readonly CopperElement[], limits: Limits): RuleFinding[] {
  return elements.flatMap((e) => {
    if (e.stretch <= limits.safeStretch) return [];
    const error = e.stretch > limits.maxStretch;
    return [
      {
        rule: 'stretch',
        level: error ? ('error' as const) : ('warning' as const),
        value: e.stretch,
        limit: error ? limits.maxStretch : limits.safeStretch,
        elements: [e.id],
        at: e.stretched?.at ?? e.anchor,
      },
    ];
  });
}
