/**
 * STL in, binary and text. The two are told apart by content: many binary files begin with the word "solid".
 * A file is binary when its size is exactly 84 + 50 n for the count n at byte 80; text when it holds "facet" and no
 * zero byte; otherwise it is read as binary, and what is missing is named.
 */
import { InputError } from '../base/news.ts';
import type { RunContext } from '../base/run-context.ts';
import { readStlText } from './stl-text.ts';

/** Facets as they stand in the file, in its order and its unit; nothing joined, nothing left out. */
export interface Soup {
  /** 9 a facet: three corners, x y z. Binary files hold float32 values, text files what was written. */
  readonly corners: Float64Array;
  /** Bytes after the last facet of a binary file, which were not read. */
  readonly trailingBytes: number;
}

const HEADER = 84;
const RECORD = 50;
/** In the file's unit. Beyond this a number is no part for a bench but another kind of file read as facets. */
export const LARGEST_COORDINATE = 1e9;
/** Facets between two calls of `ctx.step`. */
const STRIDE = 65536;

/**
 * @param bytes  the file
 * @param file   its name, for messages
 * @throws InputError `empty-file`, `not-stl`, `truncated`, `no-facets`, `not-finite`, `out-of-range`, and from text
 *         `vertex-count`, `bad-number`, `bad-word`; the place is a facet (from 1) or a line
 * @throws Cancelled
 */
export function readStl(bytes: Uint8Array, file: string, ctx: RunContext): Soup {
  if (bytes.length === 0) throw bad('empty-file', file, '', 'the file is empty', 'export the part again');
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const promised = bytes.length >= HEADER ? view.getUint32(80, true) : -1;
  if (promised >= 0 && bytes.length === HEADER + RECORD * promised)
    return readBinary(view, promised, 0, file, ctx);
  if (looksLikeText(bytes)) return readStlText(bytes, file, ctx);
  if (startsWithSolid(bytes) && !hasZero(bytes))
    throw bad('no-facets', file, '', 'the file holds no facets', 'export the part again');
  if (promised < 0)
    throw bad(
      'not-stl',
      file,
      '',
      `${bytes.length} bytes are too few for an STL file`,
      'give a binary or text STL file',
    );
  const whole = Math.floor((bytes.length - HEADER) / RECORD);
  if (whole < promised)
    throw bad(
      'truncated',
      file,
      `byte ${bytes.length}`,
      `the file promises ${promised} facets and holds ${whole}`,
      'copy or export the file again; if it is no STL file, give one',
    );
  return readBinary(view, promised, bytes.length - HEADER - RECORD * promised, file, ctx);
}

function readBinary(
  view: DataView,
  count: number,
  trailingBytes: number,
  file: string,
  ctx: RunContext,
): Soup {
  if (count === 0) throw bad('no-facets', file, '', 'the file holds no facets', 'export the part again');
  const corners = new Float64Array(9 * count);
  for (let f = 0, o = HEADER + 12, k = 0; f < count; f++, o += RECORD) {
    if (f % STRIDE === 0) ctx.step('load', f, 3 * count);
    for (let i = 0; i < 9; i++, k++) {
      const v = view.getFloat32(o + 4 * i, true);
      if (!(Math.abs(v) <= LARGEST_COORDINATE)) throw badCoordinate(v, f, i, file, '');
      corners[k] = v;
    }
  }
  return { corners, trailingBytes };
}

/** The error for a coordinate that is no number or no place; `f` from 0, `i` 0 … 8, `line` as text or empty. */
export function badCoordinate(v: number, f: number, i: number, file: string, line: string): InputError {
  const place = `${line ? `${line}, ` : ''}facet ${f + 1}, corner ${Math.floor(i / 3) + 1}, ${'xyz'[i % 3]}`;
  return Number.isFinite(v)
    ? bad(
        'out-of-range',
        file,
        place,
        `the coordinate ${v} is out of all range`,
        'check that this is an STL file and export it again',
      )
    : bad('not-finite', file, place, `the coordinate is ${v}`, 'repair the part in the program that made it');
}

function looksLikeText(bytes: Uint8Array): boolean {
  return !hasZero(bytes) && holdsFacet(bytes);
}

/** Text has no zero bytes; the header and the numbers of a binary file nearly always have one early. */
function hasZero(bytes: Uint8Array): boolean {
  const z = bytes.indexOf(0);
  return z >= 0 && z < 65536;
}

function holdsFacet(bytes: Uint8Array): boolean {
  const word = [102, 97, 99, 101, 116];
  const end = Math.min(bytes.length, 65536) - word.length;
  for (let i = 0; i <= end; i++) {
    let k = 0;
    while (k < 5 && (bytes[i + k] | 32) === word[k]) k++;
    if (k === 5) return true;
  }
  return false;
}

function startsWithSolid(bytes: Uint8Array): boolean {
  let i = bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf ? 3 : 0;
  while (i < bytes.length && bytes[i] <= 32) i++;
  return [115, 111, 108, 105, 100].every((c, k) => (bytes[i + k] | 32) === c);
}

const bad = (code: string, file: string, place: string, problem: string, mend: string): InputError =>
  new InputError({ code, file, place, problem, mend });
