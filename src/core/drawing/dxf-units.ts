/** What $INSUNITS says: mm in one unit of the drawing. */
import { InputError } from '../base/news.ts';
import type { DrawingOptions } from './drawing.ts';
import type { DxfFile } from './dxf-groups.ts';

const INCH = 25.4;
/** Light years are Julian years of light; parsecs are 648000/π astronomical units. */
const ASTRONOMICAL = 149_597_870_700_000;

const UNITS: Record<number, number> = {
  1: INCH,
  2: 12 * INCH,
  3: 63_360 * INCH,
  4: 1,
  5: 10,
  6: 1000,
  7: 1e6,
  8: 1e-6 * INCH,
  9: 1e-3 * INCH,
  10: 36 * INCH,
  11: 1e-7,
  12: 1e-6,
  13: 1e-3,
  14: 100,
  15: 1e4,
  16: 1e5,
  17: 1e12,
  18: ASTRONOMICAL,
  19: 299_792_458_000 * 365.25 * 86_400,
  20: (ASTRONOMICAL * 648_000) / Math.PI,
};

/** @throws InputError `no-units` when the header says none and the options neither */
export function unitOf(dxf: DxfFile, options: DrawingOptions, file: string): number {
  const said = dxf.units ? UNITS[dxf.units.value] : undefined;
  const unit = said ?? options.unit;
  if (unit !== null) return unit;
  throw new InputError({
    code: 'no-units',
    file,
    place: dxf.units ? `line ${dxf.units.line}` : '',
    problem: 'the drawing does not say in which unit it is drawn',
    mend: 'say "units" in its drape (mm, cm, m, um or inch), or set the unit where the drawing is made',
  });
}
