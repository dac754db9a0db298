/** Words of Gerber's blocks outside `%`: letters with their numbers, and what the digits of a coordinate mean. */
import { BadShape } from './findings.ts';

/** Digits of X, Y, I and J: `%FSLAX46Y46*%`. */
export interface Format {
  /** Which zeros are left out; `none` writes all of them. */
  leftOut: 'leading' | 'trailing' | 'none';
  /** Coordinates are steps from the last place. */
  incremental: boolean;
  x: Digits;
  y: Digits;
}

export interface Digits {
  whole: number;
  after: number;
}

/** The text after `FS`. @throws BadShape `bad-format` */
export function readFormat(text: string): Format {
  const m = /^([LTD]?)([AI]?)(?:N\d)?(?:G\d)?X([0-9])([0-9])Y([0-9])([0-9])(?:[ZDM]\d+)*$/.exec(text);
  if (!m) throw new BadShape('bad-format', `"FS${text.slice(0, 40)}" is no format of coordinates`);
  const digits = (whole: string, after: string): Digits => ({ whole: Number(whole), after: Number(after) });
  return {
    leftOut: m[1] === 'T' ? 'trailing' : m[1] === 'D' ? 'none' : 'leading',
    incremental: m[2] === 'I',
    x: digits(m[3], m[4]),
    y: digits(m[5], m[6]),
  };
}

/** A decimal point overrides the format. @returns units of the file @throws BadShape `bad-number` */
export function coordinate(word: string, { whole, after }: Digits, leftOut: Format['leftOut']): number {
  const m = /^([-+]?)(\d*)(\.\d*)?$/.exec(word);
  if (!m || (m[2] === '' && (m[3] ?? '.') === '.') || m[2].length > MOST_DIGITS)
    throw new BadShape('bad-number', `"${word.slice(0, 40)}" is no coordinate`);
  if (m[3] !== undefined) return Number(word);
  const digits = leftOut === 'trailing' ? m[2].padEnd(whole + after, '0') : m[2];
  const v = Number(digits) / 10 ** after;
  return m[1] === '-' ? -v : v;
}

/** A double holds this many digits of any number. */
const MOST_DIGITS = 15;

/** One block; X, Y, I and J are as written, null where they are not. */
export interface Words {
  g: number[];
  d: number | null;
  m: number | null;
  x: string | null;
  y: string | null;
  i: string | null;
  j: string | null;
}

/** @returns null where the block is no row of words */
export function readWords(text: string): Words | null {
  const words: Words = { g: [], d: null, m: null, x: null, y: null, i: null, j: null };
  const n = text.length;
  for (let at = 0; at < n; ) {
    const letter = text[at++];
    const from = at;
    while (at < n && NUMBER[text.charCodeAt(at)] === 1) at++;
    if (letter === ' ' && at === from) continue;
    if (at === from) return null;
    const number = text.slice(from, at);
    switch (letter) {
      case 'X':
        words.x = number;
        break;
      case 'Y':
        words.y = number;
        break;
      case 'I':
        words.i = number;
        break;
      case 'J':
        words.j = number;
        break;
      default: {
        const code = /^\d{1,9}$/.test(number) ? Number(number) : Number.NaN;
        if (Number.isNaN(code)) return null;
        if (letter === 'G') words.g.push(code);
        else if (letter === 'D' && words.d === null) words.d = code;
        else if (letter === 'M' && words.m === null) words.m = code;
        else if (letter !== 'N') return null;
      }
    }
  }
  return words;
}

/** Characters of a number. */
const NUMBER = new Uint8Array(65536);
for (const c of '0123456789+-.') NUMBER[c.charCodeAt(0)] = 1;
