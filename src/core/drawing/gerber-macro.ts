/** Aperture macros of Gerber (2022.02, ch. 4.5): their arithmetic, and their primitives put together. */
import { BadShape, type Findings, inReach } from './findings.ts';
import type { Flat } from './flat.ts';
import { boxRing, circleRing, polygonRing, reversed } from './gerber-arcs.ts';
import { rotation } from './matrix.ts';

export interface MacroLine {
  text: string;
  line: number;
}

/** What primitives need besides their numbers. */
export interface MacroTools {
  /** mm in one unit of the file. */
  unit: number;
  tolerance: number;
  flat: Flat;
  found: Findings;
}

/** Corners of an outline primitive at most (the specification's own limit). */
const MOST_CORNERS = 5000;
/** Rings of a moiré, likewise corners of a polygon primitive: more is a slip. */
const MOST_RINGS = 100;

/**
 * Rings of a macro about its origin, mm: outlines counter-clockwise, holes clockwise. A primitive that is switched off cuts only
 * what earlier ones of the same macro made.
 * @throws BadShape `bad-macro`, its text naming the macro's line; `too-large`
 */
export function macroRings(
  lines: readonly MacroLine[],
  given: readonly number[],
  tools: MacroTools,
): Float64Array[] {
  const values = new Map<number, number>(given.map((v, i) => [i + 1, v]));
  let whole: Float64Array[] = [];
  /** Primitives of the same exposure in a row, put together at once. */
  let run: Float64Array[] = [];
  let on = true;
  const settle = (): void => {
    if (run.length === 0) return;
    whole = on
      ? whole.length + run.length === 1
        ? run
        : tools.flat.union([...whole, ...run])
      : tools.flat.difference(whole, run);
    run = [];
  };
  tools.found.spend(lines.length);
  for (const { text, line } of lines) {
    const named = /^\$(\d+)=(.*)$/.exec(text.replace(/\s+/g, ''));
    if (named) {
      values.set(Number(named[1]), evaluate(named[2], values, line));
      continue;
    }
    if (/^0(\D|$)/.test(text)) continue;
    const [first, ...rest] = text.split(',');
    if (!/^\s*\d{1,3}\s*$/.test(first))
      throw new BadShape('bad-macro', `"${text.slice(0, 40)}" in line ${line} is no primitive`);
    const code = Number(first);
    const numbers = rest.map((t) => evaluate(t, values, line));
    const shape = primitive(code, numbers, line, tools);
    if (!shape) continue;
    if (shape.on !== on) {
      settle();
      on = shape.on;
    }
    run.push(...shape.rings);
  }
  settle();
  return whole;
}

/** Its rings, counter-clockwise outlines and clockwise holes, turned about the macro's origin; null for an unknown code. */
function primitive(
  code: number,
  n: readonly number[],
  line: number,
  { unit, tolerance, flat, found }: MacroTools,
): { on: boolean; rings: Float64Array[] } | null {
  const need = (least: number): void => {
    if (n.length < least)
      throw new BadShape(
        'bad-macro',
        `primitive ${code} in line ${line} has ${n.length} numbers, not ${least}`,
      );
  };
  const mm = (i: number): number => inReach(n[i] * unit);
  const size = (i: number): number => {
    const v = mm(i);
    if (v < 0) throw new BadShape('bad-macro', `primitive ${code} in line ${line} has a size of ${n[i]}`);
    return v;
  };
  const disc = (x: number, y: number, d: number): Float64Array[] =>
    d > 0 ? [circleRing(x, y, d / 2, tolerance, (k) => found.spend(k))] : [];
  const turn = (rings: Float64Array[], i: number): Float64Array[] => turned(rings, n[i] ?? 0);
  const on = n[0] !== 0;
  switch (code) {
    case 1:
      need(4);
      return { on, rings: turn(disc(mm(2), mm(3), size(1)), 4) };
    case 2:
    case 20:
      need(6);
      return { on, rings: turn(bar([mm(2), mm(3)], [mm(4), mm(5)], size(1)), 6) };
    case 21:
      need(5);
      return { on, rings: turn(solid(boxRing(mm(3), mm(4), size(1), size(2))), 5) };
    case 22:
      need(5);
      return {
        on,
        rings: turn(solid(boxRing(mm(3) + size(1) / 2, mm(4) + size(2) / 2, size(1), size(2))), 5),
      };
    case 4: {
      need(2);
      const corners = n[1];
      if (!(Number.isInteger(corners) && corners >= 1 && corners <= MOST_CORNERS))
        throw new BadShape('bad-macro', `the outline in line ${line} has ${corners} corners`);
      need(4 + 2 * corners);
      found.spend(corners);
      const ring = Float64Array.from({ length: 2 * corners }, (_, i) => mm(2 + i));
      return { on, rings: turn(solid(...flat.union([ring])), 4 + 2 * corners) };
    }
    case 5: {
      need(5);
      const corners = n[1];
      if (!(Number.isInteger(corners) && corners >= 3 && corners <= MOST_RINGS))
        throw new BadShape('bad-macro', `the polygon in line ${line} has ${corners} corners`);
      return { on, rings: turn(solid(polygonRing(corners, mm(2), mm(3), size(4), 0)), 5) };
    }
    case 6: {
      need(8);
      const [x, y] = [mm(0), mm(1)];
      const [thick, gap, most] = [size(3), size(4), n[5]];
      if (!(most >= 0 && most <= MOST_RINGS))
        throw new BadShape('bad-macro', `the moiré in line ${line} has ${most} rings`);
      const rings: Float64Array[] = [
        boxRing(x, y, size(7), size(6)),
        boxRing(x, y, size(6), size(7)),
      ].flatMap((r) => solid(r));
      for (let k = 0, d = size(2); k < most && d > 0; k++, d -= 2 * (thick + gap)) {
        const inner = d - 2 * thick;
        rings.push(...disc(x, y, d), ...disc(x, y, inner).map(reversed));
      }
      // Each ring alone before they are joined: a hole must not take away from the cross.
      return { on: true, rings: turn(flat.union([...flat.union(rings.slice(2)), ...rings.slice(0, 2)]), 8) };
    }
    case 7: {
      need(5);
      const [x, y, outer, inner, gap] = [mm(0), mm(1), size(2), size(3), size(4)];
      const cross = gap > 0 ? [boxRing(x, y, 2 * outer, gap), boxRing(x, y, gap, 2 * outer)] : [];
      const rings = flat.difference(disc(x, y, outer), [...disc(x, y, inner), ...cross]);
      return { on: true, rings: turn(rings, 5) };
    }
    default:
      found.note('macro-primitive', `line ${line}`, `Primitives ${code} of macros are unknown and left out.`);
      return null;
  }
}

/** Rings that hold something; clockwise ones stay holes. */
function solid(...rings: Float64Array[]): Float64Array[] {
  return rings.filter((r) => {
    for (let i = 2; i < r.length; i++) if (r[i] !== r[i % 2]) return r.length >= 6;
    return false;
  });
}

/** A line of width w with square-cut ends at its two points. */
function bar(
  [ax, ay]: readonly [number, number],
  [bx, by]: readonly [number, number],
  w: number,
): Float64Array[] {
  const length = Math.hypot(bx - ax, by - ay);
  if (length === 0 || w === 0) return [];
  const [nx, ny] = [(-(by - ay) / length) * (w / 2), ((bx - ax) / length) * (w / 2)];
  return [Float64Array.of(ax - nx, ay - ny, bx - nx, by - ny, bx + nx, by + ny, ax + nx, ay + ny)];
}

function turned(rings: Float64Array[], degrees: number): Float64Array[] {
  if (degrees === 0) return rings;
  const [c, s] = rotation(degrees);
  return rings.map((r) => {
    const out = new Float64Array(r.length);
    for (let i = 0; i < r.length; i += 2) {
      out[i] = c * r[i] - s * r[i + 1];
      out[i + 1] = s * r[i] + c * r[i + 1];
    }
    return out;
  });
}

/** Brackets within brackets at most. */
const DEEPEST = 50;

/** `+ - x / ( )`, signs, decimals and `$n` (0 where it was given none); x and / bind first, equals from the left. */
export function evaluate(text: string, values: ReadonlyMap<number, number>, line: number): number {
  const marks = text.match(/\d+\.?\d*|\.\d+|\$\d+|\S/g) ?? [];
  let at = 0;
  const bad = (): BadShape =>
    new BadShape('bad-macro', `"${text.trim().slice(0, 40)}" in line ${line} cannot be worked out`);
  const sum = (depth: number): number => {
    let v = product(depth);
    while (marks[at] === '+' || marks[at] === '-') v += (marks[at++] === '-' ? -1 : 1) * product(depth);
    return v;
  };
  const product = (depth: number): number => {
    let v = signed(depth);
    while (marks[at] === 'x' || marks[at] === 'X' || marks[at] === '/')
      v = marks[at++] === '/' ? v / signed(depth) : v * signed(depth);
    return v;
  };
  const signed = (depth: number): number => {
    let sign = 1;
    while (marks[at] === '-' || marks[at] === '+') if (marks[at++] === '-') sign = -sign;
    return sign * atom(depth);
  };
  const atom = (depth: number): number => {
    if (at >= marks.length || depth > DEEPEST) throw bad();
    const m = marks[at++];
    if (m === '(') {
      const v = sum(depth + 1);
      if (marks[at++] !== ')') throw bad();
      return v;
    }
    const v = m[0] === '$' ? (values.get(Number(m.slice(1))) ?? 0) : Number(m);
    if (Number.isNaN(v)) throw bad();
    return v;
  };
  const value = sum(0);
  if (at < marks.length || !Number.isFinite(value)) throw bad();
  return value;
}
