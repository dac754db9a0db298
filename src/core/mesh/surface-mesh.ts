/** The part's surface as every later stage sees it: welded, oriented, with its neighbours known. */

export interface Mended {
  /** Vertices joined to another one that was not bit for bit the same, but within the weld distance. */
  welded: number;
  /**
   * Facets of no area left out. Where one stood with a corner on a neighbour's side, the neighbour is split at that
   * corner, so that no crack opens: its facet then has two faces.
   */
  degenerate: number;
  /** Facets on the same three vertices as an earlier one left out. */
  duplicate: number;
  /** Facets turned over so that their piece is consistent and faces outward. */
  flipped: number;
  /** Border edges split where another facet's corner lay on them (T-junctions): the facet then has two faces or more. */
  split: number;
  /** Edges shared by three or more facets, or by two that cannot agree: treated as borders. */
  nonManifoldEdges: number;
}

/** A connected piece of the surface, joined across shared edges. */
export interface Piece {
  faces: number;
  closed: boolean;
  /** mm² */
  area: number;
  /** mm³, signed: negative for the wall of a cavity; 0 for an open piece. */
  volume: number;
}

/**
 * Triangle mesh with half-edges. Half-edge `h = 3 f + i` runs from corner i to corner (i + 1) % 3
 * of face f, counter-clockwise seen from outside the material.
 */
export interface SurfaceMesh {
  /** Part frame, mm, 3 a vertex. */
  readonly positions: Float64Array;
  /** Vertex numbers, 3 a face. */
  readonly triangles: Uint32Array;
  /** Opposite half-edge, -1 at a border (open or non-manifold). */
  readonly twin: Int32Array;
  /** Piece of each face. */
  readonly pieceOf: Int32Array;
  readonly pieces: readonly Piece[];
  /** Facet number in the file → face number (the first of several where it was split), -1 where the facet was left out. */
  readonly faceOfFacet: Int32Array;
  /** Face number → facet number in the file. */
  readonly facetOfFace: Int32Array;
  readonly bounds: readonly [readonly [number, number, number], readonly [number, number, number]];
  /** All pieces closed. */
  readonly closed: boolean;
  /** mm² */
  readonly area: number;
  /** mm³, sum over closed pieces. */
  readonly volume: number;
  readonly mended: Mended;
}

export const next = (h: number): number => (h % 3 === 2 ? h - 2 : h + 1);
export const previous = (h: number): number => (h % 3 === 0 ? h + 2 : h - 1);
export const faceOf = (h: number): number => (h / 3) | 0;
