/**
 * The heavy half of the command line, on a thread of its own: the main thread stays free for Ctrl+C and the bar.
 * Takes bytes, gives bytes; it neither reads nor writes files.
 */
import { parentPort, workerData } from 'node:worker_threads';
import type { Phase, RunContext } from '../core/base/run-context.ts';
import type { OutputFile } from '../core/files/output.ts';
import { buildMesh, MM_PER_UNIT } from '../core/mesh/build.ts';
import { readStl } from '../core/mesh/stl.ts';
import { partReport } from '../core/mesh/summary.ts';
import { runJob } from '../core/pipeline.ts';
import { readProject } from '../core/project/read.ts';
import type { Report } from '../core/project/report.ts';
import type { Proof, ProofFormat } from '../core/proof/prove.ts';
import { nodeThreads } from '../worker/node.ts';
import { createPool } from '../worker/pool.ts';
import { type Failure, failureOf } from '../worker/protocol.ts';
import { type NamedFile, standAlone } from '../worker/stand-alone.ts';
import { tasks } from '../worker/tasks.ts';
import type { Settings, Units } from './args.ts';
import { flatForNode } from './flat.ts';
import { proveRun } from './prove-run.ts';

/** Worker data that tells the program's file to do a job. */
export const JOB_ROLE = 'job';

export interface ProjectInput {
  projectFile: string;
  projectText: string;
  part: NamedFile;
  others: NamedFile[];
}

export type JobRequest = { settings: Settings } & (
  | { kind: 'inspect'; part: NamedFile; units: Units }
  | ({ kind: 'run' } & ProjectInput)
  | ({ kind: 'check' } & ProjectInput)
  | ({ kind: 'prove'; runFiles: OutputFile[]; formats: ProofFormat[] } & ProjectInput)
);

export interface JobAnswers {
  inspect: { part: Report['part']; trailingBytes: number };
  run: { report: Report; files: OutputFile[] };
  check: { report: Report };
  prove: Proof;
}

export type FromJob =
  | { kind: 'step'; phase: Phase; done: number; of: number }
  | { kind: 'done'; value: unknown }
  | { kind: 'failed'; failure: Failure };

/** Runs the job in `workerData` and answers to the main thread. */
export async function serveJob(programFile: URL): Promise<void> {
  if (!parentPort) throw new Error('a job runs on a worker thread');
  const port = parentPort;
  const request = (workerData as { request: JobRequest }).request;
  const tell = (m: FromJob): void => port.postMessage(m);
  const clock = phaseClock(tell);
  const pool = createPool(request.settings.threads ?? 1, tasks, nodeThreads(programFile));
  try {
    tell({ kind: 'done', value: await answer(request, clock.ctx, pool, clock.seconds) });
  } catch (error) {
    tell({ kind: 'failed', failure: failureOf(error) });
  } finally {
    pool.close();
  }
}

async function answer(
  request: JobRequest,
  ctx: RunContext,
  pool: ReturnType<typeof createPool>,
  seconds: () => Record<string, number>,
): Promise<JobAnswers[keyof JobAnswers]> {
  const { settings } = request;
  if (request.kind === 'inspect') {
    const soup = readStl(request.part.bytes, request.part.file, ctx);
    const mesh = buildMesh(soup, MM_PER_UNIT[request.units], ctx, request.part.file);
    return { part: partReport(mesh), trailingBytes: soup.trailingBytes };
  }
  const { project, unknown } = readProject(request.projectText, request.projectFile);
  if (request.kind === 'prove') return proveRun(request, project, ctx, pool);
  const input = {
    project,
    projectFile: request.projectFile,
    projectText: request.projectText,
    unknown,
    part: request.part,
    drawings: request.others,
    flat: flatForNode,
  };
  const { report, files } = await runJob(
    input,
    { seed: settings.seed, ...(request.kind === 'check' ? { stopAfter: 'reach' as const } : {}) },
    ctx,
    pool,
  );
  if (request.kind === 'check') return { report };
  const timed = settings.timing ? { ...report, timing: seconds() } : report;
  return { report: timed, files: standAlone(files, timed, request) };
}

/** Passes steps on, at most some twenty a second, and keeps the time of each phase. */
function phaseClock(tell: (m: FromJob) => void): { ctx: RunContext; seconds: () => Record<string, number> } {
  const spent: Record<string, number> = {};
  let current: Phase | null = null;
  let since = performance.now();
  let told = 0;
  const turn = (now: number): void => {
    if (current) spent[`${current}_s`] = (spent[`${current}_s`] ?? 0) + (now - since) / 1000;
    since = now;
  };
  return {
    ctx: {
      step: (phase, done, of) => {
        const now = performance.now();
        if (phase !== current) turn(now);
        if (phase !== current || now - told > 50) {
          told = now;
          tell({ kind: 'step', phase, done, of });
        }
        current = phase;
      },
    },
    seconds: () => {
      turn(performance.now());
      return Object.fromEntries(Object.entries(spent).map(([k, v]) => [k, Math.round(v * 1000) / 1000]));
    },
  };
}
