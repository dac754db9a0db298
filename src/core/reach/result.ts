/** What the beam can write, place by place. A sample is one triangle of an element's copper patch. */

export const REASONS = ['focus', 'incidence', 'shade', 'field', 'dose'] as const;
/** Why a place cannot be written (model.md §4). */
export type Reason = (typeof REASONS)[number];

/** Samples of one element in one setup, arrays of one number a triangle of `CopperElement.copper` (two for `command`). */
export interface ElementReach {
  /** Bench height of the sample's middle at stage offset 0, mm. */
  height: Float64Array;
  /** Least and greatest bench height over the triangle, mm. */
  low: Float64Array;
  high: Float64Array;
  /** Angle between outward normal and the way to the head, radians. */
  incidence: Float64Array;
  /** Share of the beam's power that is blocked, 0 … 1; without `limits.cone` 0 or 1. */
  blocked: Float64Array;
  /** Field command, mm, 2 a sample. */
  command: Float64Array;
  /** Peak fluence, J/cm². */
  fluence: Float64Array;
  /** Usable depth there: half-depth less the height uncertainty, mm; 0 where there is none. */
  usable: Float64Array;
  /** J/cm² below which nothing is activated: a place that stays below it even in focus is not worth a layer. */
  activation: number;
  /** Bit i is set where check `REASONS[i]` fails. Before planning, bit 0 (focus) is never set. */
  fails: Uint8Array;
}

export interface SetupReach {
  /** Index into `project.setups`. */
  setup: number;
  name: string;
  /** One an element of the copper, same order. */
  elements: ElementReach[];
}
