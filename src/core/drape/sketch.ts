/**
 * Where the lines of a drawing would run on the part: quick enough to follow the mouse, and no copper yet.
 *
 * The log map is read backwards: straightest lines (`geodesic/straightest.ts`) run out from the anchor like spokes, and a
 * place of the drawing at (r, φ) lies r along the spoke at φ (model.md §10), between spokes on the chord from one to the next.
 * So a move costs by the spokes and the faces that they cross, whatever the drawing holds and however large the part is.
 * Beyond the cut locus, where `drapeDrawing` says that the drawing is torn, spokes still run on; lengths are not evened.
 */
import { cosine, sine } from '../base/trig.ts';
import { add, at3, cross, lerp, scale, type Vec3 } from '../base/vec.ts';
import { straightest } from '../geodesic/straightest.ts';
import type { SurfaceMesh } from '../mesh/surface-mesh.ts';
import { faceNormal } from '../mesh/surface-point.ts';
import { drawingU } from './pad.ts';
import type { Place } from './route.ts';

/** Spokes stand so far apart at the drawing's farthest place, mm, but there are at least and at most so many. */
const APART = 0.35;
const FEWEST = 48;
const MOST = 256;
/** Lines are looked at in steps no longer than this, mm, or this share of the drawing's size. */
const STEP = 0.4;
const STEP_SHARE = 1 / 60;

/** A spoke: places on it, and how far along they are. */
interface Spoke {
  points: Float64Array;
  /** mm from the anchor */
  far: Float64Array;
}

/**
 * @param lines  2 a point, mm, the drawing's origin at 0
 * @param turn   radians, as `mapPatch` takes it
 * @returns lines on the part, 3 a point; where the surface ends, a line is broken off and goes on as another one
 */
export function sketchLines(
  mesh: SurfaceMesh,
  anchor: Place,
  turn: number,
  mirror: boolean,
  lines: readonly Float64Array[],
): Float64Array[] {
  const farthest = lines.reduce((m, l) => {
    for (let i = 0; i < l.length; i += 2) m = Math.max(m, Math.hypot(l[i], l[i + 1]));
    return m;
  }, 0);
  if (farthest === 0) return [];
  const count = Math.round(Math.min(MOST, Math.max(FEWEST, (2 * Math.PI * farthest) / APART)));
  const normal = faceNormal(mesh, anchor.surface.face);
  const zero = drawingU(normal);
  const quarter = cross(normal, zero);
  const spokes: (Spoke | undefined)[] = new Array(count);
  const spoke = (k: number): Spoke => {
    const angle = (2 * Math.PI * k) / count;
    const toward = add(scale(zero, cosine(angle)), scale(quarter, sine(angle)));
    spokes[k] ??= spokeOf(straightest(mesh, anchor.surface, toward, farthest).path.points);
    return spokes[k];
  };
  const place = (u: number, v: number): Vec3 | null => {
    const r = Math.hypot(u, v);
    if (r === 0) return anchor.point;
    const angle = Math.atan2(v, mirror ? -u : u) + turn;
    const share = (angle / (2 * Math.PI) - Math.floor(angle / (2 * Math.PI))) * count;
    const k = Math.floor(share);
    const a = along(spoke(k % count), r);
    const b = along(spoke((k + 1) % count), r);
    if (!a || !b) return null;
    return lerp(a, b, share - k);
  };
  const step = Math.max(STEP, STEP_SHARE * farthest);
  const out: Float64Array[] = [];
  for (const line of lines) {
    let run: number[] = [];
    const end = (): void => {
      if (run.length > 3) out.push(Float64Array.from(run));
      run = [];
    };
    const take = (u: number, v: number): void => {
      const p = place(u, v);
      if (p) run.push(p[0], p[1], p[2]);
      else end();
    };
    take(line[0], line[1]);
    for (let i = 2; i < line.length; i += 2) {
      const [du, dv] = [line[i] - line[i - 2], line[i + 1] - line[i - 1]];
      const pieces = Math.max(1, Math.ceil(Math.hypot(du, dv) / step));
      for (let k = 1; k <= pieces; k++)
        take(line[i - 2] + (k / pieces) * du, line[i - 1] + (k / pieces) * dv);
    }
    end();
  }
  return out;
}

function spokeOf(points: Float64Array): Spoke {
  const far = new Float64Array(points.length / 3);
  for (let i = 1; i < far.length; i++) {
    const o = 3 * i;
    far[i] =
      far[i - 1] +
      Math.hypot(points[o] - points[o - 3], points[o + 1] - points[o - 2], points[o + 2] - points[o - 1]);
  }
  return { points, far };
}

/** Place so far along a spoke; null where the surface ended before. */
function along({ points, far }: Spoke, r: number): Vec3 | null {
  const last = far.length - 1;
  if (r > far[last] * (1 + ROUNDING)) return null;
  let [lo, hi] = [0, last];
  while (hi - lo > 1) {
    const mid = (lo + hi) >> 1;
    if (far[mid] <= r) lo = mid;
    else hi = mid;
  }
  const t = Math.min(1, (r - far[lo]) / (far[hi] - far[lo]));
  return lerp(at3(points, lo), at3(points, hi), t);
}

/** A spoke of full length may be shorter by what its sum of pieces rounds off. */
const ROUNDING = 1e-9;
