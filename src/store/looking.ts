/** What the person looks at: none of it changes the document, and none of it can be undone. */
import type { StoreApi } from 'zustand/vanilla';
import type { State } from './state.ts';

export function lookingActs({ setState: set }: StoreApi<State>) {
  return {
    showStretch: (stretchShown: boolean) => set({ stretchShown }),
    showFlat: (flatShown: boolean) => set({ flatShown, pointed: null }),
    /** An element under the pointer in a panel; null when the pointer leaves it. */
    pointAt: (pointed: string | null) => set((s) => (s.pointed === pointed ? s : { pointed })),
  };
}
