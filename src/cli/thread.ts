/** The main thread's hold on the job's thread. */
import { Worker } from 'node:worker_threads';
import { Cancelled, Fault } from '../core/base/news.ts';
import { errorOf } from '../worker/protocol.ts';
import { type FromJob, JOB_ROLE, type JobAnswers, type JobRequest } from './job.ts';
import type { Progress } from './progress.ts';

export interface RunningJob<A> {
  answer: Promise<A>;
  /** Ends the thread and all that it started, at once; `answer` then fails with Cancelled. */
  stop(): void;
}

/** @param programFile  this program's own file, which is also the thread's */
export function startJob<R extends JobRequest>(
  request: R,
  programFile: URL,
  progress: Progress,
): RunningJob<JobAnswers[R['kind']]> {
  const worker = new Worker(programFile, { workerData: { role: JOB_ROLE, request } });
  let stopped = false;
  const answer = new Promise<JobAnswers[R['kind']]>((resolve, reject) => {
    worker.on('message', (m: FromJob) => {
      if (stopped) return;
      if (m.kind === 'step') progress.step(m.phase, m.done, m.of);
      else if (m.kind === 'done') resolve(m.value as JobAnswers[R['kind']]);
      else reject(errorOf(m.failure));
    });
    worker.on('error', (error) => reject(error instanceof Error ? error : new Fault(String(error))));
    worker.on('exit', (code) =>
      reject(stopped ? new Cancelled() : new Fault(`the job's thread ended with ${code}`)),
    );
  }).finally(() => {
    progress.end();
    void worker.terminate();
  });
  return {
    answer,
    stop: () => {
      stopped = true;
      void worker.terminate();
    },
  };
}
