/** Runs the real bundle of the command line, built once when a source is newer than it. */
import { spawn } from 'node:child_process';
import { existsSync, mkdirSync, mkdtempSync, readdirSync, rmdirSync, rmSync, statSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { build } from 'vite';

const ROOT = fileURLToPath(new URL('../..', import.meta.url));
/** Apart from out/cli, so that a test never changes what a person has built. */
const FOLDER = join(ROOT, 'out', 'test-cli');
const FILE = join(FOLDER, 'cli.mjs');
const LOCK = join(ROOT, 'out', 'test-cli.lock');

export interface Ended {
  status: number | null;
  stdout: string;
  stderr: string;
}

/** @returns path of the bundle */
export async function cliFile(): Promise<string> {
  mkdirSync(join(ROOT, 'out'), { recursive: true });
  for (;;) {
    try {
      mkdirSync(LOCK);
      break;
    } catch {
      // Another test file builds: wait for it, but not for one that was killed.
      if (existsSync(LOCK) && Date.now() - statSync(LOCK).mtimeMs > 60_000)
        rmSync(LOCK, { recursive: true, force: true });
      await new Promise((done) => setTimeout(done, 100));
    }
  }
  try {
    if (
      !existsSync(FILE) ||
      statSync(FILE).mtimeMs <
        newest([join(ROOT, 'src'), join(ROOT, 'assets'), join(ROOT, 'vite.cli.config.ts')])
    )
      await build({
        configFile: join(ROOT, 'vite.cli.config.ts'),
        root: ROOT,
        logLevel: 'error',
        build: { outDir: FOLDER },
      });
  } finally {
    rmdirSync(LOCK);
  }
  return FILE;
}

function newest(paths: readonly string[]): number {
  let time = 0;
  for (const path of paths) {
    const s = statSync(path);
    time = Math.max(time, s.isDirectory() ? newest(readdirSync(path).map((f) => join(path, f))) : s.mtimeMs);
  }
  return time;
}

/** @param act  called once with the running program, to send it a signal or close its output */
export async function runCli(
  args: readonly string[],
  options: { cwd?: string; act?: (child: ReturnType<typeof spawn>) => void } = {},
): Promise<Ended> {
  const file = await cliFile();
  const child = spawn(process.execPath, [file, ...args], {
    cwd: options.cwd ?? ROOT,
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  let stdout = '';
  let stderr = '';
  child.stdout.on('data', (d) => (stdout += d));
  child.stderr.on('data', (d) => (stderr += d));
  options.act?.(child);
  return new Promise((resolve, reject) => {
    child.on('error', reject);
    child.on('close', (status) => resolve({ status, stdout, stderr }));
  });
}

export const emptyFolder = (): string => mkdtempSync(join(tmpdir(), 'beamdrape-test-'));
