/** From loose facets to the surface that every later stage works on. */
import { Fault, InputError } from '../base/news.ts';
import type { RunContext } from '../base/run-context.ts';
import { flipCaps, hasFlat, isFlat } from './caps.ts';
import { orient } from './orient.ts';
import { splitFans } from './split-fans.ts';
import type { Soup } from './stl.ts';
import type { Mended, SurfaceMesh } from './surface-mesh.ts';
import { splitAtCorners } from './t-junctions.ts';
import { type Edges, pairEdges } from './twins.ts';
import { weldDistance, weldExact, weldNear } from './weld.ts';

/** Millimetres in one unit of the file. */
export const MM_PER_UNIT = { mm: 1, cm: 10, m: 1000, um: 0.001, inch: 25.4 } as const;

/**
 * Welds, drops facets of no area and facets drawn twice, splits edges at corners that lie on them, pairs edges, winds
 * pieces alike and outward.
 *
 * Where fans meet that share no edge (two cones tip to tip), each has a vertex of its own.
 *
 * @param soup        facets, in the file's unit
 * @param unitsScale  millimetres in one unit of the file
 * @param file        name for messages
 * @throws InputError `no-area` when no facet is left
 * @throws Cancelled
 */
export function buildMesh(soup: Soup, unitsScale: number, ctx: RunContext, file = 'part'): SurfaceMesh {
  if (!(unitsScale > 0 && unitsScale < Infinity)) throw new Fault(`units scale ${unitsScale}`);
  const facets = soup.corners.length / 9;
  const joined = join(soup.corners, ctx, file);
  ctx.step('load', 2 * facets, 3 * facets);
  const places = scaled(joined.positions, unitsScale);
  const { triangles } = joined;
  const { twin, pieceOf, pieces, turned, disagreeing } = orient(places, triangles, joined.edges.partner);
  const positions = splitFans(places, triangles, twin);
  let flipped = 0;
  for (const t of turned) flipped += t;
  ctx.step('load', 3 * facets, 3 * facets);
  return {
    positions,
    triangles,
    twin,
    pieceOf,
    pieces,
    faceOfFacet: faceOfFacet(joined.facetOfFace, facets),
    facetOfFace: joined.facetOfFace,
    bounds: boundsOf(positions),
    closed: pieces.every((p) => p.closed),
    area: pieces.reduce((s, p) => s + p.area, 0),
    volume: pieces.reduce((s, p) => s + p.volume, 0),
    mended: { ...joined.mended, flipped, nonManifoldEdges: joined.edges.crowded + disagreeing },
  };
}

interface Joined {
  /** In the file's unit, 3 a vertex. */
  positions: Float64Array;
  triangles: Uint32Array;
  edges: Edges;
  facetOfFace: Int32Array;
  mended: Pick<Mended, 'welded' | 'degenerate' | 'duplicate' | 'split'>;
}

/** Facets by their vertices, joined edge to edge. Where every edge joins two facets as it stands there is nothing to look for. */
function join(corners: Float64Array, ctx: RunContext, file: string): Joined {
  const exact = weldExact(corners, ctx);
  const { vertex: triangles, positions } = exact;
  const edges = isWhole(positions, triangles, weldDistance(corners));
  if (edges)
    return {
      positions,
      triangles,
      edges,
      facetOfFace: new Int32Array(triangles.length / 3).map((_, f) => f),
      mended: { welded: 0, degenerate: 0, duplicate: 0, split: 0 },
    };
  const welded = weldNear(exact, weldDistance(corners));
  const kept = keepFacets(welded.vertex);
  const whole = mendCaps(cornersOf(welded.vertex, kept.facetOfFace), kept, welded.positions, welded.distance);
  if (whole.facetOfFace.length === 0)
    throw new InputError({
      code: 'no-area',
      file,
      place: '',
      problem: 'none of the facets has an area',
      mend: 'export the part again',
    });
  const mended = mendJunctions(whole, welded.positions, welded.distance);
  return {
    ...renumber(mended.triangles, welded.positions),
    edges: mended.edges,
    facetOfFace: mended.facetOfFace,
    mended: {
      welded: welded.joined,
      degenerate: kept.degenerate + whole.caps,
      duplicate: kept.duplicate,
      split: mended.split,
    },
  };
}

/** The pairing of edges, when each joins two facets, no two facets are the same and none is flat; otherwise null. */
function isWhole(x: Float64Array, triangles: Uint32Array, distance: number): Edges | null {
  for (let h = 0; h < triangles.length; h += 3) {
    const [a, b, c] = [triangles[h], triangles[h + 1], triangles[h + 2]];
    if (a === b || b === c || c === a || isFlat(x, a, b, c, distance)) return null;
  }
  const edges = pairEdges(triangles, x.length / 3);
  const { partner } = edges;
  if (edges.crowded > 0 || triangles.length === 0) return null;
  for (let h = 0; h < partner.length; h += 3) {
    if (partner[h] < 0 || partner[h + 1] < 0 || partner[h + 2] < 0) return null;
    const g = (partner[h] / 3) | 0;
    if (((partner[h + 1] / 3) | 0) === g && ((partner[h + 2] / 3) | 0) === g) return null;
  }
  return edges;
}

function scaled(x: Float64Array, scale: number): Float64Array {
  if (scale !== 1) for (let i = 0; i < x.length; i++) x[i] *= scale;
  return x;
}

interface Kept {
  facetOfFace: Int32Array;
  /** Facets with two equal corners. */
  degenerate: number;
  duplicate: number;
}

function keepFacets(vertex: Uint32Array): Kept {
  const facets = vertex.length / 3;
  const facetOfFace = new Int32Array(facets);
  let [count, degenerate, duplicate] = [0, 0, 0];
  let size = 1 << Math.max(4, Math.ceil(Math.log2(2 * facets + 1)));
  const table = new Int32Array(size).fill(-1);
  size--;
  for (let f = 0; f < facets; f++) {
    const [a, b, c] = [vertex[3 * f], vertex[3 * f + 1], vertex[3 * f + 2]];
    if (a === b || b === c || c === a) {
      degenerate++;
      continue;
    }
    const lo = Math.min(a, b, c);
    const hi = Math.max(a, b, c);
    const mid = a ^ b ^ c ^ lo ^ hi;
    let h = Math.imul(lo, 0x9e3779b1) ^ Math.imul(mid, 0x85ebca6b) ^ Math.imul(hi, 0xc2b2ae35);
    h = Math.imul(h ^ (h >>> 15), 0x2c1b3c6d);
    let s = (h ^ (h >>> 13)) & size;
    let other = table[s];
    while (other >= 0 && !sameCorners(vertex, other, lo, mid, hi)) {
      s = (s + 1) & size;
      other = table[s];
    }
    if (other >= 0) {
      duplicate++;
      continue;
    }
    table[s] = f;
    facetOfFace[count++] = f;
  }
  return { facetOfFace: facetOfFace.slice(0, count), degenerate, duplicate };
}

interface Whole {
  triangles: Uint32Array;
  facetOfFace: Int32Array;
  caps: number;
}

/** A facet lower than the weld distance over its longest side has no area that was meant, and no normal to trust. */
function mendCaps(triangles: Uint32Array, kept: Kept, x: Float64Array, distance: number): Whole {
  let { facetOfFace } = kept;
  let caps = 0;
  if (hasFlat(x, triangles, distance)) {
    const { partner } = pairEdges(triangles, x.length / 3);
    const { drop, from, found } = flipCaps(x, triangles, partner, distance);
    caps = found;
    const stay: number[] = [];
    for (let f = 0; f < drop.length; f++) if (!drop[f]) stay.push(f);
    facetOfFace = Int32Array.from(stay, (f) => kept.facetOfFace[from[f]]);
    triangles = Uint32Array.from(
      { length: 3 * stay.length },
      (_, i) => triangles[3 * stay[(i / 3) | 0] + (i % 3)],
    );
  }
  return { triangles, facetOfFace, caps };
}

/**
 * A corner that was meant to lie on an edge is off it by what rounding did to the corner and to the edge's ends. Welding
 * allows its distance for each of them; so both together.
 */
const ON_EDGE = 2;

/** Facets with their edges paired, after border edges were split where corners of others lie on them. */
function mendJunctions(whole: Whole, x: Float64Array, distance: number) {
  const { triangles, facetOfFace } = whole;
  const edges = pairEdges(triangles, x.length / 3);
  const split = splitAtCorners(x, triangles, edges.partner, ON_EDGE * distance);
  if (!split) return { triangles, facetOfFace, edges, split: 0 };
  return {
    triangles: split.triangles,
    facetOfFace: Int32Array.from(split.from, (f) => facetOfFace[f]),
    edges: pairEdges(split.triangles, x.length / 3),
    split: split.edges,
  };
}

function faceOfFacet(facetOfFace: Int32Array, facets: number): Int32Array {
  const out = new Int32Array(facets).fill(-1);
  // From the back, so that a facet that became several faces names the first.
  for (let f = facetOfFace.length - 1; f >= 0; f--) out[facetOfFace[f]] = f;
  return out;
}

const cornersOf = (vertex: Uint32Array, facetOfFace: Int32Array): Uint32Array => {
  const triangles = new Uint32Array(3 * facetOfFace.length);
  for (let f = 0; f < facetOfFace.length; f++)
    for (let i = 0; i < 3; i++) triangles[3 * f + i] = vertex[3 * facetOfFace[f] + i];
  return triangles;
};

function sameCorners(vertex: Uint32Array, f: number, lo: number, mid: number, hi: number): boolean {
  const [a, b, c] = [vertex[3 * f], vertex[3 * f + 1], vertex[3 * f + 2]];
  return Math.min(a, b, c) === lo && Math.max(a, b, c) === hi && (a ^ b ^ c ^ lo ^ hi) === mid;
}

/** Vertices that faces use, in order of first use. */
function renumber(from: Uint32Array, x: Float64Array) {
  const number = new Int32Array(x.length / 3).fill(-1);
  const triangles = new Uint32Array(from.length);
  const positions = new Float64Array(x.length);
  let count = 0;
  for (let c = 0; c < from.length; c++) {
    const v = from[c];
    if (number[v] < 0) {
      number[v] = count;
      for (let k = 0; k < 3; k++) positions[3 * count + k] = x[3 * v + k];
      count++;
    }
    triangles[c] = number[v];
  }
  return { positions: positions.slice(0, 3 * count), triangles };
}

function boundsOf(x: Float64Array): SurfaceMesh['bounds'] {
  const lo: [number, number, number] = [Infinity, Infinity, Infinity];
  const hi: [number, number, number] = [-Infinity, -Infinity, -Infinity];
  for (let i = 0; i < x.length; i++) {
    const k = i % 3;
    if (x[i] < lo[k]) lo[k] = x[i];
    if (x[i] > hi[k]) hi[k] = x[i];
  }
  return [lo, hi];
}
