/** Resistance and current of copper (model.md §8). */
import type { Project } from '../project/schema.ts';

/** Ω·mm²/m at 20 °C: IEC 60028. */
const RHO_20 = 1 / 58;
/** per K at 20 °C: IEC 60028. */
const ALPHA = 0.00393;
/** mm² in a mil². */
const MIL2 = 6.4516e-4;

/** Resistivity of the deposit, Ω·mm²/m. */
export const resistivity = (copper: Project['copper']): number =>
  RHO_20 * copper.depositFactor * (1 + ALPHA * (copper.temperature_C - 20));

/** mΩ of a strip, lengths mm: R = ρ L / (W t). */
export const stripResistance = (length: number, width: number, copper: Project['copper']): number =>
  (resistivity(copper) * length * 1e-3 * 1e3) / (width * copper.thickness_um * 1e-3);

/** A for the allowed rise, outer layer: IPC-2221, I = 0.048 ΔT^0.44 A^0.725, A in mil². A guide: thin copper on plastic is outside its data. */
export const guideCurrent = (width: number, copper: Project['copper']): number =>
  0.048 * copper.temperatureRise ** 0.44 * ((width * copper.thickness_um * 1e-3) / MIL2) ** 0.725;
