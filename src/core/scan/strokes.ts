/** Scan paths as plain data: what the writers write. */

export type StrokeKind = 'outline' | 'fill';

/** A process class: strokes that share speed, share of power and passes. */
export interface ProcessClass {
  /** Mark speed of the command, mm/s. */
  speed: number;
  /** Share of the average power, 0 … 1. */
  power: number;
  passes: number;
}

export interface Stroke {
  kind: StrokeKind;
  /** Element id. */
  element: string;
  /** Index into the layer's classes. */
  processClass: number;
  /** Field commands, mm, 2 a point, in the order they are burnt. A closed outline repeats its first point. */
  points: Float64Array;
}

export interface LayerScan {
  /** As in the plan. */
  index: number;
  classes: ProcessClass[];
  /** In writing order. */
  strokes: Stroke[];
  /** mm of command, as are jumps. */
  markLength: number;
  jumpLength: number;
  /** s */
  time: number;
}
