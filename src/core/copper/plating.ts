/**
 * Electroless plating: what the copper needs (model.md §8).
 * Cu²⁺ + 2 HCHO + 4 OH⁻ → Cu + H₂ + 2 HCOO⁻ + 2 H₂O: G. Mallory and J. Hajdu, *Electroless Plating* (1990), ch. 12.
 * Molar masses: IUPAC. The reaction is the least use; side reactions add to it.
 */

import type { PlatingReport } from '../project/report.ts';
import type { Project } from '../project/schema.ts';

const CU = 63.546;
const HCHO = 30.026;
const NAOH = 39.997;

/** @param area_mm2  copper on the part, mm² */
export function plating(area_mm2: number, copper: Project['copper']): PlatingReport {
  const area_dm2 = area_mm2 / 1e4;
  const volume_cm3 = (area_mm2 * copper.thickness_um * 1e-3) / 1e3;
  const copper_g = volume_cm3 * copper.density;
  return {
    area_dm2,
    load: area_dm2 / copper.bathVolume_L,
    copper_g,
    formaldehyde_g: (copper_g * 2 * HCHO) / CU,
    naoh_g: (copper_g * 4 * NAOH) / CU,
    time_min: (copper.thickness_um / copper.rate_um_per_h) * 60,
  };
}
