/** Pieces wound alike and outward. */
import { nestingDepth } from './nesting.ts';
import type { Piece } from './surface-mesh.ts';

export interface Oriented {
  twin: Int32Array;
  pieceOf: Int32Array;
  pieces: Piece[];
  /** 1 where the facet is turned over against the file. */
  turned: Uint8Array;
  /** Edges of two facets that cannot be wound alike, as on a one-sided strip: now borders. */
  disagreeing: number;
}

/**
 * Turns facets over, in place in `triangles`, until each piece is wound alike: a flood over shared edges. A closed piece
 * then faces out of the material: outward where an even number of other closed pieces surround it, inward (the wall of a
 * cavity) where an odd number do. An open piece keeps the winding that most of its facets have in the file.
 *
 * @param partner  from `pairEdges`; the same numbering of half-edges
 */
export function orient(positions: Float64Array, triangles: Uint32Array, partner: Int32Array): Oriented {
  const faces = triangles.length / 3;
  const twin = partner.slice();
  const pieceOf = new Int32Array(faces).fill(-1);
  const turned = new Uint8Array(faces);
  const queue = new Uint32Array(faces);
  const turnedIn: number[] = [];
  const sizes: number[] = [];
  const open: boolean[] = [];
  let disagreeing = 0;
  for (let seed = 0; seed < faces; seed++) {
    if (pieceOf[seed] >= 0) continue;
    const piece = sizes.length;
    let [head, tail, flips] = [0, 0, 0];
    let border = false;
    pieceOf[seed] = piece;
    queue[tail++] = seed;
    while (head < tail) {
      const f = queue[head++];
      for (let h = 3 * f; h < 3 * f + 3; h++) {
        const o = twin[h];
        if (o < 0) {
          border = true;
          continue;
        }
        const g = (o / 3) | 0;
        // In the file both run from the same vertex: one of the two must be turned.
        const against = triangles[h] === triangles[o] ? 1 : 0;
        if (pieceOf[g] < 0) {
          pieceOf[g] = piece;
          turned[g] = turned[f] ^ against;
          flips += turned[g];
          queue[tail++] = g;
        } else if ((turned[g] ^ turned[f]) !== against) {
          twin[h] = twin[o] = -1;
          disagreeing++;
          border = true;
        }
      }
    }
    sizes.push(tail);
    turnedIn.push(flips);
    open.push(border);
  }
  const volume = signedVolumes(positions, triangles, pieceOf, turned, sizes.length);
  const depth = nestingDepth(positions, triangles, pieceOf, open);
  const turnPiece = sizes.map((n, p) =>
    open[p] ? 2 * turnedIn[p] > n : depth[p] % 2 === 0 ? volume[p] < 0 : volume[p] > 0,
  );
  for (let f = 0; f < faces; f++) if (turnPiece[pieceOf[f]]) turned[f] ^= 1;
  turnOver(triangles, twin, turned);
  const area = areas(positions, triangles, pieceOf, sizes.length);
  const pieces = sizes.map(
    (n, p): Piece => ({
      faces: n,
      closed: !open[p],
      area: area[p],
      volume: open[p] ? 0 : turnPiece[p] ? -volume[p] : volume[p],
    }),
  );
  return { twin, pieceOf, pieces, turned, disagreeing };
}

/** Swaps the last two corners of turned facets; half-edges 0 and 2 then change places, 1 stays. */
function turnOver(triangles: Uint32Array, twin: Int32Array, turned: Uint8Array): void {
  const moved = (h: number): number =>
    h >= 0 && turned[(h / 3) | 0] ? (h % 3 === 1 ? h : h % 3 === 0 ? h + 2 : h - 2) : h;
  for (let f = 0; f < turned.length; f++) {
    const h = 3 * f;
    if (turned[f]) {
      const c = triangles[h + 1];
      triangles[h + 1] = triangles[h + 2];
      triangles[h + 2] = c;
      const t = twin[h];
      twin[h] = twin[h + 2];
      twin[h + 2] = t;
    }
    for (let i = h; i < h + 3; i++) twin[i] = moved(twin[i]);
  }
}

/** Divergence theorem over each piece, about one of its own vertices, so that a piece far from the origin keeps its digits. */
function signedVolumes(
  x: Float64Array,
  t: Uint32Array,
  pieceOf: Int32Array,
  turned: Uint8Array,
  count: number,
): Float64Array {
  const volume = new Float64Array(count);
  const about = new Int32Array(count).fill(-1);
  for (let f = 0; f < pieceOf.length; f++) {
    const p = pieceOf[f];
    const a = 3 * t[3 * f];
    if (about[p] < 0) about[p] = a;
    const o = about[p];
    const b = 3 * t[3 * f + 1];
    const c = 3 * t[3 * f + 2];
    const ax = x[a] - x[o],
      ay = x[a + 1] - x[o + 1],
      az = x[a + 2] - x[o + 2];
    const bx = x[b] - x[o],
      by = x[b + 1] - x[o + 1],
      bz = x[b + 2] - x[o + 2];
    const cx = x[c] - x[o],
      cy = x[c + 1] - x[o + 1],
      cz = x[c + 2] - x[o + 2];
    const six = ax * (by * cz - bz * cy) + ay * (bz * cx - bx * cz) + az * (bx * cy - by * cx);
    volume[p] += (turned[f] ? -six : six) / 6;
  }
  return volume;
}

function areas(x: Float64Array, t: Uint32Array, pieceOf: Int32Array, count: number): Float64Array {
  const area = new Float64Array(count);
  for (let f = 0; f < pieceOf.length; f++) {
    const a = 3 * t[3 * f];
    const b = 3 * t[3 * f + 1];
    const c = 3 * t[3 * f + 2];
    const ux = x[b] - x[a],
      uy = x[b + 1] - x[a + 1],
      uz = x[b + 2] - x[a + 2];
    const vx = x[c] - x[a],
      vy = x[c + 1] - x[a + 1],
      vz = x[c + 2] - x[a + 2];
    const nx = uy * vz - uz * vy,
      ny = uz * vx - ux * vz,
      nz = ux * vy - uy * vx;
    area[pieceOf[f]] += Math.sqrt(nx * nx + ny * ny + nz * nz) / 2;
  }
  return area;
}
