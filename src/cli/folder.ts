/** Puts a set of files in place of a folder: all of them or none. */
import { existsSync } from 'node:fs';
import { mkdir, readdir, readFile, realpath, rename, rm, stat, writeFile } from 'node:fs/promises';
import { basename, dirname, join, resolve, sep } from 'node:path';
import { Cancelled, Fault, InputError } from '../core/base/news.ts';
import type { OutputFile } from '../core/files/output.ts';

/**
 * Whether `dir` may be written or replaced: it is not there, is empty, or holds an earlier run.
 * @throws InputError `not-ours`, `cannot-write`
 */
export async function checkTarget(dir: string): Promise<void> {
  await restoreLost(resolve(dir));
  let entries: string[];
  try {
    if (!(await stat(dir)).isDirectory())
      throw bad('not-ours', dir, 'a file stands where the folder should go', 'choose another folder');
    entries = await readdir(dir);
  } catch (error) {
    if (error instanceof InputError) throw error;
    if ((error as { code?: string }).code === 'ENOENT') return;
    throw cannotWrite(dir, error);
  }
  if (entries.length > 0 && !(await holdsRun(dir)))
    throw bad(
      'not-ours',
      dir,
      'the folder holds other things than an earlier run',
      'choose another folder or move them away',
    );
}

async function holdsRun(dir: string): Promise<boolean> {
  try {
    const report = JSON.parse(await readFile(join(dir, 'report.json'), 'utf8')) as { format?: unknown };
    return report.format === 'beamdrape-report';
  } catch {
    return false;
  }
}

/**
 * Writes into a fresh folder beside `dir`, then puts it in place. Until then the old `dir` is whole; so it is after an
 * error or a stop.
 * @param stopped  asked before each file and before the change of places
 * @throws InputError `not-ours`, `cannot-write`; Cancelled
 */
export async function putFolder(
  dir: string,
  files: readonly OutputFile[],
  stopped: () => boolean,
): Promise<void> {
  await checkTarget(dir);
  const target = existsSync(dir) ? await realpath(dir) : resolve(dir);
  const fresh = besides(target, 'new', process.pid);
  const old = besides(target, 'old', process.pid);
  const stop = (): void => {
    if (stopped()) throw new Cancelled();
  };
  try {
    await mkdir(fresh, { recursive: true });
    for (const file of files) {
      stop();
      const path = resolve(fresh, file.path);
      if (!path.startsWith(fresh + sep)) throw new Fault(`the file name "${file.path}" leaves the folder`);
      await mkdir(dirname(path), { recursive: true });
      await writeFile(path, file.bytes, { flag: 'wx' });
    }
    stop();
    const replaced = existsSync(target);
    if (replaced) await rename(target, old);
    try {
      await rename(fresh, target);
    } catch (error) {
      if (replaced) await rename(old, target);
      throw error;
    }
    await rm(old, { recursive: true, force: true });
  } catch (error) {
    await rm(fresh, { recursive: true, force: true });
    if (error instanceof Cancelled || error instanceof Fault) throw error;
    throw cannotWrite(dir, error);
  }
}

/** `.NAME.PID.new`: the process stands in the name, so that what a killed one left can be told from what is being written. */
const besides = (target: string, what: 'new' | 'old', pid: number): string =>
  join(dirname(target), `.${basename(target)}.${pid}.${what}`);

/** A process killed between the two renames left the old folder beside its place: puts it back, and clears what else it left. */
async function restoreLost(target: string): Promise<void> {
  const name = new RegExp(
    `^\\.${basename(target).replace(/[.*+?^${}()|[\]\\]/g, '\\$&')}\\.(\\d+)\\.(new|old)$`,
  );
  let beside: string[];
  try {
    beside = await readdir(dirname(target));
  } catch {
    return; // No such parent yet, or none that may be read: nothing of ours can lie there.
  }
  for (const entry of beside.sort()) {
    const m = name.exec(entry);
    if (!m || alive(Number(m[1]))) continue;
    const left = join(dirname(target), entry);
    if (m[2] === 'old' && !existsSync(target)) await rename(left, target);
    else await rm(left, { recursive: true, force: true });
  }
}

function alive(pid: number): boolean {
  try {
    process.kill(pid, 0);
    return true;
  } catch (error) {
    return (error as { code?: string }).code === 'EPERM';
  }
}

const bad = (code: string, file: string, problem: string, mend: string): InputError =>
  new InputError({ code, file, place: '', problem, mend });

function cannotWrite(dir: string, error: unknown): InputError {
  const code = (error as { code?: string }).code;
  const why =
    code === 'EACCES' || code === 'EPERM' || code === 'EROFS'
      ? 'writing is not allowed there'
      : code === 'ENOSPC'
        ? 'the disk is full'
        : code === 'ENOTDIR' || code === 'EEXIST'
          ? 'a file stands where a folder should go'
          : (error as Error).message;
  return bad('cannot-write', dir, why, 'choose another folder');
}
