/** A worker for store tests: the real session, called through the real client, on this thread. */
import { Cancelled, InputError } from '../../src/core/base/news.ts';
import type { RunContext } from '../../src/core/base/run-context.ts';
import { type Port, type WorkerClient, workerClient } from '../../src/worker/client.ts';
import { createSession, type Session } from '../../src/worker/session.ts';
import type { FromWorker, ToWorker } from '../../src/worker/wire.ts';
import { flatForTests } from '../core/helpers/flat.ts';

export interface FakeWorker {
  client: WorkerClient;
  /** Names of the calls, in order. */
  calls: string[];
  /** When set, calls of this name wait until `release` is called. */
  hold: string | null;
  release(): void;
}

export function fakeWorker(session: Partial<Session> = createSession(flatForTests)): FakeWorker {
  let flag: Int32Array = new Int32Array(1);
  let held: (() => void)[] = [];
  const port: Port = {
    onmessage: null,
    postMessage(message: ToWorker) {
      if (message.kind === 'stop-flag') {
        flag = message.flag;
        return;
      }
      const { job, name, argument } = message;
      fake.calls.push(name);
      const ctx: RunContext = {
        step: () => {
          if (Atomics.load(flag, 0) >= job) throw new Cancelled();
        },
      };
      const answer = async () => {
        let reply: FromWorker;
        try {
          ctx.step('load', 0, 1);
          const call = session[name] as (a: unknown, c: RunContext) => unknown;
          reply = { kind: 'done', job, value: await call(structuredClone(argument), ctx) };
        } catch (error) {
          reply = {
            kind: 'failed',
            job,
            failure:
              error instanceof InputError
                ? { kind: 'input', problems: [...error.problems] }
                : error instanceof Cancelled
                  ? { kind: 'cancelled' }
                  : { kind: 'fault', message: (error as Error).message, stack: '' },
          };
        }
        port.onmessage?.({ data: reply });
      };
      if (fake.hold === name) held.push(() => void answer());
      else setTimeout(() => void answer());
    },
  };
  const fake: FakeWorker = {
    client: workerClient(port),
    calls: [],
    hold: null,
    release() {
      fake.hold = null;
      for (const go of held) go();
      held = [];
    },
  };
  return fake;
}

export const until = async (holds: () => boolean, ms = 20_000): Promise<void> => {
  const end = Date.now() + ms;
  while (!holds()) {
    if (Date.now() > end) throw new Error('it never came to be');
    await new Promise((done) => setTimeout(done, 5));
  }
};
