/** Tools and views, over the viewport. */
import { useLook, useWindow } from './window.tsx';

export function Tools() {
  const { store, run } = useWindow();
  const tool = useLook((s) => s.tool);
  const part = useLook((s) => s.part);
  const { past, future } = useLook((s) => s.history);
  const drapes = useLook((s) => s.project?.circuit.drapes.length ?? 0);
  const flat = useLook((s) => s.flatShown);
  const undo = past[past.length - 1];
  const redo = future[0];
  const pick = (kind: 'look' | 'trace' | 'pad') => store.setTool(kind);
  return (
    <div className="tools" role="toolbar" aria-label="Tools">
      <button
        type="button"
        aria-pressed={tool.kind === 'look'}
        onClick={() => pick('look')}
        title="Look and select (V)"
      >
        <ToolIcon kind="look" />
        Select
      </button>
      <button
        type="button"
        aria-pressed={tool.kind === 'trace'}
        disabled={!part}
        onClick={() => pick('trace')}
        title="Draw a trace (T)"
      >
        <ToolIcon kind="trace" />
        Trace
      </button>
      <button
        type="button"
        aria-pressed={tool.kind === 'pad'}
        disabled={!part}
        onClick={() => pick('pad')}
        title="Place pads (P)"
      >
        <ToolIcon kind="pad" />
        Pad
      </button>
      <span className="gap" />
      <button
        type="button"
        disabled={!undo}
        onClick={() => run('undo')}
        title={undo ? `Undo ${undo.name} (Ctrl+Z)` : 'Nothing to undo'}
        aria-label={undo ? `Undo ${undo.name}` : 'Undo'}
      >
        <ToolIcon kind="undo" />
      </button>
      <button
        type="button"
        disabled={!redo}
        onClick={() => run('redo')}
        title={redo ? `Redo ${redo.name} (Ctrl+Shift+Z)` : 'Nothing to redo'}
        aria-label={redo ? `Redo ${redo.name}` : 'Redo'}
      >
        <ToolIcon kind="redo" />
      </button>
      <span className="gap" />
      <button type="button" onClick={() => run('fit')} title="Fit the part (F)">
        Fit
      </button>
      <button type="button" onClick={() => run('view-beam')} title="Down the beam (B)">
        Beam’s eye
      </button>
      {drapes > 0 && (
        <button
          type="button"
          aria-pressed={flat}
          onClick={() => run('toggle-flat')}
          title="The flat drawing beside the part (D)"
        >
          Flat
        </button>
      )}
    </div>
  );
}

function ToolIcon({ kind }: { kind: 'look' | 'trace' | 'pad' | 'undo' | 'redo' }) {
  return (
    <svg className="icon" width="16" height="16" viewBox="0 0 16 16" aria-hidden="true" focusable="false">
      {kind === 'look' && (
        <>
          <circle cx="8" cy="8" r="5.5" />
          <path d="M8 0.8 V4 M8 12 V15.2 M0.8 8 H4 M12 8 H15.2" />
        </>
      )}
      {kind === 'trace' && (
        <>
          <path d="M2 12.5 C5 2.5 8.5 13.5 13.5 4" />
          <circle cx="2.2" cy="12.6" r="1.6" className="solid" />
          <circle cx="13.6" cy="3.8" r="1.6" className="solid" />
        </>
      )}
      {kind === 'pad' && (
        <>
          <circle cx="8" cy="8" r="5" className="solid" />
          <path d="M1.5 14 Q8 10.5 14.5 14" />
        </>
      )}
      {kind === 'undo' && <path d="M6.5 3 L2.5 6.5 L6.5 10 M2.5 6.5 H9.5 A4 4 0 0 1 9.5 13.5 H7" />}
      {kind === 'redo' && <path d="M9.5 3 L13.5 6.5 L9.5 10 M13.5 6.5 H6.5 A4 4 0 0 0 6.5 13.5 H9" />}
    </svg>
  );
}

/** One line that says what the hand can do now. */
export function ToolHelp() {
  const tool = useLook((s) => s.tool);
  if (tool.kind === 'pad')
    return (
      <p className="tool-help" role="status">
        Click the part to place a pad. Esc ends. With the keyboard: arrows, then Space.
      </p>
    );
  if (tool.kind !== 'trace') return null;
  if (tool.route.length === 0)
    return (
      <p className="tool-help" role="status">
        Click the part where the trace begins; pads catch it. With the keyboard: arrows, then Space.
      </p>
    );
  const length = tool.live ? `${tool.live.length.toFixed(2)} mm to the pointer. ` : '';
  return (
    <p className="tool-help" role="status">
      {length}Click to go on, Enter or double-click to end, Backspace takes the last point back, Esc drops it.
    </p>
  );
}
