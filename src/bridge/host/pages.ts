/** What both hosts put around the page: its files by a closed list of kinds, its policy, nothing outside its folder. */
import { readFile } from 'node:fs/promises';
import { extname, resolve, sep } from 'node:path';

export const POLICY =
  "default-src 'none'; script-src 'self' 'wasm-unsafe-eval'; worker-src 'self'; connect-src 'self'; style-src 'self'; img-src 'self' data: blob:; font-src 'self'; base-uri 'none'; form-action 'none'; frame-ancestors 'none'";

export const HEADERS: Record<string, string> = {
  'Content-Security-Policy': POLICY,
  'Cross-Origin-Opener-Policy': 'same-origin',
  'Cross-Origin-Embedder-Policy': 'require-corp',
  'Cross-Origin-Resource-Policy': 'same-origin',
  'X-Content-Type-Options': 'nosniff',
  'Referrer-Policy': 'no-referrer',
  'Cache-Control': 'no-store',
};

const KINDS: Record<string, string> = {
  '.html': 'text/html; charset=utf-8',
  '.js': 'text/javascript',
  '.mjs': 'text/javascript',
  '.css': 'text/css',
  '.wasm': 'application/wasm',
  '.json': 'application/json',
  '.svg': 'image/svg+xml',
  '.png': 'image/png',
  '.woff2': 'font/woff2',
  '.stl': 'model/stl',
  '.gbr': 'text/plain',
  '.drl': 'text/plain',
  '.dxf': 'text/plain',
};

export interface Page {
  status: number;
  headers: Record<string, string>;
  body: Uint8Array<ArrayBuffer>;
}

/** @param path  as in the address, percent signs and all; `/` is the page itself */
export async function pageAt(root: string, path: string): Promise<Page> {
  const refuse = (status: number): Page => ({ status, headers: { ...HEADERS }, body: new Uint8Array(0) });
  let plain: string;
  try {
    plain = decodeURIComponent(path);
  } catch {
    return refuse(400);
  }
  if (plain.includes('\0') || plain.includes('\\')) return refuse(400);
  const file = resolve(root, '.' + (plain === '/' ? '/index.html' : plain));
  if (!file.startsWith(resolve(root) + sep)) return refuse(403);
  const kind = KINDS[extname(file).toLowerCase()];
  if (kind === undefined) return refuse(404);
  try {
    return {
      status: 200,
      headers: { ...HEADERS, 'Content-Type': kind },
      body: new Uint8Array(await readFile(file)),
    };
  } catch {
    return refuse(404);
  }
}
