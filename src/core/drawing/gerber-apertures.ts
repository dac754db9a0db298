/** Apertures of Gerber (2022.02, ch. 4.4): their definitions, and the copper of one flash. */
import { cosine } from '../base/trig.ts';
import { BadShape, inReach } from './findings.ts';
import { ringArea } from './flat.ts';
import { boxRing, circleRing, obroundRing, polygonRing, reversed } from './gerber-arcs.ts';
import { type MacroLine, type MacroTools, macroRings } from './gerber-macro.ts';

export interface Aperture {
  /** `C`, `R`, `O`, `P` or a macro's name. */
  template: string;
  /** In the file's own unit where they are lengths. */
  numbers: number[];
  /** Of the macro as it stood when the aperture was made; null for the standard ones. */
  macro: readonly MacroLine[] | null;
}

/** What one flash lays at the origin. */
export interface Stamp {
  /** Separate areas, mm: an outline and its holes each. Empty where the aperture has no size. */
  pieces: Float64Array[][];
  /** Diameter of a round aperture, mm: a draw with it is a trace. */
  round: number | null;
  /** Side of a square one, mm. */
  square: number | null;
  /** A draw with it sweeps the hull of its two ends. */
  convex: boolean;
}

/**
 * The definition after `AD`, such as `D10C,0.5X0.2`.
 * @throws BadShape `bad-aperture`
 */
export function readAperture(
  text: string,
  macros: ReadonlyMap<string, readonly MacroLine[]>,
): { code: number; aperture: Aperture } {
  const m = /^D(\d{1,9})([A-Za-z_.$][^,\s]*)(?:,(.*))?$/.exec(text);
  if (!m) throw new BadShape('bad-aperture', `"${text.slice(0, 40)}" defines no aperture`);
  const code = Number(m[1]);
  if (code < 10)
    throw new BadShape('bad-aperture', `an aperture may not be called D${m[1]}: they begin at D10`);
  const template = m[2];
  const numbers =
    m[3] === undefined || m[3].trim() === ''
      ? []
      : m[3].split('X').map((word) => {
          const v = /^\s*[-+]?(\d+\.?\d*|\.\d+)\s*$/.test(word) ? Number(word) : Number.NaN;
          if (!Number.isFinite(v))
            throw new BadShape('bad-aperture', `"${word.slice(0, 40)}" of aperture D${code} is no number`);
          return v;
        });
  const standard = /^[CROP]$/.test(template);
  const macro = standard ? null : (macros.get(template) ?? null);
  if (!standard && !macro)
    throw new BadShape(
      'no-macro',
      `aperture D${code} asks for the macro ${template.slice(0, 40)}, which is not in the file`,
    );
  return { code, aperture: { template, numbers, macro } };
}

/** @throws BadShape `bad-aperture`, `bad-macro`; InputError `too-large` */
export function stampOf(code: number, { template, numbers, macro }: Aperture, tools: MacroTools): Stamp {
  const { unit, tolerance, flat, found } = tools;
  const spend = (n: number): void => found.spend(n);
  const pieces = (rings: Float64Array[]): Float64Array[][] =>
    flat.split(rings).filter((piece) => flat.area(piece) > 0);
  if (macro)
    return { pieces: pieces(macroRings(macro, numbers, tools)), round: null, square: null, convex: false };
  const least = template === 'C' ? 1 : 2;
  if (numbers.length < least)
    throw new BadShape('bad-aperture', `aperture D${code} has ${numbers.length} numbers, not ${least}`);
  const size = (i: number): number => {
    const v = inReach(numbers[i] * unit);
    if (v < 0) throw new BadShape('bad-aperture', `aperture D${code} has a size of ${numbers[i]}`);
    return v;
  };
  const [w, h] = [size(0), template === 'C' || template === 'P' ? size(0) : size(1)];
  const whole = { round: null, square: null, convex: true };
  const solid = (outline: Float64Array, inner: number, after: number): Float64Array[][] =>
    ringArea(outline) > 0 ? withHole(outline, inner, after) : [];
  /** @param inner  a round hole of this diameter at most lies within the outline */
  const withHole = (outline: Float64Array, inner: number, after: number): Float64Array[][] => {
    const [a, b] = [
      numbers.length > after ? size(after) : 0,
      numbers.length > after + 1 ? size(after + 1) : null,
    ];
    const hole = b === null ? circleRing(0, 0, a / 2, tolerance, spend) : boxRing(0, 0, a, b);
    if (!(ringArea(hole) > 0)) return [[outline]];
    const within = b === null ? a < inner : Math.hypot(a, b) < inner;
    return within ? [[outline, reversed(hole)]] : pieces(flat.difference([outline], [hole]));
  };
  switch (template) {
    case 'C':
      return {
        ...whole,
        pieces: w > 0 ? solid(circleRing(0, 0, w / 2, tolerance, spend), w, 1) : [],
        round: w,
      };
    case 'R':
      spend(4);
      return { ...whole, pieces: solid(boxRing(0, 0, w, h), Math.min(w, h), 2), square: w === h ? w : null };
    case 'O':
      return {
        ...whole,
        pieces: Math.min(w, h) > 0 ? solid(obroundRing(w, h, tolerance, spend), Math.min(w, h), 2) : [],
        round: w === h ? w : null,
      };
    default: {
      const n = numbers[1];
      if (!(Number.isInteger(n) && n >= 3 && n <= MOST_CORNERS))
        throw new BadShape('bad-aperture', `aperture D${code} is a polygon of ${n} corners`);
      spend(n);
      const inner = w * cosine(Math.PI / n);
      return { ...whole, pieces: solid(polygonRing(n, 0, 0, w, numbers[2] ?? 0), inner, 3) };
    }
  }
}

/** Of a polygon; the specification stops at 12. */
const MOST_CORNERS = 100;
