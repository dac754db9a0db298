/** Path data (SVG 2, 9.3) and what it shares with other lists of numbers in attributes. */
import { BadShape } from './findings.ts';
import type { Pen } from './flatten.ts';
import { arcOfEnds } from './svg-arc.ts';

/**
 * Draws path data. What a viewer would still show before the first mistake is not copper to trust: it is refused whole.
 * @throws BadShape `bad-path`
 */
export function drawPath(text: string, pen: Pen): void {
  const scan = scanner(text, 'bad-path');
  if (scan.ended() || text.trim() === 'none') return;
  let [x, y, x0, y0] = [0, 0, 0, 0];
  /** Last control point, for the smooth commands; where there is none it lies under the pen. */
  let [kx, ky] = [0, 0];
  let command = '';
  let last = '';
  while (!scan.ended()) {
    const letter = scan.letter();
    if (letter !== '') command = letter;
    else {
      if (last === 'Z') throw scan.wrong('numbers follow a closing z');
      scan.comma();
      if (command === 'M') command = 'L';
      else if (command === 'm') command = 'l';
    }
    const upper = command.toUpperCase();
    if (last === '' && upper !== 'M') throw scan.wrong('it does not begin with a move');
    const [ox, oy] = command === upper ? [0, 0] : [x, y];
    switch (upper) {
      case 'M':
        x = ox + scan.number();
        y = oy + scan.next();
        [x0, y0] = [x, y];
        pen.move(x, y);
        break;
      case 'L':
        x = ox + scan.number();
        y = oy + scan.next();
        pen.line(x, y);
        break;
      case 'H':
        x = ox + scan.number();
        pen.line(x, y);
        break;
      case 'V':
        y = oy + scan.number();
        pen.line(x, y);
        break;
      case 'C':
      case 'S': {
        const smooth = 'CS'.includes(last) ? [2 * x - kx, 2 * y - ky] : [x, y];
        const [x1, y1] = upper === 'S' ? smooth : [ox + scan.number(), oy + scan.next()];
        kx = ox + (upper === 'S' ? scan.number() : scan.next());
        ky = oy + scan.next();
        x = ox + scan.next();
        y = oy + scan.next();
        pen.cubic(x1, y1, kx, ky, x, y);
        break;
      }
      case 'Q':
        kx = ox + scan.number();
        ky = oy + scan.next();
        x = ox + scan.next();
        y = oy + scan.next();
        pen.quadratic(kx, ky, x, y);
        break;
      case 'T':
        [kx, ky] = 'QT'.includes(last) ? [2 * x - kx, 2 * y - ky] : [x, y];
        x = ox + scan.number();
        y = oy + scan.next();
        pen.quadratic(kx, ky, x, y);
        break;
      case 'A': {
        const from = [x, y] as const;
        const [rx, ry, turn] = [scan.number(), scan.next(), scan.next()];
        const [large, sweep] = [scan.flag(), scan.flag()];
        x = ox + scan.next();
        y = oy + scan.next();
        const arc = arcOfEnds({ from, to: [x, y], rx, ry, turn, large, sweep });
        if (typeof arc === 'object') pen.arc(arc, x, y);
        else if (arc === 'line') pen.line(x, y);
        break;
      }
      case 'Z':
        pen.close();
        [x, y] = [x0, y0];
        break;
      default:
        throw scan.wrong(`"${command}" is no command`);
    }
    last = upper;
  }
}

export interface Scanner {
  ended(): boolean;
  /** The letter that stands here, or '' before anything else. */
  letter(): string;
  /** A comma or none, and white space. */
  comma(): void;
  number(): number;
  /** Comma or white space, and a number. */
  next(): number;
  /** Comma or white space, and the one digit of a flag: no separator need follow it. */
  flag(): boolean;
  wrong(problem: string): BadShape;
}

const NUMBER = /[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?/y;

/** @param code  of the `BadShape` that is thrown for what is no number */
export function scanner(text: string, code: string): Scanner {
  let at = 0;
  const space = (): void => {
    while (at < text.length && isSpace(text.charCodeAt(at))) at++;
  };
  const wrong = (problem: string): BadShape => new BadShape(code, `${problem}, at character ${at + 1}`);
  const comma = (): void => {
    space();
    if (text[at] === ',') at++;
  };
  const number = (): number => {
    space();
    NUMBER.lastIndex = at;
    const found = NUMBER.exec(text);
    if (!found)
      throw wrong(at >= text.length ? 'a number is missing' : `"${text.slice(at, at + 12)}" is no number`);
    const value = Number(found[0]);
    if (!Number.isFinite(value)) throw wrong(`"${found[0].slice(0, 12)}" is too large`);
    at = NUMBER.lastIndex;
    return value;
  };
  return {
    ended() {
      space();
      return at >= text.length;
    },
    letter() {
      const c = text.charCodeAt(at) | 32;
      return c >= 97 && c <= 122 ? text[at++] : '';
    },
    comma,
    number,
    next() {
      comma();
      return number();
    },
    flag() {
      comma();
      space();
      const digit = text.charCodeAt(at) - 48;
      if (!(digit >= 0 && digit <= 9)) throw wrong('a flag is neither 0 nor 1');
      at++;
      // "Any nonzero value for either of the flags is taken to mean the value 1."
      return digit !== 0;
    },
    wrong,
  };
}

function isSpace(c: number): boolean {
  return c === 32 || (c >= 9 && c <= 13);
}

/** All numbers of an attribute. @throws BadShape */
export function numbers(text: string, code: string): number[] {
  const scan = scanner(text, code);
  const out: number[] = [];
  while (!scan.ended()) out.push(out.length === 0 ? scan.number() : scan.next());
  return out;
}
