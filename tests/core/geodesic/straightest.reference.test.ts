import { describe, expect, it } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import { at3, distance, dot, normalize, type Vec3 } from '../../../src/core/base/vec.ts';
import { straightest } from '../../../src/core/geodesic/straightest.ts';
import { barycentric, positionOf } from '../../../src/core/mesh/surface-point.ts';
import { source } from '../../reference/sources.ts';
import { gridMesh, placeAt, sphere, tube } from '../helpers/surfaces.ts';

const rad = (deg: number): number => (deg * Math.PI) / 180;

describe(source('do-carmo'), () => {
  it.each([
    [15, 90, 40],
    [15, 930, 38],
    [10, -400, -25],
    [10, 25, -0.01],
  ])('a helix of %d mm radius over %d degrees on a tube of long slivers, to 1e-12', (r, dphi, dz) => {
    // 720 flats of 60 mm: slivers of aspect 460. Unrolled they are a strip, and the line in it is straight.
    const n = 720;
    const mesh = tube(r, 60, n, 1);
    const flat = 2 * r * Math.sin(Math.PI / n);
    const z0 = dz < 0 ? 47 : 11;
    const s0 = 3.3;
    const at = (s: number): Vec3 => {
      const k = Math.floor(s);
      const [a, b] = [k, k + 1].map(
        (i): Vec3 => [r * Math.cos((2 * Math.PI * i) / n), r * Math.sin((2 * Math.PI * i) / n), 0],
      );
      return [a[0] + (s - k) * (b[0] - a[0]), a[1] + (s - k) * (b[1] - a[1]), 0];
    };
    const s1 = s0 + (dphi / 360) * n;
    const p = at(s0);
    const start = placeAt(mesh, [p[0], p[1], z0]).surface;
    const along = normalize([at(3.9)[0] - at(3.1)[0], at(3.9)[1] - at(3.1)[1], 0]);
    const way = (dphi / 360) * n * flat;
    const line = straightest(mesh, start, [way * along[0], way * along[1], dz], Math.hypot(way, dz));
    const q = at(s1);
    expect(line.stopped).toBeNull();
    expect(distance(positionOf(mesh, line.end), [q[0], q[1], z0 + dz]) / line.path.length).toBeLessThan(
      1e-12,
    );
    expect(Math.abs(line.path.length / Math.hypot(way, dz) - 1)).toBeLessThan(1e-12);
    expect(line.direction[2]).toBeCloseTo(dz / Math.hypot(way, dz), 12);
  });

  it.each([
    [30, 40, 100],
    [20, 30, 170],
    [45, 35, 95],
  ])('a cone of half-angle %d: straight in the unrolled sector, to 1e-12', (beta, l1, turn) => {
    const n = 360;
    const [s, c] = [Math.sin(rad(beta)), Math.cos(rad(beta))];
    const at = (l: number, i: number): Vec3 => {
      const phi = (2 * Math.PI * (i % n)) / n;
      return [l * s * Math.cos(phi), l * s * Math.sin(phi), -l * c];
    };
    const mesh = gridMesh(n, 1, (i, j) => at(j === 0 ? 50 : 0.01, i));
    // Each flat is a sector of this angle about the tip.
    const sector = 2 * Math.asin(s * Math.sin(Math.PI / n));
    // On the ruling of number 7, turned against the way to the tip.
    const [tip, up] = [[0, 0, 0] as Vec3, at(l1, 7)];
    const to = normalize(up);
    const side = normalize([at(l1, 8)[0] - up[0], at(l1, 8)[1] - up[1], at(l1, 8)[2] - up[2]]);
    const across = normalize(side.map((x, k) => x - dot(side, to) * to[k]) as unknown as Vec3);
    const angle = rad(turn);
    const direction = to.map((x, k) => x * Math.cos(angle) + across[k] * Math.sin(angle)) as unknown as Vec3;
    const face = [...mesh.facetOfFace.keys()].find((f) =>
      [up, at(l1, 7.5)].every((p) => Math.min(...barycentric(mesh, f, p)) > -1e-9),
    )!;
    const bary = barycentric(mesh, face, up).map((w) => (Math.abs(w) < 1e-12 ? 0 : w)) as unknown as Vec3;
    const length = 30;
    const line = straightest(mesh, { face, bary }, direction, length);
    // In the plane: from (l1, 0) along the angle.
    const [x, y] = [l1 + length * Math.cos(angle), length * Math.sin(angle)];
    const end = positionOf(mesh, line.end);
    const [l, k] = [Math.hypot(x, y), Math.atan2(y, x) / sector];
    const [a, b] = [at(1, 7 + Math.floor(k)), at(1, 8 + Math.floor(k))];
    const inFlat = (k - Math.floor(k)) * sector;
    const part = Math.sin(inFlat) / (Math.sin(inFlat) + Math.sin(sector - inFlat));
    const chord = a.map((v, m) => v + part * (b[m] - v)) as unknown as Vec3;
    const far = l / distance(chord, tip);
    expect(line.stopped).toBeNull();
    expect(distance(end, chord.map((v) => v * far) as unknown as Vec3)).toBeLessThan(length * 1e-12);
  });

  it('on ever finer spheres the line nears the great circle (seed 5)', () => {
    const r = 20;
    const errors = [3, 4, 5].map((level) => {
      const mesh = sphere(r, level);
      const random = randomFrom(5);
      let sum = 0;
      for (let i = 0; i < 40; i++) {
        const at = normalize([random() - 0.5, random() - 0.5, random() - 0.5]);
        const { surface, point } = placeAt(mesh, [r * at[0], r * at[1], r * at[2]]);
        const out = normalize(point);
        const any: Vec3 = [random() - 0.5, random() - 0.5, random() - 0.5];
        const t = normalize(any.map((x, k) => x - dot(any, out) * out[k]) as unknown as Vec3);
        const length = 25;
        const end = positionOf(mesh, straightest(mesh, surface, t, length).end);
        const [c, s] = [Math.cos(length / r), Math.sin(length / r)];
        const exact = out.map((x, k) => r * (c * x + s * t[k])) as unknown as Vec3;
        sum += distance(end, exact) ** 2;
      }
      return Math.sqrt(sum / 40) / 25;
    });
    expect(errors[2]).toBeLessThan(3e-3);
    expect(errors[0] / errors[2]).toBeGreaterThan(6);
  });

  it('Clairaut: on a vase the radius times the sine to the meridian stays, ever better on finer meshes', () => {
    const radius = (v: number): number => 12 + 4 * Math.sin(v / 5) - 0.1 * v;
    const strays = [60, 120, 240].map((n) => {
      const mesh = gridMesh(n, n, (i, j) => {
        const [u, v] = [(2 * Math.PI * (i % n)) / n, (40 * j) / n];
        return [radius(v) * Math.cos(u), radius(v) * Math.sin(u), v];
      });
      let worst = 0;
      for (const [phi, v, dz] of [
        [0.3, 3, 1.3],
        [2.1, 20, 0.4],
        [4.4, 34, -1.4],
      ]) {
        const p: Vec3 = [radius(v) * Math.cos(phi), radius(v) * Math.sin(phi), v];
        const line = straightest(
          mesh,
          placeAt(mesh, p).surface,
          [-Math.sin(phi), Math.cos(phi), dz] as Vec3,
          38,
        );
        expect(line.stopped).toBeNull();
        const momentum = Array.from(line.path.faces, (_, i) => {
          const [a, b] = [at3(line.path.points, i), at3(line.path.points, i + 1)];
          // Moment of the unit direction about the axis: r sin of the angle to the meridian.
          return (a[0] * b[1] - a[1] * b[0]) / distance(a, b);
        });
        for (const m of momentum) worst = Math.max(worst, Math.abs(m / momentum[0] - 1));
      }
      return worst;
    });
    expect(strays[2]).toBeLessThan(0.005);
    // Second order would be 16.
    expect(strays[0] / strays[2]).toBeGreaterThan(5);
  });
});
