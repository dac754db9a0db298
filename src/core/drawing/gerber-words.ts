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
  const sign = word[0] === '-' || word[0] === '+' ? 1 : 0;
  const n = word.length - sign;
  if (word.includes('.') || n > MOST_DIGITS) return decimal(word);
  if (n === 0) throw noCoordinate(word);
  let v = 0;
  for (let k = sign; k < word.length; k++) {
    const digit = word.charCodeAt(k) - 48;
    if (digit < 0 || digit > 9) throw noCoordinate(word);
    v = 10 * v + digit;
  }
  if (leftOut === 'trailing' && n < whole + after) v *= 10 ** (whole + after - n);
  v /= 10 ** after;
  return word[0] === '-' ? -v : v;
}

function decimal(word: string): number {
  if (!/^[-+]?(\d{1,15}\.\d*|\.\d+)$/.test(word)) throw noCoordinate(word);
  return Number(word);
}

const noCoordinate = (word: string): BadShape =>
  new BadShape('bad-number', `"${word.slice(0, 40)}" is no coordinate`);

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
    switch (letter) {
      case 'X':
        words.x = text.slice(from, at);
        break;
      case 'Y':
        words.y = text.slice(from, at);
        break;
      case 'I':
        words.i = text.slice(from, at);
        break;
      case 'J':
        words.j = text.slice(from, at);
        break;
      default: {
        const code = whole(text, from, at);
        if (code < 0) return null;
        if (letter === 'G') words.g.push(code);
        else if (letter === 'D' && words.d === null) words.d = code;
        else if (letter === 'M' && words.m === null) words.m = code;
        else if (letter !== 'N') return null;
      }
    }
  }
  return words;
}

/** A number without sign or point; -1 where it is none or has more than nine digits. */
function whole(text: string, from: number, to: number): number {
  if (to - from > 9) return -1;
  let v = 0;
  for (let k = from; k < to; k++) {
    const digit = text.charCodeAt(k) - 48;
    if (digit < 0) return -1;
    v = 10 * v + digit;
  }
  return v;
}

/** Characters of a number. */
const NUMBER = new Uint8Array(65536);
for (const c of '0123456789+-.') NUMBER[c.charCodeAt(0)] = 1;
