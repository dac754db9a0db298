/**
 * What hangs together on the part: pulses whose activated ellipses overlap are one piece of copper. From that, the
 * pieces of each element, which elements touch, and which nets are joined.
 */
import type { SurfaceMesh } from '../mesh/surface-mesh.ts';
import { SHEET_REACH } from './burn.ts';
import type { BurntPulses } from './burnt-pulses.ts';
import { bucketOf, type CopperGrid, distanceToCopper } from './copper-grid.ts';
import { sets } from './sets.ts';

/** mm: a pulse this far from an element's copper still lands on it, for commands in the files are rounded. */
const LANDS = 1e-3;

export interface Joins {
  /**
   * Pieces into which the activated part of each element falls; 0 when nothing of it is activated. A piece counts when
   * a pulse of it lands on the element: the rim of a neighbour's pulses that reaches over is none.
   */
  pieces: Int32Array;
  /** Pairs of elements of which pieces that count touch: lower index · elements + higher index. */
  touching: Set<number>;
  /** Pairs of nets that activated copper joins, lower net · nets + higher net. */
  joined: Set<number>;
}

/**
 * @param elements  how many
 * @param netOf     net number of each element
 * @param nets      how many
 */
export function findJoins(
  p: BurntPulses,
  mesh: SurfaceMesh,
  grid: CopperGrid,
  elements: number,
  netOf: Int32Array,
  nets: number,
): Joins {
  const whole = sets(p.count);
  const parts = sets(p.element.length); // one node for each element that a pulse touches
  const meetings: number[] = []; // nodes of unlike elements that touch, two a meeting
  for (let i = 0; i < p.count; i++)
    for (let k = p.start[i]; k < p.start[i + 1]; k++)
      for (let l = k + 1; l < p.start[i + 1]; l++) meetings.push(k, l);

  eachNeighbour(p, (i, j) => {
    if (known(p, whole, parts, i, j) || !overlap(p, mesh, i, j)) return;
    whole.join(i, j);
    for (let k = p.start[i]; k < p.start[i + 1]; k++)
      for (let l = p.start[j]; l < p.start[j + 1]; l++)
        if (p.element[k] === p.element[l]) parts.join(k, l);
        else meetings.push(k, l);
  });

  const { pieces, counts } = countPieces(p, mesh, grid, parts, elements);
  const touching = new Set<number>();
  for (let m = 0; m < meetings.length; m += 2) {
    const [k, l] = [meetings[m], meetings[m + 1]];
    const [e, f] = [p.element[k], p.element[l]];
    if (counts[parts.find(k)] && counts[parts.find(l)])
      touching.add(Math.min(e, f) * elements + Math.max(e, f));
  }
  return { pieces, touching, joined: joinedNets(p, whole, netOf, nets) };
}

/** Pieces of each element, and which roots are pieces that count. */
function countPieces(p: BurntPulses, mesh: SurfaceMesh, grid: CopperGrid, parts: Group, elements: number) {
  const nodes = p.element.length;
  const raw = new Int32Array(elements);
  for (let k = 0; k < nodes; k++) if (parts.find(k) === k) raw[p.element[k]]++;
  const counts = new Uint8Array(nodes);
  for (let i = 0; i < p.count; i++)
    for (let k = p.start[i]; k < p.start[i + 1]; k++) {
      const root = parts.find(k);
      const e = p.element[k];
      if (counts[root]) continue;
      const lands = () =>
        distanceToCopper(
          grid,
          p.hit[3 * i],
          p.hit[3 * i + 1],
          p.hit[3 * i + 2],
          crossOf(mesh, p.face[i]),
          LANDS,
          e,
        ) <= LANDS;
      if (raw[e] === 1 || lands()) counts[root] = 1;
    }
  const pieces = new Int32Array(elements);
  for (let k = 0; k < nodes; k++) if (counts[k]) pieces[p.element[k]]++;
  return { pieces, counts };
}

function joinedNets(p: BurntPulses, whole: Group, netOf: Int32Array, nets: number): Set<number> {
  const netsOf = new Map<number, Set<number>>(); // by the lowest pulse of a piece of copper
  for (let i = 0; i < p.count; i++)
    for (let k = p.start[i]; k < p.start[i + 1]; k++) {
      const root = whole.find(i);
      const found = netsOf.get(root);
      if (found) found.add(netOf[p.element[k]]);
      else netsOf.set(root, new Set([netOf[p.element[k]]]));
    }
  const joined = new Set<number>();
  for (const found of netsOf.values()) {
    const list = [...found].sort((a, b) => a - b);
    for (let a = 0; a < list.length; a++)
      for (let b = a + 1; b < list.length; b++) joined.add(list[a] * nets + list[b]);
  }
  return joined;
}

type Group = ReturnType<typeof sets>;

/** Whether an overlap of i and j would tell nothing new: the same piece already, and one element each, the same. */
function known(p: BurntPulses, whole: Group, parts: Group, i: number, j: number): boolean {
  const a = p.start[i];
  const b = p.start[j];
  const [na, nb] = [p.start[i + 1] - a, p.start[j + 1] - b];
  if (na > 1 || nb > 1) return false;
  if (na === 1 && nb === 1 && (p.element[a] !== p.element[b] || parts.find(a) !== parts.find(b)))
    return false;
  return whole.find(i) === whole.find(j);
}

/**
 * An activated ellipse reaches a / sin(angle to the beam) toward its neighbour: what lies across the beam counts.
 * Exact for two ellipses of one shape, which neighbours are but for a small change of defocus.
 */
function overlap(p: BurntPulses, mesh: SurfaceMesh, i: number, j: number): boolean {
  const vx = p.hit[3 * j] - p.hit[3 * i];
  const vy = p.hit[3 * j + 1] - p.hit[3 * i + 1];
  const vz = p.hit[3 * j + 2] - p.hit[3 * i + 2];
  const vv = vx * vx + vy * vy + vz * vz;
  let reached = 0; // share of the way between the two that their ellipses cover
  for (const k of [i, j]) {
    const vu = vx * p.toward[3 * k] + vy * p.toward[3 * k + 1] + vz * p.toward[3 * k + 2];
    const across = Math.sqrt(Math.max(0, vv - vu * vu));
    if (Math.abs(vu) > SHEET_REACH * Math.max(across, p.halfWidth[k])) return false; // another sheet
    reached += p.halfWidth[k] / across;
  }
  return reached >= 1 && sameWay(mesh, p.face[i], p.face[j]);
}

/** Faces that look apart are the two sides of a thin wall. */
function sameWay(mesh: SurfaceMesh, f: number, g: number): boolean {
  if (f === g) return true;
  const n = crossOf(mesh, f);
  const m = crossOf(mesh, g);
  return n[0] * m[0] + n[1] * m[1] + n[2] * m[2] > 0;
}

function crossOf(mesh: SurfaceMesh, f: number): [number, number, number] {
  const { positions: x, triangles: t } = mesh;
  const [a, b, c] = [3 * t[3 * f], 3 * t[3 * f + 1], 3 * t[3 * f + 2]];
  const ux = x[b] - x[a],
    uy = x[b + 1] - x[a + 1],
    uz = x[b + 2] - x[a + 2];
  const vx = x[c] - x[a],
    vy = x[c + 1] - x[a + 1],
    vz = x[c + 2] - x[a + 2];
  return [uy * vz - uz * vy, uz * vx - ux * vz, ux * vy - uy * vx];
}

/** Each pair of pulses near enough to overlap, once, i < j. Cells of space as wide as the longest ellipse is long. */
function eachNeighbour(p: BurntPulses, use: (i: number, j: number) => void): void {
  const reach = new Float32Array(p.count);
  let longest = 0;
  for (let i = 0; i < p.count; i++) {
    reach[i] = p.halfWidth[i] / Math.max(p.cos[i], 1 / SHEET_REACH);
    if (reach[i] > longest) longest = reach[i];
  }
  if (longest === 0) return;
  const cell = 2 * longest;
  let size = 16;
  while (size < 2 * p.count) size *= 2;
  const mask = size - 1;
  const start = new Uint32Array(size + 1);
  const bucket = new Int32Array(p.count);
  for (let i = 0; i < p.count; i++) {
    bucket[i] = bucketOf(
      Math.floor(p.hit[3 * i] / cell),
      Math.floor(p.hit[3 * i + 1] / cell),
      Math.floor(p.hit[3 * i + 2] / cell),
      mask,
    );
    start[bucket[i] + 1]++;
  }
  for (let b = 0; b < size; b++) start[b + 1] += start[b];
  const sorted = new Int32Array(p.count);
  const fill = start.slice();
  for (let i = 0; i < p.count; i++) sorted[fill[bucket[i]]++] = i;
  const near = new Float32Array(3 * p.count); // beside each other as they will be read
  for (let k = 0; k < p.count; k++) for (let c = 0; c < 3; c++) near[3 * k + c] = p.hit[3 * sorted[k] + c];
  // hits are shared by 32 bits in this sieve only: a few nanometres wider than the reach
  const slack = 1e-4;
  for (let i = 0; i < p.count; i++) {
    const x = p.hit[3 * i];
    const y = p.hit[3 * i + 1];
    const z = p.hit[3 * i + 2];
    const far = reach[i] + longest;
    const i1 = Math.floor((x + far) / cell);
    const j1 = Math.floor((y + far) / cell);
    const k1 = Math.floor((z + far) / cell);
    for (let a = Math.floor((x - far) / cell); a <= i1; a++)
      for (let b = Math.floor((y - far) / cell); b <= j1; b++)
        for (let c = Math.floor((z - far) / cell); c <= k1; c++) {
          const at = bucketOf(a, b, c, mask);
          for (let s = start[at]; s < start[at + 1]; s++) {
            const j = sorted[s];
            if (j <= i) continue;
            const dx = near[3 * s] - x;
            const dy = near[3 * s + 1] - y;
            const dz = near[3 * s + 2] - z;
            const sum = reach[i] + reach[j] + slack;
            if (dx * dx + dy * dy + dz * dz <= sum * sum) use(i, j);
          }
        }
  }
}
