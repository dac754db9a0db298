/** The page's side of a worker: calls as promises, progress, stopping. */
import type { InputProblem } from '../core/base/news.ts';
import type { Phase } from '../core/base/run-context.ts';
import type { CallArgument, CallName, CallResult, Failure, FromWorker, ToWorker } from './wire.ts';

export interface Progress {
  phase: Phase;
  done: number;
  of: number;
}

export interface WorkerClient {
  /** @throws WorkFailure */
  call<K extends CallName>(
    name: K,
    argument: CallArgument<K>,
    hear?: (p: Progress) => void,
  ): Promise<CallResult<K>>;
  /** Stops every call made so far, at its next step. */
  stopAll(): void;
}

export class WorkFailure extends Error {
  readonly failure: Failure;
  constructor(failure: Failure) {
    super(
      failure.kind === 'input'
        ? failure.problems.map((p) => p.problem).join('; ')
        : failure.kind === 'fault'
          ? failure.message
          : 'stopped',
    );
    this.name = 'WorkFailure';
    this.failure = failure;
  }
}

export const problemsOf = (error: unknown): InputProblem[] | null =>
  error instanceof WorkFailure && error.failure.kind === 'input' ? error.failure.problems : null;
export const wasStopped = (error: unknown): boolean =>
  error instanceof WorkFailure && error.failure.kind === 'cancelled';

/** What a Worker is, as far as we need it. */
export interface Port {
  postMessage(message: ToWorker): void;
  onmessage: ((event: { data: FromWorker }) => void) | null;
  onerror?: ((event: { message?: string }) => void) | null;
}

export function workerClient(port: Port): WorkerClient {
  const flag = new Int32Array(
    typeof SharedArrayBuffer === 'undefined' ? new ArrayBuffer(4) : new SharedArrayBuffer(4),
  );
  const open = new Map<
    number,
    {
      done(value: unknown): void;
      failed(error: WorkFailure): void;
      hear?: ((p: Progress) => void) | undefined;
    }
  >();
  let last = 0;
  port.postMessage({ kind: 'stop-flag', flag });
  port.onmessage = ({ data }) => {
    const call = open.get(data.job);
    if (!call) return;
    if (data.kind === 'progress') return call.hear?.(data);
    open.delete(data.job);
    if (data.kind === 'done') call.done(data.value);
    else call.failed(new WorkFailure(data.failure));
  };
  port.onerror = (event) => {
    const failure: Failure = {
      kind: 'fault',
      message: event.message ?? 'the worker could not start',
      stack: '',
    };
    for (const call of open.values()) call.failed(new WorkFailure(failure));
    open.clear();
  };
  return {
    call: <K extends CallName>(name: K, argument: CallArgument<K>, hear?: (p: Progress) => void) =>
      new Promise<CallResult<K>>((done, failed) => {
        const job = ++last;
        open.set(job, { done: (v) => done(v as CallResult<K>), failed, hear });
        port.postMessage({ kind: 'call', job, name, argument });
      }),
    stopAll() {
      Atomics.store(flag, 0, last);
    },
  };
}
