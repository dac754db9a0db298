/** Task threads under Node: the program's own file, started again as a worker. */
import { parentPort, Worker } from 'node:worker_threads';
import { type Spawn, type TaskTable, taskServer } from './pool.ts';
import type { FromTaskThread, ToTaskThread } from './protocol.ts';

/** Worker data that tells the program's file to serve tasks. */
export const TASK_ROLE = 'tasks';

/** @param file  URL of a file that calls `serveTasks` when its worker data has the role `TASK_ROLE` */
export function nodeThreads(file: URL): Spawn {
  return (hear, broken) => {
    const worker = new Worker(file, { workerData: { role: TASK_ROLE } });
    let closing = false;
    worker.on('message', (m: FromTaskThread) => hear(m));
    worker.on('error', (error) => broken(error instanceof Error ? error.message : String(error)));
    worker.on('exit', (code) => {
      if (!closing && code === 0) broken('it ended early');
    });
    return {
      post: (m: ToTaskThread) => worker.postMessage(m),
      close: () => {
        closing = true;
        void worker.terminate();
      },
    };
  };
}

export function serveTasks(tasks: TaskTable): void {
  if (!parentPort) throw new Error('only a worker thread serves tasks');
  const port = parentPort;
  const take = taskServer(tasks, (m) => port.postMessage(m));
  port.on('message', (m: ToTaskThread) => take(m));
}
