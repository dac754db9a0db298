/** What a shop rule found, in words: the same in the window, on the job sheet and on the command line. */
import type { RuleFinding } from './report.ts';

/** @returns without the elements, without a full stop */
export function ruleWords(r: RuleFinding): string {
  if (r.text !== undefined) return r.text;
  const least = r.level === 'error' ? 'at least' : 'better at least';
  const most = r.level === 'error' ? 'at most' : 'better at most';
  const mm = (x: number) => `${rounded(x, 3)} mm`;
  const percent = (x: number) => `${rounded(100 * x, 1)} %`;
  const degrees = (x: number) => `${rounded(x, 1)}°`;
  switch (r.rule) {
    case 'width':
      return `${mm(r.value)} wide, ${least} ${mm(r.limit)}`;
    case 'gap':
      return `${mm(r.value)} apart over the surface, ${least} ${mm(r.limit)}`;
    case 'air-gap':
      return `${mm(r.value)} apart through the air, ${least} ${mm(r.limit)}`;
    case 'border':
      return `${mm(r.value)} from the end of the surface, ${least} ${mm(r.limit)}`;
    case 'stretch':
      return `lengths differ from the drawing by up to ${percent(r.value)}, ${most} ${percent(r.limit)}`;
    case 'sharp-edge':
      return `crosses an edge of ${degrees(r.value)}, ${most} ${degrees(r.limit)}`;
    case 'inner-corner':
      return `an inner corner of ${degrees(r.value)}, ${least} ${degrees(r.limit)}`;
    default:
      return `${r.rule}: ${rounded(r.value, 3)}, limit ${rounded(r.limit, 3)}`;
  }
}

const rounded = (x: number, digits: number): string => String(Number(x.toFixed(digits)));
