/**
 * Shop rule: no acute inner corners (common practice, no published source). Where copper runs together at an acute angle the
 * bath stands in the notch and plates it shut or leaves it ragged, and a laser line does not reach its tip.
 */
import { radiansFromDegrees } from '../base/brands.ts';
import { PairMap } from '../base/pair-map.ts';
import { cosine } from '../base/trig.ts';
import { at3, cross, distance, dot, lerp, normalize, sub, type Vec3 } from '../base/vec.ts';
import type { CopperElement } from '../drape/copper.ts';
import type { RuleFinding } from '../project/report.ts';
import type { Limits } from '../project/schema.ts';
import { type NetSheet, netSheet } from './net-sheet.ts';

/** An inner corner below this is told when the limits name none, degrees: a right angle that is not quite one is none. */
const ACUTE = 80;
/** A corner is looked at over this much of its sides, mm: what is smaller than a laser line's width is no corner. */
const SIDE = 0.1;
/** Corners nearer to each other than this are one, mm. */
const ONE = 2 * SIDE;
/** An element has part in a corner that is this near to its copper, mm. */
const BESIDE = SIDE / 2;

interface Corner {
  at: Vec3;
  /** Cosine of the angle that is free of copper. */
  cos: number;
}

/** Every acute inner corner of the copper of a net, where elements meet too; a warning. An element without a net stands alone. */
export function innerCornerRule(elements: readonly CopperElement[], limits: Limits): RuleFinding[] {
  const limit = limits.acuteCorner ?? ACUTE;
  return netsOf(elements).flatMap((own) =>
    innerCorners(netSheet(own), cosine(radiansFromDegrees(limit))).map(({ at, cos }) => ({
      rule: 'inner-corner',
      level: 'warning' as const,
      value: (Math.acos(Math.max(-1, Math.min(1, cos))) * 180) / Math.PI,
      limit,
      elements: own.filter((e) => liesBy(e, at)).map((e) => e.id),
      at,
    })),
  );
}

function netsOf(elements: readonly CopperElement[]): CopperElement[][] {
  const nets = new Map<string, CopperElement[]>();
  const alone: CopperElement[][] = [];
  for (const e of elements) {
    const known = nets.get(e.net);
    if (e.net === '') alone.push([e]);
    else if (known) known.push(e);
    else nets.set(e.net, [e]);
  }
  return [...nets.values(), ...alone];
}

const kept = new WeakMap<NetSheet, { above: number; corners: Corner[] }>();

/** Sharpest first; of several within `ONE` the sharpest. @param above  least cosine of the free angle */
function innerCorners(sheet: NetSheet, above: number): Corner[] {
  const known = kept.get(sheet);
  if (known?.above === above) return known.corners;
  const { positions, triangles } = sheet;
  const found: Corner[] = [];
  for (const loop of rims(positions, triangles)) {
    const { points, normals } = loop;
    for (let i = 0; i < points.length; i++) {
      const before = along(points, i, -1);
      const after = along(points, i, 1);
      if (!before || !after) continue;
      const back = normalize(sub(before, points[i]));
      const ahead = normalize(sub(after, points[i]));
      const cos = dot(back, ahead);
      // Copper lies on the left: its inner corners turn to the right.
      if (cos > above && dot(cross(ahead, back), normals[i]) < 0) found.push({ at: points[i], cos });
    }
  }
  found.sort((a, b) => b.cos - a.cos);
  const corners: Corner[] = [];
  for (const corner of found) if (!corners.some((k) => distance(k.at, corner.at) < ONE)) corners.push(corner);
  kept.set(sheet, { above, corners });
  return corners;
}

/** Place so far along a closed rim from one of its points; null where the rim is not twice as long. */
function along(points: readonly Vec3[], from: number, step: 1 | -1): Vec3 | null {
  let left = SIDE;
  let i = from;
  for (let n = 0; n < points.length / 2; n++) {
    const j = (i + step + points.length) % points.length;
    const l = distance(points[i], points[j]);
    if (l >= left) return lerp(points[i], points[j], left / l);
    left -= l;
    i = j;
  }
  return null;
}

interface Rim {
  points: Vec3[];
  /** Of the triangle behind the edge that each point begins. */
  normals: Vec3[];
}

/** Closed rims of a sheet: edges that one triangle alone has, one after the other with the copper on the left. */
function rims(x: Float64Array, triangles: Uint32Array): Rim[] {
  const heads = (e: number): number => triangles[e % 3 === 2 ? e - 2 : e + 1];
  const used = new PairMap(triangles.length);
  for (let e = 0; e < triangles.length; e++) {
    const [a, b] = [triangles[e], heads(e)];
    used.set(Math.min(a, b), Math.max(a, b), used.get(Math.min(a, b), Math.max(a, b), 0) + 1);
  }
  const leaving = new Map<number, number[]>();
  for (let e = 0; e < triangles.length; e++) {
    const [a, b] = [triangles[e], heads(e)];
    if (used.get(Math.min(a, b), Math.max(a, b), 0) !== 1) continue;
    const list = leaving.get(a);
    if (list) list.push(e);
    else leaving.set(a, [e]);
  }
  const out: Rim[] = [];
  for (const list of leaving.values())
    while (list.length > 0) {
      const rim: Rim = { points: [], normals: [] };
      let next: number | undefined = list.pop();
      while (next !== undefined) {
        const e: number = next;
        const t = 3 * Math.floor(e / 3);
        const [a, b, c] = [0, 1, 2].map((k) => at3(x, triangles[t + k]));
        rim.points.push(at3(x, triangles[e]));
        rim.normals.push(cross(sub(b, a), sub(c, a)));
        next = leaving.get(heads(e))?.pop();
      }
      out.push(rim);
    }
  return out;
}

/** Whether an outline of the element comes that near to a place. */
function liesBy({ outline }: CopperElement, p: Vec3): boolean {
  return outline.some((loop) => {
    for (let i = 0; i < loop.length; i += 3)
      if (Math.hypot(loop[i] - p[0], loop[i + 1] - p[1], loop[i + 2] - p[2]) < BESIDE) return true;
    return false;
  });
}
