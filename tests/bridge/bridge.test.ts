import {
  existsSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  renameSync,
  writeFileSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import { join, relative } from 'node:path';
import { beforeEach, describe, expect, test } from 'vitest';
import { createDesk, type Desk } from '../../src/bridge/host/desk.ts';
import { putFolder, saveWhole } from '../../src/bridge/host/files.ts';
import { pageAt } from '../../src/bridge/host/pages.ts';
import { startWindow } from '../../src/bridge/host/start.ts';
import type { OpenedProject, Place, PlacedDrawing, StartNews } from '../../src/bridge/host.ts';
import { requestSchema } from '../../src/bridge/requests.ts';
import { pack, unpack } from '../../src/bridge/wire.ts';

const folder = () => mkdtempSync(join(tmpdir(), 'beamdrape-bridge-'));
const bytes = (s: string) => new TextEncoder().encode(s);

describe('messages', () => {
  test('plain data with byte arrays comes out as it went in', () => {
    const value = {
      a: [1, 'ä', null, { b: Uint8Array.of(1, 2, 3) }],
      c: Uint8Array.of(),
      d: { e: Uint8Array.of(255) },
      f: true,
    };
    expect(unpack(pack(value))).toEqual(value);
  });

  test('a message cut short is refused', () => {
    const m = pack({ a: Uint8Array.of(1, 2, 3, 4) });
    for (const n of [m.length - 1, 6])
      expect(() => unpack(m.subarray(0, n))).toThrowError(
        expect.objectContaining({ name: expect.stringMatching(/RangeError|SyntaxError/) }),
      );
  });
});

describe('requests', () => {
  const file = { path: 'top/layer-01.svg', bytes: Uint8Array.of(1) };
  test('an export below its folder is taken', () => {
    expect(requestSchema.safeParse({ ask: 'export', suggested: 'dome-scan', files: [file] }).success).toBe(
      true,
    );
  });
  test.each(['../x', '/etc/x', 'a/../../x', 'C:/x', 'a\\b', '.hidden', 'a//b', 'a/./b', 'a/\u0000b'])(
    'a path "%s" is refused',
    (path) => {
      expect(
        requestSchema.safeParse({ ask: 'export', suggested: 'scan', files: [{ ...file, path }] }).success,
      ).toBe(false);
    },
  );
  test('what is not in the list, or has more in it, is refused', () => {
    expect(requestSchema.safeParse({ ask: 'run', command: 'ls' }).success).toBe(false);
    expect(requestSchema.safeParse({ ask: 'start', more: 1 }).success).toBe(false);
    expect(requestSchema.safeParse(null).success).toBe(false);
  });
});

describe('files', () => {
  test('a save replaces the whole file and leaves nothing beside it', async () => {
    const dir = folder();
    const path = join(dir, 'a.drape.json');
    writeFileSync(path, 'a long old text');
    await saveWhole(path, 'new');
    expect(readFileSync(path, 'utf8')).toBe('new');
    expect(readdirSync(dir)).toEqual(['a.drape.json']);
  });

  test('a save that cannot be made leaves the old file and says what to do', async () => {
    const dir = folder();
    await expect(saveWhole(join(dir, 'no', 'a.json'), 'x')).rejects.toMatchObject({
      name: 'HostError',
      news: { mend: 'save to another place' },
    });
    expect(readdirSync(dir)).toEqual([]);
  });

  test('an export replaces an earlier one whole: a layer that is no more is gone', async () => {
    const dir = join(folder(), 'scan');
    const report = { path: 'report.json', bytes: bytes('{"format":"beamdrape-report"}') };
    await putFolder(dir, [
      report,
      { path: 'top/layer-01.svg', bytes: bytes('1') },
      { path: 'top/layer-02.svg', bytes: bytes('2') },
    ]);
    await putFolder(dir, [report, { path: 'top/layer-01.svg', bytes: bytes('new') }]);
    expect(readdirSync(join(dir, 'top'))).toEqual(['layer-01.svg']);
    expect(readFileSync(join(dir, 'top/layer-01.svg'), 'utf8')).toBe('new');
    expect(readdirSync(join(dir, '..'))).toEqual(['scan']);
  });

  test('a folder with other things is not touched', async () => {
    const dir = join(folder(), 'scan');
    mkdirSync(dir);
    writeFileSync(join(dir, 'mine.txt'), 'x');
    await expect(putFolder(dir, [{ path: 'report.json', bytes: bytes('{}') }])).rejects.toMatchObject({
      news: { problem: expect.stringContaining('other things') },
    });
    expect(readdirSync(dir)).toEqual(['mine.txt']);
  });
});

describe('pages', () => {
  const root = folder();
  mkdirSync(join(root, 'pages'));
  writeFileSync(join(root, 'pages', 'index.html'), '<p>');
  writeFileSync(join(root, 'pages', 'secret.key'), 'k');
  writeFileSync(join(root, 'outside.html'), 'no');
  const at = async (path: string) => (await pageAt(join(root, 'pages'), path)).status;
  test('are served from their folder, by a closed list of kinds', async () => {
    expect([await at('/'), await at('/index.html'), await at('/secret.key'), await at('/none.html')]).toEqual(
      [200, 200, 404, 404],
    );
  });
  test.each([
    '/../outside.html',
    '/%2e%2e/outside.html',
    '/..%2foutside.html',
    '/..%5coutside.html',
    '/%zz',
    '/%00',
  ])('%s is refused', async (path) => {
    expect([400, 403]).toContain(await at(path));
  });
  test('every answer carries the policy, refusals too', async () => {
    for (const path of ['/', '/none.html', '/../outside.html']) {
      const { headers } = await pageAt(join(root, 'pages'), path);
      expect(headers['Content-Security-Policy']).toContain("default-src 'none'");
      expect(headers['Cross-Origin-Embedder-Policy']).toBe('require-corp');
    }
  });
});

describe('the desk', () => {
  let dir: string;
  let state: string;
  let desk: Desk;
  let answers: { open?: string; place?: string; folder?: string };
  const make = (startFile: string | null = null) =>
    createDesk(
      state,
      {
        open: async () => answers.open ?? null,
        place: async () => answers.place ?? null,
        folder: async () => answers.folder ?? null,
        list: async () => [],
      },
      { title() {}, menu() {}, close() {} },
      startFile,
    );
  const value = async <T>(request: unknown): Promise<T> => {
    const reply = await desk.answer(request);
    if (!reply.ok) throw new Error(`${reply.problem}; ${reply.mend}`);
    return reply.value as T;
  };

  beforeEach(() => {
    dir = folder();
    state = folder();
    answers = {};
    desk = make();
    mkdirSync(join(dir, 'parts'));
    writeFileSync(join(dir, 'parts', 'a.stl'), 'solid');
    writeFileSync(join(dir, 'job.drape.json'), JSON.stringify({ part: { file: 'parts/a.stl' } }));
  });

  test('a project is opened with its part; the page sees no path of it but the folder of recent files', async () => {
    answers.open = join(dir, 'job.drape.json');
    const opened = await value<OpenedProject>({ ask: 'open', what: 'document' });
    expect(opened.name).toBe('job.drape.json');
    expect(opened.part?.file).toBe('parts/a.stl');
    expect(new TextDecoder().decode(opened.part?.bytes)).toBe('solid');
    expect(JSON.stringify({ ...opened, part: { ...opened.part, bytes: null } })).not.toContain(dir);
    expect(await value<{ name: string }[]>({ ask: 'recent' })).toEqual([
      expect.objectContaining({ name: 'job.drape.json', folder: dir }),
    ]);
  });

  test('a project that names something else than an .stl as its part gets nothing of it', async () => {
    writeFileSync(join(dir, 'evil.drape.json'), JSON.stringify({ part: { file: '/etc/passwd' } }));
    answers.open = join(dir, 'evil.drape.json');
    const opened = await value<OpenedProject>({ ask: 'open', what: 'document' });
    expect(opened.part).toBeNull();
    expect(opened.partProblem).toContain('not an .stl');
  });

  test('a place that was never chosen is neither read nor written', async () => {
    for (const request of [
      { ask: 'save', ref: 'guess', text: 'x', part: null, drawings: [] },
      { ask: 'open-recent', ref: join(dir, 'job.drape.json') },
    ])
      expect(await desk.answer(request)).toMatchObject({
        ok: false,
        problem: expect.stringContaining('never chosen'),
      });
  });

  test('saved in another folder, the project is told how it must name its part', async () => {
    answers.open = join(dir, 'job.drape.json');
    const opened = await value<OpenedProject>({ ask: 'open', what: 'document' });
    mkdirSync(join(dir, 'jobs', 'today'), { recursive: true });
    answers.place = join(dir, 'jobs', 'today', 'x');
    const place = await value<Place>({
      ask: 'choose-place',
      suggested: 'x',
      partRef: opened.part!.ref,
      partName: 'parts/a.stl',
    });
    expect(place).toMatchObject({ name: 'x.drape.json', partFile: '../../parts/a.stl', writePart: false });
    await value({ ask: 'save', ref: place.ref, text: 'text', part: null, drawings: [] });
    expect(readFileSync(join(dir, 'jobs', 'today', 'x.drape.json'), 'utf8')).toBe('text');
  });

  test('a part without a file is saved beside its project', async () => {
    answers.place = join(dir, 'new.drape.json');
    const place = await value<Place>({
      ask: 'choose-place',
      suggested: 'x',
      partRef: null,
      partName: 'dropped.stl',
    });
    expect(place.writePart).toBe(true);
    await value({
      ask: 'save',
      ref: place.ref,
      text: '{}',
      part: { file: 'dropped.stl', bytes: bytes('solid') },
      drawings: [],
    });
    expect(readFileSync(join(dir, 'dropped.stl'), 'utf8')).toBe('solid');
  });

  test('the first start is told once, and what is put away stays away', async () => {
    expect((await value<StartNews>({ ask: 'start' })).firstStart).toBe(true);
    await value({ ask: 'dismiss', what: 'hint-trace' });
    desk = make();
    const news = await value<StartNews>({ ask: 'start' });
    expect(news.firstStart).toBe(false);
    expect(news.dismissed).toEqual(['hint-trace']);
  });

  test('work kept by a program that is gone is offered; by one that runs it is not', async () => {
    const entry = {
      name: 'job.drape.json',
      ref: null,
      text: '{"a":1}',
      partFile: 'p.stl',
      partRef: null,
      partBytes: bytes('solid'),
      drawings: [],
    };
    await value({ ask: 'journal', entry });
    desk = make();
    // This process is alive: its work is its own.
    expect((await value<StartNews>({ ask: 'start' })).lost).toEqual([]);
    const journal = join(state, 'journal');
    // A process number that cannot be one: the program that kept this has ended.
    for (const f of readdirSync(journal))
      renameSync(join(journal, f), join(journal, f.replace(/^\d+/, '4194999')));
    const { lost } = await value<StartNews>({ ask: 'start' });
    expect(lost).toEqual([expect.objectContaining({ name: 'job.drape.json' })]);
    const back = await value<OpenedProject>({ ask: 'recover', id: lost[0]!.id, take: true });
    expect(back.text).toBe('{"a":1}');
    expect(new TextDecoder().decode(back.part?.bytes)).toBe('solid');
    expect(readdirSync(journal)).toEqual([]);
  });

  test('an entry is taken out of the journal when the work is saved', async () => {
    await value({
      ask: 'journal',
      entry: {
        name: 'x',
        ref: null,
        text: '{}',
        partFile: 'p.stl',
        partRef: null,
        partBytes: null,
        drawings: [],
      },
    });
    expect(readdirSync(join(state, 'journal'))).toHaveLength(1);
    await value({ ask: 'journal', entry: null });
    expect(readdirSync(join(state, 'journal'))).toEqual([]);
  });
});

describe('drawings on the desk', () => {
  let dir: string;
  let state: string;
  let desk: Desk;
  let answers: { open?: string; place?: string };
  const make = () =>
    createDesk(
      state,
      {
        open: async () => answers.open ?? null,
        place: async () => answers.place ?? null,
        folder: async () => null,
        list: async () => [],
      },
      { title() {}, menu() {}, close() {} },
      null,
    );
  const value = async <T>(request: unknown): Promise<T> => {
    const reply = await desk.answer(request);
    if (!reply.ok) throw new Error(`${reply.problem}; ${reply.mend}`);
    return reply.value as T;
  };
  const project = (...drawings: string[]) =>
    JSON.stringify({
      part: { file: 'a.stl' },
      circuit: { drapes: drawings.map((drawing) => ({ drawing })) },
    });

  beforeEach(() => {
    dir = folder();
    state = folder();
    answers = { open: join(dir, 'job.drape.json') };
    desk = make();
    mkdirSync(join(dir, 'art'));
    writeFileSync(join(dir, 'a.stl'), 'solid');
    writeFileSync(join(dir, 'art', 'ring.svg'), '<svg/>');
    writeFileSync(join(dir, 'secret.key'), 'key');
    writeFileSync(
      join(dir, 'job.drape.json'),
      project('art/ring.svg', 'gone.gbr', 'art/ring.svg', 'secret.key'),
    );
  });

  test('those that the project names come along, each once; a missing one says why, and what is none is not read', async () => {
    const { drawings } = await value<OpenedProject>({ ask: 'open', what: 'document' });
    expect(drawings.map((d) => [d.file, d.bytes && new TextDecoder().decode(d.bytes), d.problem])).toEqual([
      ['art/ring.svg', '<svg/>', undefined],
      ['gone.gbr', null, expect.stringMatching(/gone\.gbr: it is not there$/)],
      ['secret.key', null, 'its name does not end like that of a drawing'],
    ]);
  });

  test('a drill file called .txt and a netlist come along by what they hold, other text does not', async () => {
    const drill = 'M48\r\nMETRIC,TZ\r\nT1C0.8\r\n%\r\nT1\r\nX1.0Y2.0\r\nM30\r\n';
    writeFileSync(join(dir, 'holes.txt'), drill);
    writeFileSync(join(dir, 'diary.txt'), 'Dear diary, M48 was a bus.\n');
    writeFileSync(join(dir, 'net.ipc'), 'P  JOB x\n999\n');
    const data = JSON.parse(project('holes.txt', 'diary.txt')) as object;
    writeFileSync(join(dir, 'job.drape.json'), JSON.stringify({ ...data, netlist: 'net.ipc' }));
    const { drawings } = await value<OpenedProject>({ ask: 'open', what: 'document' });
    expect(drawings.map((d) => [d.file, d.bytes !== null, d.problem])).toEqual([
      ['holes.txt', true, undefined],
      ['diary.txt', false, 'it is neither a drawing nor a netlist'],
      ['net.ipc', true, undefined],
    ]);
    answers.open = join(dir, 'holes.txt');
    expect(await value({ ask: 'open', what: 'drawing' })).toMatchObject({
      kind: 'drawings',
      drawings: [{ file: 'holes.txt' }],
    });
    answers.open = join(dir, 'diary.txt');
    expect(await desk.answer({ ask: 'open', what: 'drawing' })).toMatchObject({
      ok: false,
      problem: 'diary.txt is neither a part nor a project nor a drawing',
    });
  });

  test('saved in another folder, they are named from there; one without a file gets a free name beside the project', async () => {
    const { drawings } = await value<OpenedProject>({ ask: 'open', what: 'document' });
    const far = folder();
    writeFileSync(join(far, 'tail.gbr'), 'of somebody else');
    answers.place = join(far, 'x.drape.json');
    const { ref } = await value<Place>({
      ask: 'choose-place',
      suggested: 'x',
      partRef: null,
      partName: 'a.stl',
    });
    const placed = await value<PlacedDrawing[]>({
      ask: 'place-drawings',
      project: ref,
      drawings: [
        { file: 'art/ring.svg', ref: drawings[0]!.ref },
        { file: 'tail.gbr', ref: null },
        { file: '../tail.gbr', ref: null },
      ],
    });
    expect(placed.map((p) => [p.file, p.write])).toEqual([
      [relative(far, join(dir, 'art', 'ring.svg')), false],
      ['tail-2.gbr', true],
      ['tail-3.gbr', true],
    ]);
    await value({
      ask: 'save',
      ref,
      text: '{}',
      part: null,
      drawings: [{ ref: placed[1]!.ref, bytes: bytes('G04 mine*') }],
    });
    expect(readFileSync(join(far, 'tail-2.gbr'), 'utf8')).toBe('G04 mine*');
    expect(readFileSync(join(far, 'tail.gbr'), 'utf8')).toBe('of somebody else');
  });

  test('bytes of a drawing are not written over a project, a part or what was never placed', async () => {
    const opened = await value<OpenedProject>({ ask: 'open', what: 'document' });
    for (const ref of [opened.ref, opened.part!.ref, 'guess'])
      expect(
        await desk.answer({
          ask: 'save',
          ref: opened.ref,
          text: '{}',
          part: null,
          drawings: [{ ref, bytes: bytes('x') }],
        }),
      ).toMatchObject({ ok: false });
    expect(readFileSync(join(dir, 'a.stl'), 'utf8')).toBe('solid');
    expect(readFileSync(join(dir, 'job.drape.json'), 'utf8')).toContain('ring.svg');
    expect(
      await desk.answer({
        ask: 'place-drawings',
        project: opened.ref,
        drawings: [{ file: 'run.sh', ref: null }],
      }),
    ).toMatchObject({ ok: false, problem: '"run.sh" is not the name of a drawing' });
  });

  test('work that was lost brings back those with a file and those without', async () => {
    const { drawings } = await value<OpenedProject>({ ask: 'open', what: 'document' });
    const entry = { name: 'job.drape.json', ref: null, text: '{}', partFile: 'a.stl', partRef: null };
    const kept = [
      { file: 'art/ring.svg', ref: drawings[0]!.ref, bytes: null },
      { file: 'tail.gbr', ref: null, bytes: bytes('G04 tail*') },
    ];
    await value({ ask: 'journal', entry: { ...entry, partBytes: null, drawings: kept } });
    // The second time bytes do not come again.
    await value({
      ask: 'journal',
      entry: { ...entry, partBytes: null, drawings: kept.map((d) => ({ ...d, bytes: null })) },
    });
    const journal = join(state, 'journal');
    for (const f of readdirSync(journal))
      renameSync(join(journal, f), join(journal, f.replace(/^\d+/, '4194999')));
    desk = make();
    const { lost } = await value<StartNews>({ ask: 'start' });
    const back = await value<OpenedProject>({ ask: 'recover', id: lost[0]!.id, take: true });
    expect(back.drawings.map((d) => [d.file, new TextDecoder().decode(d.bytes!), d.ref !== null])).toEqual([
      ['art/ring.svg', '<svg/>', true],
      ['tail.gbr', 'G04 tail*', false],
    ]);
    expect(readdirSync(journal)).toEqual([]);
  });
});

describe('starting', () => {
  test('a wrong option or a missing file is bad usage: status 2', async () => {
    expect(await startWindow(['--nonsense'])).toBe(2);
    expect(await startWindow(['no-such-file.drape.json'])).toBe(2);
    expect(existsSync('no-such-file.drape.json')).toBe(false);
  });
});
