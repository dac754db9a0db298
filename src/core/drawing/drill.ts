/**
 * Drill files in the manner of IPC-NC-349: header with units and tools, holes, slots by G85, routed slots. They give holes only:
 * what is drilled is shown and kept out of copper.
 *
 * The standard's words are the opposite of "suppression": LZ keeps leading zeros (trailing ones are left out), TZ keeps trailing
 * ones. A decimal point overrides both. What the file does not say is asked for, never guessed.
 */
import { InputError } from '../base/news.ts';
import type { RunContext } from '../base/run-context.ts';
import type { Drawing, DrawingOptions, Hole } from './drawing.ts';
import { lines } from './drill-lines.ts';
import { type DrillFormat, drillNumber, formatOf, readUnits } from './drill-words.ts';
import { BadShape, type Findings, findings, inReach } from './findings.ts';
import { noAttributes, readAttribute } from './gerber-attributes.ts';

const MEND = 'mend the file at this place, or export it again with decimal points';

/**
 * @param options  `unit` is used only where the file has none
 * @returns a drawing without shapes
 * @throws InputError `not-drill`, `no-units`, `no-format`, `bad-format`, `bad-number`, `bad-tool`, `out-of-range`, `too-large`
 */
export function readDrill(text: string, file: string, options: DrawingOptions, ctx: RunContext): Drawing {
  const found = findings(file, MEND);
  const reader = new Reader(file, options, found);
  for (const { text: raw, line } of lines(text)) {
    if (line % STRIDE === 0) ctx.step('load', line, 0);
    const content = raw.trim();
    if (content !== '') found.at(`line ${line}`, () => reader.take(content, `line ${line}`));
    if (reader.ended) break;
  }
  found.settle();
  if (!reader.known)
    throw new InputError({
      code: 'not-drill',
      file,
      place: '',
      problem: 'the file holds no command of a drill file',
      mend: 'choose a drill file',
    });
  if (!reader.ended) found.note('no-end', 'end', 'The file stops without M30: it may have been cut short.');
  return { file, shapes: [], holes: reader.holes, layers: [], notes: found.notes() };
}

const STRIDE = 65536;

/** What a hole takes in memory, in points. */
const HOLE_COST = 6;

/** Lines of headers that say nothing about holes. */
const NO_CHANGE = /^(M48|M95|%|FMT,.*|VER,.*|DETECT,.*|ATC,.*|M47.*|M06|M0?8|M0?9|G0?5|G81|G40|F\d.*|S\d.*)$/;

interface Tool {
  diameter: number;
  /** mm; null while the file has not said: the unit in force when it is used. */
  unit: number | null;
}

class Reader {
  readonly holes: Hole[] = [];
  /** M30 has come. */
  ended = false;
  /** Something in the file was a command of drill files. */
  known = false;
  readonly #file: string;
  readonly #options: DrawingOptions;
  readonly #found: Findings;
  readonly #attributes = noAttributes();
  readonly #tools = new Map<number, Tool>();
  #plated: boolean | null = null;
  #format: DrillFormat | null = null;
  #tool: number | null = null;
  /** Between M48 and % or M95: tools are defined there, and chosen after it. */
  #header = false;
  #incremental = false;
  /** Last place, mm. */
  #x = 0;
  #y = 0;
  /** Between G00 and G05: moves are a router's, which cuts while it is down. */
  #routing = false;
  #down = false;

  constructor(file: string, options: DrawingOptions, found: Findings) {
    this.#file = file;
    this.#options = options;
    this.#found = found;
  }

  take(text: string, place: string): void {
    // Most lines of a long file.
    if (text[0] === 'X' || text[0] === 'Y') {
      this.#move(text, place);
      return;
    }
    if (text[0] === ';') {
      this.#comment(text.slice(1));
      return;
    }
    const units = readUnits(text, this.#format);
    if (units) {
      this.#format = units;
      this.known = true;
      return;
    }
    if (/^M(30|0?0)$/.test(text)) this.known = this.ended = true;
    else if (/^(G9[01]|ICI(,ON|,OFF)?)$/.test(text))
      this.#incremental = text === 'G91' || /^ICI(,ON)?$/.test(text);
    else if (/^M15$/.test(text)) this.#down = true;
    else if (/^M1[67]$/.test(text)) this.#down = false;
    else if (/^T\d/.test(text)) this.#takeTool(text);
    else if (/^R\d+([XY]|$)/.test(text)) this.#repeat(text, place);
    else if (/^(G00?|G0?1|G85)[XY]|^G00?$/.test(text)) this.#move(text, place);
    else if (NO_CHANGE.test(text)) {
      this.known ||= text === 'M48';
      if (text === 'M48') this.#header = true;
      if (text === '%' || text === 'M95') this.#header = false;
      if (/^G0?5$/.test(text)) this.#routing = this.#down = false;
    } else
      this.#found.note('unknown-command', place, `"${text.slice(0, 40)}" is not understood and left out.`);
  }

  /** Some files say in comments what is plated. */
  #comment(text: string): void {
    readAttribute(text.trim().replace(/^#@!\s*/, ''), this.#attributes);
    const word =
      /^\s*TYPE=(PLATED|NON_PLATED)/.exec(text)?.[1] ?? this.#attributes.fileFunction?.split(',')[0] ?? '';
    if (/^plated$/i.test(word)) this.#plated = true;
    else if (/^non_?plated$/i.test(word)) this.#plated = false;
  }

  /** `T01C0.800` with speeds and feeds in any order, or `T01` alone. */
  #takeTool(text: string): void {
    const m = /^T(\d{1,6})((?:[A-Z][-+.\d]*)*)$/.exec(text);
    if (!m) throw new BadShape('bad-tool', `"${text.slice(0, 40)}" is no tool`);
    this.known = true;
    const code = Number(m[1]);
    const c = /C([-+.\d]*)/.exec(m[2]);
    if (c) {
      const diameter = /^\+?(\d+\.?\d*|\.\d+)$/.test(c[1]) ? Number(c[1]) : Number.NaN;
      if (!(diameter > 0))
        throw new BadShape('bad-tool', `tool T${m[1]} has a diameter of "${c[1].slice(0, 40)}"`);
      this.#tools.set(code, { diameter, unit: this.#format?.unit ?? null });
    }
    if (!c || !this.#header) this.#tool = code === 0 ? null : code;
  }

  #move(text: string, place: string): void {
    this.known = true;
    const [first, second] = text.includes('G') ? text.split('G85') : [text];
    const g = first[0] === 'G' ? /^G(\d+)/.exec(first) : null;
    if (g) this.#routing = true;
    // G00 moves the router without cutting, down or not.
    const cut = this.#routing && this.#down && (g === null || Number(g[1]) !== 0);
    const from = [this.#x, this.#y] as const;
    // In a slot both places may leave a letter out: it keeps its value.
    if (first !== '') this.#goTo(g === null ? first : first.slice(g[0].length));
    if (second !== undefined) {
      const start = [this.#x, this.#y] as const;
      this.#goTo(second);
      this.#drill(start, [this.#x, this.#y], place);
    } else if (cut) this.#drill(from, [this.#x, this.#y], place);
    else if (!this.#routing) this.#drill([this.#x, this.#y], [this.#x, this.#y], place);
  }

  /** `R4X2.54`: the last hole again so many times, each a step further. */
  #repeat(text: string, place: string): void {
    const m = /^R(\d{1,9})(.*)$/.exec(text)!;
    const last = this.holes[this.holes.length - 1];
    if (!last || this.#routing) {
      this.#found.note('no-hole', place, 'Repeats without a hole before them are left out.');
      return;
    }
    const n = Number(m[1]);
    this.#found.spend(HOLE_COST * n);
    const { x, y } = this.#words(m[2]);
    const [dx, dy] = [x ?? 0, y ?? 0];
    inReach(n * dx);
    inReach(n * dy);
    const by = (p: readonly [number, number], k: number) => [p[0] + k * dx, p[1] + k * dy] as const;
    for (let k = 1; k <= n; k++) this.holes.push({ ...last, at: by(last.at, k), to: by(last.to, k), place });
    [this.#x, this.#y] = this.holes[this.holes.length - 1].to;
  }

  #drill(at: readonly [number, number], to: readonly [number, number], place: string): void {
    const tool = this.#tool === null ? undefined : this.#tools.get(this.#tool);
    if (!tool) {
      const which =
        this.#tool === null
          ? 'before any tool is chosen'
          : `with tool T${this.#tool}, which has no diameter,`;
      this.#found.note('no-tool', place, `Holes ${which} are left out.`);
      return;
    }
    this.#found.spend(HOLE_COST);
    const diameter = inReach(tool.diameter * (tool.unit ?? this.#known().unit));
    this.holes.push({ at, to, diameter, plated: this.#plated, place });
  }

  #goTo(text: string): void {
    const { x, y } = this.#words(text);
    const step = this.#incremental ? 1 : 0;
    if (x !== null) this.#x = inReach(step * this.#x + x);
    if (y !== null) this.#y = inReach(step * this.#y + y);
  }

  /** mm; null for a letter that is not written. */
  #words(text: string): { x: number | null; y: number | null } {
    const m = /^(?:X([-+.\d]*))?(?:Y([-+.\d]*))?$/.exec(text);
    if (!m) throw new BadShape('bad-number', `"${text.slice(0, 40)}" is no place`);
    const value = (word: string | undefined): number | null =>
      word === undefined ? null : drillNumber(word, this.#known());
    return { x: value(m[1]), y: value(m[2]) };
  }

  #known(): DrillFormat {
    if (this.#format) return this.#format;
    const { unit } = this.#options;
    if (unit === null)
      throw new InputError({
        code: 'no-units',
        file: this.#file,
        place: '',
        problem: 'the file does not say whether it is in mm or in inches',
        mend: 'say "units" in its drape: mm or inch',
      });
    this.#found.note('units-given', 'start', 'The file has no unit; the one that was given is taken.');
    this.#format = formatOf(unit);
    return this.#format;
  }
}
