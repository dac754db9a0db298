/** Opening, saving, journal and export: the store and the host brought together. */
import type {
  Host,
  HostEvent,
  Opened,
  OpenedDrawings,
  OpenedPart,
  OpenedProject,
  OpenWhat,
  RecentFile,
} from '../bridge/host.ts';
import { drawingFilesIn, partFileIn } from '../bridge/project-files.ts';
import { writeProject } from '../core/project/read.ts';
import type { Question } from '../panels/question.ts';
import type { Store } from '../store/store.ts';
import type { Ray } from '../worker/session.ts';

export type Ask = (question: Question) => Promise<{ answer: string | null; entry: string }>;
export type Documents = ReturnType<typeof createDocuments>;

/** How often unsaved work is kept, ms. */
const KEEP_EVERY = 4000;

/** Place of the page, px. */
export interface Pixel {
  x: number;
  y: number;
}

/** @param rays  where on the part something dropped at a place of the page belongs, or what comes by no place: best first */
export function createDocuments(
  store: Store,
  host: Host,
  ask: Ask,
  rays: (at: Pixel | null) => readonly Ray[],
) {
  let kept = -1;
  /** Bytes without a file that the journal holds already. */
  const keptBytes = new Set<Uint8Array>();

  async function forget(): Promise<void> {
    keptBytes.clear();
    await host.journal(null);
    kept = -1;
  }

  const recentListeners = new Set<(files: readonly RecentFile[]) => void>();
  const tellRecent = () =>
    guard('Listing recent files', async () => {
      const files = await host.recent();
      for (const hear of recentListeners) hear(files);
    });

  const guard = async (doing: string, f: () => Promise<unknown>): Promise<void> => {
    try {
      await f();
    } catch (error) {
      store.fail(error, doing);
    }
  };

  /** @returns whether the work at hand may be left */
  async function mayLeave(): Promise<boolean> {
    if (!store.unsaved()) return true;
    const { answer } = await ask({
      title: 'Save the changes?',
      text: `“${store.getState().origin.name}” has changes that are not saved.`,
      answers: [
        ['save', 'Save'],
        ['drop', 'Do not save'],
      ],
    });
    if (answer === 'save') return save();
    return answer === 'drop';
  }

  /** A document takes the place of the one at hand; drawings are laid on its part. */
  async function take(opened: Opened | null, at: Pixel | null = null): Promise<void> {
    if (opened?.kind === 'drawings') await lay(opened, at);
    else if (opened && (await mayLeave())) await showOpened(opened);
  }

  async function lay({ drawings }: OpenedDrawings, at: Pixel | null): Promise<void> {
    if ((await store.layDrawings(drawings, rays(at))) !== 'no-units') return;
    const { answer } = await ask({
      title: 'Unit of the drawing',
      text: `${drawings.map((d) => d.file).join(', ')}: the file does not say what one of its units is.`,
      answers: [],
      choices: UNITS.map(([, words]) => words),
    });
    const unit = UNITS.find(([, words]) => words === answer);
    if (unit) await store.layDrawings(drawings, rays(at), unit[0]);
  }

  async function showOpened(opened: OpenedPart | OpenedProject): Promise<void> {
    if (opened.kind === 'part') {
      await store.openPart(opened.name, opened.part);
      return;
    }
    const shown = await store.openProject(opened.text, opened.name, opened.ref, opened.part, opened.drawings);
    void tellRecent();
    const { project } = store.getState();
    if (
      shown &&
      opened.part &&
      project?.part.sha256 !== undefined &&
      project.part.sha256.toLowerCase() !== (await sha256(opened.part.bytes))
    )
      store.notify(
        'problem',
        `${project.part.file} is not the file that the project was saved with`,
        'check that it is the right part',
      );
    if (shown && !opened.part)
      store.notify(
        'problem',
        `The part is missing: ${(opened.partProblem ?? 'its file was not found').replace(/\.$/, '')}`,
        'put the file back and open the project again',
      );
  }

  const open = (what: OpenWhat) => guard('Opening', async () => take(await host.open(what)));

  const openDemo = () => guard('Opening the demonstration', async () => (await mayLeave()) && fetchDemo());

  async function fetchDemo(): Promise<void> {
    const index = await fetch('./demo/touch-dial.drape.json');
    if (!index.ok)
      return store.notify('problem', 'The demonstration is not in this build', 'build the program again');
    const text = await index.text();
    const beside = async (file: string) => ({
      file,
      ref: null,
      bytes: new Uint8Array(await (await fetch(`./demo/${file}`)).arrayBuffer()),
    });
    await store.openProject(
      text,
      'touch-dial.drape.json',
      null,
      await beside(partFileIn(text) ?? ''),
      await Promise.all(drawingFilesIn(text).map(beside)),
    );
  }

  async function saveTo(place: { ref: string; name: string } | null): Promise<boolean> {
    const s = store.getState();
    if (!s.project) return false;
    let target = place;
    let part: { file: string; bytes: Uint8Array } | null = null;
    let project = s.project;
    if (!target) {
      const chosen = await host.choosePlace(
        s.origin.name || `${project.name}.drape.json`,
        s.origin.partRef,
        project.part.file,
      );
      if (!chosen) return false;
      target = chosen;
      project = store.renamePart(chosen.partFile) ?? project;
      if (chosen.writePart && s.origin.partBytes) part = { file: chosen.partFile, bytes: s.origin.partBytes };
    }
    const used = store.drawingsInUse();
    const placed = used.length > 0 ? await host.placeDrawings(target.ref, used) : [];
    project = store.placeDrawings(placed.map((p, i) => ({ ...p, was: used[i]!.file }))) ?? project;
    const text = writeProject(project);
    const drawings = placed.flatMap((p, i) => (p.write ? [{ ref: p.ref, bytes: used[i]!.bytes }] : []));
    await host.save({ ref: target.ref, text, part, drawings });
    store.saved({ ref: target.ref, name: target.name }, project, text);
    await forget();
    void tellRecent();
    return true;
  }

  const save = async (): Promise<boolean> => {
    const { ref, name } = store.getState().origin;
    try {
      return await saveTo(ref ? { ref, name } : null);
    } catch (error) {
      store.fail(error, 'Saving');
      return false;
    }
  };

  const saveAs = () => guard('Saving', () => saveTo(null));

  const exportFiles = () =>
    guard('Writing the scan files', async () => {
      const s = store.getState();
      if (!s.project) return;
      const { project, revision } = s;
      // An unchanged project is copied as it was read, so that the files are those of the command line.
      const text =
        s.origin.text !== null && project === s.origin.saved ? s.origin.text : writeProject(project);
      const result = await store.exportFiles(text);
      if (!result) return;
      const folder = await host.exportFiles(`${safeName(project.name)}-scan`, result.files);
      if (folder === null) return;
      store.setExported({ revision, report: result.report, folder, files: result.files.length });
      store.setStep('files');
      if (result.report.ok) store.notify('done', `${result.files.length} files written to ${folder}`);
      else
        store.notify(
          'problem',
          `${result.files.length} files are in ${folder}, but not every check holds`,
          'see in the Files step what fails before anything is burnt',
        );
    });

  const keep = () =>
    guard('Keeping the work', async () => {
      const s = store.getState();
      if (!s.project || s.revision === kept) return;
      const { revision } = s;
      kept = revision;
      if (!store.unsaved()) {
        await forget();
        kept = revision;
        return;
      }
      const once = (ref: string | null, bytes: Uint8Array | null) =>
        ref === null && bytes !== null && !keptBytes.has(bytes) ? bytes : null;
      const partBytes = once(s.origin.partRef, s.origin.partBytes);
      const drawings = store
        .drawingsInUse()
        .map(({ file, ref, bytes }) => ({ file, ref, bytes: once(ref, bytes) }));
      await host.journal({
        name: s.origin.name,
        ref: s.origin.ref,
        text: writeProject(s.project),
        partFile: s.project.part.file,
        partRef: s.origin.partRef,
        partBytes,
        drawings,
      });
      for (const sent of [partBytes, ...drawings.map((d) => d.bytes)]) if (sent) keptBytes.add(sent);
    });
  setInterval(() => void keep(), KEEP_EVERY);

  async function close(): Promise<void> {
    if (await mayLeave()) {
      await forget();
      host.close();
    }
  }

  return {
    open: () => open('document'),
    openDrawing: () => open('drawing'),
    openDemo,
    openDropped: (files: readonly File[], at: Pixel) =>
      guard('Opening', async () => take(await host.openDropped(files), at)),
    openRecent: (ref: string) => guard('Opening', async () => take(await host.openRecent(ref))),
    onRecent(hear: (files: readonly RecentFile[]) => void): () => void {
      recentListeners.add(hear);
      void tellRecent();
      return () => recentListeners.delete(hear);
    },
    save: () => void save(),
    saveAs,
    exportFiles,
    close: () => guard('Closing', close),
    hear(event: HostEvent) {
      if (event.kind === 'close-asked') void guard('Closing', close);
      else if (event.kind === 'opened') void guard('Opening', () => take(event.opened));
    },
    /** What a fresh window shows: what was asked for, else lost work, else the demonstration or nothing. */
    async begin(tellDismissed: (put: readonly string[]) => void): Promise<void> {
      const news = await host.start();
      tellDismissed(news.dismissed);
      await guard('Opening', async () => {
        if (news.opened) return take(news.opened);
        for (const lost of news.lost) {
          const { answer } = await ask({
            title: 'Work that was not saved',
            text: `“${lost.name}” was open when the program ended on ${new Date(lost.when).toLocaleString()}.`,
            answers: [
              ['take', 'Bring it back'],
              ['drop', 'Throw it away'],
            ],
          });
          if (answer === null) continue;
          const back = await host.recover(lost.id, answer === 'take');
          if (back) {
            await store.openProject(back.text, back.name, back.ref, back.part, back.drawings, false);
            return;
          }
        }
        await fetchDemo();
      });
    },
    showHelp: () =>
      void ask({
        title: 'Keys and mouse',
        text: 'Drag turns the view, Shift and drag (or the right button) moves it, the wheel zooms to the pointer. Arrows turn it, + and − zoom, F fits, B looks down the beam. T draws a trace, P places pads, V selects, Esc steps back. A drawing dropped on the part is laid there; selected, it is dragged by its copper, and the wheel over it (or Alt and the arrows) turns it. D shows the flat drawing beside the part. In the strip, arrows move the marker or a layer; Enter shows a layer alone.',
        answers: [['ok', 'Close this']],
      }),
  };
}

const UNITS = [
  ['mm', 'millimetre'],
  ['inch', 'inch'],
  ['um', 'micrometre'],
  ['cm', 'centimetre'],
  ['m', 'metre'],
] as const;

async function sha256(bytes: Uint8Array): Promise<string> {
  const sum = new Uint8Array(await crypto.subtle.digest('SHA-256', bytes as Uint8Array<ArrayBuffer>));
  return [...sum].map((b) => b.toString(16).padStart(2, '0')).join('');
}

const safeName = (name: string): string =>
  name
    .normalize('NFKD')
    .replace(/[^A-Za-z0-9._-]+/g, '-')
    .replace(/^[.-]+|[.-]+$/g, '') || 'project';
