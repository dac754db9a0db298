import { describe, expect, it } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import { firstFace, rasterFaces } from '../../../src/core/proof/first-hit.ts';
import { beamAt, type Lean, towardHead } from '../../../src/core/proof/forward.ts';

const lean: Lean = { kx: 1 / 190, ky: 1 / 178 };

/** Every triangle against the beam, Möller & Trumbore (1997): the slow and obvious way. */
function bruteFirst(p: Float64Array, t: Uint32Array, X: number, Y: number): { face: number; d: number } {
  const o = beamAt(lean, X, Y, 0);
  const u = towardHead(lean, X, Y);
  let best = { face: -1, d: -Infinity };
  const sub = (i: number, j: number) => [p[i] - p[j], p[i + 1] - p[j + 1], p[i + 2] - p[j + 2]];
  const cross = (a: number[], b: number[]) => [
    a[1] * b[2] - a[2] * b[1],
    a[2] * b[0] - a[0] * b[2],
    a[0] * b[1] - a[1] * b[0],
  ];
  const dot = (a: readonly number[], b: readonly number[]) => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
  for (let f = 0; f < t.length / 3; f++) {
    const [a, b, c] = [3 * t[3 * f], 3 * t[3 * f + 1], 3 * t[3 * f + 2]];
    const e1 = sub(b, a);
    const e2 = sub(c, a);
    const q = cross([...u], e2);
    const det = dot(e1, q);
    if (det === 0) continue;
    const s = [o[0] - p[a], o[1] - p[a + 1], o[2] - p[a + 2]];
    const v = dot(s, q) / det;
    const r = cross(s, e1);
    const w = dot(u, r) / det;
    if (v < 0 || w < 0 || v + w > 1) continue;
    const d = o[2] + (dot(e2, r) / det) * u[2];
    if (d > best.d) best = { face: f, d };
  }
  return best;
}

/** A bumpy sheet of N × N squares; `lift` turns it into something a beam may cross several times. */
function sheet(
  n: number,
  size: number,
  height: (x: number, y: number) => number,
): { p: number[]; t: number[] } {
  const p: number[] = [];
  const t: number[] = [];
  for (let j = 0; j <= n; j++)
    for (let i = 0; i <= n; i++) {
      const x = -size / 2 + (size * i) / n;
      const y = -size / 3 + (size * j) / n;
      p.push(x, y, height(x, y));
    }
  for (let j = 0; j < n; j++)
    for (let i = 0; i < n; i++) {
      const a = j * (n + 1) + i;
      t.push(a, a + 1, a + n + 2, a, a + n + 2, a + n + 1);
    }
  return { p, t };
}

describe('first face met by a beam', () => {
  it('agrees with trying every triangle on loose triangles of all sizes (seed 11)', () => {
    const random = randomFrom(11);
    const p: number[] = [];
    const t: number[] = [];
    for (let f = 0; f < 400; f++) {
      const size = 10 ** (2.2 * random() - 0.5);
      const [x, y, z] = [90 * random() - 45, 90 * random() - 45, 60 * random() - 40];
      for (let k = 0; k < 3; k++)
        p.push(
          x + size * (random() - 0.5),
          y + size * (random() - 0.5),
          Math.min(100, z + size * (random() - 0.5)),
        );
      t.push(3 * f, 3 * f + 1, 3 * f + 2);
    }
    const positions = Float64Array.from(p);
    const triangles = Uint32Array.from(t);
    const raster = rasterFaces(positions, triangles, lean, [-50, -48, 52, 50]);
    let [hits, deep] = [0, 0];
    for (let i = 0; i < 4000; i++) {
      const X = 102 * random() - 50;
      const Y = 98 * random() - 48;
      const mine = firstFace(raster, positions, triangles, lean, X, Y, { face: -1, d: 0 });
      const slow = bruteFirst(positions, triangles, X, Y);
      expect(mine.face).toBe(slow.face);
      if (slow.face < 0) continue;
      hits++;
      if (slow.d < 0) deep++;
      expect(Math.abs(mine.d - slow.d)).toBeLessThan(1e-9);
    }
    expect(hits).toBeGreaterThan(1000);
    expect(deep).toBeGreaterThan(100);
  });

  it('no beam slips between the faces of a sheet, aimed at its edges and corners (seed 5)', () => {
    const random = randomFrom(5);
    const { p, t } = sheet(40, 30, (x, y) => 3 * Math.sin(x / 3) * Math.cos(y / 4) + 0.1 * x);
    const positions = Float64Array.from(p);
    const triangles = Uint32Array.from(t);
    const raster = rasterFaces(positions, triangles, lean, [-12, -7, 12, 17]);
    const aim = (a: number, b: number, s: number) => {
      const at = [0, 1, 2].map((c) => p[3 * a + c] + s * (p[3 * b + c] - p[3 * a + c]));
      return [at[0] / (1 - at[2] * lean.kx), at[1] / (1 - at[2] * lean.ky)];
    };
    let aimed = 0;
    for (let i = 0; i < 3000; i++) {
      const h = Math.floor(random() * t.length);
      const [X, Y] = aim(t[h], t[h - (h % 3) + ((h + 1) % 3)], i % 3 === 0 ? 0 : random());
      if (Math.abs(X) > 12 || Y < -7 || Y > 17) continue;
      aimed++;
      expect(
        firstFace(raster, positions, triangles, lean, X, Y, { face: -1, d: 0 }).face,
      ).toBeGreaterThanOrEqual(0);
    }
    expect(aimed).toBeGreaterThan(1000);
  });

  it('a roof takes the beam from the plate below it', () => {
    const positions = Float64Array.of(-20, -20, 0, 20, -20, 0, 0, 20, 0, 1, 1, 6, 9, 1, 6, 1, 9, 6);
    const triangles = Uint32Array.of(0, 1, 2, 3, 4, 5);
    const raster = rasterFaces(positions, triangles, lean, [-20, -20, 20, 20]);
    const under = firstFace(raster, positions, triangles, lean, 3, 3, { face: -1, d: 0 });
    expect([under.face, Number(under.d.toFixed(9))]).toEqual([1, 6]);
    const beside = firstFace(raster, positions, triangles, lean, -3, 3, { face: -1, d: 0 });
    expect([beside.face, beside.d]).toEqual([0, 0]);
    // the beam leans: a command just outside the roof as seen from above still meets it, for it leans outward going down
    const leaning = firstFace(raster, positions, triangles, lean, 9.2, 1.04, { face: -1, d: 0 });
    expect(leaning.face).toBe(1);
  });

  it('a beam beside the part meets nothing', () => {
    const positions = Float64Array.of(-1, -1, 0, 1, -1, 0, 0, 1, 0);
    const raster = rasterFaces(positions, Uint32Array.of(0, 1, 2), lean, [-5, -5, 5, 5]);
    expect(firstFace(raster, positions, Uint32Array.of(0, 1, 2), lean, 4, 4, { face: -1, d: 0 }).face).toBe(
      -1,
    );
  });
});
