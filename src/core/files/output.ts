import { encodeUtf8 } from '../base/utf8.ts';

/** A file to be written: its path below the output folder with `/` between names, and its bytes. */
export interface OutputFile {
  path: string;
  bytes: Uint8Array;
}

export const textFile = (path: string, text: string): OutputFile => ({ path, bytes: encodeUtf8(text) });
