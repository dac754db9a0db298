/** The browser host as the page sees it: requests over HTTP to the server that this project runs. */
import type { Host, HostEvent, Opened } from '../host.ts';
import type { Reply, Request } from '../requests.ts';
import { pack, unpack } from '../wire.ts';
import { askThrough, common } from './desktop.ts';
import { openDropped } from './drops.ts';

/** A browser page has no file dialogs with paths: the window asks by itself. */
export interface AskPerson {
  /** One of the names, or null. */
  file(names: readonly string[]): Promise<string | null>;
  name(suggested: string): Promise<string | null>;
}

export function browserHost(person: AskPerson): Host {
  const send = async (request: Request): Promise<Reply> => {
    const response = await fetch('/ask', { method: 'POST', body: pack(request) });
    if (!response.ok)
      return {
        ok: false,
        problem: `the server refused (${response.status})`,
        mend: 'open the address with its key again',
      };
    return unpack(new Uint8Array(await response.arrayBuffer())) as Reply;
  };
  const ask = askThrough((r) =>
    send(r).catch(
      (): Reply => ({ ok: false, problem: 'the server does not answer', mend: 'start the program again' }),
    ),
  );
  const listeners = new Set<(event: HostEvent) => void>();
  let unsaved = false;
  addEventListener('beforeunload', (event) => {
    if (unsaved) event.preventDefault();
  });
  return {
    ...common(ask),
    kind: 'browser',
    async open(what) {
      const named = await person.file(await ask<string[]>({ ask: 'list', what }));
      return named === null ? null : ask<Opened>({ ask: 'open', what, named });
    },
    openDropped,
    async choosePlace(suggested, partRef, partName) {
      const named = await person.name(suggested);
      return named === null ? null : ask({ ask: 'choose-place', suggested, partRef, partName, named });
    },
    exportFiles: (suggested, files) => ask({ ask: 'export', suggested, files: [...files] }),
    title(name, now) {
      unsaved = now;
      document.title = `${now ? '• ' : ''}${name} – Beamdrape`;
    },
    menu() {},
    close() {
      unsaved = false;
      void ask({ ask: 'close' });
    },
    listen(hear) {
      listeners.add(hear);
      return () => listeners.delete(hear);
    },
  };
}
