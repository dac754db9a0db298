/**
 * Shop rules: copper of different nets no nearer than the shop can keep apart (model.md §9; common practice, no published
 * source), once by the way over the surface, where the bath creeps and a burr of the laser runs, and once through the air,
 * where plating may bridge a slot or two walls that face each other. Nothing counts through the part: copper on both
 * sides of a thin wall is as far apart as the way around it.
 */
import { addScaled, distance, scale, sub, type Vec3 } from '../base/vec.ts';
import { contacts } from '../copper/contacts.ts';
import type { CopperElement } from '../drape/copper.ts';
import type { DrapePart } from '../drape/drape.ts';
import { shortestWith } from '../geodesic/shortest.ts';
import { WindowSolver } from '../geodesic/windows.ts';
import type { NearestHit } from '../mesh/queries.ts';
import { faceOf, next } from '../mesh/surface-mesh.ts';
import { barycentric, faceNormal } from '../mesh/surface-point.ts';
import type { RuleFinding } from '../project/report.ts';
import type { Limits } from '../project/schema.ts';
import { type Near, OutlineGrid } from './near-outlines.ts';

/** A gap is true to this share: places whose straight distance is no shorter than that are not asked for their way. */
const TRUE_TO = 1e-3;
/** Air counts of its own where it is shorter than the way over the surface by more than this share. */
const SHORTER = 0.05;
/** A line through the air begins and ends this far above the surface, mm: as the beam of a shade check does. */
const LIFT = 1e-3;

/**
 * Least gap of every pair of elements of different nets that is below `safeGap`: rule `gap` over the surface, rule
 * `air-gap` through the air where that is shorter by more than a twentieth. Elements without a net count as nets of their own.
 */
export function gapRule(part: DrapePart, elements: readonly CopperElement[], limits: Limits): RuleFinding[] {
  const n = elements.length;
  // What touches is one piece of copper: a short where nets are named, and no gap.
  const touching = new Set(contacts(elements).map(({ a, b }) => a * n + b));
  const pairs = new OutlineGrid(elements, limits.safeGap).pairs(
    (a, b) => a !== b && !sameNet(elements[a], elements[b]) && !touching.has(a * n + b),
  );
  const gaps = new GapMeasure(part, limits.safeGap);
  return [...pairs]
    .sort(([x], [y]) => x - y)
    .flatMap(([pair, near]) => {
      const ids = [elements[Math.floor(pair / n)].id, elements[pair % n].id];
      const over = gaps.overSurface(near);
      const air = gaps.throughAir(near, (over?.distance ?? Infinity) * (1 - SHORTER));
      return [
        ...(over ? [finding('gap', over, ids, limits)] : []),
        ...(air ? [finding('air-gap', air, ids, limits)] : []),
      ];
    });
}

interface Gap {
  /** mm */
  distance: number;
  at: Vec3;
}

class GapMeasure {
  private readonly part: DrapePart;
  private readonly within: number;
  private solver: WindowSolver | null = null;
  private readonly around = new Map<number, Set<number>>();

  constructor(part: DrapePart, within: number) {
    this.part = part;
    this.within = within;
  }

  /** Shortest way over the surface between such places, null where none is shorter than `within`. @param near  nearest first */
  overSurface(near: readonly Near[]): Gap | null {
    let best: Gap | null = null;
    for (const { distance: straight, at, to } of near) {
      if (straight >= (best?.distance ?? this.within) * (1 - TRUE_TO)) break;
      const way = this.way(at, to);
      if (way < (best?.distance ?? this.within)) best = { distance: way, at };
    }
    return best;
  }

  /** Shortest line through the air between such places, null where none is shorter than `below`. @param near  nearest first */
  throughAir(near: readonly Near[], below: number): Gap | null {
    for (const { distance: straight, at, to } of near) {
      if (straight >= below) return null;
      if (this.isAir(at, to)) return { distance: straight, at };
    }
    return null;
  }

  /** mm; Infinity where the way is longer than `within` for sure */
  private way(p: Vec3, q: Vec3): number {
    const { mesh } = this.part;
    const [from, to] = [this.placeOf(p), this.placeOf(q)];
    if (from.face === to.face) return distance(p, q);
    if (!this.facesAround(from.face).has(to.face)) return Infinity;
    this.solver ??= new WindowSolver(mesh);
    const path = shortestWith(
      this.solver,
      { face: from.face, bary: barycentric(mesh, from.face, from.point) },
      { face: to.face, bary: barycentric(mesh, to.face, to.point) },
    );
    return path?.length ?? Infinity;
  }

  /** Faces that a way no longer than `within` from anywhere in a face can come to: it crosses no edge farther off. */
  private facesAround(face: number): Set<number> {
    const known = this.around.get(face);
    if (known) return known;
    const { positions: x, triangles: t, twin } = this.part.mesh;
    const corner = (v: number): Vec3 => [x[3 * v], x[3 * v + 1], x[3 * v + 2]];
    const own = [0, 1, 2].map((i) => corner(t[3 * face + i]));
    const found = new Set([face]);
    const open = [face];
    while (open.length > 0) {
      const f = open.pop()!;
      for (let h = 3 * f; h < 3 * f + 3; h++) {
        if (twin[h] < 0 || found.has(faceOf(twin[h]))) continue;
        if (!nearTriangle(corner(t[h]), corner(t[next(h)]), own, this.within)) continue;
        found.add(faceOf(twin[h]));
        open.push(faceOf(twin[h]));
      }
    }
    this.around.set(face, found);
    return found;
  }

  private isAir(p: Vec3, q: Vec3): boolean {
    const { mesh, queries } = this.part;
    const [a, b] = [p, q].map((x) => addScaled(x, faceNormal(mesh, this.placeOf(x).face), LIFT));
    const far = distance(a, b);
    return far === 0 || !queries.blocked(a, scale(sub(b, a), 1 / far), far);
  }

  private placeOf(p: Vec3): NearestHit {
    return this.part.queries.nearest(p) as NearestHit;
  }
}

/** Whether the edge a–b may come within `reach` of a triangle: false only where it does not. */
function nearTriangle(a: Vec3, b: Vec3, corners: readonly Vec3[], reach: number): boolean {
  for (let k = 0; k < 3; k++) {
    const [lo, hi] = [Math.min(a[k], b[k]), Math.max(a[k], b[k])];
    const [least, most] = [Math.min(...corners.map((c) => c[k])), Math.max(...corners.map((c) => c[k]))];
    if (lo > most + reach || hi < least - reach) return false;
  }
  return true;
}

function finding(
  rule: 'gap' | 'air-gap',
  { distance: value, at }: Gap,
  ids: string[],
  limits: Limits,
): RuleFinding {
  const error = value < limits.minGap;
  return {
    rule,
    level: error ? 'error' : 'warning',
    value,
    limit: error ? limits.minGap : limits.safeGap,
    elements: ids,
    at,
  };
}

const sameNet = (a: CopperElement, b: CopperElement): boolean => a.net !== '' && a.net === b.net;
