/** One vertex for each place: first bit for bit, then within the weld distance. */
import type { RunContext } from '../base/run-context.ts';

/**
 * Programs that compute the same corner twice differ in the last bits of a float32; four of them, at the size of the
 * largest coordinate, is more than such a difference and far less than any edge that was meant.
 */
const WELD_ULPS = 4;
const FLOAT32_ULP = 2 ** -23;

export interface Welded {
  /** Vertex of each corner. */
  vertex: Uint32Array;
  /** 3 a vertex, in order of first appearance. */
  positions: Float64Array;
  /** Places that were joined to another one though not bit for bit the same. */
  joined: number;
  /** The distance used. */
  distance: number;
}

/** Distance below which two places are meant to be one. @param corners  3 a corner */
export function weldDistance(corners: Float64Array): number {
  let largest = 0;
  for (let i = 0; i < corners.length; i++) {
    const x = Math.abs(corners[i]);
    if (x > largest) largest = x;
  }
  return WELD_ULPS * FLOAT32_ULP * largest;
}

/** Joins places within the weld distance. @param exact  from `weldExact` */
export function weldNear(exact: Exact, distance: number): Welded {
  const to = joinNear(exact.positions, distance);
  const count = exact.positions.length / 3;
  const number = new Uint32Array(count);
  let kept = 0;
  for (let v = 0; v < count; v++) number[v] = to[v] === v ? kept++ : number[to[v]];
  if (kept === count) return { vertex: exact.vertex, positions: exact.positions, joined: 0, distance };
  const positions = new Float64Array(3 * kept);
  for (let v = 0; v < count; v++)
    if (to[v] === v) positions.set(exact.positions.subarray(3 * v, 3 * v + 3), 3 * number[v]);
  const vertex = exact.vertex.map((v) => number[v]);
  return { vertex, positions, joined: count - kept, distance };
}

export interface Exact {
  /** Vertex of each corner. */
  vertex: Uint32Array;
  /** 3 a vertex, in order of first appearance. */
  positions: Float64Array;
}

/** One vertex for corners that are the same bit for bit. @param corners  3 a corner; –0 counts as +0 */
export function weldExact(corners: Float64Array, ctx: RunContext): Exact {
  const n = corners.length / 3;
  const vertex = new Uint32Array(n);
  let positions = new Float64Array(Math.max(30, n));
  // Places as float32, as files hold them: half the bits to hash, and what that makes equal is told apart below.
  const key = new Float32Array(3);
  const bits = new Int32Array(key.buffer);
  let size = 1 << Math.max(4, Math.ceil(Math.log2(n / 3 + 1)));
  let table = new Int32Array(size).fill(-1);
  let count = 0;
  // Finalizer of MurmurHash3 (Appleby, public domain): spreads the low bits, which grids leave empty.
  const slotOf = (): number => {
    let h = Math.imul(bits[0], 0x85ebca6b);
    h = Math.imul(h ^ (h >>> 15) ^ bits[1], 0x85ebca6b);
    h = Math.imul(h ^ (h >>> 15) ^ bits[2], 0x85ebca6b);
    h = Math.imul(h ^ (h >>> 15), 0xc2b2ae35);
    return (h ^ (h >>> 16)) & (size - 1);
  };
  for (let c = 0; c < n; c++) {
    if (c % 262144 === 0) ctx.step('load', n + c, 3 * n);
    // x + 0 turns –0 into +0.
    const x = corners[3 * c] + 0;
    const y = corners[3 * c + 1] + 0;
    const z = corners[3 * c + 2] + 0;
    key[0] = x;
    key[1] = y;
    key[2] = z;
    let s = slotOf();
    let v = table[s];
    while (v >= 0 && (positions[3 * v] !== x || positions[3 * v + 1] !== y || positions[3 * v + 2] !== z)) {
      s = (s + 1) & (size - 1);
      v = table[s];
    }
    if (v < 0) {
      v = count++;
      table[s] = v;
      if (3 * count > positions.length) {
        const larger = new Float64Array(2 * positions.length);
        larger.set(positions);
        positions = larger;
      }
      positions[3 * v] = x;
      positions[3 * v + 1] = y;
      positions[3 * v + 2] = z;
      if (2 * count > size) {
        size *= 2;
        table = new Int32Array(size).fill(-1);
        for (let u = 0; u < count; u++) {
          key[0] = positions[3 * u];
          key[1] = positions[3 * u + 1];
          key[2] = positions[3 * u + 2];
          let t = slotOf();
          while (table[t] >= 0) t = (t + 1) & (size - 1);
          table[t] = u;
        }
      }
    }
    vertex[c] = v;
  }
  return { vertex, positions: positions.slice(0, 3 * count) };
}

/**
 * Joins each place to the first earlier one that stands for itself and lies within `distance`. A hash grid of cells much
 * wider than the distance, so that nearly every search stays in one cell.
 */
function joinNear(x: Float64Array, distance: number): Uint32Array {
  const count = x.length / 3;
  const to = new Uint32Array(count);
  for (let v = 0; v < count; v++) to[v] = v;
  if (!(distance > 0)) return to;
  const cell = 64 * distance;
  const size = 1 << Math.max(4, Math.ceil(Math.log2(2 * count + 1)));
  const head = new Int32Array(size).fill(-1);
  const chain = new Int32Array(count);
  const slotOf = (i: number, j: number, k: number): number => {
    let h = Math.imul(i | 0, 0x9e3779b1) ^ Math.imul(j | 0, 0x85ebca6b) ^ Math.imul(k | 0, 0xc2b2ae35);
    h = Math.imul(h ^ (h >>> 15), 0x2c1b3c6d);
    return (h ^ (h >>> 13)) & (size - 1);
  };
  const d2 = distance * distance;
  for (let v = 0; v < count; v++) {
    const [px, py, pz] = [x[3 * v], x[3 * v + 1], x[3 * v + 2]];
    let found = -1;
    for (let i = Math.floor((px - distance) / cell), i1 = Math.floor((px + distance) / cell); i <= i1; i++)
      for (let j = Math.floor((py - distance) / cell), j1 = Math.floor((py + distance) / cell); j <= j1; j++)
        for (
          let k = Math.floor((pz - distance) / cell), k1 = Math.floor((pz + distance) / cell);
          k <= k1;
          k++
        )
          for (let u = head[slotOf(i, j, k)]; u >= 0; u = chain[u]) {
            const [dx, dy, dz] = [px - x[3 * u], py - x[3 * u + 1], pz - x[3 * u + 2]];
            if (dx * dx + dy * dy + dz * dz <= d2 && (found < 0 || u < found)) found = u;
          }
    if (found >= 0) {
      to[v] = found;
      continue;
    }
    const s = slotOf(Math.floor(px / cell), Math.floor(py / cell), Math.floor(pz / cell));
    chain[v] = head[s];
    head[s] = v;
  }
  return to;
}
