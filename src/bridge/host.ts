/**
 * The one interface that the window needs from whatever it runs in. Two hosts keep it: the desktop
 * (electron/) and a local browser served by this project (src/bridge/host/serve.ts).
 *
 * The page never names a path. The host hands out a `ref` for a place that the person chose, and
 * takes back only refs that it handed out.
 */

export interface PartFile {
  /** As the project names it, relative to the project file. */
  file: string;
  /** Where it lies, or null when only its bytes are known (a drop into a browser, the demonstration). */
  ref: string | null;
  bytes: Uint8Array;
}

/** A drawing that a project names, or that was dropped on it. */
export interface DrawingFile {
  /** As the project names it, relative to the project file; a bare name where no project names it yet. */
  file: string;
  /** Where it lies, or null when only its bytes are known. */
  ref: string | null;
  /** Null when the file could not be read; `problem` says why. */
  bytes: Uint8Array | null;
  problem?: string;
}

/**
 * Names that a drawing may have. A project says which files are read for it: one that comes from elsewhere shall not
 * reach what is no drawing.
 */
export const isDrawingName = (name: string): boolean =>
  /\.(svg|dxf|gbr|ger|g[tb][lsop]|gko|gml?\d*|drl|xln|xnc|exc)$/i.test(name);

/** Likewise for a netlist. */
export const isNetlistName = (name: string): boolean => /\.(ipc|356|d356)$/i.test(name);

/** Whether a file is read as a drawing or a netlist: by its name, or whatever its name by how it begins. */
export const isRead = (name: string, bytes: Uint8Array): boolean =>
  isDrawingName(name) || isNetlistName(name) || beginsLikeDrawing(bytes) || beginsLikeNetlist(bytes);

/** Names that are looked at, and written beside a project, at all: drill files and netlists are often plain text. */
export const isWritten = (name: string): boolean =>
  isDrawingName(name) || isNetlistName(name) || /\.txt$/i.test(name);

/** SVG, DXF, drill file, Gerber: as the readers tell them. */
export const beginsLikeDrawing = (bytes: Uint8Array): boolean =>
  /<svg[\s>]|^M48\s*$|%(FS|MO|AD|TF)/m.test(headOf(bytes)) || /^\s*0\s*\r?\n\s*SECTION/.test(headOf(bytes));

/** Records of IPC-D-356A. */
export const beginsLikeNetlist = (bytes: Uint8Array): boolean =>
  /^(P {2}(JOB|CODE|UNITS|TITLE|NUM|REV|VER|IMAGE|NNAME)|[37][12]7)/m.test(headOf(bytes));

const headOf = (bytes: Uint8Array): string => new TextDecoder().decode(bytes.subarray(0, 4096));

export interface OpenedProject {
  kind: 'project';
  /** Where it lies; null when it has no place yet. */
  ref: string | null;
  /** File name, for titles and messages. */
  name: string;
  text: string;
  /** Null when the part's file could not be read; `partProblem` says why. */
  part: PartFile | null;
  partProblem?: string;
  /** Every drawing that its circuit names, each once, those that could not be read too. */
  drawings: DrawingFile[];
}

export interface OpenedPart {
  kind: 'part';
  name: string;
  part: PartFile;
}

/** Drawings are laid on the part that is open. Each has its bytes and a bare name. */
export interface OpenedDrawings {
  kind: 'drawings';
  drawings: (DrawingFile & { bytes: Uint8Array })[];
}

export type Opened = OpenedProject | OpenedPart | OpenedDrawings;

export interface RecentFile {
  ref: string;
  name: string;
  folder: string;
}

/** Work that an earlier window could not save. */
export interface LostWork {
  id: string;
  name: string;
  /** ISO time of the last entry. */
  when: string;
}

export interface StartNews {
  /** What the person asked to open, on the command line or by a double click. */
  opened: Opened | null;
  firstStart: boolean;
  lost: LostWork[];
  recent: RecentFile[];
  /** Hints and cautions put away for good. */
  dismissed: string[];
}

export interface Place {
  ref: string;
  name: string;
  /** How the project must name the part when it is saved there. */
  partFile: string;
  /** The part has no file yet: its bytes go along with the save. */
  writePart: boolean;
}

/** Where a drawing lies once its project is saved. */
export interface PlacedDrawing {
  /** How the project must name it. */
  file: string;
  ref: string;
  /** It has no file yet: its bytes go along with the save. */
  write: boolean;
}

export interface SaveRequest {
  ref: string;
  text: string;
  part: { file: string; bytes: Uint8Array } | null;
  drawings: { ref: string; bytes: Uint8Array }[];
}

export interface JournalEntry {
  name: string;
  ref: string | null;
  text: string;
  partFile: string;
  partRef: string | null;
  /** Sent once for a part without a file. */
  partBytes: Uint8Array | null;
  /** Likewise: bytes once, and only for a drawing without a file. */
  drawings: { file: string; ref: string | null; bytes: Uint8Array | null }[];
}

export interface MenuEntry {
  id: string;
  label: string;
  /** As `Mod+Shift+S`; shown beside the label. The page itself listens for the keys. */
  keys?: string;
  enabled: boolean;
}

export interface Menu {
  label: string;
  entries: (MenuEntry | 'line')[];
}

export type HostEvent =
  | { kind: 'command'; id: string }
  | { kind: 'close-asked' }
  | { kind: 'opened'; opened: Opened };

/** What a dialog offers first: any file may be chosen in either. */
export type OpenWhat = 'document' | 'drawing';

export interface Host {
  readonly kind: 'desktop' | 'browser';
  start(): Promise<StartNews>;
  /** Asks which file to open. Null when the person changed their mind. */
  open(what: OpenWhat): Promise<Opened | null>;
  openRecent(ref: string): Promise<Opened>;
  /** Files dropped on the window: the first project among them, else the first part, else all drawings. */
  openDropped(files: readonly File[]): Promise<Opened | null>;
  /** Gives back lost work, or throws it away. */
  recover(id: string, take: boolean): Promise<OpenedProject | null>;
  /** Asks where to save. */
  choosePlace(suggested: string, partRef: string | null, partName: string): Promise<Place | null>;
  /** How a project saved at `project` must name its drawings, in their order. */
  placeDrawings(
    project: string,
    drawings: readonly { file: string; ref: string | null }[],
  ): Promise<PlacedDrawing[]>;
  save(request: SaveRequest): Promise<void>;
  /** Asks for a folder and writes the files into a folder of that name in it; null when the person changed their mind. */
  exportFiles(
    suggested: string,
    files: readonly { path: string; bytes: Uint8Array }[],
  ): Promise<string | null>;
  /** Keeps unsaved work; null when there is none. */
  journal(entry: JournalEntry | null): Promise<void>;
  recent(): Promise<RecentFile[]>;
  dismiss(what: string): Promise<void>;
  /** Title and unsaved state, for the frame and for the question on closing. */
  title(name: string, unsaved: boolean): void;
  menu(menus: readonly Menu[]): void;
  close(): void;
  listen(hear: (event: HostEvent) => void): () => void;
}

/** What travels when a request could not be met. */
export interface HostProblem {
  problem: string;
  mend: string;
}

export class HostError extends Error {
  readonly news: HostProblem;
  constructor(news: HostProblem) {
    super(`${news.problem}; ${news.mend}.`);
    this.name = 'HostError';
    this.news = news;
  }
}
