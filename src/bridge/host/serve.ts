/** The local browser host: the same page over 127.0.0.1, for this person alone. */
import { randomBytes, timingSafeEqual } from 'node:crypto';
import { readdir } from 'node:fs/promises';
import { createServer, type IncomingMessage, type ServerResponse } from 'node:http';
import type { AddressInfo } from 'node:net';
import { join } from 'node:path';
import { HostError, isDrawingName } from '../host.ts';
import { pack, unpack } from '../wire.ts';
import { createDesk, type Dialogs } from './desk.ts';
import { HEADERS, pageAt } from './pages.ts';

export interface Served {
  /** Address with its key: whoever has it may use the window. */
  url: string;
  close(): Promise<void>;
  /** Settles when the page asked to end. */
  ended: Promise<void>;
}

export interface ServeOptions {
  /** Folder of the built page. */
  pages: string;
  /** Settings and journal. */
  state: string;
  /** The folder that the person started in: files are opened from it and saved to it, and nowhere else. */
  folder: string;
  startFile: string | null;
}

/** Longest request: a part of ten million facets fits. */
const LONGEST = 600 * 1024 * 1024;

export async function serve(options: ServeOptions): Promise<Served> {
  const key = randomBytes(24).toString('base64url');
  let end: () => void = () => {};
  const ended = new Promise<void>((done) => {
    end = done;
  });
  const desk = createDesk(
    options.state,
    dialogsIn(options.folder),
    { title() {}, menu() {}, close: () => setTimeout(end, 200) },
    options.startFile,
  );
  const server = createServer((request, response) => {
    answer(request, response).catch(() => {
      if (!response.headersSent) response.writeHead(500, HEADERS);
      response.end();
    });
  });

  async function answer(request: IncomingMessage, response: ServerResponse): Promise<void> {
    const { port } = server.address() as AddressInfo;
    // The name of the host is checked, so that a page elsewhere cannot reach us under a name of its own.
    if (request.headers.host !== `127.0.0.1:${port}`) return refuse(response, 403);
    const url = new URL(request.url ?? '/', `http://127.0.0.1:${port}`);
    if (request.method === 'GET' && url.pathname === '/' && url.searchParams.has('key')) {
      if (!same(url.searchParams.get('key') ?? '', key)) return refuse(response, 403);
      response.writeHead(303, {
        ...HEADERS,
        Location: '/',
        'Set-Cookie': `beamdrape=${key}; HttpOnly; SameSite=Strict; Path=/`,
      });
      response.end();
      return;
    }
    const cookie = /(?:^|;\s*)beamdrape=([^;]+)/.exec(request.headers.cookie ?? '')?.[1] ?? '';
    if (!same(cookie, key)) return refuse(response, 403);
    if (request.method === 'POST' && url.pathname === '/ask') {
      if (request.headers.origin !== `http://127.0.0.1:${port}`) return refuse(response, 403);
      const body = await bodyOf(request);
      if (body === null) return refuse(response, 413);
      const reply = await desk.answer(unpack(body));
      response.writeHead(200, { ...HEADERS, 'Content-Type': 'application/octet-stream' });
      response.end(pack(reply));
      return;
    }
    if (request.method !== 'GET') return refuse(response, 405);
    const page = await pageAt(options.pages, url.pathname);
    response.writeHead(page.status, page.headers);
    response.end(page.body);
  }

  await new Promise<void>((ready, failed) => {
    server.once('error', failed);
    server.listen(0, '127.0.0.1', ready);
  });
  const { port } = server.address() as AddressInfo;
  return {
    url: `http://127.0.0.1:${port}/?key=${key}`,
    ended,
    close: () =>
      new Promise((done) => {
        server.close(() => done());
        server.closeAllConnections();
      }),
  };
}

const refuse = (response: ServerResponse, status: number): void => {
  response.writeHead(status, HEADERS);
  response.end();
};

function same(a: string, b: string): boolean {
  const [x, y] = [Buffer.from(a), Buffer.from(b)];
  return x.length === y.length && timingSafeEqual(x, y);
}

async function bodyOf(request: IncomingMessage): Promise<Uint8Array | null> {
  const chunks: Buffer[] = [];
  let size = 0;
  for await (const chunk of request as AsyncIterable<Buffer>) {
    size += chunk.length;
    if (size > LONGEST) return null;
    chunks.push(chunk);
  }
  return new Uint8Array(Buffer.concat(chunks));
}

/** The page asks by itself and sends a bare name; only names in the one folder are taken. */
function dialogsIn(folder: string): Dialogs {
  const inFolder = (named: string | undefined): string | null => {
    if (named === undefined) return null;
    if (/[\\/\0]/.test(named) || named.startsWith('.'))
      throw new HostError({
        problem: `"${named}" is not a plain file name`,
        mend: `give a name in ${folder}`,
      });
    return join(folder, named);
  };
  return {
    open: async (_what, named) => inFolder(named),
    place: async (_suggested, named) => inFolder(named),
    folder: async () => folder,
    list: async (what) =>
      (await readdir(folder))
        .filter((f) => (what === 'drawing' ? isDrawingName(f) : /\.(stl|drape\.json)$/i.test(f)))
        .sort(),
  };
}
