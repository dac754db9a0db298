/** Every command of the window in one list: menus, keys and buttons all come from here. */
import type { Menu, RecentFile } from '../bridge/host.ts';
import { hasCircuit, type State } from '../store/state.ts';
import type { Store } from '../store/store.ts';
import type { Viewport } from '../view/viewport.ts';
import type { Documents } from './documents.ts';

export interface Command {
  id: string;
  menu: 'File' | 'Edit' | 'View' | 'Help';
  label(s: State): string;
  /** `Mod` is Ctrl, or Cmd on a Mac. Single letters work where no text is typed. */
  keys?: string;
  enabled?(s: State): boolean;
  run(): unknown;
  /** Begins a group. */
  line?: boolean;
}

export function commandList(store: Store, documents: Documents, view: () => Viewport | null): Command[] {
  const named = (s: State, which: 'past' | 'future') =>
    (which === 'past' ? s.history.past[s.history.past.length - 1] : s.history.future[0])?.name;
  const hasPart = (s: State) => s.part !== null;
  return [
    { id: 'open', menu: 'File', label: () => 'Open…', keys: 'Mod+O', run: documents.open },
    {
      id: 'lay-drawing',
      menu: 'File',
      label: () => 'Lay a drawing…',
      enabled: hasPart,
      run: documents.openDrawing,
    },
    { id: 'demo', menu: 'File', label: () => 'Open the demonstration', run: documents.openDemo },
    {
      id: 'save',
      menu: 'File',
      label: () => 'Save',
      keys: 'Mod+S',
      enabled: (s) => s.project !== null,
      run: documents.save,
      line: true,
    },
    {
      id: 'save-as',
      menu: 'File',
      label: () => 'Save as…',
      keys: 'Mod+Shift+S',
      enabled: (s) => s.project !== null,
      run: documents.saveAs,
    },
    {
      id: 'export',
      menu: 'File',
      label: () => 'Write the scan files…',
      keys: 'Mod+E',
      enabled: (s) => hasPart(s) && s.project !== null && hasCircuit(s.project),
      run: documents.exportFiles,
      line: true,
    },
    { id: 'close', menu: 'File', label: () => 'Close', run: documents.close, line: true },

    {
      id: 'undo',
      menu: 'Edit',
      label: (s) => (named(s, 'past') ? `Undo ${named(s, 'past')}` : 'Undo'),
      keys: 'Mod+Z',
      enabled: (s) => s.history.past.length > 0,
      run: store.undo,
    },
    {
      id: 'redo',
      menu: 'Edit',
      label: (s) => (named(s, 'future') ? `Redo ${named(s, 'future')}` : 'Redo'),
      keys: 'Mod+Shift+Z',
      enabled: (s) => s.history.future.length > 0,
      run: store.redo,
    },
    {
      id: 'delete',
      menu: 'Edit',
      label: (s) => (s.selection.length === 1 ? `Delete ${s.selection[0]}` : 'Delete'),
      keys: 'Delete',
      enabled: (s) => s.selection.length > 0,
      run: store.deleteSelected,
      line: true,
    },
    {
      id: 'select-all',
      menu: 'Edit',
      label: () => 'Select all',
      keys: 'Mod+A',
      enabled: (s) => s.project !== null && hasCircuit(s.project),
      run() {
        const circuit = store.getState().project?.circuit;
        store.select([...(circuit?.elements ?? []), ...(circuit?.drapes ?? [])].map((e) => e.id));
      },
    },
    {
      id: 'tool-look',
      menu: 'Edit',
      label: () => 'Select',
      keys: 'V',
      run: () => store.setTool('look'),
      line: true,
    },
    {
      id: 'tool-trace',
      menu: 'Edit',
      label: () => 'Draw a trace',
      keys: 'T',
      enabled: hasPart,
      run: () => store.setTool('trace'),
    },
    {
      id: 'tool-pad',
      menu: 'Edit',
      label: () => 'Place pads',
      keys: 'P',
      enabled: hasPart,
      run: () => store.setTool('pad'),
    },

    { id: 'fit', menu: 'View', label: () => 'Fit', keys: 'F', enabled: hasPart, run: () => view()?.fit() },
    {
      id: 'view-beam',
      menu: 'View',
      label: () => 'Beam’s eye',
      keys: 'B',
      run: () => view()?.look('beam'),
      line: true,
    },
    {
      id: 'view-corner',
      menu: 'View',
      label: () => 'From a corner',
      keys: 'C',
      run: () => view()?.look('corner'),
    },
    { id: 'view-front', menu: 'View', label: () => 'Front', keys: '1', run: () => view()?.look('front') },
    { id: 'view-right', menu: 'View', label: () => 'Right', keys: '2', run: () => view()?.look('right') },
    { id: 'view-back', menu: 'View', label: () => 'Back', keys: '3', run: () => view()?.look('back') },
    { id: 'view-left', menu: 'View', label: () => 'Left', keys: '4', run: () => view()?.look('left') },
    {
      id: 'view-below',
      menu: 'View',
      label: () => 'From below',
      keys: '5',
      run: () => view()?.look('below'),
    },
    {
      id: 'toggle-plane',
      menu: 'View',
      label: () => 'Field and focal plane',
      keys: 'G',
      run: () => view()?.toggle('plane'),
      line: true,
    },
    {
      id: 'toggle-stretch',
      menu: 'View',
      label: (s) => (s.stretchShown ? 'Show what the beam reaches' : 'Show the stretch of drawings'),
      keys: 'S',
      enabled: (s) => (s.project?.circuit.drapes.length ?? 0) > 0,
      run: () => store.showStretch(!store.getState().stretchShown),
    },
    {
      id: 'toggle-flat',
      menu: 'View',
      label: (s) => (s.flatShown ? 'Put the flat drawing away' : 'Flat drawing beside the part'),
      keys: 'D',
      enabled: (s) => (s.project?.circuit.drapes.length ?? 0) > 0,
      run: () => store.showFlat(!store.getState().flatShown),
    },
    {
      id: 'toggle-lens',
      menu: 'View',
      label: () => 'Lens body',
      keys: 'L',
      run: () => view()?.toggle('lens'),
    },
    { id: 'toggle-cut', menu: 'View', label: () => 'Cut open', keys: 'X', run: () => view()?.toggle('cut') },

    { id: 'hints', menu: 'Help', label: () => 'Keys and mouse', keys: 'F1', run: documents.showHelp },
  ];
}

/** Recent files stand in the File menu by their name and folder. */
export const recentCommands = (recent: readonly RecentFile[], documents: Documents): Command[] =>
  recent.map((f, i) => ({
    id: `recent-${f.ref}`,
    menu: 'File',
    label: () => `${f.name} – ${f.folder}`,
    run: () => documents.openRecent(f.ref),
    line: i === 0,
  }));

export function menusOf(commands: readonly Command[], s: State): Menu[] {
  return (['File', 'Edit', 'View', 'Help'] as const).map((label) => ({
    label,
    entries: commands
      .filter((c) => c.menu === label)
      .flatMap((c, i) => [
        ...(c.line && i > 0 ? (['line'] as const) : []),
        { id: c.id, label: c.label(s), ...(c.keys ? { keys: c.keys } : {}), enabled: c.enabled?.(s) ?? true },
      ]),
  }));
}

/** The command that a key press means, or null. */
export function commandFor(e: KeyboardEvent, commands: readonly Command[]): Command | null {
  const target = e.target as HTMLElement;
  const typing = target.matches?.('input:not([type=checkbox]), select, textarea');
  const mod = e.ctrlKey || e.metaKey;
  if (typing && !mod) return null;
  // A text field keeps its own undo and select-all.
  if (typing && /^[za]$/i.test(e.key)) return null;
  for (const c of commands) {
    if (!c.keys) continue;
    const parts = c.keys.split('+');
    const key = parts[parts.length - 1]!;
    if (parts.includes('Mod') !== mod || e.altKey) continue;
    if (parts.includes('Shift') !== e.shiftKey && key.length === 1 && /[a-z]/i.test(key)) continue;
    if (e.key.toLowerCase() === key.toLowerCase()) return c;
  }
  // Two habits that are not the first ones: Ctrl+Y and Backspace.
  if (mod && e.key.toLowerCase() === 'y') return commands.find((c) => c.id === 'redo') ?? null;
  if (mod && e.key.toLowerCase() === 'f') return commands.find((c) => c.id === 'fit') ?? null;
  return null;
}
