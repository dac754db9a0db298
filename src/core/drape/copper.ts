/** Copper on the surface: what every stage after draping works on. Plain data, flat arrays, part frame. */
import type { Vec3 } from '../base/vec.ts';

export type ElementKind = 'trace' | 'pad' | 'region';

/** Piece of the surface cut into small triangles, each inside one face of the part. */
export interface Patch {
  /** Part frame, mm, 3 a vertex. */
  positions: Float64Array;
  /** 3 a triangle, wound as the part's faces. */
  triangles: Uint32Array;
  /** Face of the part that each triangle lies in. */
  face: Int32Array;
}

/**
 * A patch that reaches a little past the copper's edge and carries, at each vertex, the fields
 * from which outlines, insets and fill lines are drawn as level lines.
 */
export interface FieldPatch extends Patch {
  /** Distance to the drawn outline over the surface, mm; negative inside the copper. */
  edge: Float64Array;
  /**
   * Hatch coordinate, mm: its level lines are the fill lines, and it grows by 1 mm for each mm walked
   * across them. For a trace it is the distance to the centre line, positive on its left.
   */
  hatch: Float64Array;
  /** Trace: arc length of the foot on the centre line, mm. Pad and region: 0 everywhere. */
  along: Float64Array;
}

/** Centre line of a trace: every place where it enters another face. */
export interface SurfacePath {
  /** Part frame, mm, 3 a point. */
  points: Float64Array;
  /** Face that the piece from point i to i + 1 lies in; one fewer than points. */
  faces: Int32Array;
  /** mm */
  length: number;
}

export interface CopperElement {
  id: string;
  kind: ElementKind;
  net: string;
  /** Width of a trace, mm; 0 for pads and regions. */
  width: number;
  /** Trace only. */
  path?: SurfacePath;
  /** Centre of a pad, first route point of a trace, middle of a region: where "show me" may turn. */
  anchor: Vec3;
  /** Fields on a patch that reaches past the edge. */
  field: FieldPatch;
  /** The copper itself: `field` cut off at the drawn outline; `source` is the triangle of `field` each was cut from. */
  copper: Patch & { source: Int32Array };
  /** Closed loops of the drawn outline on the surface, 3 a point, copper on the left seen from outside. */
  outline: Float64Array[];
  /** Centre line on the surface (trace), perimeter of the outline otherwise, mm. */
  length: number;
  /** The same in the drawing. */
  drawnLength: number;
  /** Copper on the surface, mm². */
  area: number;
  /** Largest |length ratio - 1| along the element's copper. */
  stretch: number;
  /** Of a drawing's element: where that is, and the ratios of length on the part to length drawn, along its line and across. */
  stretched?: { along: number; across: number; at: Vec3 };
}

export interface Copper {
  elements: CopperElement[];
}
