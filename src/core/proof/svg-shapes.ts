/** Coordinates in SVG: numbers, points, straight path data, transforms (SVG 2, chapters 8 and 9). */
import { cosine, sine, tangent } from '../base/trig.ts';

/** x' = a x + c y + e, y' = b x + d y + f. */
export type Matrix = readonly [number, number, number, number, number, number];
export const IDENTITY: Matrix = [1, 0, 0, 1, 0, 0];

/** First `n`, then `m`. */
export const times = (m: Matrix, n: Matrix): Matrix => [
  m[0] * n[0] + m[2] * n[1],
  m[1] * n[0] + m[3] * n[1],
  m[0] * n[2] + m[2] * n[3],
  m[1] * n[2] + m[3] * n[3],
  m[0] * n[4] + m[2] * n[5] + m[4],
  m[1] * n[4] + m[3] * n[5] + m[5],
];

/** What is wrong with a piece of text, for the caller to say where. */
export class BadShape extends Error {}

/** Called with each point; `move` begins a stroke. */
export type Draw = (x: number, y: number, move: boolean) => void;

/** `points` of a polyline or polygon. */
export function drawPoints(text: string, closed: boolean, draw: Draw): void {
  const scan = scanner(text);
  let [x0, y0, n] = [0, 0, 0];
  while (!scan.ended()) {
    const x = scan.number();
    if (scan.ended()) throw new BadShape('its points end with half a point');
    const y = scan.number();
    if (n++ === 0) [x0, y0] = [x, y];
    draw(x, y, n === 1);
  }
  if (closed && n > 1) draw(x0, y0, false);
}

/** Path data made of straight pieces: M L H V Z, absolute and relative. Curves are none of ours. */
export function drawPath(text: string, draw: Draw): void {
  const scan = scanner(text);
  let [x, y, x0, y0] = [0, 0, 0, 0];
  let command = '';
  let moved = false;
  while (!scan.ended()) {
    const letter = scan.letter();
    if (letter) command = letter;
    else if (command === 'M') command = 'L';
    else if (command === 'm') command = 'l';
    else if (command === 'Z' || command === 'z') throw new BadShape('numbers follow a closing z');
    const relative = command >= 'a';
    const ox = relative ? x : 0;
    const oy = relative ? y : 0;
    switch (command.toUpperCase()) {
      case 'M':
        x = ox + scan.number();
        y = oy + scan.number();
        [x0, y0] = [x, y];
        draw(x, y, true);
        moved = true;
        continue;
      case 'L':
        x = ox + scan.number();
        y = oy + scan.number();
        break;
      case 'H':
        x = ox + scan.number();
        break;
      case 'V':
        y = oy + scan.number();
        break;
      case 'Z':
        [x, y] = [x0, y0];
        break;
      case '':
        throw new BadShape('the path begins with no command');
      default:
        throw new BadShape(`the path command ${command} is no straight line`);
    }
    if (!moved) throw new BadShape('the path begins with no move');
    draw(x, y, false);
  }
}

/** @param text  such as `translate(10,0) scale(2)`; the last is applied first */
export function readTransform(text: string): Matrix {
  let m = IDENTITY;
  let rest = text.trim();
  while (rest !== '') {
    const one = /^([a-zA-Z]+)\s*\(([^)]*)\)[\s,]*/.exec(rest);
    if (!one) throw new BadShape(`the transform "${text}" cannot be read`);
    const scan = scanner(one[2]);
    const v: number[] = [];
    while (!scan.ended()) v.push(scan.number());
    m = times(m, oneTransform(one[1], v, text));
    rest = rest.slice(one[0].length);
  }
  return m;
}

function oneTransform(name: string, v: number[], text: string): Matrix {
  const fits = (...counts: number[]) => counts.includes(v.length);
  const t = (degrees: number) => (degrees * Math.PI) / 180;
  if (name === 'matrix' && fits(6)) return v as unknown as Matrix;
  if (name === 'translate' && fits(1, 2)) return [1, 0, 0, 1, v[0], v[1] ?? 0];
  if (name === 'scale' && fits(1, 2)) return [v[0], 0, 0, v[1] ?? v[0], 0, 0];
  if (name === 'skewX' && fits(1)) return [1, 0, tangent(t(v[0])), 1, 0, 0];
  if (name === 'skewY' && fits(1)) return [1, tangent(t(v[0])), 0, 1, 0, 0];
  if (name === 'rotate' && fits(1, 3)) {
    const [c, s] = [cosine(t(v[0])), sine(t(v[0]))];
    const turn: Matrix = [c, s, -s, c, 0, 0];
    return v.length === 1 ? turn : times(times([1, 0, 0, 1, v[1], v[2]], turn), [1, 0, 0, 1, -v[1], -v[2]]);
  }
  throw new BadShape(`the transform "${text}" cannot be read`);
}

/** Numbers as SVG writes them: `1-2`, `.5.5`, `1e-3` and commas or white space between. */
export function scanner(text: string) {
  const NUMBER = /[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?/y;
  let at = 0;
  const skip = () => {
    for (; at < text.length; at++) {
      const c = text.charCodeAt(at);
      if (c !== 32 && c !== 44 && (c < 9 || c > 13)) break;
    }
  };
  return {
    ended(): boolean {
      skip();
      return at >= text.length;
    },
    number(): number {
      skip();
      NUMBER.lastIndex = at;
      const found = NUMBER.exec(text);
      if (!found)
        throw new BadShape(
          at >= text.length ? 'a number is missing at the end' : `"${text.slice(at, at + 12)}" is no number`,
        );
      at = NUMBER.lastIndex;
      return Number(found[0]);
    },
    /** The command letter that stands here, or '' before a number. */
    letter(): string {
      skip();
      const c = text[at];
      if (c === undefined || !/[a-zA-Z]/.test(c)) return '';
      at++;
      return c;
    },
  };
}
