/**
 * Shop rule: copper no narrower than the shop can make (model.md §9; common practice, no published source), as it lies on the
 * part: a drawing that the surface squeezes is narrower there than it was drawn, and areas have necks.
 */
import { radiansFromDegrees } from '../base/brands.ts';
import { cosine } from '../base/trig.ts';
import { addScaled, cross, dot, normalize, sub, type Vec3 } from '../base/vec.ts';
import type { CopperElement } from '../drape/copper.ts';
import type { DrapePart } from '../drape/drape.ts';
import { TRUE_TO } from '../drape/element.ts';
import { faceNormal } from '../mesh/surface-point.ts';
import type { RuleFinding } from '../project/report.ts';
import type { Limits } from '../project/schema.ts';
import { type Near, OutlineGrid } from './near-outlines.ts';

/** Sides of one neck run against each other within this angle; a wider one is a corner, which is narrow at its tip. */
const AGAINST = -cosine(radiansFromDegrees(20));
/** What lies across a neck lies square to its side within this angle. */
const SQUARE = cosine(radiansFromDegrees(18));
/** Both sides of a neck are true to `TRUE_TO` along patch edges, across them, and as thinned. */
const OUTLINES = 6 * TRUE_TO;

/** Narrowest place of each element, where it is below `safeWidth`: of a trace no more than its drawn width. */
export function widthRule(
  part: DrapePart,
  elements: readonly CopperElement[],
  limits: Limits,
): RuleFinding[] {
  return elements.flatMap((e) => {
    const drawn = e.kind === 'trace' ? { distance: e.width, at: e.anchor } : null;
    const neck = neckOf(part, e, limits.safeWidth);
    const known = drawn && (!neck || neck.distance + OUTLINES >= drawn.distance);
    const narrow = known ? drawn : neck;
    // What is measured counts as too narrow only where it is for sure.
    const below = (limit: number): boolean =>
      narrow !== null && narrow.distance + (known ? 0 : OUTLINES) < limit;
    if (!narrow || !below(limits.safeWidth)) return [];
    const error = below(limits.minWidth);
    return [
      {
        rule: 'width',
        level: error ? ('error' as const) : ('warning' as const),
        value: narrow.distance,
        limit: error ? limits.minWidth : limits.safeWidth,
        elements: [e.id],
        at: narrow.at,
      },
    ];
  });
}

interface Neck {
  /** mm */
  distance: number;
  at: Vec3;
}

/** Copper that did not change has the neck that it had. */
const kept = new WeakMap<CopperElement, { below: number; neck: Neck | null }>();

/** Smallest circle that fits between two sides of an element, null where none is smaller than `below` mm. */
function neckOf(part: DrapePart, element: CopperElement, below: number): Neck | null {
  const known = kept.get(element);
  if (known?.below === below) return known.neck;
  const grid = new OutlineGrid([element], below);
  const [near] = grid
    .pairs(
      () => true,
      ({ heading, facing }) => dot(heading, facing) < AGAINST,
    )
    .values();
  const neck = narrowest(part, grid, near ?? []);
  kept.set(element, { below, neck });
  return neck;
}

/** @param near  nearest first */
function narrowest({ mesh, queries }: DrapePart, grid: OutlineGrid, near: readonly Near[]): Neck | null {
  let best: Neck | null = null;
  for (const one of near) {
    // No circle is smaller than half the way across: those that follow are wider.
    if (best && one.distance >= best.distance) break;
    const width = circleBetween(one);
    if (best && width >= best.distance) continue;
    const hit = queries.nearest(one.at);
    if (!hit) continue;
    const inward: Vec3 = cross(faceNormal(mesh, hit.face), one.heading);
    // Across a slit in the copper the other side is on the right.
    if (dot(inward, normalize(sub(one.to, one.at))) < SQUARE) continue;
    const middle = addScaled(one.at, inward, width / 2);
    if (grid.isClear(0, middle, width / 2 - OUTLINES)) best = { distance: width, at: one.at };
  }
  return best;
}

/**
 * Diameter of the circle that touches a side at `at` and the line of the other side: what fits between two sides that run
 * against each other. Straight across it would be less on a round end, which is no neck.
 */
const circleBetween = ({ distance, heading, facing }: Near): number =>
  (2 * distance) / (1 - dot(heading, facing));
