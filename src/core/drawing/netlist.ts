/** Netlists in IPC-D-356A: records of 80 columns, one for each pad, hole and via, with the net that it belongs to. */
import { InputError } from '../base/news.ts';
import type { RunContext } from '../base/run-context.ts';
import type { Note } from './drawing.ts';
import { lines } from './drill-lines.ts';
import { BadShape, type Findings, findings, inReach } from './findings.ts';

export interface NetPoint {
  /** 317, 327, 367. */
  kind: 'through' | 'surface' | 'tooling';
  /** null where the record names none, or says that there is none (`N/C`). */
  net: string | null;
  part: string | null;
  pin: string | null;
  /** In the middle of a net, not at its end. */
  middle: boolean;
  /** mm, u to the right and v up, as drawings are. */
  at: readonly [number, number];
  /** Width and height before the turn, mm; null where the record has none. Round: the same twice. */
  size: readonly [number, number] | null;
  /** Degrees counter-clockwise; null where the unit of angles is not known. */
  turn: number | null;
  /** mm; `plated` null where the record does not say. */
  hole: { diameter: number; plated: boolean | null } | null;
  /** Side from which it can be reached: 0 both, 1 the first, and so on; null where the record does not say. */
  access: number | null;
  /** Covered by solder mask on: 0 none, 1 first side, 2 second, 3 both; null where the record does not say. */
  mask: number | null;
  place: string;
}

export interface Netlist {
  file: string;
  points: NetPoint[];
  notes: Note[];
}

const MEND = 'mend the record at this place or export the netlist again';

/**
 * @param unit  mm in one count of the file, for a file without `P  UNITS`; null asks for it
 * @throws InputError `not-netlist`, `no-units`, `bad-number`, `bad-units`, `out-of-range`, `too-large`
 */
export function readNetlist(text: string, file: string, unit: number | null, ctx: RunContext): Netlist {
  const found = findings(file, MEND);
  const points: NetPoint[] = [];
  /** Long names: `P  NNAME1 …` */
  const names = new Map<string, string>();
  let units = unit === null ? null : { mm: unit, degrees: true };
  let said = false;
  let known = false;
  let ended = false;
  let last: NetPoint | null = null;
  for (const { text: raw, line } of lines(text)) {
    if (line % STRIDE === 0) ctx.step('load', line, 0);
    const record = raw.trimEnd();
    const place = `line ${line}`;
    const code = record.slice(0, 3);
    if (record === '' || record[0] === 'C') continue;
    if (code === '999') {
      ended = true;
      break;
    }
    if (record[0] === 'P') {
      known = true;
      const name = /^P\s+(NNAME\d+)\s+(\S.*)$/.exec(record);
      if (name) names.set(name[1], name[2].trim());
      if (/^P\s+UNITS/.test(record)) {
        units = found.at(place, () => readUnits(record)) ?? units;
        said = true;
      }
      continue;
    }
    const kind = KINDS.get(code);
    const goesOn = /^0[1-9]7$/.test(code);
    if (!kind && !goesOn) {
      found.note('unknown-record', place, `"${record.slice(0, 20)}" is not understood and left out.`);
      continue;
    }
    known = true;
    if (goesOn && !last) {
      found.note('no-record', place, 'Continued records without one before them are left out.');
      continue;
    }
    if (!units) {
      found.settle();
      throw noUnits(file);
    }
    if (!said) found.note('units-given', 'start', 'The file has no unit; the one that was given is taken.');
    found.spend(RECORD_COST);
    const { mm, degrees } = units;
    const next = found.at(place, () =>
      readRecord(record, kind ?? null, goesOn ? last : null, { mm, degrees, names, place, found }),
    );
    if (!next) continue;
    points.push(next);
    last = next;
  }
  found.settle();
  if (!known)
    throw new InputError({
      code: 'not-netlist',
      file,
      place: '',
      problem: 'the file holds no record of a netlist',
      mend: 'choose a netlist in IPC-D-356A',
    });
  if (!ended) found.note('no-end', 'end', 'The file stops without 999: it may have been cut short.');
  return { file, points, notes: found.notes() };
}

const STRIDE = 65536;
/** What a record takes in memory, in points. */
const RECORD_COST = 8;

const KINDS = new Map<string, NetPoint['kind']>([
  ['317', 'through'],
  ['327', 'surface'],
  ['367', 'tooling'],
]);

const noUnits = (file: string): InputError =>
  new InputError({
    code: 'no-units',
    file,
    place: '',
    problem: 'records come before the units (P  UNITS CUST 0, 1 or 2)',
    mend: 'say what one count is',
  });

/** Counts of 0.0001 inch or 0.001 mm. */
function readUnits(record: string): { mm: number; degrees: boolean } {
  const m = /^P\s+UNITS\s+CUST\s*([012])?$/.exec(record);
  if (!m) throw new BadShape('bad-units', `"${record.slice(0, 40)}" is not one of CUST 0, 1 and 2`);
  return { mm: m[1] === '1' ? 0.001 : 0.00254, degrees: m[1] !== '2' };
}

/** @param before  for a continued record: what it leaves out is taken from there */
function readRecord(
  record: string,
  kind: NetPoint['kind'] | null,
  before: NetPoint | null,
  {
    mm,
    degrees,
    names,
    place,
    found,
  }: {
    mm: number;
    degrees: boolean;
    names: ReadonlyMap<string, string>;
    place: string;
    found: Findings;
  },
): NetPoint | null {
  /** Columns as the standard counts them, from 1. */
  const columns = (from: number, to: number): string => record.slice(from - 1, to).trim();
  const number = (from: number, to: number): number | null => {
    const word = columns(from, to).replace(/\s+/g, '');
    if (word === '' || word === '+' || word === '-') return null;
    if (!/^[-+]?\d+$/.test(word))
      throw new BadShape('bad-number', `"${word}" in columns ${from} to ${to} is no number`);
    return Number(word);
  };
  const letter = (column: number, wanted: string): boolean => {
    const c = columns(column, column);
    if (c !== '' && c !== wanted)
      throw new BadShape('bad-number', `column ${column} holds "${c}" and not ${wanted}`);
    return c === wanted;
  };
  const length = (from: number, to: number): number | null => {
    const v = number(from, to);
    return v === null ? null : inReach(v * mm);
  };
  const name = columns(4, 17);
  const x = letter(42, 'X') ? length(43, 49) : null;
  const y = letter(50, 'Y') ? length(51, 57) : null;
  if (x === null || y === null) {
    if (!before) throw new BadShape('bad-number', 'the record has no place in columns 42 to 57');
    found.note('continued', place, 'Continued records without a place of their own are left out.');
    return null;
  }
  const diameter = letter(33, 'D') ? length(34, 37) : null;
  const plated = columns(38, 38);
  const width = letter(58, 'X') ? length(59, 62) : null;
  const height = letter(63, 'Y') ? length(64, 67) : null;
  const turned = letter(68, 'R') ? number(69, 71) : null;
  if (turned && !degrees)
    found.note(
      'radians',
      place,
      'Turns of pads in radians have no digits that are known; they are left out.',
    );
  return {
    kind: kind ?? before!.kind,
    net: name === '' ? (before?.net ?? null) : name === 'N/C' ? null : (names.get(name) ?? name),
    part: columns(21, 26) || (before?.part ?? null),
    pin: columns(28, 31) || (before?.pin ?? null),
    middle: columns(32, 32) === 'M',
    at: [x, y],
    size: width === null ? (before?.size ?? null) : [width, height === null || height === 0 ? width : height],
    turn: turned === null ? (before?.turn ?? 0) : degrees || turned === 0 ? turned : null,
    hole:
      diameter === null
        ? (before?.hole ?? null)
        : { diameter, plated: plated === 'P' ? true : plated === 'U' ? false : null },
    access: letter(39, 'A') ? number(40, 41) : (before?.access ?? null),
    mask: letter(73, 'S') ? number(74, 74) : (before?.mask ?? null),
    place,
  };
}
