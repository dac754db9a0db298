/** Runs named functions on threads, results in the order of the arguments: the same bytes whatever the number of threads. */
import { Fault } from '../core/base/news.ts';
import { errorOf, type Failure, type FromTaskThread, failureOf, type ToTaskThread } from './protocol.ts';

/** A plain function of plain data. `shared` is the same object for every task of a map, so work on it may be kept by it. */
// biome-ignore lint/suspicious/noExplicitAny: each task knows its own types; the wiring does not.
export type Task = (shared: any, argument: any) => unknown;
export type TaskTable = Readonly<Record<string, Task>>;

export interface Workers {
  /** 1: everything runs in the calling thread. */
  readonly threads: number;
  /**
   * @param task    name in the task table
   * @param shared  plain data that no task changes; sent once to each thread, its arrays in shared memory where there is any
   * @param args    one task each
   * @param tell    hears how many tasks are done; what it throws stops the map (a person who cancels)
   * @returns       results in the order of `args`
   * @throws        what the task with the lowest index threw
   */
  map<A, R>(task: string, shared: unknown, args: readonly A[], tell?: (done: number) => void): Promise<R[]>;
}

/** One thread, as the pool sees it. */
export interface TaskThread {
  post(message: ToTaskThread): void;
  close(): void;
}

export type Spawn = (hear: (message: FromTaskThread) => void, broken: (why: string) => void) => TaskThread;

export interface Pool extends Workers {
  /** Ends the threads; tasks under way are lost. */
  close(): void;
}

/** @param spawn  starts a thread that serves the same `tasks`; not called when `threads` is 1 */
export function createPool(threads: number, tasks: TaskTable, spawn: Spawn): Pool {
  const running: Slot[] = [];
  const keys = new WeakMap<object, number>();
  const copies: SharedCopies = new WeakMap();
  let lastKey = 0;
  let queue: Promise<unknown> = Promise.resolve();

  function slot(i: number): Slot {
    if (running[i]) return running[i];
    const s: Slot = {
      has: new Set(),
      hear: () => {},
      broken: () => {},
      thread: undefined as unknown as TaskThread,
    };
    s.thread = spawn(
      (m) => s.hear(m),
      (why) => {
        delete running[i];
        s.broken(why);
      },
    );
    running[i] = s;
    return s;
  }

  function spread<A, R>(
    task: string,
    shared: unknown,
    args: readonly A[],
    tell?: (done: number) => void,
  ): Promise<R[]> {
    const key = keyOf(shared);
    return new Promise((resolve, reject) => {
      const results = new Array<R>(args.length);
      let next = 0;
      let busy = 0;
      let done = 0;
      // Tasks are handed out in order, so when one fails every task before it is under way or done: the failure with the
      // lowest index does not depend on who was quicker.
      let failed: { index: number; failure: Failure } | null = null;
      const settle = (): void => {
        if (busy > 0) return;
        if (failed) reject(errorOf(failed.failure));
        else if (next === args.length) resolve(results);
      };
      const feed = (s: Slot): void => {
        if (failed || next === args.length) {
          settle();
          return;
        }
        const index = next++;
        busy++;
        s.broken = (why) => {
          busy--;
          failed = {
            index: -1,
            failure: { kind: 'fault', message: `a worker thread stopped: ${why}`, stack: '' },
          };
          settle();
        };
        s.hear = (m) => {
          busy--;
          if (m.kind === 'done') {
            results[m.index] = m.value as R;
            try {
              tell?.(++done);
            } catch (error) {
              failed = { index: -1, failure: failureOf(error) };
            }
          } else if (!failed || m.index < failed.index) failed = { index: m.index, failure: m.failure };
          feed(s);
        };
        if (!s.has.has(key)) {
          s.thread.post({ kind: 'shared', key, value: shareArrays(shared, copies) });
          s.has.add(key);
        }
        s.thread.post({ kind: 'task', index, task, shared: key, argument: args[index] });
      };
      for (let i = 0; i < Math.min(threads, args.length); i++) feed(slot(i));
    });
  }

  function keyOf(shared: unknown): number {
    if (typeof shared !== 'object' || shared === null) return ++lastKey;
    const known = keys.get(shared);
    if (known !== undefined) return known;
    keys.set(shared, ++lastKey);
    return lastKey;
  }

  return {
    threads,
    map<A, R>(
      task: string,
      shared: unknown,
      args: readonly A[],
      tell?: (done: number) => void,
    ): Promise<R[]> {
      const run = tasks[task];
      if (!run) return Promise.reject(new Fault(`there is no task "${task}"`));
      if (args.length === 0) return Promise.resolve([]);
      if (threads === 1 || args.length === 1) {
        return Promise.resolve().then(() =>
          args.map((a, i) => {
            const result = run(shared, a) as R;
            tell?.(i + 1);
            return result;
          }),
        );
      }
      // One map at a time: a thread hears the answers of one map.
      const result = queue.then(() => spread<A, R>(task, shared, args, tell));
      queue = result.catch(() => {});
      return result;
    },
    close: () => {
      for (const s of running) s?.thread.close();
      running.length = 0;
    },
  };
}

interface Slot {
  thread: TaskThread;
  /** Keys of the shared data that it has. */
  has: Set<number>;
  hear: (message: FromTaskThread) => void;
  broken: (why: string) => void;
}

/** The other end: keeps shared data and runs tasks. @returns what to do with each message */
export function taskServer(
  tasks: TaskTable,
  answer: (message: FromTaskThread) => void,
): (message: ToTaskThread) => void {
  const shared = new Map<number, unknown>();
  return (m) => {
    if (m.kind === 'shared') {
      shared.set(m.key, m.value);
      return;
    }
    try {
      answer({ kind: 'done', index: m.index, value: tasks[m.task](shared.get(m.shared), m.argument) });
    } catch (error) {
      answer({ kind: 'failed', index: m.index, failure: failureOf(error) });
    }
  };
}

type SharedCopies = WeakMap<object, ArrayBufferView>;

/** The same plain data with its typed arrays in shared memory, so that threads do not hold a copy each. */
function shareArrays(value: unknown, copies: SharedCopies): unknown {
  if (typeof SharedArrayBuffer === 'undefined') return value;
  const visit = (v: unknown): unknown => {
    if (typeof v !== 'object' || v === null) return v;
    if (ArrayBuffer.isView(v)) {
      const view = v as unknown as Float64Array;
      if (view.buffer instanceof SharedArrayBuffer || !(view.BYTES_PER_ELEMENT > 0)) return v;
      let copy = copies.get(v) as Float64Array<SharedArrayBuffer> | undefined;
      if (!copy) {
        const Kind = view.constructor as new (buffer: SharedArrayBuffer) => Float64Array<SharedArrayBuffer>;
        copy = new Kind(new SharedArrayBuffer(view.byteLength));
        copy.set(view);
        copies.set(v, copy);
      }
      return copy;
    }
    if (Array.isArray(v)) return v.map(visit);
    return Object.fromEntries(Object.entries(v).map(([k, inner]) => [k, visit(inner)]));
  };
  return visit(value);
}
