/** Booleans in the plane for the command line: their binary is carried inside the program, which stays one file. */
import wasm from 'manifold-3d/manifold.wasm?inline';
import { type Flat, loadFlat } from '../core/drawing/flat.ts';

let loaded: Promise<Flat> | undefined;

/** Loaded once a thread, when first asked for: 0.1 to 0.25 s. */
export function flatForNode(): Promise<Flat> {
  loaded ??= loadFlat(Uint8Array.from(Buffer.from(wasm.slice(wasm.indexOf(',') + 1), 'base64')));
  return loaded;
}
