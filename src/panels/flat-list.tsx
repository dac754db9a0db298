/** The elements of a flat drawing as a list for the keyboard: only the rows in sight are in the page. */
import { type KeyboardEvent, useEffect, useMemo, useRef, useState } from 'react';
import { type FlatRow, toggled } from '../store/flat.ts';
import { show } from '../store/units.ts';
import type { DrawingPicture } from '../worker/pictures.ts';
import { useWindow } from './window.tsx';

/** Height of a row, px; style.css has the same. */
const ROW = 24;
/** Rows that are drawn beyond those in sight. */
const MORE = 6;

export function FlatList({
  read,
  rows,
  selection,
  drape,
  onReveal,
}: {
  read: DrawingPicture;
  rows: readonly FlatRow[];
  selection: readonly string[];
  drape: string;
  onReveal(ids: readonly string[]): void;
}) {
  const { store } = useWindow();
  const box = useRef<HTMLDivElement>(null);
  const [top, setTop] = useState(0);
  const [active, setActive] = useState(0);
  /** Where a run of rows that Shift selects began. */
  const from = useRef(0);
  const items = useMemo(
    () => read.flat.ids.flatMap((id, i) => (id === null ? [] : [{ id, row: rows[i]! }])),
    [read, rows],
  );
  const chosen = useMemo(() => new Set(selection), [selection]);
  const inView = box.current ? Math.ceil(box.current.clientHeight / ROW) : 5;

  function bringIn(index: number): void {
    const node = box.current;
    if (!node) return;
    if (index * ROW < node.scrollTop) node.scrollTop = index * ROW;
    else if ((index + 1) * ROW > node.scrollTop + node.clientHeight)
      node.scrollTop = (index + 1) * ROW - node.clientHeight;
  }

  // What is selected elsewhere comes into sight here.
  const first = useMemo(() => items.findIndex((e) => chosen.has(e.id)), [items, chosen]);
  const own = useRef(false);
  // biome-ignore lint/correctness/useExhaustiveDependencies: bringIn reads only the node
  useEffect(() => {
    if (first >= 0 && !own.current) {
      setActive(first);
      from.current = first;
      bringIn(first);
    }
    own.current = false;
  }, [first]);

  function select(ids: readonly string[]): void {
    own.current = true;
    store.select(ids);
  }

  function take(index: number, how: 'one' | 'more' | 'run'): void {
    const item = items[index];
    if (!item) return;
    setActive(index);
    bringIn(index);
    if (how === 'run') {
      const [a, b] = [Math.min(from.current, index), Math.max(from.current, index)];
      select(items.slice(a, b + 1).map((e) => e.id));
    } else {
      from.current = index;
      select(
        how === 'one'
          ? [item.id]
          : toggled(
              selection.filter((x) => x !== drape),
              item.id,
            ),
      );
    }
    onReveal([item.id]);
  }

  const onKey = (e: KeyboardEvent) => {
    const to = {
      ArrowDown: active + 1,
      ArrowUp: active - 1,
      PageDown: active + 5,
      PageUp: active - 5,
      Home: 0,
      End: items.length - 1,
    }[e.key];
    if (to !== undefined) {
      const index = Math.max(0, Math.min(items.length - 1, to));
      if (e.ctrlKey || e.metaKey) {
        setActive(index);
        bringIn(index);
      } else take(index, e.shiftKey ? 'run' : 'one');
    } else if (e.key === ' ' || e.key === 'Enter') take(active, e.ctrlKey || e.metaKey ? 'more' : 'one');
    else return;
    e.preventDefault();
    e.stopPropagation();
  };

  const begin = Math.max(0, Math.floor(top / ROW) - MORE);
  const end = Math.min(items.length, begin + inView + 2 * MORE);
  const optionId = (i: number) => `flat-option-${i}`;
  return (
    <div
      ref={box}
      className={chosen.has(drape) ? 'flat-list whole' : 'flat-list'}
      role="listbox"
      tabIndex={0}
      aria-label={`Elements of ${drape}`}
      aria-multiselectable="true"
      aria-activedescendant={active >= begin && active < end ? optionId(active) : undefined}
      onKeyDown={onKey}
      onFocus={() => store.pointAt(null)}
      onScroll={(e) => setTop(e.currentTarget.scrollTop)}
    >
      <div role="presentation" style={{ height: items.length * ROW, position: 'relative' }}>
        {items.slice(begin, end).map(({ id, row }, k) => {
          const i = begin + k;
          const e = row.laid;
          return (
            // biome-ignore lint/a11y/useKeyWithClickEvents lint/a11y/useFocusableInteractive: the list hears the keys and has the focus
            <div
              key={id}
              id={optionId(i)}
              role="option"
              className={i === active ? 'option active' : 'option'}
              style={{ top: i * ROW }}
              aria-selected={chosen.has(id) || chosen.has(drape)}
              aria-setsize={items.length}
              aria-posinset={i + 1}
              onClick={(ev) => take(i, ev.shiftKey ? 'run' : ev.ctrlKey || ev.metaKey ? 'more' : 'one')}
              onPointerEnter={() => store.pointAt(id)}
              onPointerLeave={() => store.pointAt(null)}
            >
              <span className="id">{id.slice(drape.length + 1)}</span>
              <span className="dim">{e ? e.net || 'no net' : ''}</span>
              <span className="count">
                {!e
                  ? row.look === 'pending'
                    ? '…'
                    : 'not laid'
                  : e.kind === 'trace'
                    ? `${show(e.length, 1)} mm`
                    : `${show(e.area, 2)} mm²`}
              </span>
            </div>
          );
        })}
      </div>
    </div>
  );
}
