/**
 * Lays the pulses of one layer on the drawn copper: which samples reach the activation fluence, and by what.
 * F = 2 E max(0, n·u) / (π w²) · exp(−2 ρ²/w²) with ρ the distance from the beam's axis (model.md §3).
 */
import { partPoint } from '../base/brands.ts';
import { type Pose, poseFrame } from '../base/pose.ts';
import type { Limits, Material } from '../project/schema.ts';
import { beamAt, type Lean, towardHead } from './forward.ts';
import type { Samples } from './samples.ts';
import { activatedHalfWidth, axisFluence, radiusAt, type Spot, usableDepth } from './spot.ts';
import { boxOf, type LayerPulses } from './trace.ts';

/** Bits of a sample's flags. */
export const ACTIVATED = 1;
export const OUT_OF_DEPTH = 2;

/** mm: coordinates in the files are rounded, so a place planned at the very edge of the depth may read this far beyond. */
const DEPTH_SLACK = 1e-3;
/**
 * A sample further along the beam from the hit than this many activated half-widths lies on another sheet: on one sheet
 * it would need an incidence above 80°.
 */
export const SHEET_REACH = 6;
/** Edge of a cell in command space, mm, and the most cells. */
const CELL = 0.02;
const MOST_CELLS = 8_000_000;

/** What a layer did, one number a pulse. */
export interface LayerBurn {
  /** Activated half-width across the tilt, mm; 0 where nothing is activated. */
  halfWidth: Float32Array;
  /** 1/e² radius where it lands, mm. */
  radius: Float32Array;
  /** mm from where it landed to the nearest sample that it may touch; Infinity when there is none. */
  nearest: Float32Array;
  /** Elements of which pulse i activates a sample: `element[start[i]] … element[start[i + 1] − 1]`. */
  start: Uint32Array;
  element: Int32Array;
}

export interface LayerPlace {
  pose: Pose;
  offset: number;
  lean: Lean;
}

/** @param flags  one a sample; bits are set, never cleared, so layers may come in any order */
export function burnLayer(
  pulses: LayerPulses,
  place: LayerPlace,
  samples: Samples,
  spot: Spot,
  limits: Limits,
  material: Material,
  flags: Uint8Array,
): LayerBurn {
  const { lean } = place;
  const count = pulses.d.length;
  const halfWidth = new Float32Array(count);
  const nearest = new Float32Array(count).fill(Infinity);
  const start = new Uint32Array(count + 1);
  let tags = new Int32Array(count + 16);
  let tagCount = 0;

  // the spot of each pulse, and the widest and deepest of them
  const radius = new Float32Array(count);
  const inside = new Float64Array(count); // ln(F at the axis, square on / F_act)
  let [widest, low, high] = [0, Infinity, -Infinity];
  for (let i = 0; i < count; i++) {
    const uz = towardHead(lean, pulses.command[2 * i], pulses.command[2 * i + 1])[2];
    radius[i] = radiusAt(spot, pulses.d[i] / uz);
    const square = axisFluence(spot, radius[i], pulses.share[i]);
    inside[i] = Math.log(square / spot.threshold);
    halfWidth[i] = activatedHalfWidth(spot, radius[i], square * Math.max(0, pulses.cos[i]));
    if (inside[i] <= 0) continue;
    widest = Math.max(widest, radius[i] * Math.sqrt(inside[i] / 2));
    low = Math.min(low, pulses.d[i]);
    high = Math.max(high, pulses.d[i]);
  }
  if (widest === 0) return { halfWidth, radius, nearest, start, element: new Int32Array(0) };

  const margin = SHEET_REACH * widest;
  const grid = sampleGrid(samples, place, boxOf(pulses.command), [low - margin, high + margin], 2 * widest);
  const { x, y, z, nx, ny, nz } = grid;
  for (let i = 0; i < count; i++) {
    start[i] = tagCount;
    if (inside[i] <= 0) continue;
    const X = pulses.command[2 * i];
    const Y = pulses.command[2 * i + 1];
    const d = pulses.d[i];
    const [hx, hy, hz] = beamAt(lean, X, Y, d);
    const [ux, uy, uz] = towardHead(lean, X, Y);
    const most = (radius[i] * radius[i] * inside[i]) / 2; // ρ² that a surface square on would still be activated at
    const reach = Math.sqrt(most);
    const along = SHEET_REACH * reach;
    const usable = usableDepth(spot, limits, material, pulses.cos[i], pulses.share[i]) + DEPTH_SLACK;
    const bits = Math.abs(d) > usable ? ACTIVATED | OUT_OF_DEPTH : ACTIVATED;
    // a sample at ρ from the axis lies within ρ / u_z of it in its own level, and that much scaled to the focal plane
    const rx = reach / uz / (1 - (d + along) * lean.kx);
    const ry = reach / uz / (1 - (d + along) * lean.ky);
    const i0 = Math.max(0, Math.floor((X - rx - grid.x0) / grid.cell));
    const i1 = Math.min(grid.columns - 1, Math.floor((X + rx - grid.x0) / grid.cell));
    const j0 = Math.max(0, Math.floor((Y - ry - grid.y0) / grid.cell));
    const j1 = Math.min(grid.rows - 1, Math.floor((Y + ry - grid.y0) / grid.cell));
    let close = Infinity;
    for (let j = j0; j <= j1; j++) {
      const to = grid.start[j * grid.columns + i1 + 1];
      for (let k = grid.start[j * grid.columns + i0]; k < to; k++) {
        const vx = x[k] - hx;
        const vy = y[k] - hy;
        const vz = z[k] - hz;
        const vu = vx * ux + vy * uy + vz * uz;
        if (vu > along || vu < -along) continue;
        const vv = vx * vx + vy * vy + vz * vz;
        const rho = vv - vu * vu;
        if (rho > most) continue;
        const c = nx[k] * ux + ny[k] * uy + nz[k] * uz;
        if (c <= 0) continue; // the other side of a wall
        if (vv < close) close = vv;
        if (rho > most + (radius[i] * radius[i] * Math.log(c)) / 2) continue; // ln(F0 c / F_act) < 2ρ²/w²
        const sample = grid.sample[k];
        flags[sample] |= bits;
        const e = samples.element[sample];
        let t = tagCount - 1;
        while (t >= start[i] && tags[t] !== e) t--;
        if (t < start[i]) {
          if (tagCount === tags.length) {
            const more = new Int32Array(2 * tags.length);
            more.set(tags);
            tags = more;
          }
          tags[tagCount++] = e;
        }
      }
    }
    nearest[i] = Math.sqrt(close);
  }
  start[count] = tagCount;
  return { halfWidth, radius, nearest, start, element: tags.slice(0, tagCount) };
}

/**
 * The samples that a layer may touch, as they stand under the head, sorted into cells of command space. There a
 * pulse's activated ellipse is a disc about its own command, however the surface leans.
 */
function sampleGrid(
  samples: Samples,
  place: LayerPlace,
  box: readonly number[],
  heights: readonly [number, number],
  rim: number,
) {
  const { lean, offset } = place;
  const frame = poseFrame(place.pose);
  const m0 = frame.direction([1, 0, 0]);
  const m1 = frame.direction([0, 1, 0]);
  const m2 = frame.direction([0, 0, 1]);
  const at0 = frame.point(partPoint([0, 0, 0]));
  const x0 = box[0] - 2 * rim;
  const y0 = box[1] - 2 * rim;
  const wide = box[2] - box[0] + 4 * rim;
  const deep = box[3] - box[1] + 4 * rim;
  const cell = Math.max(CELL, Math.sqrt((wide * deep) / MOST_CELLS));
  const columns = Math.ceil(wide / cell) + 1;
  const rows = Math.ceil(deep / cell) + 1;
  const where = new Int32Array(samples.count).fill(-1);
  const start = new Uint32Array(columns * rows + 1);
  const p = samples.position;
  for (let s = 0; s < samples.count; s++) {
    const a = p[3 * s];
    const b = p[3 * s + 1];
    const c = p[3 * s + 2];
    const d = m0[2] * a + m1[2] * b + m2[2] * c + at0[2] + offset;
    if (!(d >= heights[0] && d <= heights[1])) continue;
    const X = (m0[0] * a + m1[0] * b + m2[0] * c + at0[0]) / (1 - d * lean.kx);
    const Y = (m0[1] * a + m1[1] * b + m2[1] * c + at0[1]) / (1 - d * lean.ky);
    const i = Math.floor((X - x0) / cell);
    const j = Math.floor((Y - y0) / cell);
    if (i < 0 || j < 0 || i >= columns || j >= rows) continue;
    where[s] = j * columns + i;
    start[where[s] + 1]++;
  }
  for (let i = 1; i < start.length; i++) start[i] += start[i - 1];
  const kept = start[start.length - 1];
  const fill = start.slice();
  const sample = new Int32Array(kept);
  for (let s = 0; s < samples.count; s++) if (where[s] >= 0) sample[fill[where[s]]++] = s;
  const x = new Float64Array(kept);
  const y = new Float64Array(kept);
  const z = new Float64Array(kept);
  const nx = new Float32Array(kept);
  const ny = new Float32Array(kept);
  const nz = new Float32Array(kept);
  for (let k = 0; k < kept; k++) {
    const o = 3 * sample[k];
    const [a, b, c] = [p[o], p[o + 1], p[o + 2]];
    x[k] = m0[0] * a + m1[0] * b + m2[0] * c + at0[0];
    y[k] = m0[1] * a + m1[1] * b + m2[1] * c + at0[1];
    z[k] = m0[2] * a + m1[2] * b + m2[2] * c + at0[2] + offset;
    const [e, f, g] = [samples.normal[o], samples.normal[o + 1], samples.normal[o + 2]];
    nx[k] = m0[0] * e + m1[0] * f + m2[0] * g;
    ny[k] = m0[1] * e + m1[1] * f + m2[1] * g;
    nz[k] = m0[2] * e + m1[2] * f + m2[2] * g;
  }
  return { x0, y0, cell, columns, rows, start, sample, x, y, z, nx, ny, nz };
}
