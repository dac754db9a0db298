#!/usr/bin/env node
/** The program for the command line, and the file of its own worker threads. */
import { availableParallelism } from 'node:os';
import { join } from 'node:path';
import { isMainThread, workerData } from 'node:worker_threads';
import { Cancelled, InputError, sentence } from '../core/base/news.ts';
import type { OutputFile } from '../core/files/output.ts';
import type { ProofFormat } from '../core/proof/prove.ts';
import { serveTasks, TASK_ROLE } from '../worker/node.ts';
import { PROJECT_COPY } from '../worker/stand-alone.ts';
import { tasks } from '../worker/tasks.ts';
import { type Command, FORMATS, HELP, parseCommand, type Settings } from './args.ts';
import { demonstration } from './demo.ts';
import { checkTarget, putFolder } from './folder.ts';
import { type ProjectFiles, readInput, readProjectFiles, readRunFolder } from './inputs.ts';
import { JOB_ROLE, type JobAnswers, type JobRequest, type ProjectInput, serveJob } from './job.ts';
import { progressTo } from './progress.ts';
import { showCheck, showPart, showProof, showRun } from './show.ts';
import { startJob } from './thread.ts';
import { openWindow } from './window.ts';

const DONE = 0;
const CHECK_FAILS = 1;
const BAD_INPUT = 2;
const FAULT = 3;
const STOPPED = 130;

/** Put in by the build, from package.json. */
declare const __VERSION__: string;

const programFile = new URL(import.meta.url);

async function main(argv: readonly string[]): Promise<void> {
  // Whoever reads our output may leave early, as `head` does: that is no fault.
  process.stdout.on('error', (error: NodeJS.ErrnoException) => {
    if (error.code !== 'EPIPE') throw error;
  });
  try {
    process.exitCode = await perform(parseCommand(argv));
  } catch (error) {
    process.exitCode = told(error);
  }
}

/** Says what went wrong on stderr. @returns exit status */
function told(error: unknown): number {
  if (error instanceof Cancelled) return STOPPED;
  if (error instanceof InputError) {
    for (const p of error.problems) process.stderr.write(`${oneLine(sentence(p))}\n`);
    return BAD_INPUT;
  }
  const text = error instanceof Error ? (error.stack ?? error.message) : String(error);
  process.stderr.write(
    `A fault of the program, not of your files. Please report it with these lines:\n${text}\n`,
  );
  return FAULT;
}

const oneLine = (text: string): string => text.replace(/\s*[\r\n]+\s*/g, ' ');

async function perform(command: Command): Promise<number> {
  switch (command.name) {
    case 'help':
      process.stdout.write(HELP);
      return DONE;
    case 'version':
      process.stdout.write(`${__VERSION__}\n`);
      return DONE;
    case 'window':
      return openWindow(command.args);
    case 'inspect': {
      const bytes = await readInput(command.part, '', '');
      const found = await job({
        kind: 'inspect',
        part: { file: command.part, bytes },
        units: command.units,
        settings: command.settings,
      });
      print(
        command.json,
        { file: command.part, units: command.units, ...found.part, trailingBytes: found.trailingBytes },
        () => showPart(command.part, found.part, found.trailingBytes),
      );
      return DONE;
    }
    case 'check': {
      const files = inputOf(await readProjectFiles(command.project));
      const { report } = await job({ kind: 'check', ...files, settings: command.settings });
      print(command.json, report, () => showCheck(report));
      return report.ok ? DONE : CHECK_FAILS;
    }
    case 'run': {
      await checkTarget(command.out);
      const files = inputOf(await readProjectFiles(command.project));
      return runInto(command.out, { kind: 'run', ...files, settings: command.settings });
    }
    case 'prove': {
      const runFiles = await readRunFolder(command.dir);
      const files = inputOf(await readProjectFiles(join(command.dir, PROJECT_COPY)));
      const present = FORMATS.filter((f) => runFiles.some((r) => r.path.toLowerCase().endsWith(`.${f}`)));
      const formats = command.formats ?? present;
      const absent = namedFormats(runFiles).filter((f) => !formats.includes(f));
      const proof = await job({ kind: 'prove', ...files, runFiles, formats, settings: command.settings });
      print(
        command.json,
        { format: 'beamdrape-proof', version: 1, ...proof.report, absent, byFormat: proof.byFormat },
        () => showProof(command.dir, proof, absent),
      );
      return proof.report.ok ? DONE : CHECK_FAILS;
    }
    case 'demo':
      await checkTarget(command.out);
      return runInto(command.out, { kind: 'run', ...inputOf(demonstration()), settings: command.settings });
  }
}

/** Formats of the files that the report of a run names. */
function namedFormats(runFiles: readonly OutputFile[]): ProofFormat[] {
  const report = runFiles.find((f) => f.path === 'report.json');
  const text = report ? new TextDecoder().decode(report.bytes) : '';
  return FORMATS.filter((f) => text.includes(`.${f}"`));
}

/** What the job needs of the files; says what the person should know. */
function inputOf({ projectFile, projectText, part, others, notices }: ProjectFiles): ProjectInput {
  for (const n of notices) process.stderr.write(`${n}\n`);
  return { projectFile, projectText, part, others };
}

async function runInto(out: string, request: JobRequest & { kind: 'run' }): Promise<number> {
  const { report, files } = await job(request);
  let stopped = false;
  const stop = (): void => {
    stopped = true;
  };
  await withStop(stop, () => putFolder(out, files, () => stopped));
  process.stdout.write(showRun(report, out));
  return report.ok ? DONE : CHECK_FAILS;
}

async function job<R extends JobRequest>(request: R): Promise<JobAnswers[R['kind']]> {
  const settings = { ...request.settings, threads: request.settings.threads ?? availableParallelism() };
  const running = startJob<R>({ ...request, settings }, programFile, progressOf(settings));
  return withStop(running.stop, () => running.answer);
}

/** Ctrl+C, and a polite request to end, call `stop` while `work` runs. */
async function withStop<T>(stop: () => void, work: () => Promise<T>): Promise<T> {
  const signals = ['SIGINT', 'SIGTERM', 'SIGHUP'] as const;
  for (const s of signals) process.on(s, stop);
  try {
    return await work();
  } finally {
    for (const s of signals) process.off(s, stop);
  }
}

const progressOf = (settings: Settings) =>
  progressTo(process.stderr, settings.progress ?? (process.stderr.isTTY ? 'bar' : 'lines'));

function print(json: boolean, data: unknown, words: () => string): void {
  process.stdout.write(json ? `${JSON.stringify(data, null, 2)}\n` : words());
}

const role = (workerData as { role?: string } | null)?.role;
if (isMainThread) void main(process.argv.slice(2));
else if (role === JOB_ROLE) void serveJob(programFile);
else if (role === TASK_ROLE) serveTasks(tasks);
