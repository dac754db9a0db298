/** Copper of plain shapes, cut by hand, in a plane that is lopsided and far from the origin. */
import type { Vec3 } from '../../../src/core/base/vec.ts';
import { netReports } from '../../../src/core/copper/nets.ts';
import type { CopperElement, ElementKind, Patch } from '../../../src/core/drape/copper.ts';
import type { NetReport } from '../../../src/core/project/report.ts';
import { type Project, projectSchema } from '../../../src/core/project/schema.ts';

const U: Vec3 = [0.48, 0.64, 0.6];
const V: Vec3 = [-0.8, 0.6, 0];
export type Place = (x: number, y: number) => Vec3;
export const inPlane: Place = (x, y) =>
  [0, 1, 2].map((k) => [1210, -340, 77][k] + x * U[k] + y * V[k]) as unknown as Vec3;

/** Flat triangles, 6 numbers each, counter-clockwise. */
export const patch = (
  triangles: readonly number[][],
  face: number | ((t: number) => number) = 7,
  place = inPlane,
): Patch => {
  // One vertex a place, as patches have them.
  const known = new Map<string, number>();
  const positions: number[] = [];
  const corners = triangles.flatMap((t) =>
    [0, 2, 4].map((i) => {
      const key = `${t[i].toFixed(9)} ${t[i + 1].toFixed(9)}`;
      let v = known.get(key);
      if (v === undefined) {
        v = positions.length / 3;
        positions.push(...place(t[i], t[i + 1]));
        known.set(key, v);
      }
      return v;
    }),
  );
  return {
    positions: Float64Array.from(positions),
    triangles: Uint32Array.from(corners),
    face: Int32Array.from(triangles, (_, t) => (typeof face === 'number' ? face : face(t))),
  };
};

/** Rectangle cut into n × m cells of two triangles. */
export function rect(x: number, y: number, w: number, h: number, n = 1, m = 1): number[][] {
  const out: number[][] = [];
  for (let i = 0; i < n; i++)
    for (let j = 0; j < m; j++) {
      const [a, b, c, d] = [x + (w * i) / n, x + (w * (i + 1)) / n, y + (h * j) / m, y + (h * (j + 1)) / m];
      out.push([a, c, b, c, b, d], [a, c, b, d, a, d]);
    }
  return out;
}

/** Ring of n sides between two radii, the inner 0 for a disc. */
export function ring(x: number, y: number, inner: number, outer: number, n: number): number[][] {
  const at = (r: number, i: number): number[] => {
    const a = (2 * Math.PI * (i % n)) / n;
    return [x + r * Math.cos(a), y + r * Math.sin(a)];
  };
  return Array.from({ length: n }, (_, i) => [
    [...at(inner, i), ...at(outer, i), ...at(outer, i + 1)],
    ...(inner > 0 ? [[...at(inner, i), ...at(outer, i + 1), ...at(inner, i + 1)]] : []),
  ]).flat();
}

/** Convex polygon as a fan. */
export const polygon = (...at: [number, number][]): number[][] =>
  at.slice(2).map((c, i) => [...at[0], ...at[i + 1], ...c]);

let count = 0;
export const element = (kind: ElementKind, copper: Patch, width = 0): CopperElement =>
  ({
    id: `${kind}${count++}`,
    kind,
    net: 'N',
    width,
    length: kind === 'trace' ? 1 : 0,
    copper: { ...copper, source: new Int32Array(copper.face.length) },
  }) as unknown as CopperElement;

export const pad = (triangles: number[][]): CopperElement => element('pad', patch(triangles));
export const region = (triangles: number[][]): CopperElement => element('region', patch(triangles));

/** Sheet whose square has 1 mΩ, so that mΩ are squares. */
export const squares: Project['copper'] = projectSchema.shape.copper.parse({
  depositFactor: 1,
  thickness_um: 1000 / 58,
  temperature_C: 20,
});

export const netOf = (...elements: CopperElement[]): NetReport =>
  netReports({ copper: squares } as Project, { elements })[0];

/** Squares from the first pad to the second. */
export const resistance = (...elements: CopperElement[]): number =>
  netOf(...elements).resistance_mohm[0].value;
