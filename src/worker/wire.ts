/** Messages between the page and its worker. Errors cross as data. */
import type { InputProblem } from '../core/base/news.ts';
import type { Phase } from '../core/base/run-context.ts';
import type { Session } from './session.ts';

export type CallName = keyof Session;
export type CallArgument<K extends CallName> = Parameters<Session[K]>[0];
export type CallResult<K extends CallName> = Awaited<ReturnType<Session[K]>>;

export type ToWorker =
  | { kind: 'stop-flag'; flag: Int32Array }
  | { kind: 'call'; job: number; name: CallName; argument: unknown };

export type Failure =
  | { kind: 'input'; problems: InputProblem[] }
  | { kind: 'cancelled' }
  | { kind: 'fault'; message: string; stack: string };

export type FromWorker =
  | { kind: 'progress'; job: number; phase: Phase; done: number; of: number }
  | { kind: 'done'; job: number; value: unknown }
  | { kind: 'failed'; job: number; failure: Failure };
