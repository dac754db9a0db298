/** Undo and redo by intent: what one gesture did is one step. */
import type { Project } from '../core/project/schema.ts';

export interface Step {
  name: string;
  before: Project;
  after: Project;
  /** Acts of the same gesture join into one step, named after the first; null never joins. */
  gesture: string | null;
}

export interface History {
  past: readonly Step[];
  future: readonly Step[];
}

export const noHistory: History = { past: [], future: [] };

/** Steps kept. Projects share all that did not change, so a step costs little. */
const DEPTH = 500;

export function record(
  h: History,
  name: string,
  before: Project,
  after: Project,
  gesture: string | null,
): History {
  if (before === after) return h;
  const last = h.past[h.past.length - 1];
  if (gesture !== null && last?.gesture === gesture)
    return { past: [...h.past.slice(0, -1), { ...last, after }], future: [] };
  return { past: [...h.past, { name, before, after, gesture }].slice(-DEPTH), future: [] };
}

/** A finished gesture takes no more acts, even under the same name. */
export const seal = (h: History): History => {
  const last = h.past[h.past.length - 1];
  return last === undefined || last.gesture === null
    ? h
    : { ...h, past: [...h.past.slice(0, -1), { ...last, gesture: null }] };
};

export function undo(h: History): { history: History; project: Project; step: Step } | null {
  const step = h.past[h.past.length - 1];
  if (!step) return null;
  return { history: { past: h.past.slice(0, -1), future: [step, ...h.future] }, project: step.before, step };
}

export function redo(h: History): { history: History; project: Project; step: Step } | null {
  const step = h.future[0];
  if (!step) return null;
  return { history: { past: [...h.past, step], future: h.future.slice(1) }, project: step.after, step };
}
