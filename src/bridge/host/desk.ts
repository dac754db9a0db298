/**
 * The host's side of one window: answers its requests, keeps the list of places that the person chose,
 * the journal of unsaved work and the small settings. Knows Node, not which window it serves.
 */
import { createHash, randomBytes } from 'node:crypto';
import { existsSync, mkdirSync, readdirSync, readFileSync } from 'node:fs';
import { rm } from 'node:fs/promises';
import { basename, dirname, join, relative, resolve, sep } from 'node:path';
import {
  beginsLikeDrawing,
  type DrawingFile,
  HostError,
  isDrawingName,
  isRead,
  isWritten,
  type LostWork,
  type Opened,
  type OpenedProject,
  type OpenWhat,
  type PartFile,
  type Place,
  type PlacedDrawing,
  type RecentFile,
  type StartNews,
} from '../host.ts';
import { drawingFilesIn, partFileIn } from '../project-files.ts';
import { type Reply, type Request, requestSchema } from '../requests.ts';
import { putFolder, readWhole, saveWhole } from './files.ts';

export interface Dialogs {
  /** Path to open, or null. `named` is what a page without dialogs of its own already asked for. */
  open(what: OpenWhat, named?: string): Promise<string | null>;
  place(suggested: string, named?: string): Promise<string | null>;
  folder(named?: string): Promise<string | null>;
  /** Files that may be opened by name: only where the page asks itself. */
  list(what: OpenWhat): Promise<string[]>;
}

export interface Frame {
  title(name: string, unsaved: boolean): void;
  menu(menus: Extract<Request, { ask: 'menu' }>['menus']): void;
  close(): void;
}

export interface Desk {
  /** Answers one request; whatever goes wrong comes back as data. */
  answer(raw: unknown): Promise<Reply>;
  /** Opens a path that the person gave outside the page: a drop, the command line, a double click. */
  openPath(path: string): Promise<Opened>;
  /** Of several: the first project, else the first part, else all of them as drawings. */
  openPaths(paths: readonly string[]): Promise<Opened | null>;
}

interface Settings {
  started: boolean;
  dismissed: string[];
  recent: string[];
}

const RECENT = 12;

export function createDesk(state: string, dialogs: Dialogs, frame: Frame, startFile: string | null): Desk {
  const refs = new Map<string, string>();
  const settingsFile = join(state, 'settings.json');
  const journalFolder = join(state, 'journal');
  const journalFile = join(journalFolder, `${process.pid}-${randomBytes(3).toString('hex')}.json`);
  mkdirSync(journalFolder, { recursive: true });

  const refOf = (path: string): string => {
    for (const [ref, known] of refs) if (known === path) return ref;
    const ref = randomBytes(9).toString('base64url');
    refs.set(ref, path);
    return ref;
  };
  const pathOf = (ref: string): string => {
    const path = refs.get(ref);
    if (path === undefined)
      throw new HostError({ problem: 'this place was never chosen', mend: 'choose it in a dialog' });
    return path;
  };

  const settings = (): Settings => {
    try {
      const s = JSON.parse(readFileSync(settingsFile, 'utf8')) as Partial<Settings>;
      return {
        started: s.started === true,
        dismissed: Array.isArray(s.dismissed) ? s.dismissed.map(String) : [],
        recent: Array.isArray(s.recent) ? s.recent.map(String) : [],
      };
    } catch {
      return { started: false, dismissed: [], recent: [] };
    }
  };
  const change = (f: (s: Settings) => Settings) =>
    saveWhole(settingsFile, JSON.stringify(f(settings()), null, 2) + '\n');
  const remember = (path: string) =>
    change((s) => ({ ...s, recent: [path, ...s.recent.filter((p) => p !== path)].slice(0, RECENT) }));
  const recent = (): RecentFile[] =>
    settings()
      .recent.filter((p) => existsSync(p))
      .map((p) => ({ ref: refOf(p), name: basename(p), folder: dirname(p) }));

  async function openPath(given: string): Promise<Opened> {
    const path = resolve(given);
    if (/\.stl$/i.test(path)) {
      const bytes = await readWhole(path);
      return { kind: 'part', name: basename(path), part: { file: basename(path), ref: refOf(path), bytes } };
    }
    if (!/\.json$/i.test(path)) return openDrawings([path]);
    const text = new TextDecoder().decode(await readWhole(path));
    await remember(path);
    return {
      kind: 'project',
      ref: refOf(path),
      name: basename(path),
      text,
      ...(await partOf(text, dirname(path))),
      drawings: await Promise.all(
        drawingFilesIn(text).map((file) => drawingOf(file, resolve(dirname(path), file))),
      ),
    };
  }

  async function openDrawings(paths: readonly string[]): Promise<Opened> {
    const drawings = await Promise.all(
      paths.map(async (p) => ({ file: basename(p), ref: refOf(resolve(p)), bytes: await readWhole(p) })),
    );
    const other = drawings.find((d) => !isDrawingName(d.file) && !beginsLikeDrawing(d.bytes));
    if (other !== undefined)
      throw new HostError({
        problem: `${other.file} is neither a part nor a project nor a drawing`,
        mend: 'open an .stl, a .drape.json, or an SVG, DXF, Gerber or drill file',
      });
    return { kind: 'drawings', drawings };
  }

  async function openPaths(paths: readonly string[]): Promise<Opened | null> {
    const first = paths.find((p) => /\.json$/i.test(p)) ?? paths.find((p) => /\.stl$/i.test(p));
    if (first !== undefined) return openPath(first);
    return paths.length === 0 ? null : openDrawings(paths);
  }

  /** The part that a project names. What is wrong with the project itself is for its reader to say. */
  async function partOf(
    text: string,
    folder: string,
  ): Promise<{ part: PartFile | null; partProblem?: string }> {
    const file = partFileIn(text);
    if (file === null) return { part: null, partProblem: 'the project names no part' };
    if (!/\.stl$/i.test(file)) return { part: null, partProblem: `"${file}" is not an .stl file` };
    const path = resolve(folder, file);
    try {
      return { part: { file, ref: refOf(path), bytes: await readWhole(path) } };
    } catch (error) {
      return { part: null, partProblem: (error as Error).message };
    }
  }

  /** A drawing that a project names `file`. */
  async function drawingOf(file: string, path: string): Promise<DrawingFile> {
    const missing = (problem: string): DrawingFile => ({ file, ref: null, bytes: null, problem });
    if (!isWritten(path)) return missing('its name does not end like that of a drawing');
    try {
      const bytes = await readWhole(path);
      if (!isRead(path, bytes)) return missing('it is neither a drawing nor a netlist');
      return { file, ref: refOf(path), bytes };
    } catch (error) {
      if (!(error instanceof HostError)) throw error;
      return missing(error.news.problem);
    }
  }

  /** What has a file keeps it; what has none is put beside the project, under a name that is free there. */
  function placeDrawings({
    project,
    drawings,
  }: Extract<Request, { ask: 'place-drawings' }>): PlacedDrawing[] {
    const folder = dirname(pathOf(project));
    const taken = new Set<string>();
    return drawings.map(({ file, ref }) => {
      if (ref !== null) {
        const path = pathOf(ref);
        const same = resolve(folder, file) === path;
        return { file: same ? file : relative(folder, path).split(sep).join('/'), ref, write: false };
      }
      const name = (file.split(/[\\/]/).pop() as string).replace(/[^\p{L}\p{N}._ -]/gu, '_');
      if (!isWritten(name))
        throw new HostError({
          problem: `"${name}" is not the name of a drawing`,
          mend: 'give the drawing such a name',
        });
      const path = freePath(folder, name, taken);
      return { file: basename(path), ref: refOf(path), write: true };
    });
  }

  function lost(): LostWork[] {
    return readdirSync(journalFolder)
      .filter(
        (f) =>
          f.endsWith('.json') && join(journalFolder, f) !== journalFile && !alive(Number(f.split('-')[0])),
      )
      .flatMap((f) => {
        try {
          const entry = JSON.parse(readFileSync(join(journalFolder, f), 'utf8')) as {
            name: string;
            when: string;
          };
          return [{ id: f, name: entry.name, when: entry.when }];
        } catch {
          return [];
        }
      })
      .sort((a, b) => (a.when < b.when ? 1 : -1));
  }

  async function recover(id: string, take: boolean): Promise<OpenedProject | null> {
    if (!lost().some((l) => l.id === id))
      throw new HostError({ problem: 'there is no such work', mend: 'open the saved project instead' });
    const path = join(journalFolder, id);
    const side = besides(path, 'part');
    let back: OpenedProject | null = null;
    if (take) {
      const e = JSON.parse(readFileSync(path, 'utf8')) as {
        name: string;
        path: string | null;
        text: string;
        partFile: string;
        partPath: string | null;
        drawings?: { file: string; path: string | null }[];
      };
      const partPath = e.partPath ?? (existsSync(side) ? side : null);
      back = {
        kind: 'project',
        ref: e.path ? refOf(e.path) : null,
        name: e.name,
        text: e.text,
        part: partPath
          ? { file: e.partFile, ref: e.partPath ? refOf(e.partPath) : null, bytes: await readWhole(partPath) }
          : null,
        drawings: await Promise.all(
          (e.drawings ?? []).map(async ({ file, path: at }) => {
            if (at !== null) return drawingOf(file, at);
            const kept = besides(path, sideName(file));
            return existsSync(kept)
              ? { file, ref: null, bytes: await readWhole(kept) }
              : { file, ref: null, bytes: null, problem: 'it was not kept' };
          }),
        ),
      };
    }
    await forget(path);
    return back;
  }

  async function journal(entry: Extract<Request, { ask: 'journal' }>['entry']): Promise<void> {
    if (entry === null) return forget(journalFile);
    if (entry.partBytes) await saveWhole(besides(journalFile, 'part'), entry.partBytes);
    for (const d of entry.drawings)
      if (d.bytes) await saveWhole(besides(journalFile, sideName(d.file)), d.bytes);
    await saveWhole(
      journalFile,
      JSON.stringify({
        name: entry.name,
        when: new Date().toISOString(),
        path: entry.ref ? pathOf(entry.ref) : null,
        text: entry.text,
        partFile: entry.partFile,
        partPath: entry.partRef ? pathOf(entry.partRef) : null,
        drawings: entry.drawings.map((d) => ({ file: d.file, path: d.ref ? pathOf(d.ref) : null })),
      }),
    );
  }

  /** Takes an entry out of the journal with the files kept beside it. */
  async function forget(entry: string): Promise<void> {
    const own = basename(entry).replace(/json$/, '');
    for (const f of readdirSync(journalFolder))
      if (f.startsWith(own)) await rm(join(journalFolder, f), { force: true });
  }

  async function meet(r: Request): Promise<unknown> {
    switch (r.ask) {
      case 'start': {
        const before = settings();
        if (!before.started) await change((s) => ({ ...s, started: true }));
        const news: StartNews = {
          opened: startFile ? await openPath(startFile) : null,
          firstStart: !before.started,
          lost: lost(),
          recent: recent(),
          dismissed: before.dismissed,
        };
        return news;
      }
      case 'open': {
        const path = await dialogs.open(r.what, r.named);
        return path === null ? null : openPath(path);
      }
      case 'list':
        return dialogs.list(r.what);
      case 'open-recent':
        return openPath(pathOf(r.ref));
      case 'recover':
        return recover(r.id, r.take);
      case 'choose-place': {
        const chosen = await dialogs.place(r.suggested, r.named);
        if (chosen === null) return null;
        const path = /\.json$/i.test(chosen) ? chosen : `${chosen}.drape.json`;
        const partPath = r.partRef === null ? null : pathOf(r.partRef);
        const place: Place = {
          ref: refOf(path),
          name: basename(path),
          partFile:
            partPath === null ? basename(r.partName) : relative(dirname(path), partPath).split(sep).join('/'),
          writePart: partPath === null,
        };
        return place;
      }
      case 'place-drawings':
        return placeDrawings(r);
      case 'save': {
        const path = pathOf(r.ref);
        if (r.part) {
          const beside = join(dirname(path), basename(r.part.file));
          if (!/\.stl$/i.test(beside))
            throw new HostError({
              problem: `"${r.part.file}" is not an .stl file`,
              mend: 'give the part such a name',
            });
          await saveWhole(beside, r.part.bytes);
        }
        for (const d of r.drawings) {
          const at = pathOf(d.ref);
          if (!isWritten(at))
            throw new HostError({
              problem: `"${basename(at)}" is not the name of a drawing`,
              mend: 'give the drawing such a name',
            });
          await saveWhole(at, d.bytes);
        }
        await saveWhole(path, r.text);
        await remember(path);
        return null;
      }
      case 'export': {
        const parent = await dialogs.folder(r.named);
        if (parent === null) return null;
        const folder = join(parent, r.suggested);
        await putFolder(folder, r.files);
        return folder;
      }
      case 'journal':
        await journal(r.entry);
        return null;
      case 'recent':
        return recent();
      case 'dismiss':
        await change((s) => ({ ...s, dismissed: [...new Set([...s.dismissed, r.what])] }));
        return null;
      case 'title':
        frame.title(r.name, r.unsaved);
        return null;
      case 'menu':
        frame.menu(r.menus);
        return null;
      case 'close':
        await journal(null);
        frame.close();
        return null;
    }
  }

  return {
    openPath,
    openPaths,
    async answer(raw) {
      const request = requestSchema.safeParse(raw);
      if (!request.success)
        return {
          ok: false,
          problem: 'the host was asked something it does not know',
          mend: 'this is a mistake of the program',
        };
      try {
        return { ok: true, value: await meet(request.data) };
      } catch (error) {
        if (error instanceof HostError) return { ok: false, ...error.news };
        return { ok: false, problem: (error as Error).message, mend: 'this is a mistake of the program' };
      }
    },
  };
}

const besides = (entry: string, ending: string): string => entry.replace(/json$/, ending);

/** Bytes of a drawing stand in the journal under a name that any file system takes. */
const sideName = (file: string): string =>
  `${createHash('sha256').update(file).digest('hex').slice(0, 16)}.drawing`;

function freePath(folder: string, name: string, taken: Set<string>): string {
  const dot = name.lastIndexOf('.');
  for (let n = 1; ; n++) {
    const path = join(folder, n === 1 ? name : `${name.slice(0, dot)}-${n}${name.slice(dot)}`);
    if (taken.has(path.toLowerCase()) || existsSync(path)) continue;
    taken.add(path.toLowerCase());
    return path;
  }
}

function alive(pid: number): boolean {
  if (!Number.isInteger(pid) || pid <= 0) return false;
  try {
    process.kill(pid, 0);
    return true;
  } catch (error) {
    return (error as { code?: string }).code === 'EPERM';
  }
}
