/** What travels between a thread and the one that started it. Errors cross as data, never as Error objects. */
import { Cancelled, Fault, InputError, type InputProblem } from '../core/base/news.ts';

export type Failure =
  | { kind: 'input'; problems: InputProblem[] }
  | { kind: 'cancelled' }
  | { kind: 'fault'; message: string; stack: string };

/** To a task thread: data that many tasks need, sent once; then one task at a time. */
export type ToTaskThread =
  | { kind: 'shared'; key: number; value: unknown }
  | { kind: 'task'; index: number; task: string; shared: number; argument: unknown };

export type FromTaskThread =
  | { kind: 'done'; index: number; value: unknown }
  | { kind: 'failed'; index: number; failure: Failure };

export function failureOf(error: unknown): Failure {
  if (error instanceof InputError) return { kind: 'input', problems: error.problems.map((p) => ({ ...p })) };
  if (error instanceof Cancelled) return { kind: 'cancelled' };
  if (error instanceof Error) return { kind: 'fault', message: error.message, stack: error.stack ?? '' };
  return { kind: 'fault', message: String(error), stack: '' };
}

export function errorOf(failure: Failure): Error {
  if (failure.kind === 'input') return new InputError(failure.problems[0], ...failure.problems.slice(1));
  if (failure.kind === 'cancelled') return new Cancelled();
  const fault = new Fault(failure.message);
  if (failure.stack) fault.stack = failure.stack;
  return fault;
}
