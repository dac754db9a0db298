/** STL text: words and numbers between white space, read from bytes without making strings. */
import { InputError } from '../base/news.ts';
import type { RunContext } from '../base/run-context.ts';
import { badCoordinate, LARGEST_COORDINATE, type Soup } from './stl.ts';

const MEND = 'mend the text at this place or export the part again';
const STRIDE = 65536;

/**
 * Any number of `solid … endsolid` sections; CR, LF, tabs and upper case are all one. Stored normals are passed over.
 * @throws InputError `no-facets`, `truncated`, `vertex-count`, `bad-number`, `bad-word`, `not-finite`, `out-of-range`
 */
export function readStlText(bytes: Uint8Array, file: string, ctx: RunContext): Soup {
  // The shortest facet there can be, "facet vertex 0 0 0 …  endfacet", takes 54 bytes: this is never outgrown.
  const corners = new Float64Array(9 * Math.ceil(bytes.length / 54) + 9);
  const end = bytes.length;
  let at = bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf ? 3 : 0;
  let from = at;
  let facets = 0;
  let n = 0;
  let inFacet = false;
  let inSolid = false;
  const fail = (code: string, problem: string): InputError =>
    new InputError({ code, file, place: `line ${lineOf(bytes, from)}`, problem, mend: MEND });

  for (;;) {
    while (at < end && bytes[at] <= 32) at++;
    if (at >= end) break;
    from = at;
    while (at < end && bytes[at] > 32) at++;
    const kind = wordAt(bytes, from, at);
    if (kind === VERTEX) {
      if (!inFacet) throw fail('bad-word', '"vertex" outside a facet');
      if (n - 9 * facets === 9) throw fail('vertex-count', `facet ${facets + 1} has more than 3 corners`);
      for (let i = 0; i < 3; i++) {
        while (at < end && bytes[at] <= 32) at++;
        if (at >= end) throw fail('truncated', 'the text stops inside a facet');
        from = at;
        while (at < end && bytes[at] > 32) at++;
        const v = numberAt(bytes, from, at);
        if (v === undefined) throw fail('bad-number', `"${textAt(bytes, from, at)}" is no number`);
        if (!(Math.abs(v) <= LARGEST_COORDINATE))
          throw badCoordinate(v, facets, n - 9 * facets, file, `line ${lineOf(bytes, from)}`);
        corners[n++] = v;
      }
    } else if (kind === FACET) {
      if (inFacet) throw fail('vertex-count', `facet ${facets + 1} has no "endfacet"`);
      inFacet = true;
    } else if (kind === END_FACET) {
      if (!inFacet) throw fail('bad-word', '"endfacet" without "facet"');
      const found = (n - 9 * facets) / 3;
      if (found !== 3) throw fail('vertex-count', `facet ${facets + 1} has ${found} corners, not 3`);
      inFacet = false;
      facets++;
      if (facets % STRIDE === 0) ctx.step('load', at, 3 * bytes.length);
    } else if (kind === NORMAL) {
      // Whatever it says: normals are computed from the corners.
      for (let i = 0; i < 3; i++) {
        while (at < end && bytes[at] <= 32) at++;
        while (at < end && bytes[at] > 32) at++;
      }
    } else if (kind === SOLID || kind === END_SOLID) {
      if (inFacet) throw fail('truncated', 'a section stops inside a facet');
      inSolid = kind === SOLID;
      while (at < end && bytes[at] !== 10 && bytes[at] !== 13) at++;
    } else if (kind !== LOOP)
      throw fail('bad-word', `"${textAt(bytes, from, at)}" does not belong in an STL file`);
  }
  if (inFacet) throw fail('truncated', 'the text stops inside a facet');
  if (facets === 0)
    throw new InputError({
      code: 'no-facets',
      file,
      place: '',
      problem: 'the file holds no facets',
      mend: 'export the part again',
    });
  if (inSolid) throw fail('truncated', 'the text stops without "endsolid"');
  return { corners: corners.slice(0, n), trailingBytes: 0 };
}

const VERTEX = 1;
const FACET = 2;
const END_FACET = 3;
const NORMAL = 4;
const SOLID = 5;
const END_SOLID = 6;
/** `outer`, `loop` and `endloop`: they say nothing that the corners do not. */
const LOOP = 7;

const WORDS: [string, number][] = [
  ['vertex', VERTEX],
  ['facet', FACET],
  ['endfacet', END_FACET],
  ['normal', NORMAL],
  ['solid', SOLID],
  ['endsolid', END_SOLID],
  ['outer', LOOP],
  ['loop', LOOP],
  ['endloop', LOOP],
];
const LETTERS = WORDS.map(([word]) => Uint8Array.from(word, (c) => c.charCodeAt(0)));

/** Which word stands there, in any case; 0 for none of them. */
function wordAt(bytes: Uint8Array, from: number, to: number): number {
  for (let w = 0; w < LETTERS.length; w++) {
    const letters = LETTERS[w];
    if (letters.length !== to - from) continue;
    let i = 0;
    while (i < letters.length && (bytes[from + i] | 32) === letters[i]) i++;
    if (i === letters.length) return WORDS[w][1];
  }
  return 0;
}

/** 10⁰ … 10²²: the powers of ten that a double holds exactly. */
const POWERS = Float64Array.from({ length: 23 }, (_, i) => Number(`1e${i}`));

/** The word as a number, rightly rounded; NaN and the infinities as such; undefined when it is none. */
function numberAt(bytes: Uint8Array, from: number, to: number): number | undefined {
  let i = from;
  const negative = bytes[i] === 45;
  if (negative || bytes[i] === 43) i++;
  let m = 0;
  let exponent = 0;
  const first = i;
  let c = 0;
  while (i < to && (c = bytes[i] - 48) >= 0 && c <= 9) {
    m = m * 10 + c;
    i++;
  }
  let digits = i - first;
  if (i < to && bytes[i] === 46) {
    const point = ++i;
    while (i < to && (c = bytes[i] - 48) >= 0 && c <= 9) {
      m = m * 10 + c;
      i++;
    }
    exponent = point - i;
    digits += i - point;
  }
  if (digits > 0 && i < to && (bytes[i] | 32) === 101) {
    i++;
    const down = bytes[i] === 45;
    if (down || bytes[i] === 43) i++;
    const begin = i;
    let e = 0;
    while (i < to && (c = bytes[i] - 48) >= 0 && c <= 9) {
      e = e * 10 + c;
      i++;
    }
    if (i === begin) return undefined;
    exponent += down ? -e : e;
  }
  if (digits === 0 || i !== to) return unusual(textAt(bytes, from, to));
  // Both factors exact: one rounding, so the same as a full parser (Clinger 1990). Otherwise ask the full one.
  if (m > Number.MAX_SAFE_INTEGER || exponent > 22 || exponent < -22)
    return Number(textAt(bytes, from, to, to - from));
  const v = exponent < 0 ? m / POWERS[-exponent] : m * POWERS[exponent];
  return negative ? -v : v;
}

/** What C libraries print for numbers that are none. */
function unusual(word: string): number | undefined {
  if (/^[+-]?nan(\(\w*\))?$/i.test(word) || /^[+-]?1\.#(ind|qnan|snan)/i.test(word)) return Number.NaN;
  if (/^[+-]?inf(inity)?$/i.test(word) || /^[+-]?1\.#inf/i.test(word))
    return word[0] === '-' ? -Infinity : Infinity;
  return undefined;
}

function textAt(bytes: Uint8Array, from: number, to: number, most = 30): string {
  let s = '';
  for (let i = from; i < Math.min(to, from + most); i++) s += String.fromCharCode(bytes[i]);
  return s;
}

/** Line from 1; counted only when the file is bad. */
function lineOf(bytes: Uint8Array, at: number): number {
  let n = 1;
  for (let i = 0; i < at; i++) if (bytes[i] === 10 || (bytes[i] === 13 && bytes[i + 1] !== 10)) n++;
  return n;
}
