/** Numbers of drill files (IPC-NC-349): units, digits and which zeros are written. */
import { BadShape } from './findings.ts';

export interface DrillFormat {
  /** mm */
  unit: number;
  whole: number;
  after: number;
  /** `leading`: leading zeros are written and trailing ones left out (LZ); null where the file does not say. */
  kept: 'leading' | 'trailing' | null;
}

const METRIC: DrillFormat = { unit: 1, whole: 3, after: 3, kept: null };
const INCH: DrillFormat = { unit: 25.4, whole: 2, after: 4, kept: null };

/** Digits of the standard for a unit of so many mm. */
export const formatOf = (unit: number): DrillFormat => (unit === INCH.unit ? INCH : { ...METRIC, unit });

/** `METRIC,LZ`, `INCH,TZ,00.0000`, `M71`, `M72`; what a line does not say stays. Null for other lines. */
export function readUnits(text: string, before: DrillFormat | null): DrillFormat | null {
  const m = /^(METRIC|INCH|M71|M72)((?:,[^,]*)*)$/.exec(text);
  if (!m) return null;
  const base = m[1] === 'METRIC' || m[1] === 'M71' ? METRIC : INCH;
  // M71 and M72 in the body leave digits alone that the header gave for the same unit.
  let format: DrillFormat = before?.unit === base.unit ? before : { ...base, kept: before?.kept ?? null };
  for (const word of m[2].split(',').slice(1)) {
    const digits = /^(0+)\.(0+)$/.exec(word);
    if (word === 'LZ' || word === 'TZ') format = { ...format, kept: word === 'LZ' ? 'leading' : 'trailing' };
    else if (digits) format = { ...format, whole: digits[1].length, after: digits[2].length };
    else throw new BadShape('bad-format', `"${word.slice(0, 40)}" is no format of coordinates`);
  }
  return format;
}

/** @returns mm @throws BadShape `bad-number`, and `no-format` where the digits may be read in two ways */
export function drillNumber(word: string, { unit, whole, after, kept }: DrillFormat): number {
  const m = /^([-+]?)(\d*)(\.\d*)?$/.exec(word);
  if (!m || (m[2] === '' && (m[3] ?? '.') === '.') || m[2].length > MOST_DIGITS)
    throw new BadShape('bad-number', `"${word.slice(0, 40)}" is no coordinate`);
  if (m[3] !== undefined) return Number(word) * unit;
  const sign = m[1] === '-' ? -unit : unit;
  const leading = Number(m[2].padEnd(whole + after, '0')) / 10 ** after;
  const trailing = Number(m[2]) / 10 ** after;
  if (kept === null && leading !== trailing)
    throw new BadShape(
      'no-format',
      `"${word}" is ${leading} with LZ and ${trailing} with TZ, and the file says neither`,
    );
  return sign * (kept === 'leading' ? leading : trailing);
}

/** A double holds this many digits of any number. */
const MOST_DIGITS = 15;
