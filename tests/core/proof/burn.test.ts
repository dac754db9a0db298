import { describe, expect, it } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import { encodeUtf8 } from '../../../src/core/base/utf8.ts';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import { buildNormals } from '../../../src/core/part/normals.ts';
import { ACTIVATED, burnLayer, OUT_OF_DEPTH } from '../../../src/core/proof/burn.ts';
import { leanOf, towardHead } from '../../../src/core/proof/forward.ts';
import { sampleCopper } from '../../../src/core/proof/samples.ts';
import { spotOf } from '../../../src/core/proof/spot.ts';
import { tracePulses } from '../../../src/core/proof/trace.ts';
import {
  box,
  commandFor,
  copperOf,
  meshOf,
  projectWith,
  type Rect,
  toBench,
  turned,
} from '../helpers/proof-scene.ts';

/** Burns single pulses aimed at places of the part and gives back everything about it. */
function shoot(
  pose: ReturnType<typeof turned>,
  offset: number,
  rects: Rect[],
  aims: Vec3[],
  mesh = box(-14, -9, 10, 8, 4),
  change: Record<string, unknown> = {},
) {
  const project = projectWith(pose, change);
  const normals = buildNormals(mesh);
  const copper = copperOf(rects);
  // a stroke too short for a second pulse
  const rows = aims.flatMap((p) => {
    const [X, Y] = commandFor(project, pose, offset, p);
    return [`${X},${Y},0,0,a,1`, `${X},${Y},1,800,a,1`];
  });
  const bytes = encodeUtf8(['x_mm,y_mm,mark,speed_mm_s,element,power', ...rows].join('\n'));
  const pulses = tracePulses({
    file: 'a.csv',
    format: 'csv',
    bytes,
    head: project.head,
    pose,
    offset,
    mesh,
    normals,
  });
  const samples = sampleCopper(copper, mesh, normals);
  const flags = new Uint8Array(samples.count);
  const spot = spotOf(project.head, project.material);
  const lean = leanOf(project.head);
  const burn = burnLayer(
    pulses,
    { pose, offset, lean },
    samples,
    spot,
    project.limits,
    project.material,
    flags,
  );
  return { project, pulses, samples, flags, burn, spot, lean };
}

const straight = { head: { ...projectWith(turned([0, 0, 1], 0)).head, pivot: null } };
const square: Rect = { id: 'a', net: 'A', from: [-2, -2.2], to: [1.8, 2] };

describe('one pulse on a leaning plate', () => {
  // head of the table, F_act 0.4 J/cm²: half-width a across the tilt and a / cosθ along it, µm (Liu 1982)
  it.each([
    [0, 0, 24.880314, 24.880314],
    [30, 0, 24.082265, 27.807805],
    [45, 1, 24.467472, 34.602231],
    [60, 0, 20.754182, 41.508365],
    [60, 2, 21.512094, 43.024187],
  ])(
    'at %d° and d = %d mm activates an ellipse of a across and a / cosθ along (Liu 1982)',
    (degrees, d, across, along) => {
      const { samples, flags, pulses } = shoot(
        turned([0, 1, 0], degrees),
        d,
        [{ ...square, from: [-0.1, -0.1], to: [0.1, 0.1] }],
        [[0.003, -0.002, 0]],
        undefined,
        straight,
      );
      expect(Math.abs(pulses.d[0] - d)).toBeLessThan(0.01);
      let [x, y, area] = [0, 0, 0];
      for (let s = 0; s < samples.count; s++) {
        if (!flags[s]) continue;
        x = Math.max(x, Math.abs(samples.position[3 * s] - 0.003));
        y = Math.max(y, Math.abs(samples.position[3 * s + 1] + 0.002));
        area += samples.area[s];
        const inside =
          ((samples.position[3 * s] - 0.003) / along) ** 2 +
          ((samples.position[3 * s + 1] + 0.002) / across) ** 2;
        expect(inside).toBeLessThan(1.01e-6);
      }
      // samples stand 0.01 to 0.02 mm apart: none may lie outside, and the widest lies near the rim
      expect(1000 * x).toBeGreaterThan(along - 16);
      expect(1000 * y).toBeGreaterThan(across - 16);
      expect(Math.abs(area / (Math.PI * along * across * 1e-6) - 1)).toBeLessThan(0.2);
    },
  );

  it('activates just the samples that the formula says, for every sample and pulse (seed 17)', () => {
    const random = randomFrom(17);
    const pose = turned([1, 2, 0.5], 33, [20, -15, 0.4]);
    const offset = 0.7;
    const aims: Vec3[] = Array.from({ length: 60 }, () => [3.9 * random() - 2.05, 4.3 * random() - 2.25, 0]);
    const { project, pulses, samples, flags, burn, spot, lean } = shoot(pose, offset, [square], aims);
    expect(pulses.d.length).toBe(60);
    const zenith = toBench({ ...pose, move: [0, 0, 0] }, [0, 0, 1]);
    const near = new Float64Array(60).fill(Infinity);
    let touched = 0;
    for (let s = 0; s < samples.count; s++) {
      const at = toBench(pose, [
        samples.position[3 * s],
        samples.position[3 * s + 1],
        samples.position[3 * s + 2],
      ]);
      let bits = 0;
      for (let i = 0; i < 60; i++) {
        const [X, Y, d] = [pulses.command[2 * i], pulses.command[2 * i + 1], pulses.d[i]];
        const u = towardHead(lean, X, Y);
        const v = [at[0] - X * (1 - d / 190), at[1] - Y * (1 - d / 178), at[2] + offset - d];
        const along = v[0] * u[0] + v[1] * u[1] + v[2] * u[2];
        const rho2 = v[0] ** 2 + v[1] ** 2 + v[2] ** 2 - along ** 2;
        const w = spot.waist * Math.hypot(1, d / u[2] / spot.rayleigh);
        const cos = zenith[0] * u[0] + zenith[1] * u[1] + zenith[2] * u[2];
        const F = ((200 * spot.energy * cos) / (Math.PI * w * w)) * Math.exp((-2 * rho2) / (w * w));
        near[i] = Math.min(near[i], Math.hypot(v[0], v[1], v[2]));
        if (F >= project.material.activationFluence)
          bits |= Math.abs(d) > 1.7 + 1e-3 ? ACTIVATED | OUT_OF_DEPTH : ACTIVATED;
      }
      if (bits) touched++;
      expect(flags[s]).toBe(bits);
    }
    expect(touched).toBeGreaterThan(200);
    const reached = [...burn.nearest].map((n, i) => (n < Infinity ? Math.abs(n - near[i]) : 0));
    expect(Math.max(...reached)).toBeLessThan(1e-6);
    expect([...burn.element].every((e) => e === 0)).toBe(true);
  });

  it('out of the usable depth marks what it activates', () => {
    const run = (offset: number) =>
      shoot(turned([0, 0, 1], 0), offset, [square], [[0, 0, 0]], undefined, straight);
    expect(run(1.7).flags.filter((f) => f === ACTIVATED).length).toBeGreaterThan(0);
    expect(run(1.7).flags.some((f) => (f & OUT_OF_DEPTH) > 0)).toBe(false);
    expect(run(1.702).flags.some((f) => f === (ACTIVATED | OUT_OF_DEPTH))).toBe(true);
    expect(run(-1.702).flags.some((f) => f === (ACTIVATED | OUT_OF_DEPTH))).toBe(true);
  });

  it('names the elements it activates', () => {
    const pair: Rect[] = [
      { ...square, to: [0, 2] },
      { id: 'b', net: 'B', from: [0.01, -2.2], to: [1.8, 2] },
    ];
    const { burn } = shoot(
      turned([0, 0, 1], 0),
      0,
      pair,
      [
        [-1, 0, 0],
        [0.005, 0, 0],
        [1, 0, 0],
        [5, 0, 0],
      ],
      undefined,
      straight,
    );
    expect([...burn.start]).toEqual([0, 1, 3, 4, 4]);
    expect([burn.element[0], [...burn.element.slice(1, 3)].sort(), burn.element[3]]).toEqual([0, [0, 1], 1]);
  });
});

describe('what stands in the way', () => {
  // the plate of the rectangle at z = 0 and a roof over its left half, 3 mm above: faces of the roof look up
  const roofed = meshOf(
    [-9, -9, 0, 9, -9, 0, 9, 9, 0, -9, 9, 0, -9, -9, 3, 0, -9, 3, 0, 9, 3, -9, 9, 3],
    [0, 1, 2, 0, 2, 3, 4, 5, 6, 4, 6, 7],
  );

  it('takes the pulse: copper under a roof stays dark', () => {
    const { flags, pulses } = shoot(
      turned([0, 0, 1], 0),
      0,
      [square],
      [
        [-1, 0.3, 0],
        [1, 0.3, 0],
      ],
      roofed,
      straight,
    );
    expect([...pulses.face].map((f) => f > 1)).toEqual([true, false]);
    expect([...pulses.d]).toEqual([3, 0]);
    expect(flags.some((f) => f > 0)).toBe(true);
  });

  it('lights nothing behind: the copper under the roof is untouched, though the layer also writes at its height', () => {
    const { flags, samples } = shoot(
      turned([0, 0, 1], 0),
      -3,
      [square],
      [
        [-1, 0.3, 0],
        [1, 0.3, 0],
      ],
      roofed,
      straight,
    );
    const lit = [...flags].flatMap((f, s) => (f ? [samples.position[3 * s]] : []));
    expect(lit.length).toBeGreaterThan(0);
    expect(lit.every((x) => Math.abs(x - 1) < 0.1)).toBe(true);
  });

  it('a face seen from behind takes the pulse and is not activated', () => {
    const { flags, pulses } = shoot(
      turned([1, 0, 0], 180),
      0,
      [square],
      [[0.5, 0.3, 0]],
      meshOf([-9, -9, 0, 9, -9, 0, 9, 9, 0], [0, 1, 2]),
      straight,
    );
    expect(pulses.cos[0]).toBeCloseTo(-1, 6);
    expect(flags.every((f) => f === 0)).toBe(true);
  });
});
