/**
 * Gerber RS-274X and X2 (Gerber Layer Format Specification, 2022.02, with the deprecated commands of older files): draws become
 * traces, flashes pads, contours regions; what clear polarity erases is gone.
 *
 * The file is read by code of this folder. Of the parsers in the registry one loses the sign of `-$1` in macros and the first of
 * two commands in a line, the other the second of two definitions in one pair of `%`, and neither knows LM, LR, LS, AB or
 * attributes; they stand as second readers in the tests.
 */
import { InputError } from '../base/news.ts';
import type { RunContext } from '../base/run-context.ts';
import type { Drawing, DrawingOptions } from './drawing.ts';
import { BadShape, type Findings, findings, inReach, tooLarge } from './findings.ts';
import type { Flat } from './flat.ts';
import { readAperture } from './gerber-apertures.ts';
import { readAttribute } from './gerber-attributes.ts';
import { type Block, blocks } from './gerber-blocks.ts';
import type { MacroLine } from './gerber-macro.ts';
import { erased } from './gerber-marks.ts';
import { Plotter, repeatCount } from './gerber-plotter.ts';
import { coordinate, type Format, readFormat, readWords, type Words } from './gerber-words.ts';

const MEND = 'mend the file at this place or export it again as Gerber X2';
const INCH = 25.4;

/**
 * @param options  `unit` is used only where the file has neither MO nor G70 or G71
 * @param flat     booleans in the plane, loaded
 * @returns shapes in mm in the order of the file; layers: the file's own function (`Copper,L1,Top`), or its name
 * @throws InputError `not-gerber`, `no-format`, `no-units`, `bad-format`, `bad-number`, `bad-aperture`, `no-macro`, `bad-macro`,
 *         `bad-repeat`, `bad-placing`, `out-of-range`, `too-large`
 */
export function readGerber(
  text: string,
  file: string,
  options: DrawingOptions,
  ctx: RunContext,
  flat: Flat,
): Drawing {
  const found = findings(file, MEND);
  const reader = new Reader(file, options, found, flat);
  checkLength(text, file);
  let count = 0;
  for (const block of blocks(text)) {
    if (count++ % STRIDE === 0) ctx.step('load', block.line, 0);
    const place = `line ${block.line}`;
    found.at(place, () => reader.take(block, place));
    if (reader.ended) break;
  }
  const marks = found.at('end', () => reader.finish()) ?? [];
  found.settle();
  const layer = reader.layer;
  const shapes = erased(marks, file, options.tolerance, flat, found).map(
    ({ figure, role, net, pin, line }) => ({
      id: null,
      layer,
      net,
      role,
      pin,
      figure,
      place: `line ${line}`,
    }),
  );
  return { file, shapes, holes: [], layers: [layer], notes: found.notes() };
}

const STRIDE = 65536;

/** Two seconds of reading. */
const MOST_BLOCKS = 2_000_000;

function checkLength(text: string, file: string): void {
  let count = 0;
  for (let at = text.indexOf('*'); at >= 0; at = text.indexOf('*', at + 1))
    if (++count > MOST_BLOCKS) throw tooLarge(file, '', `more than ${MOST_BLOCKS} commands`);
}

class Reader {
  /** M02 has come. */
  ended = false;
  readonly file: string;
  readonly options: DrawingOptions;
  readonly found: Findings;
  readonly #plot: Plotter;
  #format: Format | null = null;
  #units = false;
  /** Last place in units of the file. */
  #x = 0;
  #y = 0;
  #operation: number | null = null;
  readonly #macros = new Map<string, MacroLine[]>();
  #openMacro: MacroLine[] | null = null;
  /** Something in the file was a command of Gerber. */
  #known = false;

  constructor(file: string, options: DrawingOptions, found: Findings, flat: Flat) {
    this.file = file;
    this.options = options;
    this.found = found;
    this.#plot = new Plotter(options, flat, found);
  }

  get layer(): string {
    return this.#plot.attributes.fileFunction ?? this.file.replace(/^.*[\\/]/, '').replace(/\.[^.]*$/, '');
  }

  take(block: Block, place: string): void {
    if (!block.ended)
      this.found.note('unfinished', place, `"${block.text.slice(0, 40)}" has no * behind it.`);
    if (block.extended) this.#extended(block, place);
    else {
      const comment = COMMENT.exec(block.text);
      if (comment) {
        this.#known = true;
        // Attributes for readers of older files stand in comments.
        readAttribute(comment[1].replace(/^\s*#@!\s*/, ''), this.#plot.attributes);
        return;
      }
      const words = readWords(block.text);
      if (words) this.#words(words, block.line, place);
      else this.#unknown(block.text, place);
    }
  }

  finish() {
    if (!this.#known)
      throw new InputError({
        code: 'not-gerber',
        file: this.file,
        place: '',
        problem: 'the file holds no command of Gerber',
        mend: 'choose a Gerber file',
      });
    if (!this.ended)
      this.found.note('no-end', 'end', 'The file stops without M02: it may have been cut short.');
    const { fileFunction, negative } = this.#plot.attributes;
    if (fileFunction !== null && !/^copper\b/i.test(fileFunction))
      this.found.note('not-copper', 'start', `The file says that it is not copper but ${fileFunction}.`);
    if (negative)
      this.found.note(
        'negative',
        'start',
        'The file says that it is negative: what it draws is free of copper.',
      );
    return this.#plot.finish();
  }

  #unknown(text: string, place: string): void {
    this.found.note('unknown-command', place, `"${text.slice(0, 40)}" is not understood and left out.`);
  }

  #extended({ text, line, first }: Block, place: string): void {
    if (first) this.#openMacro = null;
    if (this.#openMacro) {
      this.#openMacro.push({ text, line });
      return;
    }
    const plot = this.#plot;
    const rest = text.slice(2);
    this.#known ||= /^(FS|MO|AD|AM|LP|TF|SR|IP|IN|LN)/.test(text);
    switch (text.slice(0, 2)) {
      case 'FS': {
        this.#format = readFormat(rest);
        return;
      }
      case 'MO':
        if (rest !== 'MM' && rest !== 'IN')
          throw new BadShape('bad-format', `"${text.slice(0, 40)}" is no unit: MM and IN are`);
        this.#setUnit(rest === 'MM' ? 1 : INCH);
        return;
      case 'AM':
        this.#openMacro = [];
        this.#macros.set(rest, this.#openMacro);
        return;
      case 'AD': {
        const { code, aperture } = readAperture(rest, this.#macros);
        plot.define(code, aperture);
        return;
      }
      case 'LP':
        if (rest !== 'D' && rest !== 'C') break;
        plot.dark = rest === 'D';
        return;
      case 'LM':
        if (!/^(N|X|Y|XY)$/.test(rest)) break;
        plot.placing = { ...plot.placing, mirrorX: rest.includes('X'), mirrorY: rest.includes('Y') };
        return;
      case 'LR':
        plot.placing = { ...plot.placing, turn: placingNumber(rest) };
        return;
      case 'LS': {
        const scale = placingNumber(rest);
        if (!(scale > 0)) throw new BadShape('bad-placing', `apertures cannot be scaled by ${rest}`);
        plot.placing = { ...plot.placing, scale };
        return;
      }
      case 'SR':
        this.#repeat(rest);
        return;
      case 'AB': {
        const code = /^D(\d{2,9})$/.exec(rest);
        if (code) plot.beginBlock(Number(code[1]));
        else if (rest !== '' || !plot.endBlock()) break;
        return;
      }
      case 'IN':
      case 'LN':
        return;
    }
    if (readAttribute(text, plot.attributes) || NO_CHANGE.test(text)) return;
    if (/^IPNEG/.test(text)) plot.attributes.negative = true;
    else this.#unknown(text, place);
  }

  #repeat(text: string): void {
    const m = /^(?:X([^YIJ]*))?(?:Y([^IJ]*))?(?:I([^J]*))?(?:J(.*))?$/.exec(text);
    if (!m) throw new BadShape('bad-repeat', `"SR${text.slice(0, 40)}" is no repeat`);
    if (text === '') {
      this.#plot.endRepeat();
      return;
    }
    const [nx, ny] = [repeatCount(m[1]), repeatCount(m[2])];
    const [dx, dy] = [m[3], m[4]].map((w) => inReach(placingNumber(w ?? '0') * this.#unit()));
    if (nx === 1 && ny === 1) this.#plot.endRepeat();
    else this.#plot.beginRepeat(nx, ny, dx, dy);
  }

  #words(w: Words, line: number, place: string): void {
    const plot = this.#plot;
    this.#known ||= w.d !== null || w.m !== null || w.g.length > 0;
    const arcs = (way: 'line' | 'clockwise' | 'counter-clockwise'): void => {
      plot.mode = { ...plot.mode, way };
    };
    for (const g of w.g)
      switch (g) {
        case 0:
        case 1:
          arcs('line');
          break;
        case 2:
          arcs('clockwise');
          break;
        case 3:
          arcs('counter-clockwise');
          break;
        case 36:
          plot.beginRegion(line);
          break;
        case 37:
          plot.endRegion();
          break;
        case 54:
        case 55:
          break;
        case 70:
          this.#setUnit(INCH);
          break;
        case 71:
          this.#setUnit(1);
          break;
        case 74:
        case 75:
          plot.mode = { ...plot.mode, quadrants: g === 74 ? 'single' : 'multi' };
          break;
        case 90:
        case 91:
          if (this.#format) this.#format = { ...this.#format, incremental: g === 91 };
          break;
        default:
          this.#unknown(`G${g}`, place);
      }
    if (w.d !== null && w.d >= 10) plot.aperture = w.d;
    else if (w.d !== null && (w.d < 1 || w.d > 3)) this.#unknown(`D${w.d}`, place);
    else if (w.d !== null || w.x !== null || w.y !== null) this.#operate(w, line, place);
    if (w.m !== null) {
      if (w.m <= 2 || w.m === 30) this.ended = true;
      else this.#unknown(`M${w.m}`, place);
    }
  }

  #operate(w: Words, line: number, place: string): void {
    const plot = this.#plot;
    const unit = this.#unit();
    const f = this.#digits(line);
    const step = f.incremental ? 1 : 0;
    if (w.x !== null) this.#x = step * this.#x + coordinate(w.x, f.x, f.leftOut);
    if (w.y !== null) this.#y = step * this.#y + coordinate(w.y, f.y, f.leftOut);
    const to = [inReach(this.#x * unit), inReach(this.#y * unit)] as const;
    const ij =
      w.i === null && w.j === null
        ? null
        : ([
            inReach(w.i === null ? 0 : coordinate(w.i, f.x, f.leftOut) * unit),
            inReach(w.j === null ? 0 : coordinate(w.j, f.y, f.leftOut) * unit),
          ] as const);
    plot.step = unit * 10 ** -Math.min(f.x.after, f.y.after);
    if (w.d === null && this.#operation === null)
      this.found.note('no-operation', place, 'Coordinates before the first D01, D02 or D03 only move.');
    this.#operation = w.d ?? this.#operation;
    if (this.#operation === 1) plot.draw(to, ij, line);
    else if (this.#operation === 3) plot.flash(to, line);
    else plot.move(to);
  }

  #setUnit(mm: number): void {
    this.#units = true;
    this.#plot.unit = mm;
  }

  #unit(): number {
    if (this.#units) return this.#plot.unit;
    if (this.options.unit === null)
      throw new InputError({
        code: 'no-units',
        file: this.file,
        place: '',
        problem: 'the file does not say whether it is in mm or in inches',
        mend: 'say "units" in its drape: mm or inch',
      });
    this.#setUnit(this.options.unit);
    this.found.note('units-given', 'start', 'The file has no unit; the one that was given is taken.');
    return this.options.unit;
  }

  #digits(line: number): Format {
    if (!this.#format)
      throw new InputError({
        code: 'no-format',
        file: this.file,
        place: `line ${line}`,
        problem: 'coordinates come before the format of their digits (%FS…*%)',
        mend: MEND,
      });
    return this.#format;
  }
}

const COMMENT = /^G(?:04|4(?!\d))(.*)$/;

/** Deprecated commands that change nothing as they stand. */
const NO_CHANGE =
  /^(IPPOS|ASAXBY|IR0+(\.0*)?|MI(A0)?(B0)?|OF(A[+-]?0*\.?0*)?(B[+-]?0*\.?0*)?|SF(A1(\.0*)?)?(B1(\.0*)?)?)$/;

function placingNumber(word: string): number {
  const v = /^[-+]?(\d+\.?\d*|\.\d+)$/.test(word.trim()) ? Number(word) : Number.NaN;
  if (!Number.isFinite(v)) throw new BadShape('bad-placing', `"${word.slice(0, 40)}" is no number`);
  return v;
}
