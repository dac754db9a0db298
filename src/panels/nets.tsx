/** The nets of the circuit: how they hang together, how long they are, what they resist. A click selects one. */
import { useMemo } from 'react';
import { type NetRow, netRows, netsNow } from '../store/nets.ts';
import { current, type State } from '../store/state.ts';
import { show } from '../store/units.ts';
import { useWindow } from './window.tsx';

export function Nets({ state }: { state: State }) {
  const { store, reveal } = useWindow();
  const { copper } = current(state);
  const now = netsNow(state);
  const found = now === 'working' ? null : now;
  const rows = useMemo(() => (copper ? netRows(copper, found) : []), [copper, found]);
  const chosen = useMemo(() => new Set(state.selection), [state.selection]);
  if (!copper) return null;
  if (rows.length === 0) return <Joined state={state} />;
  const loose = copper.elements.length - rows.reduce((n, r) => n + r.elements.length, 0);
  const take = (row: NetRow, more: boolean) => {
    const others = more ? state.selection.filter((id) => !row.elements.includes(id)) : [];
    const taken = row.elements.every((id) => chosen.has(id));
    store.select(more && taken ? others : [...others, ...row.elements]);
    reveal(row.elements);
  };
  return (
    <>
      <h3>Nets</h3>
      <p className="dim nets-state" role="status">
        {now === 'working'
          ? 'Resistances: working out …'
          : now === null
            ? 'Resistances are not worked out.'
            : ''}
      </p>
      <ul className="nets" aria-label="Nets">
        {rows.map((row) => (
          <li key={row.name}>
            <button
              type="button"
              data-net={row.name}
              aria-pressed={row.elements.every((id) => chosen.has(id))}
              onClick={(e) => take(row, e.shiftKey || e.ctrlKey || e.metaKey)}
            >
              <NetWords row={row} working={now === 'working'} />
            </button>
          </li>
        ))}
      </ul>
      <Joined state={state} />
      {loose > 0 && (
        <p className="dim">{loose === 1 ? 'One element has no net.' : `${loose} elements have no net.`}</p>
      )}
    </>
  );
}

/** Opens and shorts, as the report has them. */
function Joined({ state }: { state: State }) {
  const { connections: c, copper } = state;
  if (!c || c.revision !== copper?.revision) return null;
  const told = [
    ...c.value.problems.map((p) => ({
      text: `${p.file === state.project?.name ? '' : `${p.file}, `}${p.place}: ${p.problem}; ${p.mend}.`,
      level: 'error' as const,
    })),
    ...c.value.rules.map(({ text, level, elements }) => ({ text: text ?? elements.join(', '), level })),
  ];
  if (told.length === 0) return null;
  return (
    <ul className="joined" aria-label="Opens and shorts">
      {told.slice(0, MOST_TOLD).map(({ text, level }) => (
        <li key={text} className={level === 'error' ? 'wrong' : 'look'}>
          {text}
        </li>
      ))}
      {told.length > MOST_TOLD && <li className="dim">and {told.length - MOST_TOLD} more, in the report</li>}
    </ul>
  );
}

/** Opens and shorts listed at once. */
const MOST_TOLD = 40;

function NetWords({ row, working }: { row: NetRow; working: boolean }) {
  const { name, elements, length, found } = row;
  return (
    <>
      <span className="id">{name}</span>
      <span className="count">
        {found ? (found.most ? ohms(found.most.value) : 'no two pads') : working ? '…' : '–'}
      </span>
      <span className="dim">
        {elements.length === 1 ? '1 element' : `${elements.length} elements`}
        {length > 0 ? ` · ${show(length, 1)} mm` : ''}
        {found ? ` · ${show(found.area, 1)} mm²` : ''}
      </span>
      {found && (found.most || found.current > 0) && (
        <span className="dim">
          {found.most ? `from ${found.most.from} to ${found.most.to}` : ''}
          {found.most && found.current > 0 ? ' · ' : ''}
          {found.current > 0 ? `guide ${show(found.current, 2)} A` : ''}
        </span>
      )}
      {found && found.pieces > 1 && <span className="look">In {found.pieces} pieces that do not touch</span>}
    </>
  );
}

const ohms = (mohm: number): string =>
  mohm >= 1e6
    ? `${show(mohm / 1e6, 2)} kΩ`
    : mohm >= 1000
      ? `${show(mohm / 1000, 2)} Ω`
      : `${show(mohm, mohm < 100 ? 1 : 0)} mΩ`;
