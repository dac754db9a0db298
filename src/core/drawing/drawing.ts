/**
 * A flat drawing as plain shapes: what every reader gives and draping takes. Lengths in mm, u to the right and v up
 * (`v = -y` for SVG), whatever the file's own unit and axes are.
 */

/** Words of SVG 2 (stroke-linecap, stroke-linejoin). */
export type Ends = 'round' | 'square' | 'butt';
export type Bends = 'round' | 'miter' | 'bevel';

/** A line of constant width. */
export interface Stroke {
  kind: 'stroke';
  /** 2 a point; curves are flattened. At least two points; a closed stroke does not repeat its first. */
  points: Float64Array;
  closed: boolean;
  /** mm, above 0 */
  width: number;
  ends: Ends;
  bends: Bends;
}

/** A filled figure. */
export interface Area {
  kind: 'area';
  /**
   * 2 a point, the first not repeated. Outlines run counter-clockwise, holes clockwise; rings cross neither themselves nor
   * each other: fill rules and polarity are worked out by the reader.
   */
  rings: Float64Array[];
}

export interface Shape {
  /** The drawing's own name for it (SVG id, DXF handle is none); null where it gives none. */
  id: string | null;
  /** Layer, group or class of the file; '' where it knows none. */
  layer: string;
  /** Net that the file names (Gerber X2 .N); null where it names none. */
  net: string | null;
  /** What it is for: strokes are traces, flashed or named pads are pads, other areas are regions. */
  role: 'trace' | 'pad' | 'region';
  /** Pin that the file names, as `part-pin`; null where it names none. */
  pin: string | null;
  figure: Stroke | Area;
  /** Where in the file, for messages: `line 12`, `path "ring"`. */
  place: string;
}

/** A drilled hole: shown, and kept out of copper. */
export interface Hole {
  /** Centre, or the start of a slot, mm. */
  at: readonly [number, number];
  /** End of a slot; the same as `at` for a round hole. */
  to: readonly [number, number];
  /** mm */
  diameter: number;
  /** null where the file does not say. */
  plated: boolean | null;
  place: string;
}

/** What a reader left out or had to assume; one for each kind of thing, with the first place and how often. */
export interface Note {
  code: string;
  place: string;
  /** One sentence for a person. */
  text: string;
  count: number;
}

export interface Drawing {
  file: string;
  shapes: Shape[];
  holes: Hole[];
  /** Layers in order of first appearance, those without shapes too. */
  layers: string[];
  notes: Note[];
}

export interface DrawingOptions {
  /** mm in one unit of the file, for a file that does not say; null asks for it (`InputError` `no-units`). */
  unit: number | null;
  /** Curves stay within this of their chords, mm. */
  tolerance: number;
  /** Width of lines that have none, mm. */
  lineWidth: number;
}

export const DEFAULTS: DrawingOptions = { unit: null, tolerance: 0.005, lineWidth: 0.5 };

/** A reader stops at this many flattened points with `InputError` `too-large`: a drawing of a circuit has far fewer. */
export const MOST_POINTS = 4_000_000;
