/** The report (`report.json`), as job.md fixes it. Lengths mm, angles degrees, fluence J/cm². */
import type { Vec3 } from '../base/vec.ts';

export interface Report {
  format: 'beamdrape-report';
  version: 1;
  project: string;
  ok: boolean;
  /** Fields of the project file that this version does not know, by JSON path. */
  unknownFields: string[];
  part: {
    triangles: number;
    vertices: number;
    pieces: number;
    closed: boolean;
    area: number;
    volume: number;
    bounds: [Vec3, Vec3];
    mended: {
      welded: number;
      degenerate: number;
      duplicate: number;
      flipped: number;
      split: number;
      nonManifoldEdges: number;
    };
  };
  beam: {
    waistRadius_um: number;
    rayleighRange: number;
    pulseEnergy_uJ: number;
    peakPower_kW: number;
    halfDepth: number;
    truncated: boolean;
  };
  /** Drawings as they were read, in the order of the drapes; left out where the circuit has none. */
  drawings?: DrawingReport[];
  elements: ElementReport[];
  rules: RuleFinding[];
  setups: SetupReport[];
  unreached: { length: number; elements: string[] };
  collisions: { setup: string; layer: number; height: number; at: Vec3 }[];
  nets: NetReport[];
  plating: PlatingReport;
  proof: ProofReport | null;
  timing?: Record<string, number>;
}

export interface DrawingReport {
  /** Id of the drape, and the file. */
  drape: string;
  file: string;
  shapes: number;
  holes: number;
  layers: string[];
  /** What was left out or had to be assumed: where first, and how often. */
  notes: { code: string; place: string; text: string; count: number }[];
}

export interface ElementReport {
  id: string;
  kind: string;
  net: string;
  length: number;
  area: number;
  drawnLength: number;
  stretch: number;
  /** Of a drawing's element where it is stretched most: lengths on the part over lengths drawn, along its line and across. */
  stretched?: { along: number; across: number; at: Vec3 };
  setups: string[];
  layers: number[];
  focus: { ok: boolean; worst: number; at: Vec3 };
  incidence: { ok: boolean; worst: number; at: Vec3 };
  shade: { ok: boolean; share: number; at?: Vec3 };
  field: { ok: boolean; worst: number; at?: Vec3 };
  dose: { ok: boolean; min: number; max: number; at?: Vec3 };
}

export interface RuleFinding {
  rule: string;
  level: 'error' | 'warning';
  value: number;
  limit: number;
  elements: string[];
  at: Vec3;
  /** What a measured value does not say: an element that could not be laid, or not as drawn. `value` and `limit` are 0 then. */
  text?: string;
}

export interface SetupReport {
  name: string;
  pose: { rotate: readonly number[]; move: Vec3 };
  layers: {
    index: number;
    focusHeight: number;
    /** What to set: +focusHeight where the head moves, -focusHeight where the stage does. */
    zOffset: number;
    zMoves: 'stage' | 'head';
    worstDefocus: number;
    copperArea: number;
    /** Bench heights of the layer's copper at stage offset 0. */
    heights: [number, number];
    /** Commands of the layer's strokes: least and greatest X, Y. */
    extent: [[number, number], [number, number]];
    markLength: number;
    jumpLength: number;
    time: number;
    classes: { speed: number; power: number; passes: number }[];
    files: string[];
  }[];
}

export interface NetReport {
  name: string;
  pieces: number;
  area: number;
  /** Of all centre lines of its traces, mm. */
  length: number;
  /** From the first pad of a piece to every other. The true value of the copper's shape is at most `within` off. */
  resistance_mohm: { from: string; to: string; value: number; within: number }[];
  current_A: number;
}

export interface PlatingReport {
  area_dm2: number;
  load: number;
  copper_g: number;
  formaldehyde_g: number;
  naoh_g: number;
  time_min: number;
}

export interface ProofReport {
  ok: boolean;
  /** Least share of an element's drawn area that is activated. */
  covered: number;
  /** Element that `covered` is about. */
  coveredElement: string;
  focus: number;
  stray_mm2: number;
  /** Elements not activated, or broken (one id), and pairs that no longer touch (two ids). */
  opens: string[][];
  /** Pairs of nets that activated copper joins. */
  shorts: string[][];
  /** Number of files read back. */
  files: number;
  /** What is wrong with the set of files itself, a sentence each, such as a file that is missing. Any of them fails. */
  findings: string[];
}
