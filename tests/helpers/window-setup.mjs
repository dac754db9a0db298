/** Before the window tests: a desktop runtime, and the window built. */
import { execFileSync } from 'node:child_process';
import { fileURLToPath } from 'node:url';
import { electronExe } from './electron-runtime.mjs';

export default function setup() {
  process.env.ELECTRON_EXE = electronExe();
  if (process.env.BEAMDRAPE_BUILT === '1') return;
  const root = fileURLToPath(new URL('../..', import.meta.url));
  execFileSync('npm', ['run', '--silent', 'build'], {
    cwd: root,
    stdio: ['ignore', 'ignore', 'inherit'],
    shell: process.platform === 'win32',
  });
}
