/**
 * `npm test`: lint, build, core tests, then window tests where a desktop runtime and a display can be had.
 * The last line is the count over all runs: `N passed, N failed`. Status 0 only when everything held and tests ran.
 *
 *   --all    window tests left out count as a failure (what the checks on every change use)
 *   WORDS    only test files whose path holds one of them, as `npm test -- core/mesh`
 */
import { spawnSync } from 'node:child_process';
import { mkdirSync, readFileSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { electronExe } from './electron-runtime.mjs';

const ROOT = fileURLToPath(new URL('../..', import.meta.url));
const OUT = join(ROOT, 'out', 'test-results');
const all = process.argv.includes('--all');
const words = process.argv.slice(2).filter((a) => !a.startsWith('--'));
const shell = process.platform === 'win32';

let passed = 0;
let failed = 0;
/** What is wrong apart from failing tests. */
const troubles = [];

run('lint', 'npm', ['run', '--silent', 'lint']) || troubles.push('lint found something');
const built = run('build', 'npm', ['run', '--silent', 'build']);
if (!built) troubles.push('the build failed');

rmSync(OUT, { recursive: true, force: true });
mkdirSync(OUT, { recursive: true });
vitest('core', []);
const reason = built ? windowTests() : 'the build failed';
if (reason) {
  console.log(`\nLeft out: the window tests (tests/flows), because ${reason}.`);
  console.log(
    'To run them: a desktop runtime ("npx install-electron", or linux-x64 with access to the package registry)',
  );
  console.log(
    'and a display (on Linux without one: "apt-get install xvfb xauth libgtk-3-0 libnss3 libasound2 libgbm1").',
  );
  if (all) troubles.push('the window tests were left out');
}
if (passed + failed === 0) troubles.push('no test ran');
for (const t of troubles) console.log(`Not in order: ${t}.`);
console.log(`${passed} passed, ${failed} failed`);
process.exit(failed === 0 && troubles.length === 0 ? 0 : 1);

function run(title, command, args, env = {}) {
  console.log(`\n── ${title}`);
  const { status } = spawnSync(command, args, {
    cwd: ROOT,
    stdio: 'inherit',
    shell,
    env: { ...process.env, ...env },
  });
  return status === 0;
}

/** @returns why the window tests were left out, or null when they ran */
function windowTests() {
  let exe;
  try {
    exe = electronExe();
  } catch (error) {
    return error.message;
  }
  const needsDisplay = process.platform === 'linux' && !process.env.DISPLAY;
  if (needsDisplay && spawnSync('xvfb-run', ['--help'], { stdio: 'ignore' }).status !== 0)
    return 'there is no display and no xvfb-run to make one';
  const missing = process.platform === 'linux' ? missingLibraries(exe) : [];
  if (missing.length > 0) return `the desktop runtime lacks ${missing.join(', ')}`;
  const wrap = needsDisplay ? ['xvfb-run', '-a', '-s', '-screen 0 1280x900x24'] : [];
  vitest('window', wrap, { ELECTRON_EXE: exe, BEAMDRAPE_BUILT: '1' });
  return null;
}

function missingLibraries(exe) {
  const { stdout } = spawnSync('ldd', [exe], { encoding: 'utf8' });
  return [...(stdout ?? '').matchAll(/^\s*(\S+) => not found/gm)].map((m) => m[1]);
}

function vitest(project, wrap, env = {}) {
  const file = join(OUT, `${project}.json`);
  const command = [
    ...wrap,
    process.execPath,
    join(ROOT, 'node_modules', 'vitest', 'vitest.mjs'),
    'run',
    ...['--project', project, '--reporter=default', '--reporter=json', `--outputFile.json=${file}`],
    ...(words.length > 0 ? ['--passWithNoTests', ...words] : []),
  ];
  const ok = run(`${project} tests`, command[0], command.slice(1), env);
  let result;
  try {
    result = JSON.parse(readFileSync(file, 'utf8'));
  } catch {
    troubles.push(`the ${project} tests gave no result`);
    return;
  }
  passed += result.numPassedTests;
  failed += result.numFailedTests;
  // A test file that cannot be loaded has no tests to fail.
  const broken = result.testResults.filter(
    (f) => f.status === 'failed' && f.assertionResults.length === 0,
  ).length;
  failed += broken;
  if (!ok && result.numFailedTests + broken === 0)
    troubles.push(`the ${project} tests ended with an error outside any test`);
  if (result.numPendingTests > 0) console.log(`${result.numPendingTests} skipped in ${project}`);
}
