/** The menus inside the window, for hosts that have none of their own. */
import { type KeyboardEvent, useEffect, useRef, useState } from 'react';
import { useWindow } from './window.tsx';

export interface MenuItem {
  id: string;
  label: string;
  keys?: string;
  enabled: boolean;
}
export interface MenuList {
  label: string;
  entries: readonly (MenuItem | 'line')[];
}

export function MenuBar({ menus, title }: { menus: readonly MenuList[]; title: string }) {
  const { run } = useWindow();
  const [open, setOpen] = useState(-1);
  const bar = useRef<HTMLDivElement>(null);
  useEffect(() => {
    if (open < 0) return;
    const away = (e: PointerEvent) => !bar.current?.contains(e.target as Node) && setOpen(-1);
    addEventListener('pointerdown', away);
    bar.current?.querySelector<HTMLElement>('[role=menuitem]:not([disabled])')?.focus();
    return () => removeEventListener('pointerdown', away);
  }, [open]);
  const close = (focus: number) => {
    setOpen(-1);
    bar.current?.querySelectorAll<HTMLElement>('.menu-name')[focus]?.focus();
  };
  const onKey = (e: KeyboardEvent) => {
    if (open < 0) return;
    const items = [...(bar.current?.querySelectorAll<HTMLElement>('[role=menuitem]:not([disabled])') ?? [])];
    const at = items.indexOf(document.activeElement as HTMLElement);
    if (e.key === 'Escape') close(open);
    else if (e.key === 'ArrowDown') items[(at + 1) % items.length]?.focus();
    else if (e.key === 'ArrowUp') items[(at + items.length - 1) % items.length]?.focus();
    else if (e.key === 'ArrowRight') setOpen((open + 1) % menus.length);
    else if (e.key === 'ArrowLeft') setOpen((open + menus.length - 1) % menus.length);
    else return;
    e.preventDefault();
    e.stopPropagation();
  };
  return (
    <header className="menu-bar">
      {/* biome-ignore lint/a11y/noStaticElementInteractions: the keys belong to the menu that is open inside */}
      <div className="menus" ref={bar} onKeyDown={onKey}>
        {menus.map((m, i) => (
          <div key={m.label} className="menu">
            <button
              type="button"
              className="menu-name"
              aria-haspopup="menu"
              aria-expanded={open === i}
              onClick={() => setOpen(open === i ? -1 : i)}
            >
              {m.label}
            </button>
            {open === i && (
              <div role="menu" aria-label={m.label}>
                {m.entries.map((e, k) =>
                  e === 'line' ? (
                    // biome-ignore lint/suspicious/noArrayIndexKey: a line has no name
                    <hr key={k} />
                  ) : (
                    <button
                      key={e.id}
                      type="button"
                      role="menuitem"
                      disabled={!e.enabled}
                      onClick={() => {
                        close(i);
                        run(e.id);
                      }}
                    >
                      <span>{e.label}</span>
                      {e.keys && <kbd>{e.keys.replace('Mod', 'Ctrl')}</kbd>}
                    </button>
                  ),
                )}
              </div>
            )}
          </div>
        ))}
      </div>
      <h1 className="title">{title}</h1>
    </header>
  );
}
