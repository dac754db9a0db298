/**
 * A flat map of a patch of the surface about an anchor: small triangles on the part with flat coordinates at their corners,
 * even inside each triangle, so that it can be read both ways.
 *
 * Coordinates start as those of the log map (`geodesic/log-map.ts`), which is exact on the polyhedron; `evenLengths` may
 * change them afterwards. Faces larger than the step are cut, so that the map is as true on the long slivers of a part
 * from CAD as on a fine mesh.
 */

import { PairMap } from '../base/pair-map.ts';
import { cosine, sine } from '../base/trig.ts';
import type { Vec3 } from '../base/vec.ts';
import { logMap } from '../geodesic/log-map.ts';
import type { MapLimit } from '../geodesic/map-limits.ts';
import type { WindowSolver } from '../geodesic/windows.ts';
import { faceNormal, positionOf, weightsIn } from '../mesh/surface-point.ts';
import { boxBound, heldDistance } from './box-bound.ts';
import { drawingU } from './pad.ts';
import { refine } from './refine.ts';
import type { Place } from './route.ts';

/** Steps to the radius of the patch, and the longest one, mm: what lies between corners is even. */
const STEPS = 24;
const LONGEST = 0.5;

export interface MapPatch {
  /** Part frame, mm, 3 a corner. */
  positions: Float64Array;
  /** 3 a triangle, wound as the part's faces. */
  triangles: Uint32Array;
  /** Face of the part of each triangle. */
  face: Int32Array;
  /** Flat coordinates, mm, 2 a corner: u to the right and v up, seen from outside. */
  flat: Float64Array;
  /** Triangle across side i (from corner i to the next) of triangle t at 3 t + i, -1 where the patch ends. */
  across: Int32Array;
  /** Corner that the anchor is, or the nearest to it. */
  anchor: number;
  /** Where the log map stops being one to one, nearest first by `measure`. */
  limits(measure: (u: number, v: number) => number): MapLimit[];
}

/**
 * Patch of all places within `radius` mm of the anchor, in the drawing's axes: `turn` counter-clockwise from the direction
 * that model.md §10 gives u, v mirrored or not.
 * @param turn  radians
 */
export function mapPatch(
  solver: WindowSolver,
  anchor: Place,
  radius: number,
  turn: number,
  mirror: boolean,
): MapPatch {
  const step = Math.min(LONGEST, radius / STEPS);
  const { mesh } = solver;
  const zero = drawingU(faceNormal(mesh, anchor.surface.face));
  // Corners of triangles that reach into the patch may lie a step beyond it.
  const reach = radius + 2 * step;
  const map = logMap(solver, anchor.surface, reach, zero);
  const far = boxBound(Float64Array.from(positionOf(mesh, anchor.surface)));
  const flip = mirror ? -1 : 1;
  const flatOf = (r: number, angle: number): [number, number] => [
    flip * r * cosine(angle - turn),
    r * sine(angle - turn),
  ];
  const laid = refine(
    mesh,
    map.faces,
    (face, p) => {
      const at = map.at(face, p);
      if (!at) return { edge: heldDistance(null, reach, () => far(p)) - radius, hatch: NaN, along: NaN };
      const [u, v] = flatOf(at.radius, at.angle);
      return { edge: at.radius - radius, hatch: u, along: v };
    },
    { fine: step, coarse: step, tolerance: step },
  );
  const flat = new Float64Array(2 * laid.hatch.length);
  for (let i = 0; i < laid.hatch.length; i++) {
    flat[2 * i] = laid.hatch[i];
    flat[2 * i + 1] = laid.along[i];
  }
  const known: number[] = [];
  for (let t = 0; t < laid.face.length; t++)
    if ([0, 1, 2].every((i) => Number.isFinite(flat[2 * laid.triangles[3 * t + i]]))) known.push(t);
  const triangles = Uint32Array.from(known.flatMap((t) => [...laid.triangles.subarray(3 * t, 3 * t + 3)]));
  let nearest = 0;
  for (let i = 1; i < laid.hatch.length; i++) if (laid.edge[i] < laid.edge[nearest]) nearest = i;
  return {
    positions: laid.positions,
    triangles,
    face: Int32Array.from(known, (t) => laid.face[t]),
    flat,
    across: neighbours(triangles),
    anchor: nearest,
    limits: (measure) => map.limits((place) => measure(...flatOf(place.radius, place.angle))),
  };
}

/**
 * A triangle over the cut locus has corners that the map sends to opposite sides: it would lie over half the drawing. Where
 * the map is one to one, flat lengths are hardly longer than those on the part until the far side of a round part comes near.
 */
const TORN = 3;
/** Sides shorter than this, mm, are stretched by rounding alone. */
const SHORT = 1e-6;

/** The map without the triangles that it tears: the same corners, and the same arrays of them. */
export function withoutTorn(patch: MapPatch): MapPatch {
  const { positions, flat, triangles, face } = patch;
  const kept: number[] = [];
  for (let t = 0; t < face.length; t++) if (!isTorn(positions, flat, triangles, t)) kept.push(t);
  if (kept.length === face.length) return patch;
  const left = Uint32Array.from(kept.flatMap((t) => [...triangles.subarray(3 * t, 3 * t + 3)]));
  return { ...patch, triangles: left, face: Int32Array.from(kept, (t) => face[t]), across: neighbours(left) };
}

function isTorn(x: Float64Array, flat: Float64Array, triangles: Uint32Array, t: number): boolean {
  for (let i = 0; i < 3; i++) {
    const [a, b] = [triangles[3 * t + i], triangles[3 * t + ((i + 1) % 3)]];
    const real = Math.hypot(x[3 * a] - x[3 * b], x[3 * a + 1] - x[3 * b + 1], x[3 * a + 2] - x[3 * b + 2]);
    const drawn = Math.hypot(flat[2 * a] - flat[2 * b], flat[2 * a + 1] - flat[2 * b + 1]);
    if (drawn > TORN * real + SHORT) return true;
  }
  return false;
}

function neighbours(triangles: Uint32Array): Int32Array {
  const across = new Int32Array(triangles.length).fill(-1);
  const first = new PairMap(triangles.length);
  for (let h = 0; h < triangles.length; h++) {
    const a = triangles[h];
    const b = triangles[h % 3 === 2 ? h - 2 : h + 1];
    const [lo, hi] = a < b ? [a, b] : [b, a];
    const other = first.get(lo, hi, -1);
    if (other < 0) first.set(lo, hi, h);
    else if (across[other] < 0) {
      across[h] = (other / 3) | 0;
      across[other] = (h / 3) | 0;
    }
  }
  return across;
}

/** Flat coordinates of places on the part. */
export function flatReader(patch: MapPatch): (face: number, p: Vec3) => [number, number] | null {
  const of = new Map<number, number[]>();
  patch.face.forEach((f, t) => {
    const list = of.get(f);
    if (list) list.push(t);
    else of.set(f, [t]);
  });
  const cells = new Map<number, FaceCells>();
  return (face, p) => {
    const list = of.get(face);
    if (!list) return null;
    let t = -1;
    if (list.length <= FEW) t = holder(patch, list, p);
    else {
      let grid = cells.get(face);
      if (!grid) {
        grid = faceCells(patch, list);
        cells.set(face, grid);
      }
      t = holder(patch, grid.around(p), p);
    }
    if (t < 0) return null;
    const w = weights(patch, t, p);
    const { triangles, flat } = patch;
    let [u, v] = [0, 0];
    for (let i = 0; i < 3; i++) {
      const c = 2 * triangles[3 * t + i];
      u += w[i] * flat[c];
      v += w[i] * flat[c + 1];
    }
    return [u, v];
  };
}

/** So few triangles in a face are tried one after the other. */
const FEW = 12;
/** A place this far outside a triangle, as a weight, is on its side: rounding. */
const SIDE = 1e-7;

function holder(patch: MapPatch, list: readonly number[], p: Vec3): number {
  let best = -1;
  let least = -SIDE;
  for (const t of list) {
    const w = weights(patch, t, p);
    const m = Math.min(w[0], w[1], w[2]);
    if (m >= 0) return t;
    if (m >= least) [best, least] = [t, m];
  }
  return best;
}

/** Weights of a triangle's corners at the foot of p in its plane. */
const weights = ({ positions, triangles }: MapPatch, t: number, p: Vec3): Vec3 =>
  weightsIn(positions, triangles, t, p);

interface FaceCells {
  around(p: Vec3): readonly number[];
}

/** Triangles of one face in square cells along the two axes in which it is widest. */
function faceCells({ positions: x, triangles }: MapPatch, list: readonly number[]): FaceCells {
  const lo = [Infinity, Infinity, Infinity];
  const hi = [-Infinity, -Infinity, -Infinity];
  for (const t of list)
    for (let i = 0; i < 3; i++)
      for (let k = 0; k < 3; k++) {
        const c = x[3 * triangles[3 * t + i] + k];
        lo[k] = Math.min(lo[k], c);
        hi[k] = Math.max(hi[k], c);
      }
  const [i, j] = [0, 1, 2].sort((a, b) => hi[b] - lo[b] - (hi[a] - lo[a]));
  const side = Math.sqrt(((hi[i] - lo[i]) * (hi[j] - lo[j] || hi[i] - lo[i])) / list.length) || 1;
  const columns = Math.floor((hi[i] - lo[i]) / side) + 1;
  const rows = Math.floor((hi[j] - lo[j]) / side) + 1;
  const cells: number[][] = Array.from({ length: columns * rows }, () => []);
  const column = (c: number): number => Math.max(0, Math.min(columns - 1, Math.floor((c - lo[i]) / side)));
  const row = (c: number): number => Math.max(0, Math.min(rows - 1, Math.floor((c - lo[j]) / side)));
  for (const t of list) {
    const at = [0, 1, 2].map((k) => 3 * triangles[3 * t + k]);
    const us = at.map((o) => x[o + i]);
    const vs = at.map((o) => x[o + j]);
    for (let c = column(Math.min(...us)); c <= column(Math.max(...us)); c++)
      for (let r = row(Math.min(...vs)); r <= row(Math.max(...vs)); r++) cells[r * columns + c].push(t);
  }
  return { around: (p) => cells[row(p[j]) * columns + column(p[i])] };
}
