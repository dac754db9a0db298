/** Opens the window wherever one can be had, and says which and why. */
import { spawn } from 'node:child_process';
import { existsSync, readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { homedir } from 'node:os';
import { dirname, join, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { serve } from './serve.ts';

/**
 * `[FILE] [--browser] [--no-open]`: a project or part to open; the browser even where the desktop
 * runtime is there; only print the address.
 * @returns exit status
 */
export async function startWindow(args: readonly string[]): Promise<number> {
  const known = new Set(['--browser', '--no-open']);
  const wrong = args.find((a) => a.startsWith('-') && !known.has(a));
  const files = args.filter((a) => !a.startsWith('-'));
  if (wrong !== undefined || files.length > 1)
    return say(
      wrong
        ? `window: there is no option ${wrong}; use [FILE] [--browser] [--no-open].`
        : 'window: give one file at most.',
      2,
    );
  const file = files[0] === undefined ? null : resolve(files[0]);
  if (file !== null && !existsSync(file))
    return say(`${files[0]}: there is no such file; check its name.`, 2);
  const out = builtFolder();
  if (out === null) return say('The window is not built; run "npm run build" first.', 2);

  const desktop = args.includes('--browser') ? { reason: 'a browser was asked for' } : desktopRuntime(out);
  if ('exe' in desktop) {
    say(`Opening a desktop window (${desktop.how}).`);
    return runDesktop(desktop.exe, dirname(out), file);
  }
  const served = await serve({
    pages: join(out, 'renderer'),
    state: stateFolder(),
    folder: file ? dirname(file) : process.cwd(),
    startFile: file,
  });
  const opener = args.includes('--no-open') ? null : openerOf();
  say(`Opening in a browser, because ${desktop.reason}.`);
  say(`Files are read and saved in ${file ? dirname(file) : process.cwd()}.`);
  if (opener === null || !launch(opener, served.url)) say('Open this address in a browser on this computer:');
  process.stdout.write(served.url + '\n');
  say('Ctrl+C ends it.');
  await Promise.race([
    served.ended,
    new Promise<void>((stop) => process.once('SIGINT', stop).once('SIGTERM', stop)),
  ]);
  await served.close();
  return 0;
}

const say = (line: string, status = 0): number => {
  process.stderr.write(line + '\n');
  return status;
};

/** Folder with `renderer/` and `main/`: beside the bundled program, or in the repository. */
function builtFolder(): string | null {
  const here = dirname(fileURLToPath(import.meta.url));
  const candidates = [resolve(here, '..'), resolve(here, '../../../out')];
  return candidates.find((c) => existsSync(join(c, 'renderer/index.html'))) ?? null;
}

type Desktop = { exe: string; how: string } | { reason: string };

/** Never loads the `electron` package itself: that would start a download. */
function desktopRuntime(out: string): Desktop {
  if (!existsSync(join(out, 'main/main.cjs'))) return { reason: 'the desktop part is not built' };
  if (process.platform === 'linux' && !process.env['DISPLAY'] && !process.env['WAYLAND_DISPLAY'])
    return { reason: 'this session has no screen for a desktop window' };
  const named = process.env['ELECTRON_EXE'];
  if (named)
    return existsSync(named)
      ? { exe: named, how: 'the runtime that ELECTRON_EXE names' }
      : { reason: 'ELECTRON_EXE names a file that is not there' };
  try {
    const folder = dirname(
      createRequire(join(dirname(out), 'package.json')).resolve('electron/package.json'),
    );
    const exe = join(folder, 'dist', readFileSync(join(folder, 'path.txt'), 'utf8').trim());
    if (existsSync(exe)) return { exe, how: 'the installed Electron' };
  } catch {
    // Not installed: said below.
  }
  return { reason: 'the Electron runtime is not installed here ("npx install-electron" fetches it)' };
}

function runDesktop(exe: string, app: string, file: string | null): Promise<number> {
  const flags: string[] = [];
  if (process.platform === 'linux' && process.getuid?.() === 0) {
    say('Running as root: the system sandbox cannot be used, so it is switched off.');
    flags.push('--no-sandbox');
  }
  const child = spawn(exe, [...flags, app, ...(file ? [file] : [])], {
    stdio: ['ignore', 'inherit', 'ignore'],
  });
  return new Promise((done) => {
    child.once('error', (error) => done(say(`The desktop window could not be opened: ${error.message}.`, 3)));
    child.once('exit', (code) => done(code === 0 || code === null ? 0 : 3));
  });
}

function stateFolder(): string {
  const home = homedir();
  if (process.platform === 'win32') return join(process.env['APPDATA'] ?? home, 'Beamdrape', 'browser');
  if (process.platform === 'darwin') return join(home, 'Library/Application Support/Beamdrape/browser');
  return join(process.env['XDG_CONFIG_HOME'] ?? join(home, '.config'), 'Beamdrape', 'browser');
}

function openerOf(): string[] | null {
  if (process.platform === 'darwin') return ['open'];
  if (process.platform === 'win32') return ['cmd', '/c', 'start', ''];
  const names = ['xdg-open', 'x-www-browser', 'chromium', 'firefox'];
  const folders = (process.env['PATH'] ?? '').split(':');
  for (const name of names) if (folders.some((f) => existsSync(join(f, name)))) return [name];
  return null;
}

function launch(opener: readonly string[], url: string): boolean {
  if (process.platform === 'linux' && !process.env['DISPLAY'] && !process.env['WAYLAND_DISPLAY'])
    return false;
  const child = spawn(opener[0]!, [...opener.slice(1), url], { stdio: 'ignore', detached: true });
  child.on('error', () => {});
  child.unref();
  return true;
}
