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
  // A facet takes far more than 60 bytes: an upper bound that is never passed.
  let corners = new Float64Array(9 * Math.ceil(bytes.length / 60) + 9);
  const scan = scanner(bytes);
  if (bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf) scan.skip(3);
  let facets = 0;
  let n = 0;
  let inFacet = false;
  let inSolid = false;
  const fail = (code: string, problem: string): InputError =>
    new InputError({ code, file, place: `line ${scan.line()}`, problem, mend: MEND });
  const endFacet = (): void => {
    if (!inFacet) throw fail('bad-word', '"endfacet" without "facet"');
    const found = (n - 9 * facets) / 3;
    if (found !== 3) throw fail('vertex-count', `facet ${facets + 1} has ${found} corners, not 3`);
    inFacet = false;
    facets++;
    if (facets % STRIDE === 0) ctx.step('load', scan.at(), 3 * bytes.length);
  };
  while (scan.word()) {
    if (scan.is('vertex')) {
      if (!inFacet) throw fail('bad-word', '"vertex" outside a facet');
      if (n - 9 * facets === 9) throw fail('vertex-count', `facet ${facets + 1} has more than 3 corners`);
      if (n + 3 > corners.length) corners = grown(corners);
      for (let i = 0; i < 3; i++) {
        if (!scan.word()) throw fail('truncated', 'the text stops inside a facet');
        const v = scan.number();
        if (v === undefined) throw fail('bad-number', `"${scan.text()}" is no number`);
        if (!(Math.abs(v) <= LARGEST_COORDINATE))
          throw badCoordinate(v, facets, n - 9 * facets, file, `line ${scan.line()}`);
        corners[n++] = v;
      }
    } else if (scan.is('facet')) {
      if (inFacet) throw fail('vertex-count', `facet ${facets + 1} has no "endfacet"`);
      inFacet = true;
    } else if (scan.is('endfacet')) endFacet();
    else if (scan.is('normal')) {
      for (let i = 0; i < 3; i++) scan.word();
    } else if (scan.is('solid')) {
      if (inFacet) throw fail('truncated', 'a section stops inside a facet');
      inSolid = true;
      scan.skipLine();
    } else if (scan.is('endsolid')) {
      if (inFacet) throw fail('truncated', 'a section stops inside a facet');
      inSolid = false;
      scan.skipLine();
    } else if (!scan.is('outer') && !scan.is('loop') && !scan.is('endloop'))
      throw fail('bad-word', `"${scan.text()}" does not belong in an STL file`);
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

function grown(a: Float64Array<ArrayBuffer>): Float64Array<ArrayBuffer> {
  const b = new Float64Array(2 * a.length);
  b.set(a);
  return b;
}

/** 10⁰ … 10²²: the powers of ten that a double holds exactly. */
const POWERS = Float64Array.from({ length: 23 }, (_, i) => Number(`1e${i}`));

function scanner(bytes: Uint8Array) {
  const end = bytes.length;
  let at = 0;
  let from = 0;
  let to = 0;
  const text = (): string => {
    let s = '';
    for (let i = from; i < Math.min(to, from + 30); i++) s += String.fromCharCode(bytes[i]);
    return s;
  };
  return {
    at: (): number => at,
    text,
    skip(n: number): void {
      at += n;
    },
    skipLine(): void {
      while (at < end && bytes[at] !== 10 && bytes[at] !== 13) at++;
    },
    /** Line of the last word, from 1; counted only when somebody asks, which is when the file is bad. */
    line(): number {
      let n = 1;
      for (let i = 0; i < from; i++) if (bytes[i] === 10 || (bytes[i] === 13 && bytes[i + 1] !== 10)) n++;
      return n;
    },
    /** Moves to the next word; false at the end. */
    word(): boolean {
      while (at < end && bytes[at] <= 32) at++;
      if (at >= end) return false;
      from = at;
      while (at < end && bytes[at] > 32) at++;
      to = at;
      return true;
    },
    /** Whether the last word is `w` (lower case), whatever its case. */
    is(w: string): boolean {
      if (to - from !== w.length) return false;
      for (let i = 0; i < w.length; i++) if ((bytes[from + i] | 32) !== w.charCodeAt(i)) return false;
      return true;
    },
    /** The last word as a number, rightly rounded; NaN and the infinities as such; undefined when it is none. */
    number(): number | undefined {
      let i = from;
      const negative = bytes[i] === 45;
      if (negative || bytes[i] === 43) i++;
      let m = 0;
      let digits = 0;
      let exponent = 0;
      for (; i < to && bytes[i] >= 48 && bytes[i] <= 57; i++, digits++) m = m * 10 + (bytes[i] - 48);
      if (bytes[i] === 46 && i < to)
        for (i++; i < to && bytes[i] >= 48 && bytes[i] <= 57; i++, digits++, exponent--)
          m = m * 10 + (bytes[i] - 48);
      if (digits > 0 && i < to && (bytes[i] | 32) === 101) {
        let e = 0;
        i++;
        const down = bytes[i] === 45;
        if (down || bytes[i] === 43) i++;
        const first = i;
        for (; i < to && bytes[i] >= 48 && bytes[i] <= 57; i++) e = e * 10 + (bytes[i] - 48);
        if (i === first) return undefined;
        exponent += down ? -e : e;
      }
      if (digits === 0 || i !== to) return unusual(text());
      // Both factors exact: one rounding, so the same as a full parser (Clinger 1990). Otherwise ask the full one.
      if (m > Number.MAX_SAFE_INTEGER || exponent > 22 || exponent < -22)
        return Number(textOf(bytes, from, to));
      const v = exponent < 0 ? m / POWERS[-exponent] : m * POWERS[exponent];
      return negative ? -v : v;
    },
  };
}

function textOf(bytes: Uint8Array, from: number, to: number): string {
  let s = '';
  for (let i = from; i < to; i++) s += String.fromCharCode(bytes[i]);
  return s;
}

/** What C libraries print for numbers that are none. */
function unusual(word: string): number | undefined {
  if (/^[+-]?nan(\(\w*\))?$/i.test(word) || /^[+-]?1\.#(ind|qnan|snan)/i.test(word)) return Number.NaN;
  if (/^[+-]?inf(inity)?$/i.test(word) || /^[+-]?1\.#inf/i.test(word))
    return word[0] === '-' ? -Infinity : Infinity;
  return undefined;
}
