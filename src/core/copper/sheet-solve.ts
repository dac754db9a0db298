/**
 * Resistance of a sheet between electrodes, between two bounds that close in on each other.
 *
 * A potential that is linear in each triangle and meets everywhere gives at least the true conductance (Dirichlet's principle;
 * stiffness by cotangents, U. Pinkall and K. Polthier, Exp. Math. 2 (1993) 15). One that meets at the middles of edges only
 * (M. Crouzeix and P.-A. Raviart, RAIRO 7 (1973) 33) has currents that pass from triangle to triangle without loss, as
 * L. Marini found (SIAM J. Numer. Anal. 22 (1985) 493), so that it gives at most the true conductance (Thomson's principle).
 * What the two differ by in a triangle is what it lacks (W. Prager and J. Synge, Q. Appl. Math. 5 (1947) 241): triangles
 * with the most are cut (W. Dörfler, SIAM J. Numer. Anal. 33 (1996) 1106) until the bounds are near enough.
 */
import { factor, type SparseRows } from '../base/sparse.ts';
import { cutTriangle } from './cut-triangle.ts';
import { narrowestLine } from './equipotential.ts';
import type { IntrinsicMesh } from './intrinsic.ts';

/** The true resistance is no farther from the value than this share of it, unless the sheet would need more vertices. */
export const NEAR = 0.002;
/** Vertices of a sheet that are not exceeded: a few seconds, 100 MB. */
export const MOST_VERTICES = 40_000;
/** Share of what all triangles lack that those which are cut lack together. */
const CUT = 0.6;

export interface SheetResistance {
  /** Squares of sheet: times the sheet resistance it is the resistance. */
  squares: number;
  /** The true value is at most this far off, squares. */
  within: number;
  /** Least length of an equipotential line between the two, mm. */
  narrowest: number;
}

/**
 * @param mesh        one piece, all of it joined by triangles and electrodes; it is cut finer
 * @param electrodes  their number; every electrode is joined to the others
 * @param step        called before each solution; what it throws stops the work
 * @returns from electrode 0 to each of the others, no current at the rest
 */
export function sheetResistance(
  mesh: IntrinsicMesh,
  electrodes: number,
  step: () => void = () => {},
): SheetResistance[] {
  mesh.makeDelaunay();
  for (;;) {
    step();
    const upper = solve(mesh, electrodes, mesh.tail, mesh.electrode, 1);
    const middles = mesh.edge.map((_, c) => mesh.edge[c % 3 === 2 ? c - 2 : c + 1]);
    const lower = solve(mesh, electrodes, middles, mesh.held, 4);
    const found = upper.pairs.map((u, i) => ({
      squares: (u.resistance + lower.pairs[i].resistance) / 2,
      within: Math.abs(lower.pairs[i].resistance - u.resistance) / 2,
    }));
    const rough = found.flatMap((f, i) => (f.within > NEAR * f.squares ? [i] : []));
    if (
      rough.length === 0 ||
      mesh.electrode.length >= MOST_VERTICES ||
      !refine(mesh, lacking(mesh, upper, lower, middles, rough))
    )
      return found.map((f, i) => ({
        ...f,
        narrowest: narrowestLine(mesh, fieldOf(upper, i), upper.pairs[i].resistance),
      }));
  }
}

/** Potentials of one kind. */
interface Solution {
  /** For electrode j + 1 at 1 and all others at 0: of each unknown. */
  basis: Float64Array[];
  /** A unit current from electrode 0 to j + 1: resistance, and the potentials of electrodes 1, 2, … */
  pairs: { resistance: number; potentials: Float64Array }[];
}

/**
 * @param unknowns  of each corner of each triangle
 * @param held      electrode of each unknown, -1 for none
 * @param scale     of the stiffness by cotangents
 */
function solve(
  mesh: IntrinsicMesh,
  electrodes: number,
  unknowns: readonly number[],
  held: readonly number[],
  scale: number,
): Solution {
  const index = new Int32Array(held.length).fill(-1);
  let n = 0;
  held.forEach((h, i) => {
    if (h < 0) index[i] = n++;
  });
  const weights = new Float64Array(unknowns.length);
  const three = new Float64Array(3);
  for (let t = 0; t < mesh.triangles; t++) {
    mesh.halfCotangents(t, three);
    for (let k = 0; k < 3; k++) weights[3 * t + k] = scale * three[k];
  }
  const factored = n > 0 ? factor(rowsOf(unknowns, weights, index, n)) : null;
  const m = electrodes - 1;
  const conductance = Array.from({ length: m }, () => new Float64Array(m));
  const basis = Array.from({ length: m }, (_, j) => {
    const u = Float64Array.from(held, (h) => (h === j + 1 ? 1 : 0));
    const right = new Float64Array(n);
    eachPair(unknowns, weights, (a, b, w) => {
      if (index[a] >= 0) right[index[a]] -= w * (u[a] - u[b]);
      if (index[b] >= 0) right[index[b]] -= w * (u[b] - u[a]);
    });
    if (factored) {
      const x = factored.solve(right);
      index.forEach((i, v) => {
        if (i >= 0) u[v] = x[i];
      });
    }
    eachPair(unknowns, weights, (a, b, w) => {
      if (held[a] > 0) conductance[held[a] - 1][j] += w * (u[a] - u[b]);
      if (held[b] > 0) conductance[held[b] - 1][j] += w * (u[b] - u[a]);
    });
    return u;
  });
  const inverse = invert(conductance);
  return { basis, pairs: inverse.map((potentials, i) => ({ resistance: potentials[i], potentials })) };
}

function eachPair(
  unknowns: readonly number[],
  weights: Float64Array,
  visit: (a: number, b: number, w: number) => void,
): void {
  for (let c = 0; c < unknowns.length; c++)
    visit(unknowns[c], unknowns[c % 3 === 2 ? c - 2 : c + 1], weights[c]);
}

function rowsOf(
  unknowns: readonly number[],
  weights: Float64Array,
  index: Int32Array,
  n: number,
): SparseRows {
  const count = new Int32Array(n + 1);
  eachPair(unknowns, weights, (a, b) => {
    if (index[a] >= 0) count[index[a] + 1] += 2;
    if (index[b] >= 0) count[index[b] + 1] += 2;
  });
  for (let i = 0; i < n; i++) count[i + 1] += count[i];
  const columns = new Int32Array(count[n]);
  const values = new Float64Array(count[n]);
  const filled = count.slice(0, n);
  const put = (i: number, j: number, w: number): void => {
    columns[filled[i]] = j;
    values[filled[i]++] = w;
  };
  eachPair(unknowns, weights, (a, b, w) => {
    const [i, j] = [index[a], index[b]];
    if (i >= 0) put(i, i, w);
    if (j >= 0) put(j, j, w);
    if (i >= 0 && j >= 0) {
      put(i, j, -w);
      put(j, i, -w);
    }
  });
  // Entries at one place together.
  const start = new Int32Array(n + 1);
  const seen = new Int32Array(n).fill(-1);
  let used = 0;
  for (let i = 0; i < n; i++) {
    for (let k = count[i]; k < filled[i]; k++) {
      const j = columns[k];
      if (seen[j] >= start[i]) values[seen[j]] += values[k];
      else {
        seen[j] = used;
        columns[used] = j;
        values[used++] = values[k];
      }
    }
    start[i + 1] = used;
  }
  return { start, column: columns.slice(0, used), value: values.slice(0, used) };
}

/** Inverse of a small symmetric positive definite matrix, by Gauss and Jordan. */
function invert(matrix: readonly Float64Array[]): Float64Array[] {
  const n = matrix.length;
  const m = matrix.map((row, i) => {
    const wide = new Float64Array(2 * n);
    wide.set(row);
    wide[n + i] = 1;
    return wide;
  });
  for (let k = 0; k < n; k++) {
    const pivot = m[k][k];
    for (let j = 0; j < 2 * n; j++) m[k][j] /= pivot;
    for (let i = 0; i < n; i++) {
      const f = m[i][k];
      if (i === k || f === 0) continue;
      for (let j = 0; j < 2 * n; j++) m[i][j] -= f * m[k][j];
    }
  }
  return m.map((row) => row.slice(n));
}

/** Potential of each unknown when a unit current flows from electrode 0 to i + 1. */
function fieldOf({ basis, pairs }: Solution, i: number, potentials = pairs[i].potentials): Float64Array {
  const u = new Float64Array(basis[0].length);
  basis.forEach((b, j) => {
    for (let v = 0; v < u.length; v++) u[v] += potentials[j] * b[v];
  });
  return u;
}

/** What each triangle lacks: of the energy in the two solutions for the same potentials of electrodes, as a share of it. */
function lacking(
  mesh: IntrinsicMesh,
  upper: Solution,
  lower: Solution,
  middles: readonly number[],
  pairs: readonly number[],
): Float64Array {
  const out = new Float64Array(mesh.triangles);
  const three = new Float64Array(3);
  for (const i of pairs) {
    const { potentials, resistance } = upper.pairs[i];
    const [u, w] = [fieldOf(upper, i), fieldOf(lower, i, potentials)];
    const d = new Float64Array(3);
    for (let t = 0; t < mesh.triangles; t++) {
      // A linear function that is w at the middles has -2 w at the corners opposite, but for a constant.
      for (let k = 0; k < 3; k++) d[k] = u[mesh.tail[3 * t + k]] + 2 * w[middles[3 * t + k]];
      mesh.halfCotangents(t, three);
      for (let k = 0; k < 3; k++) out[t] += (three[k] * (d[k] - d[(k + 1) % 3]) ** 2) / resistance;
    }
  }
  return out;
}

/** Cuts the triangles that lack the most: each that is still there when its turn comes. @returns whether any was cut */
function refine(mesh: IntrinsicMesh, lacks: Float64Array): boolean {
  const order = Array.from(lacks, (_, t) => t).sort((a, b) => lacks[b] - lacks[a] || a - b);
  const all = lacks.reduce((a, b) => a + b, 0);
  const chosen: { t: number; is: string }[] = [];
  const nameOf = (t: number): string =>
    [0, 1, 2].map((k) => `${mesh.edge[3 * t + k]} ${mesh.length[mesh.edge[3 * t + k]]}`).join();
  let sum = 0;
  for (const t of order) {
    if (sum >= CUT * all) break;
    sum += lacks[t];
    chosen.push({ t, is: nameOf(t) });
  }
  for (const { t, is } of chosen) if (nameOf(t) === is) mesh.makeDelaunay(cutTriangle(mesh, t));
  return chosen.length > 0;
}
