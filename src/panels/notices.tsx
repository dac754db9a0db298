/** News for the person, progress of long work, and the first hints. */
import { useEffect, useState } from 'react';
import { useLook, useWindow } from './window.tsx';

export function Notices() {
  const { store } = useWindow();
  const notices = useLook((s) => s.notices);
  return (
    <section className="notices" aria-label="News" aria-live="polite">
      {notices.map((n) => (
        <div key={n.id} className={`notice ${n.level}`} role={n.level === 'done' ? 'status' : 'alert'}>
          <p>
            {n.text}.
            {n.mend && (
              <>
                {' '}
                <span className="mend">{n.mend.charAt(0).toUpperCase() + n.mend.slice(1)}.</span>
              </>
            )}
          </p>
          <button type="button" aria-label="Put away" onClick={() => store.dismissNotice(n.id)}>
            ×
          </button>
        </div>
      ))}
    </section>
  );
}

/** Work shorter than this shows nothing, s. */
const PATIENCE = 0.3;

export function BusyLine() {
  const { store } = useWindow();
  const busy = useLook((s) => s.busy);
  const [late, setLate] = useState(false);
  const since = busy?.since;
  useEffect(() => {
    setLate(false);
    if (since === undefined) return;
    const wait = setTimeout(() => setLate(true), Math.max(0, PATIENCE * 1000 - (performance.now() - since)));
    return () => clearTimeout(wait);
  }, [since]);
  if (!busy || !late) return null;
  return (
    <div className="busy" role="status">
      <span>{busy.what}…</span>
      <progress aria-label={busy.what} max={1} {...(busy.share === null ? {} : { value: busy.share })} />
      <button type="button" onClick={() => store.stop()}>
        Stop
      </button>
    </div>
  );
}

const HINTS: readonly (readonly [id: string, text: string])[] = [
  [
    'hint-offset',
    'Drag the marker in the strip below: it moves the stage. Copper that is then out of focus turns red.',
  ],
  ['hint-trace', 'Choose Trace and click along the part: the run follows the surface the shortest way.'],
  ['hint-files', 'Open Files to write what the laser needs, one set a layer, with the Z to set for each.'],
];

export function Hints() {
  const { dismissed, dismiss } = useWindow();
  const left = HINTS.filter(([id]) => !dismissed.has(id));
  if (left.length === 0) return null;
  return (
    <section className="hints" aria-label="Hints">
      {left.map(([id, text]) => (
        <div key={id} className="hint">
          <p>{text}</p>
          <button type="button" onClick={() => dismiss(id)}>
            Got it<span className="sr">: {text.split(/[:.]/)[0]}</span>
          </button>
        </div>
      ))}
    </section>
  );
}
