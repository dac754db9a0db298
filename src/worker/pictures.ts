/** What the window's worker hands back: flat arrays ready to draw and to ask. Lengths mm, angles degrees. */

import type { InputProblem } from '../core/base/news.ts';
import type { Vec2, Vec3 } from '../core/base/vec.ts';
import type { ElementKind } from '../core/drape/copper.ts';
import type { DrapeFinding } from '../core/drape/element.ts';
import type { Bends, Ends, Note } from '../core/drawing/drawing.ts';
import type { Mended } from '../core/mesh/surface-mesh.ts';
import type { Report, RuleFinding } from '../core/project/report.ts';
import type { Reason } from '../core/reach/result.ts';

export interface PartPicture {
  /** Part frame, 9 a face: corners are not shared, so that creases stay sharp. */
  positions: Float32Array;
  normals: Float32Array;
  /** Creases and borders as segments, 6 a segment. */
  edges: Float32Array;
  triangles: number;
  vertices: number;
  pieces: number;
  closed: boolean;
  area: number;
  volume: number;
  bounds: readonly [Vec3, Vec3];
  mended: Mended;
}

export interface ElementPicture {
  id: string;
  /** Id of the drape whose drawing it comes from; null for what the project draws itself. */
  drape: string | null;
  kind: ElementKind;
  net: string;
  length: number;
  drawnLength: number;
  area: number;
  stretch: number;
  /** Of a drawing's element: where lengths differ most, and the ratios to those drawn. */
  stretched: { along: number; across: number; at: Vec3 } | null;
  anchor: Vec3;
  /** Its triangles are `first … first + count - 1`; their corners belong to it alone. */
  first: number;
  count: number;
  /** Drawn outline, closed loops, 3 a point. */
  outline: Float32Array[];
  /** Centre line of a trace. */
  path: Float32Array | null;
}

/** A drawing that was read for a drape. */
export interface DrawingPicture {
  /** Id of the drape. */
  drape: string;
  shapes: number;
  holes: number;
  layers: string[];
  /** What its reader left out or assumed. */
  notes: Note[];
  flat: FlatPicture;
  /** Rims of its holes on the part, closed lines of 3 a point; none while it is still to be laid. */
  rims: Float32Array[];
}

/** A drawing as it was drawn, mm, u to the right and v up, thinned to what can be seen. */
export interface FlatPicture {
  /** Differs where anything below differs. */
  key: string;
  /** Element of each shape on the part; null where its layer is left out. */
  ids: (string | null)[];
  /** Lower left and upper right of all of it, lines with their width; null where it is empty. */
  box: [Vec2, Vec2] | null;
  shapes: FlatShapePicture[];
  /** 2 a point, one ring or line after the other. */
  points: Float32Array;
  /** Point behind the last one of each ring or line. */
  ends: Uint32Array;
  /** 5 a hole: where it begins and ends (the same unless it is a slot), and its diameter. */
  holes: Float32Array;
}

export interface FlatShapePicture {
  /** What the drawing calls it, null where it gives no name; its layer; the net that the file names. */
  name: string | null;
  layer: string;
  net: string | null;
  /** Its rings, or its one line, are `first … first + count - 1`. */
  first: number;
  count: number;
  /** Of a line, mm; 0 for an area: outlines counter-clockwise, holes clockwise. */
  width: number;
  closed: boolean;
  ends: Ends;
  bends: Bends;
}

/** The copper of all elements, one triangle after the other: T triangles on V vertices. */
export interface CopperPicture {
  elements: ElementPicture[];
  /** Drawings that could be read, in the order of the drapes. */
  drawings: DrawingPicture[];
  /** Elements still to be laid, when the call's patience ran out. */
  pending: number;
  /** Elements that could not be laid: why. */
  problems: InputProblem[];
  /** Elements that were laid with bad news, or not at all: no way over the surface, no room. */
  findings: DrapeFinding[];
  /** Copper on the surface, mm², each place counted once; null while elements are pending. */
  covered: number | null;
  /** Part frame, 3 a vertex. */
  positions: Float32Array;
  normals: Float32Array;
  /** Vertices of the triangles, 3 each. */
  corners: Uint32Array;
  /** Face of the part under each triangle. */
  face: Int32Array;
  /** Element of each triangle. */
  element: Int32Array;
  area: Float32Array;
  /** Bench height of each vertex at stage offset 0, one array a setup. */
  heights: Float32Array[];
}

/** One setup's answers, one number a triangle of the copper. */
export interface ReachPicture {
  setup: number;
  /** Usable depth of the beam met square on, mm: half a band's width. */
  depth: number;
  incidence: Float32Array;
  /** Share of the beam that is blocked, 0 … 1. */
  blocked: Float32Array;
  /** Largest |command| over half the field: 1 is the edge. */
  field: Float32Array;
  fluence: Float32Array;
  usable: Float32Array;
  /** Bit i: `REASONS[i]` fails. */
  fails: Uint8Array;
}

export interface LayerPicture {
  index: number;
  focusHeight: number;
  worstDefocus: number;
  elements: number;
}

/** `layerOf` of copper that another setup writes. */
export const ELSEWHERE = -2;

export interface PlanPicture {
  setup: number;
  layers: LayerPicture[];
  /** Layer of each triangle, counting from 0; -1 where none writes it, `ELSEWHERE` where another setup does. */
  layerOf: Int16Array;
  unreached: { element: number; length: number; reason: Reason }[];
}

/** How the copper is joined, against its nets and against a netlist. */
export interface ConnectionsPicture {
  rules: RuleFinding[];
  /** Why the netlist could not be used. */
  problems: InputProblem[];
}

/** What was worked out for a net. */
export interface NetPicture {
  name: string;
  /** Parts of it that do not touch. */
  pieces: number;
  /** mm² */
  area: number;
  /** Largest resistance between two of its pads, mΩ; null where no two of them are joined. */
  most: { from: string; to: string; value: number } | null;
  /** Guide for a steady current, A; 0 where nothing says. */
  current: number;
}

/** What stands under the pointer. */
export interface Probe {
  point: Vec3;
  /** The point as a project keeps it. */
  at: [number, number, number];
  normal: Vec3;
  face: number;
  height: number;
  incidence: number;
  /** Distance along the beam to what stands in its way; null where nothing does. */
  blockedAfter: number | null;
}

export interface LiveRun {
  /** Way over the surface, 3 a point; null when there is none. */
  points: Float32Array | null;
  length: number;
  /** Known to be the shortest. */
  sure: boolean;
}

export interface ExportResult {
  report: Report;
  files: { path: string; bytes: Uint8Array }[];
}
