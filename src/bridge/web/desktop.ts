/** The desktop host as the page sees it: the few functions that electron/preload.ts exposes. */
import { type Host, HostError, type HostEvent, type Opened } from '../host.ts';
import type { Reply, Request } from '../requests.ts';
import { openDropped } from './drops.ts';

export interface Preload {
  ask(request: Request): Promise<Reply>;
  /** Only real files from a drop have a path; the page cannot make one up. */
  dropped(files: File[]): Promise<Reply>;
  listen(hear: (event: HostEvent) => void): () => void;
}

export function desktopHost(preload: Preload): Host {
  const ask = askThrough((r) => preload.ask(r));
  return {
    ...common(ask),
    kind: 'desktop',
    open: (what) => ask({ ask: 'open', what }),
    openDropped: async (files) =>
      taken<Opened | null>(await preload.dropped([...files])) ?? openDropped(files),
    choosePlace: (suggested, partRef, partName) => ask({ ask: 'choose-place', suggested, partRef, partName }),
    exportFiles: (suggested, files) => ask({ ask: 'export', suggested, files: [...files] }),
    listen: (hear) => preload.listen(hear),
  };
}

export type Ask = <T>(request: Request) => Promise<T>;

export const askThrough =
  (send: (request: Request) => Promise<Reply>): Ask =>
  async <T>(request: Request) =>
    taken<T>(await send(request));

function taken<T>(reply: Reply): T {
  if (!reply.ok) throw new HostError({ problem: reply.problem, mend: reply.mend });
  return reply.value as T;
}

/** Requests that both hosts pass on as they are. */
export function common(ask: Ask) {
  return {
    start: () => ask<Awaited<ReturnType<Host['start']>>>({ ask: 'start' }),
    openRecent: (ref: string) => ask<Awaited<ReturnType<Host['openRecent']>>>({ ask: 'open-recent', ref }),
    recover: (id: string, take: boolean) =>
      ask<Awaited<ReturnType<Host['recover']>>>({ ask: 'recover', id, take }),
    placeDrawings: (
      project: string,
      drawings: Parameters<Host['placeDrawings']>[1],
    ): ReturnType<Host['placeDrawings']> =>
      ask({ ask: 'place-drawings', project, drawings: drawings.map(({ file, ref }) => ({ file, ref })) }),
    save: (r: Parameters<Host['save']>[0]) => ask<void>({ ask: 'save', ...r }),
    journal: (entry: Parameters<Host['journal']>[0]) => ask<void>({ ask: 'journal', entry }),
    recent: () => ask<Awaited<ReturnType<Host['recent']>>>({ ask: 'recent' }),
    dismiss: (what: string) => ask<void>({ ask: 'dismiss', what }),
    title: (name: string, unsaved: boolean) => void ask({ ask: 'title', name, unsaved }),
    menu: (menus: Parameters<Host['menu']>[0]) =>
      void ask({ ask: 'menu', menus: menus.map((m) => ({ label: m.label, entries: [...m.entries] })) }),
    close: () => void ask({ ask: 'close' }),
  };
}
