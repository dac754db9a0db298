/**
 * Areas in the plane put together and cut off one another: the one file through which manifold-3d enters. Its CrossSection
 * clips by sweeping a line over all edges (B. Vatti, Comm. ACM 35 (1992) 56) in whole numbers, so that no rounding makes it
 * fail: coordinates are first rounded to a grid of 2^-27 mm (7.5 picometres), and so is each crossing.
 */
import Module, { type CrossSection, type FillRule, type ManifoldToplevel } from 'manifold-3d';
import { Fault } from '../base/news.ts';
import { outlinesOf } from './flat-nesting.ts';
import { traced } from './flat-touching.ts';

/** Step of the grid that coordinates are rounded to, mm. Corners lie within half of it, crossings within one step. */
export const GRID = 2 ** -27;

/** mm. Far beyond any drawing, and far within the whole numbers that the clipping counts with. */
const FARTHEST = 1e9;

/**
 * Rings are 2 a point, mm, the first point not repeated. Given rings may cross and overlap; rings of answers do not, outlines
 * run counter-clockwise and holes clockwise, none goes twice through a point, each starts at its leftmost (then lowest) point, and rings are in the order of
 * these points. Rings of less than three points count as nothing. Coordinates that are not finite are a `Fault`.
 */
export interface Flat {
  /** Everything that the rule calls inside. Nonzero by default: rings one way round add up, the other way round take away. */
  union(rings: readonly Float64Array[], rule?: Rule): Float64Array[];
  /** What lies in `from` and not in `off`, both by the nonzero rule. */
  difference(from: readonly Float64Array[], off: readonly Float64Array[]): Float64Array[];
  /** What lies in both, both by the nonzero rule. */
  intersection(a: readonly Float64Array[], b: readonly Float64Array[]): Float64Array[];
  /** Both share some area: quicker than their intersection. */
  meet(a: readonly Float64Array[], b: readonly Float64Array[]): boolean;
  /**
   * Separate areas of an answer (or of rings that cross as little): each its outline first, then the holes in it. An island in
   * a hole is an area of its own.
   */
  split(rings: readonly Float64Array[]): Float64Array[][];
  /** mm²: what the outlines hold less the holes; negative for rings the other way round. */
  area(rings: readonly Float64Array[]): number;
}

/** Words of SVG 2 (fill-rule). */
export type Rule = 'nonzero' | 'evenodd';

/** @param wasm  bytes of `manifold.wasm`, which the caller finds: this room knows neither files nor the net */
export async function loadFlat(wasm: Uint8Array): Promise<Flat> {
  // The binary is a documented setting of the module that its types leave out.
  const module = await Module({ wasmBinary: wasm } as unknown as Parameters<typeof Module>[0]);
  module.setup();
  return flatOf(module);
}

function flatOf({ CrossSection }: ManifoldToplevel): Flat {
  const figure = (rings: readonly Float64Array[], rule: FillRule = 'NonZero'): CrossSection | null => {
    const solid = rings.filter((r) => r.length >= 6).map(pairs);
    return solid.length === 0 ? null : new CrossSection(solid, rule);
  };
  const join = (
    a: readonly Float64Array[],
    b: readonly Float64Array[],
    how: 'subtract' | 'intersect',
  ): Float64Array[] => {
    const first = figure(a);
    const second = figure(b);
    const both = first && second ? first[how](second) : null;
    const kept = both ?? (how === 'subtract' ? first : null);
    const out = kept ? ringsOf(kept) : [];
    for (const c of [first, second, both]) c?.delete();
    return out;
  };
  return {
    union(rings, rule = 'nonzero') {
      const whole = figure(rings, rule === 'evenodd' ? 'EvenOdd' : 'NonZero');
      const out = whole ? ringsOf(whole) : [];
      whole?.delete();
      return out;
    },
    difference: (from, off) => join(from, off, 'subtract'),
    intersection: (a, b) => join(a, b, 'intersect'),
    meet(a, b) {
      const first = figure(a);
      const second = figure(b);
      const both = first && second ? first.intersect(second) : null;
      const shared = both !== null && both.area() > 0;
      for (const c of [first, second, both]) c?.delete();
      return shared;
    },
    split,
    area: (rings) => rings.reduce((sum, r) => sum + ringArea(r), 0),
  };
}

function pairs(ring: Float64Array): [number, number][] {
  checkFinite(ring);
  return Array.from({ length: ring.length / 2 }, (_, i) => [ring[2 * i], ring[2 * i + 1]]);
}

function checkFinite(ring: Float64Array): void {
  for (let i = 0; i < ring.length; i++)
    if (!(Math.abs(ring[i]) <= FARTHEST)) throw new Fault(`a ring goes through ${ring[i]}`);
}

function ringsOf(figure: CrossSection): Float64Array[] {
  return inOrder(figure.toPolygons().map((polygon) => Float64Array.from(polygon.flat())));
}

/** Rings in their form: none goes twice through a point, and none is without area. */
function inOrder(rings: readonly Float64Array[]): Float64Array[] {
  return traced(rings.filter((r) => r.length >= 6))
    .filter((r) => ringArea(r) !== 0)
    .map(fromLeft)
    .sort(byPoints);
}

/** The same ring from its leftmost point on, the lowest of these. */
function fromLeft(ring: Float64Array): Float64Array {
  let first = 0;
  for (let i = 2; i < ring.length; i += 2)
    if (ring[i] < ring[first] || (ring[i] === ring[first] && ring[i + 1] < ring[first + 1])) first = i;
  const out = new Float64Array(ring.length);
  out.set(ring.subarray(first));
  out.set(ring.subarray(0, first), ring.length - first);
  return out;
}

function byPoints(a: Float64Array, b: Float64Array): number {
  for (let i = 0; i < a.length && i < b.length; i++) if (a[i] !== b[i]) return a[i] - b[i];
  return a.length - b.length;
}

function split(rings: readonly Float64Array[]): Float64Array[][] {
  rings.forEach(checkFinite);
  const clean = inOrder(rings);
  const isHole = clean.map((r) => ringArea(r) < 0);
  const outline = outlinesOf(clean, isHole);
  const areas = clean.map((): Float64Array[] => []);
  clean.forEach((r, k) => {
    if (!isHole[k]) areas[k].unshift(r);
    // A hole in nothing is what rounding leaves of a sliver.
    else if (outline[k] >= 0) areas[outline[k]].push(r);
  });
  return areas.filter((a) => a.length > 0);
}

/** Shoelace formula, mm², counter-clockwise above 0. From the first corner: differences are small where coordinates are not. */
export function ringArea(ring: Float64Array): number {
  let sum = 0;
  for (let i = 2; i + 3 < ring.length; i += 2)
    sum += (ring[i] - ring[0]) * (ring[i + 3] - ring[1]) - (ring[i + 1] - ring[1]) * (ring[i + 2] - ring[0]);
  return sum / 2;
}
