/** Every margin of one element as a number, with its worst place. */

import type { Vec3 } from '../core/base/vec.ts';
import type { Limits, Material } from '../core/project/schema.ts';
import { REASONS, type Reason } from '../core/reach/result.ts';
import type { CopperPicture, PlanPicture, ReachPicture } from '../worker/pictures.ts';
import { heightAt } from './looks.ts';

export interface Margin {
  check: Reason;
  label: string;
  ok: boolean;
  /** Worst value, in `unit`. */
  value: number;
  limit: number;
  unit: string;
  /** Value over limit, for a bar: 1 is the edge. */
  share: number;
  /** Triangle where it is worst. */
  at: number;
}

/** @returns the margins that are known: focus from the plan, the others from reach */
export function marginsOf(
  element: number,
  copper: CopperPicture,
  setup: number,
  reach: ReachPicture | null,
  plan: PlanPicture | null,
  limits: Limits,
  material: Material,
): Margin[] {
  const e = copper.elements[element];
  if (!e || !reach) return [];
  const heights = copper.heights[setup] ?? copper.heights[0];
  const { first, count } = e;
  const worst = (value: (t: number) => number) => {
    let [best, at] = [-Infinity, first];
    for (let t = first; t < first + count; t++) if (value(t) > best) [best, at] = [value(t), t];
    return { value: best, at };
  };
  const fails = (check: Reason) => {
    const bit = 1 << REASONS.indexOf(check);
    for (let t = first; t < first + count; t++) if (reach.fails[t] & bit) return true;
    return false;
  };
  const out: Margin[] = [];
  if (plan) {
    let [share, at, value, limit, ok] = [-1, first, 0, 0, true];
    for (let t = first; t < first + count; t++) {
      const layer = plan.layers[plan.layerOf[t]];
      if (!layer) {
        ok = false;
        continue;
      }
      const d = Math.abs(heightAt(copper, heights, t) - layer.focusHeight);
      if (d / reach.usable[t] > share)
        [share, at, value, limit] = [d / reach.usable[t], t, d, reach.usable[t]];
    }
    out.push({
      check: 'focus',
      label: 'Defocus',
      ok,
      value,
      limit,
      unit: 'mm',
      share: Math.max(0, share),
      at,
    });
  }
  const inc = worst((t) => reach.incidence[t]);
  out.push({
    check: 'incidence',
    label: 'Incidence',
    ok: !fails('incidence'),
    value: inc.value,
    limit: limits.maxIncidence,
    unit: '°',
    share: inc.value / limits.maxIncidence,
    at: inc.at,
  });
  const shade = worst((t) => reach.blocked[t]);
  const most = limits.cone ? limits.maxBlocked : 0;
  out.push({
    check: 'shade',
    label: 'Beam blocked',
    ok: !fails('shade'),
    value: 100 * shade.value,
    limit: 100 * most,
    unit: '%',
    share: most > 0 ? shade.value / most : shade.value > 0 ? 2 : 0,
    at: shade.at,
  });
  const field = worst((t) => reach.field[t]);
  out.push({
    check: 'field',
    label: 'Way to the field’s edge',
    ok: !fails('field'),
    value: 100 * field.value,
    limit: 100,
    unit: '%',
    share: field.value,
    at: field.at,
  });
  const need = material.activationFluence * material.doseMargin;
  const low = worst((t) => -reach.fluence[t]);
  out.push({
    check: 'dose',
    label: 'Least dose',
    ok: !fails('dose'),
    value: -low.value,
    limit: need,
    unit: 'J/cm²',
    share: need / -low.value,
    at: low.at,
  });
  return out;
}

/** Middle of a triangle of the copper and its normal, part frame. */
export function placeOf(copper: CopperPicture, t: number): { point: Vec3; normal: Vec3 } {
  const [a, b, c] = [0, 1, 2].map((i) => 3 * copper.corners[3 * t + i]);
  const mean = (x: Float32Array, k: number) => (x[a + k] + x[b + k] + x[c + k]) / 3;
  return {
    point: [mean(copper.positions, 0), mean(copper.positions, 1), mean(copper.positions, 2)],
    normal: [mean(copper.normals, 0), mean(copper.normals, 1), mean(copper.normals, 2)],
  };
}

/** Triangle of the copper that `point`, on face `face`, lies in; -1 where there is no copper. The last one drawn wins. */
export function copperAt(copper: CopperPicture, face: number, point: Vec3): number {
  const { positions: x } = copper;
  for (let t = copper.face.length - 1; t >= 0; t--) {
    if (copper.face[t] !== face) continue;
    const [o, a, b] = [0, 1, 2].map((i) => 3 * copper.corners[3 * t + i]);
    const n: [number, number, number] = [0, 0, 0];
    const [ux, uy, uz] = [x[a] - x[o], x[a + 1] - x[o + 1], x[a + 2] - x[o + 2]];
    const [vx, vy, vz] = [x[b] - x[o], x[b + 1] - x[o + 1], x[b + 2] - x[o + 2]];
    n[0] = uy * vz - uz * vy;
    n[1] = uz * vx - ux * vz;
    n[2] = ux * vy - uy * vx;
    const nn = n[0] * n[0] + n[1] * n[1] + n[2] * n[2];
    const [px, py, pz] = [point[0] - x[o], point[1] - x[o + 1], point[2] - x[o + 2]];
    const s = ((py * vz - pz * vy) * n[0] + (pz * vx - px * vz) * n[1] + (px * vy - py * vx) * n[2]) / nn;
    const r = ((uy * pz - uz * py) * n[0] + (uz * px - ux * pz) * n[1] + (ux * py - uy * px) * n[2]) / nn;
    // A hair outside still counts: neighbours of the same copper share the edge.
    if (s >= -1e-3 && r >= -1e-3 && s + r <= 1 + 1e-3) return t;
  }
  return -1;
}
