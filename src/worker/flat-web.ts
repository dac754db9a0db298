/** Booleans in the plane for the browser's worker: their binary lies beside the page. */
import wasmUrl from 'manifold-3d/manifold.wasm?url';
import { Fault } from '../core/base/news.ts';
import { type Flat, loadFlat } from '../core/drawing/flat.ts';

let loaded: Promise<Flat> | undefined;

/** Loaded once a worker, when first asked for. */
export function flatForWeb(): Promise<Flat> {
  loaded ??= fetched().then(loadFlat);
  return loaded;
}

async function fetched(): Promise<Uint8Array> {
  const answer = await fetch(wasmUrl);
  if (!answer.ok) throw new Fault(`${wasmUrl} gives ${answer.status}`);
  return new Uint8Array(await answer.arrayBuffer());
}
