/** Small parts in closed form, and STL bytes made from facets. */
import type { Vec3 } from '../../../src/core/base/vec.ts';
import type { Soup } from '../../../src/core/mesh/stl.ts';

export type Facet = [Vec3, Vec3, Vec3];

export const soupOf = (facets: readonly Facet[]): Soup => ({
  corners: Float64Array.from(facets.flat(2)),
  trailingBytes: 0,
});

export function binaryStl(facets: readonly Facet[], header = 'made by a test'): Uint8Array {
  const bytes = new Uint8Array(84 + 50 * facets.length);
  for (let i = 0; i < header.length; i++) bytes[i] = header.charCodeAt(i);
  const view = new DataView(bytes.buffer);
  view.setUint32(80, facets.length, true);
  for (const [k, v] of facets.flat(2).entries())
    view.setFloat32(84 + 50 * Math.floor(k / 9) + 12 + 4 * (k % 9), v, true);
  return bytes;
}

export function textStl(facets: readonly Facet[], eol = '\n'): string {
  const lines = facets.flatMap((f) => [
    'facet normal 0 0 0',
    ' outer loop',
    ...f.map((p) => `  vertex ${p.join(' ')}`),
    ' endloop',
    'endfacet',
  ]);
  return ['solid test', ...lines, 'endsolid test', ''].join(eol);
}

export const bytesOf = (text: string): Uint8Array => Uint8Array.from(text, (c) => c.charCodeAt(0));

export const flip = ([a, b, c]: Facet): Facet => [a, c, b];

/** Facets moved by `by`. */
export const moved = (facets: readonly Facet[], by: Vec3): Facet[] =>
  facets.map((f) => f.map((p) => [p[0] + by[0], p[1] + by[1], p[2] + by[2]] as Vec3) as Facet);

/** Box of sides a × b × c with one corner at the origin, wound outward: volume abc, area 2 (ab + bc + ca). */
export function box(a: number, b: number, c: number): Facet[] {
  const v = (i: number): Vec3 => [i & 1 ? a : 0, i & 2 ? b : 0, i & 4 ? c : 0];
  const quad = (p: number, q: number, r: number, s: number): Facet[] => [
    [v(p), v(q), v(r)],
    [v(p), v(r), v(s)],
  ];
  return [
    ...quad(0, 2, 3, 1),
    ...quad(4, 5, 7, 6),
    ...quad(0, 1, 5, 4),
    ...quad(2, 6, 7, 3),
    ...quad(0, 4, 6, 2),
    ...quad(1, 3, 7, 5),
  ];
}

/** Tetrahedron on the axes with legs a, b, c, wound outward: volume abc / 6. */
export function tetra(a: number, b: number, c: number): Facet[] {
  const [o, x, y, z]: Vec3[] = [
    [0, 0, 0],
    [a, 0, 0],
    [0, b, 0],
    [0, 0, c],
  ];
  return [
    [o, y, x],
    [o, x, z],
    [o, z, y],
    [x, y, z],
  ];
}

/** Strip of `n` quads around a ring of radius 10, 4 wide, given `halfTurns` half turns: one-sided when odd. */
export function twistedStrip(n: number, halfTurns: number): Facet[] {
  const at = (i: number, side: number): Vec3 => {
    const u = (2 * Math.PI * i) / n;
    const w = (halfTurns * u) / 2;
    const r = 10 + side * 2 * Math.cos(w);
    return [r * Math.cos(u), r * Math.sin(u), side * 2 * Math.sin(w)].map(Math.fround) as unknown as Vec3;
  };
  const facets: Facet[] = [];
  for (let i = 0; i < n; i++) {
    // The last quad joins the first: after an odd number of half turns with its sides changed.
    const last = i === n - 1;
    const cross = last && halfTurns % 2 === 1;
    const a = at(i, -1);
    const b = at(i, 1);
    const c = last ? at(0, cross ? -1 : 1) : at(i + 1, 1);
    const d = last ? at(0, cross ? 1 : -1) : at(i + 1, -1);
    facets.push([a, d, c], [a, c, b]);
  }
  return facets;
}

/** Closed ring with lumps, n × m quads: nothing about it looks the same mirrored. */
export function lumpyRing(n: number, m: number): Facet[] {
  const at = (i: number, j: number): Vec3 => {
    const u = (2 * Math.PI * (i % n)) / n;
    const v = (2 * Math.PI * (j % m)) / m;
    const r = 8 + Math.sin(3 * u + 0.4) + 0.8 * Math.cos(2 * v - u);
    return [
      (25 + r * Math.cos(v)) * Math.cos(u),
      (22 + r * Math.cos(v)) * Math.sin(u),
      r * Math.sin(v) + Math.sin(2 * u),
    ].map(Math.fround) as unknown as Vec3;
  };
  const facets: Facet[] = [];
  for (let i = 0; i < n; i++)
    for (let j = 0; j < m; j++) {
      const [a, b, c, d] = [at(i, j), at(i + 1, j), at(i + 1, j + 1), at(i, j + 1)];
      facets.push([a, b, c], [a, c, d]);
    }
  return facets;
}
