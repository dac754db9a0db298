import { describe, expect, it } from 'vitest';
import { encodeUtf8 } from '../../../src/core/base/utf8.ts';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import { buildNormals } from '../../../src/core/part/normals.ts';
import { burnLayer } from '../../../src/core/proof/burn.ts';
import { gatherPulses } from '../../../src/core/proof/burnt-pulses.ts';
import { copperGrid } from '../../../src/core/proof/copper-grid.ts';
import { leanOf } from '../../../src/core/proof/forward.ts';
import { sampleCopper } from '../../../src/core/proof/samples.ts';
import { spotOf } from '../../../src/core/proof/spot.ts';
import { strayArea } from '../../../src/core/proof/stray.ts';
import { tracePulses } from '../../../src/core/proof/trace.ts';
import {
  box,
  commandFor,
  copperOf,
  exampleHead,
  meshOf,
  projectWith,
  type Rect,
  toBench,
  turned,
} from '../helpers/proof-scene.ts';

/** Area that pulses aimed at these places activate beyond the tolerance; each a stroke of its own. */
function stray(
  pose: ReturnType<typeof turned>,
  rects: Rect[],
  aims: Vec3[],
  tolerance: number,
  head: Record<string, unknown> = {},
  mesh = box(-14, -9, 10, 8, 4),
): number {
  const project = projectWith(pose, { head: { ...exampleHead, ...head } });
  const offset = -toBench(pose, aims[0])[2]; // in focus at the first
  const rows = aims.flatMap((p) => {
    const [X, Y] = commandFor(project, pose, offset, p);
    return [`${X},${Y},0,0,a,1`, `${X},${Y},1,800,a,1`];
  });
  const bytes = encodeUtf8(['x_mm,y_mm,mark,speed_mm_s,element,power', ...rows].join('\n'));
  const normals = buildNormals(mesh);
  const copper = copperOf(rects);
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
  const place = { pose, offset, lean: leanOf(project.head) };
  const burn = burnLayer(
    pulses,
    place,
    samples,
    spotOf(project.head, project.material),
    project.limits,
    project.material,
    new Uint8Array(samples.count),
  );
  return strayArea(gatherPulses([{ pulses, burn, place }]), mesh, normals, copperGrid(copper), tolerance);
}

/** Many pulses far from one another: their areas add up and the lattice's grain averages out. */
const scattered = (n: number, x0: number, y0: number): Vec3[] =>
  Array.from({ length: n }, (_, i) => [
    x0 + 0.317 * (i % 20),
    y0 + 0.2711 * Math.floor(i / 20) + 0.00371 * (i % 20),
    0,
  ]);

const far: Rect[] = [{ id: 'a', net: 'A', from: [-13, -8], to: [-12, -7.5] }];
/** π a² / cosθ of one pulse in focus; a from w0 = 23.308829 µm and F(0) = 3.905872 J/cm² (Liu 1982). */
const ellipse = (cos: number) => (Math.PI * 0.023308829 ** 2 * Math.log((3.905872 * cos) / 0.4)) / 2 / cos;

describe('stray area', () => {
  it('of pulses far from any copper is the sum of their discs', () => {
    const n = 400;
    const area = stray(turned([0, 0, 1], 0, [1, -2, 0]), far, scattered(n, -4, -3), 0.05);
    expect(Math.abs(area / (n * ellipse(1)) - 1)).toBeLessThan(0.02);
  });

  // pulses in a row along the axis of the turn, all in focus; a little to and fro, so that the lattice's grain averages out
  it.each([
    ['the side x = 10', [0, 1, 0], -75, 15, (i, j) => [10, -8 + 0.1037 * i, -2 + j]],
    ['the side y = 8', [1, 0, 0], 70, 20, (i, j) => [-13 + 0.107 * i, 8, -2 + j]],
    ['the side x = -14', [0, 1, 0], 60, 30, (i, j) => [-14, -8 + 0.1037 * i, -2 + j]],
    ['the leaning top', [1, 1, 0], 40, 40, (i, j) => [-5 + 0.0703 * i + j, -5 + 0.0703 * i - j, 0]],
  ] as [string, Vec3, number, number, (i: number, j: number) => Vec3][])(
    'counts area of the surface, not of a projection: %s',
    (_, axis, degrees, tilt, place) => {
      const n = 140;
      const aims = Array.from({ length: n }, (_, i) => place(i, (0.00371 * i) % 0.03));
      const area = stray(turned(axis, degrees, [2, -1, 0]), far, aims, 0.05, { pivot: null });
      expect(Math.abs(area / (n * ellipse(Math.cos((tilt * Math.PI) / 180))) - 1)).toBeLessThan(0.03);
    },
  );

  it('counts area of a face that leans in the part itself: a plane z = 0.75 x, 0.8 the cosine', () => {
    const slope = meshOf([-9, -9, -6.75, 8, -9, 6, 8, 9, 6, -9, 9, -6.75], [0, 1, 2, 0, 2, 3]);
    const n = 140;
    const aims = Array.from(
      { length: n },
      (_, i): Vec3 => [(0.00371 * i) % 0.03, -8 + 0.1037 * i, 0.75 * ((0.00371 * i) % 0.03)],
    );
    const area = stray(turned([0, 0, 1], 0), far, aims, 0.05, { pivot: null }, slope);
    expect(Math.abs(area / (n * ellipse(0.8)) - 1)).toBeLessThan(0.03);
  });

  it('counts a place hit twice once', () => {
    const aims = scattered(100, -4, -3);
    const pose = turned([0, 0, 1], 0);
    expect(stray(pose, far, [...aims, ...aims], 0.05)).toBe(stray(pose, far, aims, 0.05));
  });

  it('forgives what lies within the tolerance of copper, to the micrometre', () => {
    // discs of a = 24.88 µm about points beside the right edge of the copper, at x = -12: they reach beyond 0.05 from 25.1 µm on
    const at = (gap: number): Vec3[] => [[-12 + gap, -7.7, 0]];
    const pose = turned([0, 0, 1], 0, [12, 7, 0]);
    expect(stray(pose, far, at(0.025), 0.05)).toBe(0);
    expect(stray(pose, far, at(0.04), 0.05)).toBeGreaterThan(0);
    expect(stray(pose, far, at(0.06), 0.05)).toBeLessThan(ellipse(1));
    expect(stray(pose, far, at(-0.2), 0.05)).toBe(0);
  });
});
