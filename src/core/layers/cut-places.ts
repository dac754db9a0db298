/** Where the triangles of an element's copper stand on its cut coordinate, and at what height. */
import type { Vec3 } from '../base/vec.ts';
import type { CopperElement } from '../drape/copper.ts';
import type { ElementReach } from '../reach/result.ts';

/** Corners of a triangle, or one of them alone where the foot of a trace jumps inside it. */
export interface CutPlace {
  /** Number of the copper's triangle. */
  triangle: number;
  /** Cut coordinate of each corner, mm. */
  at: readonly number[];
  /** Bench height of each corner at stage offset 0, mm. */
  height: readonly number[];
  /** Sine of the slope against the bench: height gained for each mm walked straight up it. */
  steep: number;
}

/**
 * @param writable  triangles to look at
 * @param up        the bench's +Z in the part frame, unit
 */
export function cutPlaces(
  element: CopperElement,
  by: 'along' | 'height',
  reach: ElementReach,
  writable: (t: number) => boolean,
  up: Vec3,
): CutPlace[] {
  const { positions: x, triangles, face } = element.copper;
  const rise = (v: number) => up[0] * x[3 * v] + up[1] * x[3 * v + 1] + up[2] * x[3 * v + 2];
  const out: CutPlace[] = [];
  for (let t = 0; t < face.length; t++) {
    if (!writable(t)) continue;
    const corners = [triangles[3 * t], triangles[3 * t + 1], triangles[3 * t + 2]];
    const rises = corners.map(rise);
    // The bench height of the middle is known: the pose's shift follows from it.
    const shift = reach.height[t] - (rises[0] + rises[1] + rises[2]) / 3;
    const height = rises.map((r) => r + shift);
    if (by === 'height') {
      out.push({ triangle: t, at: height, height, steep: slopeOf(x, corners, up) });
      continue;
    }
    const at = alongAt(element, t, corners);
    if (at) out.push({ triangle: t, at, height, steep: 0 });
    else {
      // The foot jumps: each corner of the patch's triangle stands for itself, over the whole height.
      const s = 3 * element.copper.source[t];
      for (let i = 0; i < 3; i++) {
        const c = element.field.along[element.field.triangles[s + i]];
        out.push({ triangle: t, at: [c, c], height: [Math.min(...height), Math.max(...height)], steep: 0 });
      }
    }
  }
  return out;
}

/** The foot moves at most as fast as the place, but for curvature: more than this times a triangle's side is a jump. */
const JUMP = 2;

/** Arc length at the corners of a copper triangle, by interpolation in the patch's triangle; null where the foot jumps in it. */
function alongAt(element: CopperElement, t: number, corners: readonly number[]): number[] | null {
  const { field, copper } = element;
  const s = 3 * copper.source[t];
  const [a, b, c] = [field.triangles[s], field.triangles[s + 1], field.triangles[s + 2]];
  const [sa, sb, sc] = [field.along[a], field.along[b], field.along[c]];
  const p = field.positions;
  const [ux, uy, uz] = [p[3 * b] - p[3 * a], p[3 * b + 1] - p[3 * a + 1], p[3 * b + 2] - p[3 * a + 2]];
  const [vx, vy, vz] = [p[3 * c] - p[3 * a], p[3 * c + 1] - p[3 * a + 1], p[3 * c + 2] - p[3 * a + 2]];
  const longest = Math.max(
    Math.hypot(ux, uy, uz),
    Math.hypot(vx, vy, vz),
    Math.hypot(ux - vx, uy - vy, uz - vz),
  );
  if (Math.max(sa, sb, sc) - Math.min(sa, sb, sc) > JUMP * longest) return null;
  const uu = ux * ux + uy * uy + uz * uz;
  const uv = ux * vx + uy * vy + uz * vz;
  const vv = vx * vx + vy * vy + vz * vz;
  const det = uu * vv - uv * uv;
  return corners.map((k) => {
    const x = copper.positions;
    const [wx, wy, wz] = [x[3 * k] - p[3 * a], x[3 * k + 1] - p[3 * a + 1], x[3 * k + 2] - p[3 * a + 2]];
    const wu = wx * ux + wy * uy + wz * uz;
    const wv = wx * vx + wy * vy + wz * vz;
    // A triangle without area has its corners on a line: the first stands for all.
    if (det <= 0) return sa;
    return sa + ((wu * vv - wv * uv) / det) * (sb - sa) + ((wv * uu - wu * uv) / det) * (sc - sa);
  });
}

/** Arc length that a copper triangle stands for: that of its middle, or of one of its corners where the foot jumps. */
export function middleAlong(element: CopperElement, t: number): number {
  const { triangles } = element.copper;
  const at = alongAt(element, t, [triangles[3 * t], triangles[3 * t + 1], triangles[3 * t + 2]]);
  return at
    ? (at[0] + at[1] + at[2]) / 3
    : element.field.along[element.field.triangles[3 * element.copper.source[t]]];
}

function slopeOf(x: Float64Array, [i, j, k]: readonly number[], up: Vec3): number {
  const [a, b, c] = [3 * i, 3 * j, 3 * k];
  const [ux, uy, uz] = [x[b] - x[a], x[b + 1] - x[a + 1], x[b + 2] - x[a + 2]];
  const [vx, vy, vz] = [x[c] - x[a], x[c + 1] - x[a + 1], x[c + 2] - x[a + 2]];
  const [nx, ny, nz] = [uy * vz - uz * vy, uz * vx - ux * vz, ux * vy - uy * vx];
  const l = Math.hypot(nx, ny, nz);
  if (l === 0) return 0;
  const cos = (nx * up[0] + ny * up[1] + nz * up[2]) / l;
  return Math.sqrt(Math.max(0, 1 - cos * cos));
}
