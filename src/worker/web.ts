/** Thin wiring: serves a session's functions in a browser worker. */
import { Cancelled, InputError } from '../core/base/news.ts';
import type { RunContext } from '../core/base/run-context.ts';
import { flatForWeb } from './flat-web.ts';
import { createSession } from './session.ts';
import type { Failure, FromWorker, ToWorker } from './wire.ts';

const session = createSession(flatForWeb);
/** Jobs up to this number are to stop; shared with the page, which may write it while we compute. */
let stopUpTo: Int32Array = new Int32Array(1);
/** Progress more often than this is not seen by anyone. */
const SPEAK_EVERY_MS = 60;

const send = (message: FromWorker, transfer: Transferable[] = []) =>
  (self as unknown as { postMessage(m: FromWorker, t: Transferable[]): void }).postMessage(message, transfer);

/** Calls are answered in the order they were made, though one may wait for a file. */
let line: Promise<void> = Promise.resolve();
self.addEventListener('message', ({ data }: MessageEvent<ToWorker>) => {
  if (data.kind === 'stop-flag') stopUpTo = data.flag;
  else line = line.then(() => hear(data));
});

async function hear(message: Extract<ToWorker, { kind: 'call' }>): Promise<void> {
  const { job, name, argument } = message;
  let spoken = performance.now();
  const ctx: RunContext = {
    step(phase, done, of) {
      if (Atomics.load(stopUpTo, 0) >= job) throw new Cancelled();
      const now = performance.now();
      if (now - spoken < SPEAK_EVERY_MS) return;
      spoken = now;
      send({ kind: 'progress', job, phase, done, of });
    },
  };
  try {
    if (Atomics.load(stopUpTo, 0) >= job) throw new Cancelled();
    const call = session[name] as (a: unknown, ctx: RunContext) => unknown;
    const value = await call(argument, ctx);
    send({ kind: 'done', job, value }, buffersIn(value));
  } catch (error) {
    send({ kind: 'failed', job, failure: failureOf(error) });
  }
}

function failureOf(error: unknown): Failure {
  if (error instanceof InputError) return { kind: 'input', problems: [...error.problems] };
  if (error instanceof Cancelled) return { kind: 'cancelled' };
  const e = error as Error;
  return { kind: 'fault', message: e.message ?? String(error), stack: e.stack ?? '' };
}

/** Buffers of the result, to be handed over rather than copied. A result never shares one with the session. */
function buffersIn(value: unknown, found = new Set<ArrayBuffer>()): ArrayBuffer[] {
  if (ArrayBuffer.isView(value)) {
    if (value.buffer instanceof ArrayBuffer) found.add(value.buffer);
  } else if (typeof value === 'object' && value !== null)
    for (const v of Object.values(value)) buffersIn(v, found);
  return [...found];
}
