/** From loose facets to the surface that every later stage works on. */
import { Fault, InputError } from '../base/news.ts';
import type { RunContext } from '../base/run-context.ts';
import { orient } from './orient.ts';
import type { Soup } from './stl.ts';
import type { SurfaceMesh } from './surface-mesh.ts';
import { pairEdges } from './twins.ts';
import { weld } from './weld.ts';

/** Millimetres in one unit of the file. */
export const MM_PER_UNIT = { mm: 1, cm: 10, m: 1000, um: 0.001, inch: 25.4 } as const;

/**
 * Welds, drops facets of no area and facets drawn twice, pairs edges, winds pieces alike and outward.
 *
 * A vertex where fans meet that share no edge (two cones tip to tip) stays one vertex: whoever walks around it goes by
 * half-edges, and so stays in one fan.
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
  const welded = weld(soup.corners, ctx);
  const kept = keepFacets(welded.vertex, welded.positions, welded.distance);
  if (kept.count === 0)
    throw new InputError({
      code: 'no-area',
      file,
      place: '',
      problem: 'none of the facets has an area',
      mend: 'export the part again',
    });
  ctx.step('load', 2 * facets, 3 * facets);
  const { positions, triangles } = renumber(welded.vertex, welded.positions, kept.facetOfFace, unitsScale);
  const { partner, crowded } = pairEdges(triangles, positions.length / 3);
  const { twin, pieceOf, pieces, turned, disagreeing } = orient(positions, triangles, partner);
  let flipped = 0;
  for (const t of turned) flipped += t;
  ctx.step('load', 3 * facets, 3 * facets);
  return {
    positions,
    triangles,
    twin,
    pieceOf,
    pieces,
    faceOfFacet: kept.faceOfFacet,
    facetOfFace: kept.facetOfFace,
    bounds: boundsOf(positions),
    closed: pieces.every((p) => p.closed),
    area: pieces.reduce((s, p) => s + p.area, 0),
    volume: pieces.reduce((s, p) => s + p.volume, 0),
    mended: {
      welded: welded.joined,
      degenerate: kept.degenerate,
      duplicate: kept.duplicate,
      flipped,
      nonManifoldEdges: crowded + disagreeing,
    },
  };
}

interface Kept {
  count: number;
  faceOfFacet: Int32Array;
  facetOfFace: Int32Array;
  degenerate: number;
  duplicate: number;
}

/** A facet lower than the weld distance over its longest side has no area that was meant, and no normal to trust. */
function keepFacets(vertex: Uint32Array, x: Float64Array, distance: number): Kept {
  const facets = vertex.length / 3;
  const faceOfFacet = new Int32Array(facets).fill(-1);
  const facetOfFace = new Int32Array(facets);
  let [count, degenerate, duplicate] = [0, 0, 0];
  let size = 1 << Math.max(4, Math.ceil(Math.log2(2 * facets + 1)));
  const table = new Int32Array(size).fill(-1);
  size--;
  for (let f = 0; f < facets; f++) {
    const [a, b, c] = [vertex[3 * f], vertex[3 * f + 1], vertex[3 * f + 2]];
    if (a === b || b === c || c === a || flat(x, 3 * a, 3 * b, 3 * c, distance)) {
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
    faceOfFacet[f] = count;
    facetOfFace[count++] = f;
  }
  return { count, faceOfFacet, facetOfFace: facetOfFace.slice(0, count), degenerate, duplicate };
}

function sameCorners(vertex: Uint32Array, f: number, lo: number, mid: number, hi: number): boolean {
  const [a, b, c] = [vertex[3 * f], vertex[3 * f + 1], vertex[3 * f + 2]];
  return Math.min(a, b, c) === lo && Math.max(a, b, c) === hi && (a ^ b ^ c ^ lo ^ hi) === mid;
}

function flat(x: Float64Array, a: number, b: number, c: number, distance: number): boolean {
  const ux = x[b] - x[a],
    uy = x[b + 1] - x[a + 1],
    uz = x[b + 2] - x[a + 2];
  const vx = x[c] - x[a],
    vy = x[c + 1] - x[a + 1],
    vz = x[c + 2] - x[a + 2];
  const wx = vx - ux,
    wy = vy - uy,
    wz = vz - uz;
  const nx = uy * vz - uz * vy,
    ny = uz * vx - ux * vz,
    nz = ux * vy - uy * vx;
  const longest = Math.max(
    ux * ux + uy * uy + uz * uz,
    vx * vx + vy * vy + vz * vz,
    wx * wx + wy * wy + wz * wz,
  );
  // (2 area)² = longest² · height²
  return nx * nx + ny * ny + nz * nz <= longest * distance * distance;
}

/** Vertices that kept facets use, in order of first use, in mm. */
function renumber(vertex: Uint32Array, x: Float64Array, facetOfFace: Int32Array, scale: number) {
  const number = new Int32Array(x.length / 3).fill(-1);
  const triangles = new Uint32Array(3 * facetOfFace.length);
  const positions = new Float64Array(x.length);
  let count = 0;
  for (let f = 0; f < facetOfFace.length; f++)
    for (let i = 0; i < 3; i++) {
      const v = vertex[3 * facetOfFace[f] + i];
      if (number[v] < 0) {
        number[v] = count;
        for (let k = 0; k < 3; k++) positions[3 * count + k] = x[3 * v + k] * scale;
        count++;
      }
      triangles[3 * f + i] = number[v];
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
