/** The graphics state of a Gerber file and the marks that its operations leave (2022.02, ch. 2 and 4). */
import { cosine, sine } from '../base/trig.ts';
import type { DrawingOptions } from './drawing.ts';
import { BadShape, type Findings, inReach } from './findings.ts';
import type { Flat } from './flat.ts';
import { arcPieces } from './flatten.ts';
import { type Aperture, type Stamp, stampOf } from './gerber-apertures.ts';
import { arcCorners, circleRing } from './gerber-arcs.ts';
import { type Attributes, noAttributes } from './gerber-attributes.ts';
import {
  AS_IT_IS,
  type Mark,
  type Placing,
  placedMark,
  placedRings,
  pointsOf,
  sweep,
} from './gerber-marks.ts';
import { arcMove, type Interpolation } from './gerber-path.ts';

/** Each mark counts as this many points more than it has: what it takes in memory beside them. */
const MARK_COST = 2;

/** Start and end of an arc may lie this many steps of the file's digits apart from one circle. */
const ROUNDED = 4;

interface Level {
  marks: Mark[];
  /** A block aperture's number, a repeat's counts and steps in mm, or null for the file itself. */
  holds: { block: number } | { nx: number; ny: number; dx: number; dy: number } | null;
}

/** A row of draws with one round aperture. */
interface Chain {
  points: number[];
  width: number;
  like: Omit<Mark, 'figure'>;
}

export class Plotter {
  /** mm in one unit of the file; the reader sees to it that it is set before anything is drawn. */
  unit = 1;
  /** Smallest step of coordinates, mm. */
  step = 0;
  /** Where the last operation ended, mm. */
  at: readonly [number, number] = [0, 0];
  aperture: number | null = null;
  dark = true;
  placing: Placing = AS_IT_IS;
  mode: Interpolation = { way: 'line', quadrants: null };
  readonly attributes: Attributes = noAttributes();
  readonly options: DrawingOptions;
  readonly flat: Flat;
  readonly found: Findings;

  readonly #apertures = new Map<number, Aperture | Mark[]>();
  readonly #stamps = new Map<number, Stamp>();
  readonly #levels: Level[] = [{ marks: [], holds: null }];
  #chain: Chain | null = null;
  #region: { line: number; contours: number[][] } | null = null;

  constructor(options: DrawingOptions, flat: Flat, found: Findings) {
    this.options = options;
    this.flat = flat;
    this.found = found;
  }

  define(code: number, aperture: Aperture): void {
    this.#endChain();
    this.#apertures.set(code, aperture);
    this.#stamps.delete(code);
  }

  /** D02 */
  move(to: readonly [number, number]): void {
    this.#endChain();
    this.#region?.contours.push([...to]);
    this.at = to;
  }

  /** D01 @param ij  mm; null where the move has neither */
  draw(to: readonly [number, number], ij: readonly [number, number] | null, line: number): void {
    const path = this.#path(to, ij, line);
    const from = this.at;
    this.at = to;
    if (this.#region) {
      const { contours } = this.#region;
      if (contours.length === 0) contours.push([...from]);
      // Not by spreading: an arc may have more corners than a call takes arguments.
      const contour = contours[contours.length - 1];
      for (const c of path) contour.push(c);
      return;
    }
    const stamp = this.#stamp(line);
    if (!stamp) return;
    const like = this.#mark('trace', line);
    if (!Array.isArray(stamp) && stamp.round !== null) this.#drawRound(from, path, stamp.round, like);
    else if (!Array.isArray(stamp) && stamp.convex) this.#drawHull(from, path, stamp, like);
    else this.found.note('draw-aperture', `line ${line}`, 'Lines drawn with a macro or block are left out.');
  }

  /** D03 */
  flash(to: readonly [number, number], line: number): void {
    this.#endChain();
    this.at = to;
    if (this.#region) {
      this.found.note('region-flash', `line ${line}`, 'Flashes within a region are left out.');
      return;
    }
    const stamp = this.#stamp(line);
    if (!stamp) return;
    if (Array.isArray(stamp)) {
      for (const m of stamp) {
        const { net, pin } = this.attributes;
        const mark = placedMark(m, this.placing, to[0], to[1]);
        this.#add({ ...mark, dark: mark.dark === this.dark, net: m.net ?? net, pin: m.pin ?? pin });
      }
      return;
    }
    if (stamp.pieces.length === 0) this.#noSize(line);
    for (const piece of stamp.pieces)
      this.#add({
        ...this.#mark('pad', line),
        figure: { kind: 'area', rings: placedRings(piece, this.placing, to[0], to[1]) },
      });
  }

  beginRegion(line: number): void {
    this.#endChain();
    if (this.#region) this.endRegion();
    this.#region = { line, contours: [] };
  }

  /** Contours are filled each for itself; a cut-in becomes the hole it stands for. */
  endRegion(): void {
    const region = this.#region;
    this.#region = null;
    if (!region) return;
    const { line } = region;
    const solid: Float64Array[] = [];
    for (const c of region.contours) {
      if (c.length <= 2) continue;
      const closed = c[0] === c[c.length - 2] && c[1] === c[c.length - 1];
      if (!closed)
        this.found.note(
          'open-contour',
          `line ${line}`,
          'Contours that do not end where they begin are closed.',
        );
      solid.push(...this.flat.union([Float64Array.from(closed ? c.slice(0, -2) : c)]));
    }
    const pieces = this.flat.split(region.contours.length > 1 ? this.flat.union(solid) : solid);
    if (pieces.length === 0)
      this.found.note('empty-region', `line ${line}`, 'Regions without area are left out.');
    for (const rings of pieces) this.#add({ ...this.#mark('region', line), figure: { kind: 'area', rings } });
  }

  beginBlock(code: number): void {
    this.#endChain();
    this.#levels.push({ marks: [], holds: { block: code } });
  }

  /** @returns false where no block is open */
  endBlock(): boolean {
    const { marks, holds } = this.#levels[this.#levels.length - 1];
    if (!holds || !('block' in holds)) return false;
    this.#endChain();
    this.#levels.pop();
    this.#apertures.set(holds.block, marks);
    this.#stamps.delete(holds.block);
    return true;
  }

  beginRepeat(nx: number, ny: number, dx: number, dy: number): void {
    this.endRepeat();
    this.#levels.push({ marks: [], holds: { nx, ny, dx, dy } });
  }

  /** Copies run up the columns first, as the specification has it. @throws InputError `too-large` */
  endRepeat(): void {
    this.#endChain();
    const { marks, holds } = this.#levels[this.#levels.length - 1];
    if (!holds || !('nx' in holds)) return;
    this.#levels.pop();
    if (marks.length === 0) return;
    const { nx, ny, dx, dy } = holds;
    // The first copy is what was drawn.
    this.found.spend((nx * ny - 1) * marks.reduce((n, m) => n + MARK_COST + pointsOf(m), 0));
    inReach(nx * dx);
    inReach(ny * dy);
    const into = this.#levels[this.#levels.length - 1].marks;
    for (let i = 0; i < nx; i++)
      for (let j = 0; j < ny; j++)
        for (const m of marks) into.push(i + j === 0 ? m : placedMark(m, AS_IT_IS, i * dx, j * dy));
  }

  /** Everything laid, in its order. What is still open is closed, and noted. */
  finish(): Mark[] {
    if (this.#region || this.#levels.length > 1)
      this.found.note('unclosed', 'end', 'A region, block or repeat is not closed; it is closed at the end.');
    this.endRegion();
    this.#endChain();
    while (this.#levels.length > 1) {
      this.endRepeat();
      this.endBlock();
    }
    return this.#levels[0].marks;
  }

  #add(mark: Mark): void {
    this.found.spend(MARK_COST + pointsOf(mark));
    this.#levels[this.#levels.length - 1].marks.push(mark);
  }

  #mark(role: Mark['role'], line: number): Omit<Mark, 'figure'> {
    return { dark: this.dark, role, net: this.attributes.net, pin: this.attributes.pin, line };
  }

  /** The aperture that is set; null, and a note, where there is none. */
  #stamp(line: number): Stamp | Mark[] | null {
    const code = this.aperture;
    const known = code === null ? undefined : this.#apertures.get(code);
    if (code === null || !known) {
      const which = code === null ? 'without an aperture' : `with aperture D${code}, which is not defined,`;
      this.found.note('no-aperture', `line ${line}`, `What is drawn ${which} is left out.`);
      return null;
    }
    if (Array.isArray(known)) return known;
    let stamp = this.#stamps.get(code);
    if (!stamp) {
      // If it cannot be made, the file is refused: once, not for each flash.
      this.#stamps.set(code, { pieces: [], round: null, square: null, convex: false });
      const { unit, flat, found } = this;
      stamp = stampOf(code, known, { unit, tolerance: this.options.tolerance, flat, found });
      this.#stamps.set(code, stamp);
    }
    return stamp;
  }

  #noSize(line: number): void {
    this.found.note('no-size', `line ${line}`, 'What is drawn with an aperture of no size is left out.');
  }

  /** Corners after the start, the end exact: on the arc for a stroke, of the same area for a region. */
  #path([x, y]: readonly [number, number], ij: readonly [number, number] | null, line: number): number[] {
    if (this.mode.way === 'line') {
      this.found.spend(1);
      return [x, y];
    }
    if (this.mode.quadrants === null)
      this.found.note(
        'no-quadrants',
        `line ${line}`,
        'The file says neither G74 nor G75: arcs are read as fits.',
      );
    const arc = arcMove(this.at, [x, y], ij ?? [0, 0], this.mode);
    const { tolerance } = this.options;
    if (!arc) {
      this.found.note('no-centre', `line ${line}`, 'Arcs without a centre are drawn as lines.');
      this.found.spend(1);
      return [x, y];
    }
    if (Math.abs(arc.r - arc.rEnd) > Math.max(ROUNDED * this.step, tolerance))
      this.found.note(
        'arc-radius',
        `line ${line}`,
        'Arcs whose ends lie on different circles run between them.',
      );
    const path: number[] = [];
    const spend = (n: number): void => this.found.spend(n);
    if (this.#region) arcCorners(path, arc.centre, arc.r, arc.rEnd, arc.start, arc.sweep, tolerance, spend);
    else {
      const n = arcPieces(Math.max(arc.r, arc.rEnd), arc.sweep, tolerance);
      spend(n);
      for (let k = 1; k < n; k++) {
        const r = arc.r + ((arc.rEnd - arc.r) * k) / n;
        const angle = arc.start + (arc.sweep * k) / n;
        path.push(arc.centre[0] + r * cosine(angle), arc.centre[1] + r * sine(angle));
      }
    }
    path.push(x, y);
    return path;
  }

  #drawRound(
    from: readonly [number, number],
    path: number[],
    diameter: number,
    like: Omit<Mark, 'figure'>,
  ): void {
    const width = diameter * this.placing.scale;
    if (width === 0) {
      this.#noSize(like.line);
      return;
    }
    const c = this.#chain;
    const goesOn =
      c !== null &&
      c.width === width &&
      c.like.dark === like.dark &&
      c.like.net === like.net &&
      c.like.pin === like.pin;
    if (!goesOn) {
      this.#endChain();
      this.#chain = { points: [...from], width, like };
    }
    const { points } = this.#chain!;
    for (let i = 0; i < path.length; i += 2)
      if (path[i] !== points[points.length - 2] || path[i + 1] !== points[points.length - 1])
        points.push(path[i], path[i + 1]);
  }

  /** The row of draws becomes one stroke; a draw that goes nowhere is a disc. */
  #endChain(): void {
    const c = this.#chain;
    this.#chain = null;
    if (!c) return;
    const { points: p, width, like } = c;
    if (p.length === 2) {
      const ring = circleRing(p[0], p[1], width / 2, this.options.tolerance, (n) => this.found.spend(n));
      this.#add({ ...like, figure: { kind: 'area', rings: [ring] } });
      return;
    }
    const closed = p.length > 6 && p[0] === p[p.length - 2] && p[1] === p[p.length - 1];
    const points = Float64Array.from(closed ? p.slice(0, -2) : p);
    this.#add({ ...like, figure: { kind: 'stroke', points, closed, width, ends: 'round', bends: 'round' } });
  }

  /** Straight along its sides a square draws a stroke with square ends; else the hulls of its places are what it covers. */
  #drawHull(from: readonly [number, number], path: number[], stamp: Stamp, like: Omit<Mark, 'figure'>): void {
    this.#endChain();
    if (stamp.pieces.length === 0) {
      this.#noSize(like.line);
      return;
    }
    const [x, y] = from;
    const straight = path.length === 2 && (path[0] === x) !== (path[1] === y);
    if (straight && stamp.square !== null && this.placing.turn % 90 === 0) {
      const width = stamp.square * this.placing.scale;
      const points = Float64Array.of(x, y, path[0], path[1]);
      this.#add({
        ...like,
        figure: { kind: 'stroke', points, closed: false, width, ends: 'square', bends: 'miter' },
      });
      return;
    }
    const [outline] = placedRings(stamp.pieces[0].slice(0, 1), this.placing, 0, 0);
    const hulls: Float64Array[] = [];
    let last = from;
    for (let i = 0; i < path.length; i += 2) {
      const next = [path[i], path[i + 1]] as const;
      this.found.spend(outline.length / 2);
      hulls.push(sweep(outline, last, next));
      last = next;
    }
    const pieces = hulls.length === 1 ? [hulls] : this.flat.split(this.flat.union(hulls));
    for (const rings of pieces) this.#add({ ...like, figure: { kind: 'area', rings } });
  }
}

/** @throws BadShape where no such repeat can be */
export function repeatCount(word: string | undefined): number {
  const n = word === undefined ? 1 : /^\d{1,9}$/.test(word) ? Number(word) : Number.NaN;
  if (!(Number.isInteger(n) && n >= 1))
    throw new BadShape('bad-repeat', `nothing is repeated ${word?.slice(0, 40)} times`);
  return n;
}
