/** Lengths as SVG 2 and CSS Values write them, in px: 1 in = 96 px = 2.54 cm = 72 pt = 6 pc, 1 Q = 0.25 mm. */
import { BadShape } from './findings.ts';

/** mm */
export const PX = 25.4 / 96;

/** mm in one unit of length; px aside, they do not depend on what a px is taken for. */
const UNITS: Record<string, number> = { in: 25.4, cm: 10, mm: 1, q: 0.25, pt: 25.4 / 72, pc: 25.4 / 6 };

export interface Length {
  value: number;
  /** As written, in lower case; '' for a bare number. */
  unit: string;
}

/** @throws BadShape `bad-number` */
export function readLength(text: string): Length {
  const found = /^\s*([+-]?(?:\d+\.?\d*|\.\d+)(?:e[+-]?\d+)?)\s*(%|[a-z]*)\s*$/i.exec(text.slice(0, 64));
  const unit = found?.[2].toLowerCase() ?? '';
  const known = unit === '' || unit === 'px' || unit === '%' || unit in UNITS;
  const value = found && known ? Number(found[1]) : Number.NaN;
  if (!Number.isFinite(value))
    throw new BadShape('bad-number', `the length "${text.slice(0, 20)}" cannot be read`);
  return { value, unit };
}

/** Does it say how long it is, whatever a px is? */
export const isPhysical = (length: Length): boolean => length.unit in UNITS;

/** @param px  mm in one px */
export const millimetres = ({ value, unit }: Length, px: number): number => value * (UNITS[unit] ?? px);

/** px; a share counts of `whole` px. @throws BadShape `bad-number` */
export function lengthOf(text: string, whole: number): number {
  const length = readLength(text);
  if (length.unit === '%') return (length.value * whole) / 100;
  return isPhysical(length) ? millimetres(length, PX) / PX : length.value;
}
