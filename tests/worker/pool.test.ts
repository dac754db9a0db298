import { afterEach, expect, test } from 'vitest';
import { Fault, InputError } from '../../src/core/base/news.ts';
import { createPool, type Pool, type Spawn, type TaskTable, taskServer } from '../../src/worker/pool.ts';
import type { FromTaskThread, ToTaskThread } from '../../src/worker/protocol.ts';

let lastShared: unknown;
const tasks: TaskTable = {
  scaled: (shared: { by: Float64Array }, n: number) => n * shared.by[0],
  fails: (_: unknown, n: number) => {
    if (n % 3 === 2)
      throw new InputError({ code: `bad-${n}`, file: 'f', place: `${n}`, problem: 'p', mend: 'm' });
    return n;
  },
  breaks: () => {
    throw new TypeError('our mistake');
  },
  keeps: (shared: object) => {
    const same = lastShared === shared;
    lastShared = shared;
    return same;
  },
};

const open: Pool[] = [];
afterEach(() => {
  for (const p of open.splice(0)) p.close();
});

/** A thread that is none: messages are cloned as between real ones, and each answer comes late, later ones sooner. */
function fakeThreads(log: { spawned: number; sharedMessages: number; buffers: unknown[] }): Spawn {
  return (hear) => {
    log.spawned++;
    let ended = false;
    const serve = taskServer(tasks, (m: FromTaskThread) => {
      const delay = m.index % 2 ? 1 : 8;
      setTimeout(() => ended || hear(structuredClone(m)), delay);
    });
    return {
      post: (m: ToTaskThread) => {
        if (m.kind === 'shared') {
          log.sharedMessages++;
          log.buffers.push((m.value as { by?: Float64Array } | null)?.by?.buffer);
        }
        serve(structuredClone(m));
      },
      close: () => {
        ended = true;
      },
    };
  };
}

function pool(threads: number) {
  const log = { spawned: 0, sharedMessages: 0, buffers: [] as unknown[] };
  const p = createPool(threads, tasks, fakeThreads(log));
  open.push(p);
  return { p, log };
}

const args = [5, 3, 8, 1, 9, 2];

test('results come in the order of the arguments, whoever is done first, for 1 to 7 threads', async () => {
  for (const threads of [1, 2, 3, 7]) {
    const { p, log } = pool(threads);
    expect(await p.map('scaled', { by: Float64Array.of(10) }, args)).toEqual(args.map((a) => a * 10));
    expect(log.spawned).toBe(threads === 1 ? 0 : Math.min(threads, args.length));
  }
});

test('shared data goes to each thread once, its arrays in shared memory', async () => {
  const { p, log } = pool(3);
  const shared = { by: Float64Array.of(2) };
  await p.map('scaled', shared, args);
  await p.map('scaled', shared, args);
  expect(log.sharedMessages).toBe(3);
  expect(log.buffers.every((b) => b instanceof SharedArrayBuffer)).toBe(true);
  await p.map('scaled', { by: shared.by }, args);
  expect(new Set(log.buffers).size).toBe(1);
});

test('a task sees the same shared object each time, so that work on it may be kept by it', async () => {
  const { p } = pool(1);
  const shared = {};
  expect(await p.map('keeps', shared, [1, 2, 3])).toEqual([false, true, true]);
});

test('what the task with the lowest index threw is thrown, as what it was', async () => {
  for (const threads of [1, 2, 4]) {
    const { p } = pool(threads);
    const error = await p.map('fails', null, [0, 1, 5, 3, 2, 8]).catch((e) => e);
    expect(error).toBeInstanceOf(InputError);
    expect(error.code).toBe('bad-5');
    expect(await p.map('fails', null, [0, 1])).toEqual([0, 1]);
  }
});

test('a mistake of ours arrives as a fault with its own words', async () => {
  const { p } = pool(2);
  const error = await p.map('breaks', null, [1, 2]).catch((e) => e);
  expect(error).toBeInstanceOf(Fault);
  expect(error.message).toBe('our mistake');
});

test('a task that is not in the table is a fault', async () => {
  const { p } = pool(2);
  expect(await p.map('nothing', null, [1, 2]).catch((e) => e)).toBeInstanceOf(Fault);
});

test('nothing to do gives nothing, and starts no thread', async () => {
  const { p, log } = pool(4);
  expect(await p.map('scaled', { by: Float64Array.of(1) }, [])).toEqual([]);
  expect(log.spawned).toBe(0);
});

test('two maps asked for at once both give their own results', async () => {
  const { p } = pool(2);
  const [a, b] = await Promise.all([
    p.map('scaled', { by: Float64Array.of(2) }, args),
    p.map('scaled', { by: Float64Array.of(3) }, args),
  ]);
  expect(a).toEqual(args.map((x) => 2 * x));
  expect(b).toEqual(args.map((x) => 3 * x));
});

test('a thread that breaks is a fault, and the next map has a new one', async () => {
  let first = true;
  const healthy = fakeThreads({ spawned: 0, sharedMessages: 0, buffers: [] });
  const p = createPool(2, tasks, (hear, broken) => {
    if (!first) return healthy(hear, broken);
    first = false;
    return {
      post: (m) => void (m.kind === 'task' && setTimeout(() => broken('out of memory'), 1)),
      close: () => {},
    };
  });
  open.push(p);
  const error = await p.map('scaled', { by: Float64Array.of(1) }, args).catch((e) => e);
  expect(error).toBeInstanceOf(Fault);
  expect(error.message).toMatch(/out of memory/);
  expect(await p.map('scaled', { by: Float64Array.of(1) }, args)).toEqual(args);
});
