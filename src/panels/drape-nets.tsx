/** Nets of a drawing on the part: which name of the drawing belongs to which net. */
import { useId, useMemo, useState } from 'react';
import type { Drape } from '../core/project/schema.ts';
import { netNames, withNet } from '../store/drawing-nets.ts';
import { current, type State } from '../store/state.ts';
import type { FlatPicture } from '../worker/pictures.ts';
import { Fact, TextField } from './fields.tsx';
import { useWindow } from './window.tsx';

/** Fields shown at once: a drawing of thousands of shapes is searched. */
const MOST = 30;

export function DrapeNets({ drape: d, flat }: { drape: Drape; flat: FlatPicture }) {
  const { store } = useWindow();
  const [sought, setSought] = useState('');
  const find = useId();
  const names = useMemo(() => netNames(d, flat), [d, flat]);
  const found = names.filter(
    (n) =>
      sought === '' ||
      [n.name, n.given, n.otherwise].some((t) => t.toLowerCase().includes(sought.toLowerCase())),
  );
  const named = names.filter((n) => n.given !== '').length;
  if (names.length === 0) return null;
  return (
    <details className="nets-of">
      <summary>Nets by the drawing’s names{named > 0 ? `, ${named} given` : ''}</summary>
      {names.length > MOST && (
        <div className="field">
          <label htmlFor={find}>Find</label>
          <span className="entry">
            <input
              id={find}
              type="search"
              autoComplete="off"
              value={sought}
              onChange={(e) => setSought(e.target.value)}
            />
          </span>
        </div>
      )}
      {found.slice(0, MOST).map((n) => (
        <TextField
          key={`${n.kind} ${n.name}`}
          label={n.kind === 'layer' ? `Layer ${n.name}` : n.name}
          value={n.given}
          placeholder={n.otherwise || 'no net'}
          onValue={(net) =>
            store.act({
              kind: 'edit-drape',
              id: d.id,
              what: `net of ${n.name}`,
              change: { nets: withNet(d.nets, n.name, net) },
            })
          }
        />
      ))}
      {found.length > MOST && <p className="dim">{found.length - MOST} more: say in “Find” which of them.</p>}
      {found.length === 0 && <p className="dim">None of {names.length} is called so.</p>}
    </details>
  );
}

/** The net of one element of a drawing: set by its name in the drawing, if it has one. */
export function DrawnNet({
  id,
  drape,
  net,
  state,
}: {
  id: string;
  drape: string | null;
  net: string;
  state: State;
}) {
  const { store } = useWindow();
  const { copper } = current(state);
  const flat = copper?.drawings.find((r) => r.drape === drape)?.flat;
  const d = state.project?.circuit.drapes.find((x) => x.id === drape);
  const name = flat?.shapes[flat.ids.indexOf(id)]?.name ?? null;
  if (!d || name === null)
    return (
      <dl>
        <Fact label="Net">{net || 'no net'}</Fact>
      </dl>
    );
  return (
    <TextField
      label="Net"
      value={d.nets[name] ?? ''}
      placeholder={net || 'no net'}
      onValue={(v) =>
        store.act({
          kind: 'edit-drape',
          id: d.id,
          what: `net of ${name}`,
          change: { nets: withNet(d.nets, name, v) },
        })
      }
    />
  );
}
