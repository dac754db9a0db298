import type { Reason } from '../reach/result.ts';

/** The plan of focus layers: plain data shared by the stages after it, the report and the window. */

/** A stretch of an element's copper that one layer writes: `from ≤ c ≤ to`, where c is the cut coordinate. */
export interface Run {
  /** Index into `Copper.elements`. */
  element: number;
  /** What the cut coordinate is: arc length along the trace, or bench height at stage offset 0. */
  by: 'along' | 'height';
  /** Limits with the stitch on; -Infinity and +Infinity where nothing is cut. mm. */
  from: number;
  to: number;
  /** The same without the stitch: where this layer and no other is meant to write. */
  cutFrom: number;
  cutTo: number;
}

export interface Layer {
  /** Number in writing order, from 1. */
  index: number;
  /** Bench height in focus while the layer is written, mm. */
  focusHeight: number;
  /** Stage offset, mm, up positive: always -focusHeight, whichever axis moves. */
  stageOffset: number;
  runs: Run[];
  /** Largest |defocus| of the layer's copper, mm. */
  worstDefocus: number;
}

export interface SetupPlan {
  /** Index into `project.setups`. */
  setup: number;
  name: string;
  layers: Layer[];
  /** Index into `Copper.elements` of those that this setup writes. */
  elements: number[];
  /** Copper of those elements that no layer writes: `length` along the trace, or across heights, mm. */
  unreached: (Run & { length: number; reason: Reason })[];
}
