/**
 * How much longer things become on the part than they are in the drawing.
 *
 * A polyhedron bends at its vertices and is flat between them, and so is its map: a single small triangle says nothing
 * about the surface that the faces stand for. So ratios are taken over chords as long as a few faces are wide.
 */
import { cosine, sine } from '../base/trig.ts';
import type { Vec3 } from '../base/vec.ts';
import type { Stroke } from '../drawing/drawing.ts';
import type { SurfaceMesh } from '../mesh/surface-mesh.ts';
import { BESIDE } from './even-lengths.ts';
import type { FlatFigure } from './flat-figure.ts';
import type { MapPatch } from './map-patch.ts';
import type { PatchWalk } from './patch-walk.ts';

export interface Stretch {
  /** Largest |ratio - 1|. */
  stretch: number;
  /** Length on the part over length in the drawing, along a line (of an area: in the worst direction) and across. */
  along: number;
  across: number;
  /** Where, part frame. */
  at: Vec3;
}

/** Chords are so many faces long, and no shorter than the least, mm, nor longer than this share of the map. */
const FACES = 5;
const LEAST = 1;
const SHARE = 1 / 3;
/** In a narrow figure they are shorter, down to this share: where faces are as long, they say nothing. */
const SHORTEST = 0.4;

/** Length of the chords on a map, mm. */
export function chordLength(mesh: SurfaceMesh, patch: MapPatch, radius: number): number {
  const faces = new Set(patch.face);
  const { positions: x, triangles: t } = mesh;
  const areas = [...faces].map((f) => {
    const [a, b, c] = [3 * t[3 * f], 3 * t[3 * f + 1], 3 * t[3 * f + 2]];
    const u = [0, 1, 2].map((k) => x[b + k] - x[a + k]);
    const v = [0, 1, 2].map((k) => x[c + k] - x[a + k]);
    return Math.hypot(u[1] * v[2] - u[2] * v[1], u[2] * v[0] - u[0] * v[2], u[0] * v[1] - u[1] * v[0]) / 2;
  });
  areas.sort((a, b) => a - b);
  const side = Math.sqrt(2 * (areas[areas.length >> 1] ?? 0));
  return Math.min(Math.max(LEAST, FACES * side), SHARE * radius);
}

/** Worst stretch along a flat line, and across it no farther than its own copper counts. @param points  2 a point */
export function lineStretch(
  walk: PatchWalk,
  { points, closed, width }: Pick<Stroke, 'points' | 'closed' | 'width'>,
  chord: number,
): Stretch {
  const across = Math.min(chord, width + 2 * BESIDE);
  let worst = NONE;
  const n = points.length / 2;
  for (let i = 0; i + (closed ? 0 : 1) < n; i++) {
    const j = (i + 1) % n;
    const [du, dv] = [points[2 * j] - points[2 * i], points[2 * j + 1] - points[2 * i + 1]];
    const l = Math.hypot(du, dv);
    if (l === 0) continue;
    const steps = Math.max(1, Math.ceil((2 * l) / chord));
    for (let k = 0; k < steps; k++) {
      const share = (k + 0.5) / steps;
      const [u, v] = [points[2 * i] + share * du, points[2 * i + 1] + share * dv];
      worst = worse(worst, walk, u, v, du / l, dv / l, chord, across);
    }
  }
  return worst;
}

/**
 * Worst stretch in any of eight directions over a figure, along chords that lie in it: what the surface does beside it is not
 * its own. A figure too small for any chord is measured by chords about its places.
 */
export function areaStretch(walk: PatchWalk, figure: FlatFigure, chord: number): Stretch {
  let worst = NONE;
  let measured = false;
  const [lu, lv, hu, hv] = figure.box;
  const step = (from: number, to: number): number =>
    (to - from) / Math.max(1, Math.ceil((2 * (to - from)) / chord));
  const [su, sv] = [step(lu, hu), step(lv, hv)];
  const each = (look: (u: number, v: number, du: number, dv: number) => void): void => {
    for (let u = lu + su / 2; u < hu; u += su)
      for (let v = lv + sv / 2; v < hv; v += sv) {
        if (figure.at(u, v).edge > 0) continue;
        for (let k = 0; k < 4; k++) look(u, v, cosine((k * Math.PI) / 4), sine((k * Math.PI) / 4));
      }
  };
  each((u, v, du, dv) => {
    const along = within(figure, u, v, du, dv, chord);
    const across = within(figure, u, v, -dv, du, chord);
    measured ||= along > 0 || across > 0;
    worst = worse(worst, walk, u, v, du, dv, along, across);
  });
  if (!measured)
    each((u, v, du, dv) => {
      worst = worse(worst, walk, u, v, du, dv, chord, chord);
    });
  return worst;
}

/** Longest chord about a place, of the length asked for and its halves, whose ends lie in the figure; 0 when they are tiny. */
function within(figure: FlatFigure, u: number, v: number, du: number, dv: number, chord: number): number {
  for (let l = chord; l > SHORTEST * chord; l /= 2) {
    const h = l / 2;
    if (figure.at(u + h * du, v + h * dv).edge <= 0 && figure.at(u - h * du, v - h * dv).edge <= 0) return l;
  }
  return 0;
}

const NONE: Stretch = { stretch: 0, along: 1, across: 1, at: [0, 0, 0] };

/** @param along, across  lengths of the two chords, mm; 0 for one that is not asked for */
function worse(
  worst: Stretch,
  walk: PatchWalk,
  u: number,
  v: number,
  du: number,
  dv: number,
  along: number,
  across: number,
): Stretch {
  const a = along > 0 ? ratio(walk, u, v, du, dv, along) : null;
  const b = across > 0 ? ratio(walk, u, v, -dv, du, across) : null;
  const stretch = Math.max(Math.abs((a ?? 1) - 1), Math.abs((b ?? 1) - 1));
  if (stretch <= worst.stretch) return worst;
  const t = walk.locate(u, v);
  return t < 0 ? worst : { stretch, along: a ?? 1, across: b ?? 1, at: walk.place(t, u, v) };
}

/** Ratio over a chord about a place; null where the chord leaves the map. */
export function ratio(
  walk: PatchWalk,
  u: number,
  v: number,
  du: number,
  dv: number,
  chord: number,
): number | null {
  const h = chord / 2;
  const line = walk.line(Float64Array.of(u - h * du, v - h * dv, u + h * du, v + h * dv), false);
  return line && !line.left ? line.path.length / chord : null;
}

/** Greatest flat length over the way on the part in any small triangle, and in any direction; at least 1. */
export function steepest({ positions: x, triangles, flat }: MapPatch): number {
  let most = 1;
  for (let t = 0; t < triangles.length / 3; t++) {
    const [a, b, c] = [triangles[3 * t], triangles[3 * t + 1], triangles[3 * t + 2]];
    const e = [0, 1, 2].map((k) => x[3 * b + k] - x[3 * a + k]);
    const f = [0, 1, 2].map((k) => x[3 * c + k] - x[3 * a + k]);
    const l = Math.hypot(e[0], e[1], e[2]);
    const fx = (e[0] * f[0] + e[1] * f[1] + e[2] * f[2]) / l;
    const fy = Math.sqrt(Math.max(0, f[0] ** 2 + f[1] ** 2 + f[2] ** 2 - fx * fx));
    // Flat steps over unit steps on the part along the first side and square to it.
    const [pu, pv] = [(flat[2 * b] - flat[2 * a]) / l, (flat[2 * b + 1] - flat[2 * a + 1]) / l];
    const [qu, qv] = [
      (flat[2 * c] - flat[2 * a] - fx * pu) / fy,
      (flat[2 * c + 1] - flat[2 * a + 1] - fx * pv) / fy,
    ];
    // Greatest singular value of that matrix.
    const [g, h] = [pu * pu + pv * pv, qu * qu + qv * qv];
    const value = Math.sqrt((g + h) / 2 + Math.hypot((g - h) / 2, pu * qu + pv * qv));
    if (value > most) most = value;
  }
  return most;
}
