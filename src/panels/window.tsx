/** What every panel may reach: the store, the commands and the view. */
import { createContext, useContext, useEffect, useState } from 'react';
import { useStore } from 'zustand';
import type { Vec3 } from '../core/base/vec.ts';
import type { State } from '../store/state.ts';
import type { Store } from '../store/store.ts';

export interface WindowTools {
  store: Store;
  /** Runs a command by its id, as the menu does. */
  run(command: string): void;
  showPlace(point: Vec3, normal: Vec3): void;
  /** Turns the view to the first of these elements if none of them can be seen. */
  reveal(ids: readonly string[]): void;
  dismissed: ReadonlySet<string>;
  dismiss(what: string): void;
}

export const WindowContext = createContext<WindowTools | null>(null);

export function useWindow(): WindowTools {
  const w = useContext(WindowContext);
  if (!w) throw new Error('a panel outside the window');
  return w;
}

/** The whole state, but deaf to the pointer: what hovers over the part concerns few panels. */
export function useSteady(): State {
  const { api } = useWindow().store;
  const [state, setState] = useState(api.getState);
  useEffect(() => {
    setState(api.getState());
    return api.subscribe((now, before) => {
      if (
        (Object.keys(now) as (keyof State)[]).some(
          (k) => k !== 'hover' && k !== 'pointed' && now[k] !== before[k],
        )
      )
        setState(now);
    });
  }, [api]);
  return state;
}

export const useLook = <T,>(f: (s: State) => T): T => useStore(useWindow().store.api, f);
