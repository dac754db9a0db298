/** The plane's booleans for tests: the binary comes from the package. */
import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { type Flat, loadFlat } from '../../../src/core/drawing/flat.ts';

let loaded: Promise<Flat> | undefined;

export function flatForTests(): Promise<Flat> {
  loaded ??= loadFlat(readFileSync(createRequire(import.meta.url).resolve('manifold-3d/manifold.wasm')));
  return loaded;
}
