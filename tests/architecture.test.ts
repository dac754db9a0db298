/** Imports go one way: the table of rooms, compared with what the sources really import. */
import { readdirSync, readFileSync } from 'node:fs';
import { dirname, join, relative, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { describe, expect, test } from 'vitest';

const ROOT = fileURLToPath(new URL('..', import.meta.url));

/** Room → rooms it may import. `types:x` allows only types of x. A room may always import itself. */
const CORE: Record<string, string[]> = {
  base: [],
  project: ['base'],
  mesh: ['base'],
  drawing: ['base'],
  geodesic: ['base', 'mesh'],
  part: ['base', 'mesh'],
  beam: ['base', 'project'],
  drape: ['base', 'project', 'mesh', 'geodesic', 'drawing'],
  reach: ['base', 'project', 'mesh', 'part', 'beam', 'drape'],
  layers: ['base', 'project', 'reach', 'types:drape'],
  scan: ['base', 'project', 'mesh', 'part', 'beam', 'drape', 'reach', 'layers'],
  files: ['base', 'project', 'types:scan', 'types:layers', 'types:reach', 'types:drape'],
  // The proof shares the head's numbers with what it judges, never the code.
  proof: ['base', 'project', 'mesh', 'part', 'drape'],
  copper: ['base', 'project', 'mesh', 'geodesic', 'drape'],
  rules: ['base', 'project', 'mesh', 'geodesic', 'drape', 'copper'],
};

const CORE_ROOMS = Object.keys(CORE).map((r) => `core/${r}`);
const ALL_CORE = [...CORE_ROOMS, 'core/pipeline'];
const ROOMS: Record<string, string[]> = {
  ...Object.fromEntries(Object.entries(CORE).map(([room, may]) => [`core/${room}`, may.map(inCore)])),
  'core/pipeline': CORE_ROOMS,
  worker: ALL_CORE,
  // The door of the command line into the window is src/cli/window.ts alone: see below.
  cli: [...ALL_CORE, 'worker', 'bridge', 'assets'],
  bridge: ['types:core/base', 'types:worker', 'assets'],
  store: ['worker', ...ALL_CORE.map((r) => `types:${r}`), 'types:bridge'],
  view: ['store', ...ALL_CORE.map((r) => `types:${r}`), 'types:worker'],
  panels: ['store', ...ALL_CORE.map((r) => `types:${r}`), 'types:worker', 'types:bridge'],
  app: [...ALL_CORE, 'worker', 'bridge', 'store', 'view', 'panels', 'assets'],
  electron: ['bridge'],
};

function inCore(room: string): string {
  return room.startsWith('types:') ? `types:core/${room.slice(6)}` : `core/${room}`;
}

/** Files of types with a constant or a small formula beside them: what the window may know of the core besides types. */
const DOORS =
  /^src\/core\/(base\/[\w-]+|reach\/result|project\/(new-project|rule-words)|files\/cautions)\.ts$/;
const WINDOW_ROOMS = ['store', 'view', 'panels'];

/** Outside libraries that only these files may import, within the core and the bridge. */
const LIBRARIES: RegExp[] = [
  /^src\/core\/mesh\/queries\.ts: (three|three-mesh-bvh)$/,
  /^src\/core\/project\/schema\.ts: zod$/,
  /^src\/core\/[\w/-]+\.ts: robust-predicates$/,
  /^src\/core\/geodesic\/[\w-]+\.ts: flatbush$/,
  /^src\/core\/drawing\/svg-xml\.ts: @xmldom\/xmldom$/,
  /^src\/core\/proof\/reader-svg\.ts: @xmldom\/xmldom$/,
  /^src\/core\/project\/read\.ts: jsonc-parser$/,
  /^src\/core\/drawing\/flat\.ts: manifold-3d$/,
];

interface Import {
  file: string;
  /** Path from the root, or a library's name. */
  target: string;
  typeOnly: boolean;
}

const sources = ['src', 'electron'].flatMap((d) => walk(join(ROOT, d)));
const imports = sources.flatMap(importsOf);

function walk(dir: string): string[] {
  return readdirSync(dir, { withFileTypes: true }).flatMap((e) =>
    e.isDirectory() ? walk(join(dir, e.name)) : /\.tsx?$/.test(e.name) ? [join(dir, e.name)] : [],
  );
}

function importsOf(path: string): Import[] {
  const text = readFileSync(path, 'utf8').replace(/\/\*[\s\S]*?\*\/|^\s*\/\/.*$/gm, '');
  const file = relative(ROOT, path).replaceAll('\\', '/');
  const out: Import[] = [];
  const add = (spec: string, typeOnly: boolean): void => {
    const local = spec.startsWith('.');
    const target = local ? relative(ROOT, resolve(dirname(path), spec)).replaceAll('\\', '/') : spec;
    out.push({ file, target: target.replace(/\?.*$/, ''), typeOnly });
  };
  for (const m of text.matchAll(
    /\b(?:import|export)\s+(type\s+)?([\w$*\s{},]*?)\s*from\s*['"]([^'"]+)['"]/g,
  )) {
    const names = /^[^{]*\{([^}]*)\}\s*$/.exec(m[2]);
    const each =
      names?.[1]
        .split(',')
        .map((s) => s.trim())
        .filter((s) => s !== '') ?? [];
    const plainDefault = /^[\w$]+\s*,/.test(m[2].trim());
    add(
      m[3],
      m[1] !== undefined || (each.length > 0 && !plainDefault && each.every((s) => s.startsWith('type '))),
    );
  }
  for (const m of text.matchAll(/\bimport\s*\(?\s*['"]([^'"]+)['"]/g)) add(m[1], false);
  for (const m of text.matchAll(/new URL\(\s*['"](\.[^'"]+\.tsx?)['"]\s*,\s*import\.meta\.url/g))
    add(m[1], false);
  return out;
}

function roomOf(path: string): string | null {
  if (path.startsWith('electron/')) return 'electron';
  if (path.startsWith('assets/')) return 'assets';
  // The report's account of a run belongs to the line as a whole.
  if (path === 'src/core/account.ts') return 'core/pipeline';
  const m = /^src\/(core\/pipeline(?=\.ts)|core\/[\w-]+(?=\/)|[\w-]+(?=\/))/.exec(path);
  return m ? m[1] : null;
}

test('there are sources to look at, and each is in a known room', () => {
  expect(sources.length).toBeGreaterThan(40);
  const lost = imports.map((i) => i.file).filter((f) => !((roomOf(f) ?? '') in ROOMS));
  expect([...new Set(lost)]).toEqual([]);
});

describe('each room imports only what its line of the table allows', () => {
  for (const [room, may] of Object.entries(ROOMS))
    test(room, () => {
      const wrong = imports
        .filter((i) => roomOf(i.file) === room && /^(src|electron|assets)\//.test(i.target))
        .filter((i) => {
          const to = roomOf(i.target);
          if (WINDOW_ROOMS.includes(room) && DOORS.test(i.target)) return false;
          return !(
            to === room ||
            (to !== null && (may.includes(to) || (i.typeOnly && may.includes(`types:${to}`))))
          );
        })
        .map((i) => `${i.file} imports ${i.typeOnly ? 'types of ' : ''}${i.target}`);
      expect(wrong).toEqual([]);
    });
});

test('the proof imports nothing of beam, reach, layers, scan and the writers', () => {
  const seen = new Set<string>();
  const follow = (file: string): void => {
    if (seen.has(file)) return;
    seen.add(file);
    for (const i of imports) if (i.file === file && !i.typeOnly) follow(i.target);
  };
  for (const f of new Set(imports.map((i) => i.file))) if (f.startsWith('src/core/proof/')) follow(f);
  expect([...seen].filter((f) => /^src\/core\/(beam|reach|layers|scan|files)\//.test(f))).toEqual([]);
});

test('outside libraries enter the core through the files named here', () => {
  const wrong = imports
    .filter((i) => i.file.startsWith('src/core/') && !/^(src|electron|assets)\//.test(i.target))
    .map((i) => `${i.file}: ${i.target}`)
    .filter((line) => !LIBRARIES.some((allowed) => allowed.test(line)));
  expect(wrong).toEqual([]);
});

test('Node is known only where programs for Node are: cli, worker/node, bridge/host and electron', () => {
  const wrong = imports
    .filter((i) => i.target.startsWith('node:'))
    .map((i) => i.file)
    .filter((f) => !/^(src\/cli\/|src\/worker\/node\.ts|src\/bridge\/host\/|electron\/)/.test(f));
  expect([...new Set(wrong)]).toEqual([]);
});

test('Electron is known only to electron/', () => {
  expect(imports.filter((i) => i.target === 'electron' && !i.file.startsWith('electron/'))).toEqual([]);
});

test('the command line enters the bridge only through its window door', () => {
  const wrong = imports.filter(
    (i) => roomOf(i.file) === 'cli' && roomOf(i.target) === 'bridge' && i.file !== 'src/cli/window.ts',
  );
  expect(wrong).toEqual([]);
});

test('the core takes sine, cosine and tangent from base/trig.ts: those of engines differ in the last bit', () => {
  const wrong = sources
    .map((path) => relative(ROOT, path).replaceAll('\\', '/'))
    .filter((f) => f.startsWith('src/core/') && f !== 'src/core/base/trig.ts')
    .filter((f) => /\bMath\.(sin|cos|tan)\b/.test(readFileSync(join(ROOT, f), 'utf8')));
  expect(wrong).toEqual([]);
});

test('the core asks no clock, no dice and no screen', () => {
  const wrong = sources
    .map((path) => relative(ROOT, path).replaceAll('\\', '/'))
    .filter((f) => f.startsWith('src/core/'))
    .filter((f) => {
      const text = readFileSync(join(ROOT, f), 'utf8').replace(/\/\*[\s\S]*?\*\/|\/\/.*$/gm, '');
      return /\bMath\.random\b|\bDate\b|\bperformance\.|\bconsole\.|\bglobalThis\b|\bprocess\.(env|argv|exit|cwd|stdout|stderr|on|nextTick|hrtime|platform)\b/.test(
        text,
      );
    });
  expect(wrong).toEqual([]);
});

test('imports in the core name their file with its ending', () => {
  const wrong = imports.filter(
    (i) => i.file.startsWith('src/core/') && i.target.startsWith('src/') && !/\.ts$/.test(i.target),
  );
  expect(wrong).toEqual([]);
});
