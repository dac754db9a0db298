/** **field**: does the command lie in the usable field? (model.md §4) */
import type { Head } from '../project/schema.ts';

/** Largest |command| over half the field: 1 is the edge. */
export const fieldShare = (X: number, Y: number, head: Pick<Head, 'field'>): number =>
  Math.max((2 * Math.abs(X)) / head.field[0], (2 * Math.abs(Y)) / head.field[1]);
