/** **dose**: is the peak fluence between activation with its margin and damage? (model.md §4) */
import type { Material } from '../project/schema.ts';

export const doseHolds = (fluence: number, material: Material): boolean =>
  fluence >= material.activationFluence * material.doseMargin && fluence <= material.damageFluence;
