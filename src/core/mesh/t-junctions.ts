/**
 * T-junctions: a corner of one facet lies in the middle of another facet's side, and a crack opens between them though the
 * surface has none. The long side is split at that corner, so that both halves find their neighbours.
 */
import { PairMap } from '../base/pair-map.ts';
import { isFlat } from './caps.ts';
import { cornersAlong, cornerTree } from './corner-tree.ts';

export interface Split {
  /** 3 a facet, wound as before. */
  triangles: Uint32Array;
  /** Facet of `triangles` as given that each one is, or is a piece of; pieces stand together. */
  from: Uint32Array;
  /** Border edges that were split. */
  edges: number;
}

/**
 * Splits border edges at corners of other facets that lie on them. Edges of three facets and more stay as they are, and so
 * does an edge whose split would leave a facet of no height or put a third facet on an edge that two share.
 *
 * @param partner   from `pairEdges`
 * @param distance  a corner this near an edge is on it, and a facet no higher than this is flat
 * @returns null when nothing was split: then nothing was copied either
 */
export function splitAtCorners(
  x: Float64Array,
  triangles: Uint32Array,
  partner: Int32Array,
  distance: number,
): Split | null {
  const open = openEdges(triangles, partner);
  if (open.length === 0) return null;
  const found = cornersOnEdges(x, triangles, open, distance);
  if (found.size === 0) return null;
  const shared = facetsOnEdges(triangles, found);
  const out: number[] = [];
  const from: number[] = [];
  let edges = 0;
  for (let f = 0; f < triangles.length / 3; f++) {
    const h = 3 * f;
    const facet: [number, number, number] = [triangles[h], triangles[h + 1], triangles[h + 2]];
    if (found.has(h) || found.has(h + 1) || found.has(h + 2)) {
      const sides = [h, h + 1, h + 2].map((s) => free(triangles, s, found.get(s) ?? [], shared));
      const used = cut(x, { facet, sides }, distance, shared, out);
      for (const side of sides) if (side.some((v) => used.has(v))) edges++;
    } else out.push(...facet);
    while (3 * from.length < out.length) from.push(f);
  }
  return edges === 0 ? null : { triangles: Uint32Array.from(out), from: Uint32Array.from(from), edges };
}

/** Half-edges on edges of one facet, in order. */
function openEdges(t: Uint32Array, partner: Int32Array): number[] {
  const border: number[] = [];
  for (let h = 0; h < partner.length; h++) if (partner[h] < 0) border.push(h);
  const facets = new PairMap(border.length);
  for (const h of border) count(facets, t[h], t[nextOf(h)]);
  return border.filter((h) => facetsOn(facets, t[h], t[nextOf(h)]) === 1);
}

/** For each open half-edge the corners in its middle, in order along it. */
function cornersOnEdges(
  x: Float64Array,
  t: Uint32Array,
  open: readonly number[],
  distance: number,
): Map<number, number[]> {
  const tree = cornerTree(x, Uint32Array.from(new Set(open.flatMap((h) => [t[h], t[nextOf(h)]]))));
  const found = new Map<number, number[]>();
  for (const h of open) {
    const third = t[nextOf(nextOf(h))];
    const on = cornersAlong(tree, t[h], t[nextOf(h)], distance).filter((v) => v !== third);
    if (on.length > 0) found.set(h, on);
  }
  return found;
}

/** How many facets there are on each edge that has one of the found corners. */
function facetsOnEdges(t: Uint32Array, found: Map<number, number[]>): PairMap {
  const corners = new Set([...found.values()].flat());
  const facets = new PairMap(8 * corners.size);
  for (let h = 0; h < t.length; h++) {
    const [a, b] = [t[h], t[nextOf(h)]];
    if (corners.has(a) || corners.has(b)) count(facets, a, b);
  }
  return facets;
}

/** The corners of a side without those that would put the facet on an edge that two others share already. */
function free(t: Uint32Array, h: number, corners: readonly number[], shared: PairMap): number[] {
  let left = [...corners];
  for (;;) {
    const line = [t[h], ...left, t[nextOf(h)]];
    const bad = new Set<number>();
    for (let i = 1; i < line.length && left.length > 0; i++)
      if (facetsOn(shared, line[i - 1], line[i]) > 1) bad.add(line[i - 1]).add(line[i]);
    const stay = left.filter((v) => !bad.has(v));
    if (stay.length === left.length) return left;
    left = stay;
  }
}

interface Piece {
  facet: [number, number, number];
  /** Corners on side 0 (from corner 0 to 1), 1 and 2, in order along it. */
  sides: readonly (readonly number[])[];
}

/**
 * Cuts a facet from corners on its sides to the corner across, one after the other, and writes the pieces.
 * @returns the corners that were used
 */
function cut(x: Float64Array, whole: Piece, distance: number, shared: PairMap, out: number[]): Set<number> {
  const used = new Set<number>();
  const pieces = [whole];
  for (let piece = pieces.pop(); piece; piece = pieces.pop()) {
    const halves = halve(x, piece, distance, shared);
    if (!halves) {
      out.push(...piece.facet);
      continue;
    }
    used.add(halves.at);
    pieces.push(halves.second, halves.first);
  }
  return used;
}

/** The first cut that leaves two facets with a height, or null. */
function halve(
  x: Float64Array,
  { facet, sides }: Piece,
  distance: number,
  shared: PairMap,
): { at: number; first: Piece; second: Piece } | null {
  for (let k = 0; k < 3; k++) {
    const [a, b, c] = [facet[k], facet[(k + 1) % 3], facet[(k + 2) % 3]];
    const side = sides[k];
    // From the middle out, so that pieces stay as wide as they can.
    const order = [...side.keys()].sort(
      (i, j) => Math.abs(2 * i + 1 - side.length) - Math.abs(2 * j + 1 - side.length),
    );
    for (const i of order) {
      const v = side[i];
      if (facetsOn(shared, v, c) > 0) continue;
      if (isFlat(x, a, v, c, distance) || isFlat(x, v, b, c, distance)) continue;
      count(shared, v, c);
      count(shared, v, c);
      return {
        at: v,
        first: { facet: [a, v, c], sides: [side.slice(0, i), [], sides[(k + 2) % 3]] },
        second: { facet: [v, b, c], sides: [side.slice(i + 1), sides[(k + 1) % 3], []] },
      };
    }
  }
  return null;
}

const nextOf = (h: number): number => (h % 3 === 2 ? h - 2 : h + 1);
const facetsOn = (facets: PairMap, a: number, b: number): number =>
  facets.get(Math.min(a, b), Math.max(a, b), 0);
const count = (facets: PairMap, a: number, b: number): void =>
  facets.set(Math.min(a, b), Math.max(a, b), facetsOn(facets, a, b) + 1);
