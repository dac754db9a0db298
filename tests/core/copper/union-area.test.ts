import { describe, expect, it } from 'vitest';
import { openReport } from '../../../src/core/account.ts';
import { randomFrom } from '../../../src/core/base/random.ts';
import { quiet } from '../../../src/core/base/run-context.ts';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import { netReports } from '../../../src/core/copper/nets.ts';
import { unionArea } from '../../../src/core/copper/union-area.ts';
import type { Patch } from '../../../src/core/drape/copper.ts';
import { drapeCircuit } from '../../../src/core/drape/drape.ts';
import { patchArea } from '../../../src/core/drape/level-lines.ts';
import { type Project, projectSchema } from '../../../src/core/project/schema.ts';
import { exampleHead } from '../helpers/proof-scene.ts';
import { partFrom, plate, tube } from '../helpers/surfaces.ts';

/** The plane of face 7: lopsided, and far from the origin. */
const U: Vec3 = [0.48, 0.64, 0.6];
const V: Vec3 = [-0.8, 0.6, 0];
const at = (x: number, y: number): number[] =>
  [0, 1, 2].map((k) => [1210, -340, 77][k] + x * U[k] + y * V[k]);

const patch = (triangles: readonly number[][], face = 7): Patch => ({
  positions: Float64Array.from(triangles.flatMap((t) => [0, 2, 4].flatMap((i) => at(t[i], t[i + 1])))),
  triangles: Uint32Array.from(triangles.flatMap((_, i) => [3 * i, 3 * i + 1, 3 * i + 2])),
  face: new Int32Array(triangles.length).fill(face),
});

/** Rectangle cut into n × m cells of two triangles. */
function rect(x: number, y: number, w: number, h: number, n = 1, m = 1, face = 7): Patch {
  const out: number[][] = [];
  for (let i = 0; i < n; i++)
    for (let j = 0; j < m; j++) {
      const [a, b, c, d] = [x + (w * i) / n, x + (w * (i + 1)) / n, y + (h * j) / m, y + (h * (j + 1)) / m];
      out.push([a, c, b, c, b, d], [a, c, b, d, a, d]);
    }
  return patch(out, face);
}

/** Disc of n sides, cut into rings. */
function disc(x: number, y: number, r: number, n: number, rings = 1): Patch {
  const out: number[][] = [];
  for (let k = 0; k < rings; k++)
    for (let i = 0; i < n; i++) {
      const p = (ring: number, side: number): number[] => {
        const [s, a] = [(r * ring) / rings, (2 * Math.PI * side) / n];
        return [x + s * Math.cos(a), y + s * Math.sin(a)];
      };
      out.push([...p(k, i), ...p(k + 1, i), ...p(k + 1, i + 1)]);
      if (k > 0) out.push([...p(k, i), ...p(k + 1, i + 1), ...p(k, i + 1)]);
    }
  return patch(out);
}

describe('the area of patches together', () => {
  it('rectangles that overlap, however they are cut', () => {
    for (const [n, m] of [
      [1, 1],
      [7, 3],
      [40, 31],
    ])
      expect(unionArea([rect(0, 0, 4, 3, n, m), rect(2.5, 1.2, 5, 4, m, n)])).toBeCloseTo(
        12 + 20 - 1.5 * 1.8,
        9,
      );
  });

  it('one within another, and one twice', () => {
    expect(unionArea([rect(0, 0, 4, 3, 5, 5), rect(1, 1, 0.7, 0.4)])).toBeCloseTo(12, 9);
    expect(unionArea([rect(1, 1, 0.7, 0.4), rect(0, 0, 4, 3, 5, 5)])).toBeCloseTo(12, 9);
    expect(unionArea([rect(0, 0, 4, 3, 6, 5), rect(0, 0, 4, 3, 6, 5)])).toBeCloseTo(12, 9);
  });

  it('three over one place: it counts once', () => {
    // A cross of two bars, and a square over its middle.
    const bars = [rect(-5, -1, 10, 2, 9, 2), rect(-1, -4, 2, 8, 3, 7)];
    expect(unionArea(bars)).toBeCloseTo(20 + 16 - 4, 9);
    expect(unionArea([...bars, rect(-1.5, -1.5, 3, 3, 4, 4)])).toBeCloseTo(32 + 4 * 0.25, 9);
  });

  it('two discs: a lens is counted once', () => {
    const [r, d] = [1.3, 1.7];
    const lens = 2 * r * r * Math.acos(d / (2 * r)) - (d / 2) * Math.sqrt(4 * r * r - d * d);
    const area = unionArea([disc(0, 0, r, 720, 60), disc(d * 0.8, d * 0.6, r, 601, 50)]);
    expect(Math.abs(area / (2 * Math.PI * r * r - lens) - 1)).toBeLessThan(3e-5);
  });

  it('touching along an edge, or in different faces of one place, is no overlap: the plain sum, to the last digit', () => {
    const near = [rect(0, 0, 4, 3, 5, 4), rect(4, 0.3, 2, 2, 3, 3)];
    expect(unionArea(near)).toBeCloseTo(16, 9);
    const faces = [rect(0, 0, 4, 3, 5, 4), rect(1, 1, 2, 2, 3, 3, 8)];
    expect(unionArea(faces)).toBe(patchArea(faces[0]) + patchArea(faces[1]));
    const apart = [rect(0, 0, 4, 3, 5, 4), rect(4.1, 0, 2, 2, 3, 3)];
    expect(unionArea(apart)).toBe(patchArea(apart[0]) + patchArea(apart[1]));
    expect(unionArea([])).toBe(0);
  });

  it('the order of the patches makes no difference, nor a patch without triangles: seeds 1 to 20', () => {
    for (let seed = 1; seed <= 20; seed++) {
      const random = randomFrom(seed);
      const list = Array.from({ length: 4 }, () =>
        disc(2 * random(), 2 * random(), 0.4 + random(), 5 + Math.floor(20 * random())),
      );
      const area = unionArea(list);
      expect(unionArea([list[2], patch([]), list[0], list[3], list[1]])).toBeCloseTo(area, 9);
      // Oracle: a fine raster of points, each asked whether any triangle holds it.
      const n = 160;
      let hits = 0;
      const flat = list.map((p) => ({ p, corners: corners(p) }));
      for (let i = 0; i < n; i++)
        for (let j = 0; j < n; j++) {
          const [x, y] = [-1.5 + (5 * (i + random())) / n, -1.5 + (5 * (j + random())) / n];
          if (flat.some(({ corners: c }) => holds(c, x, y))) hits++;
        }
      expect(Math.abs((hits * 25) / (n * n) - area)).toBeLessThan(0.05);
    }
  });
});

/** Flat corners of a patch's triangles, 6 each. */
function corners(p: Patch): number[] {
  const out: number[] = [];
  for (const v of p.triangles) {
    const d = [0, 1, 2].map((k) => p.positions[3 * v + k] - [1210, -340, 77][k]);
    out.push(d[0] * U[0] + d[1] * U[1] + d[2] * U[2], d[0] * V[0] + d[1] * V[1] + d[2] * V[2]);
  }
  return out;
}

function holds(c: readonly number[], x: number, y: number): boolean {
  for (let i = 0; i < c.length; i += 6) {
    const side = (a: number, b: number) =>
      (c[i + b] - c[i + a]) * (y - c[i + a + 1]) - (c[i + b + 1] - c[i + a + 1]) * (x - c[i + a]);
    const [p, q, r] = [side(0, 2), side(2, 4), side(4, 0)];
    if ((p >= 0 && q >= 0 && r >= 0) || (p <= 0 && q <= 0 && r <= 0)) return true;
  }
  return false;
}

describe('copper that overlaps', () => {
  const project = (elements: unknown[]): Project =>
    projectSchema.parse({
      format: 'beamdrape',
      version: 1,
      name: 'x',
      part: { file: 'x.stl' },
      head: exampleHead,
      material: { activationFluence: 0.4, damageFluence: 6 },
      setups: [{ name: 'a', pose: { rotate: [0, 0, 0, 1], move: [0, 0, 0] } }],
      circuit: { elements },
    });
  const bar = (id: string, net: string, from: Vec3, to: Vec3) => ({
    id,
    kind: 'trace',
    net,
    width: 1,
    ends: 'butt',
    route: [{ at: from }, { at: to }],
  });

  it('a net has the area of its union; plating that of everything, with or without a net', () => {
    const p = project([
      bar('a', 'N', [-6, 0.2, 0], [6, 0.2, 0]),
      bar('b', 'N', [1, -5, 0], [1, 5, 0]),
      bar('c', 'M', [-3, -4, 0], [-3, 4, 0]),
      bar('d', '', [-5, -3, 0], [5, -3, 0]),
    ]);
    const part = partFrom(plate(20, 16, 3, 2));
    const { copper } = drapeCircuit(p, 'x', part, quiet);
    const nets = new Map(netReports(p, copper).map((n) => [n.name, n.area]));
    expect(nets.get('N')).toBeCloseTo(12 + 10 - 1, 2);
    expect(nets.get('M')).toBeCloseTo(8, 2);
    const { plating } = openReport(p, [], part, copper, []);
    expect(plating.area_dm2 * 1e4).toBeCloseTo(12 + 10 + 8 + 10 - 4, 2);
  });

  it('on a cylinder of slivers a cross counts its middle once', () => {
    const r = 8;
    const on = (s: number, z: number): Vec3 => [r * Math.cos(s / r), r * Math.sin(s / r), z];
    const p = project([bar('a', 'N', on(-3, 12), on(3, 12)), bar('b', 'N', on(0.5, 9), on(0.5, 16))]);
    const { copper } = drapeCircuit(p, 'x', partFrom(tube(r, 30, 360, 1)), quiet);
    const [net] = netReports(p, copper);
    expect(net.area).toBeCloseTo(6 + 7 - 1, 2);
  });
});
