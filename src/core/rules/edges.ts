/**
 * Shop rules about the part's own shape (common practice, no published source): copper over a sharp edge breaks when the part
 * warms or bends, and copper at the end of the surface is undercut by the bath.
 */
import { cosine } from '../base/trig.ts';
import { dot, type Vec3 } from '../base/vec.ts';
import type { CopperElement } from '../drape/copper.ts';
import { faceOf, next, type SurfaceMesh } from '../mesh/surface-mesh.ts';
import { faceNormal } from '../mesh/surface-point.ts';
import type { RuleFinding } from '../project/report.ts';
import type { Limits } from '../project/schema.ts';

/** Faces turned against each other by more than this are an edge when the limits name none, degrees. */
const SHARP = 75;
/** Copper this near the end of the surface when the limits name no distance, mm. */
const BORDER = 0.5;

/** Worst edge that each element crosses, in degrees between the two faces; a warning. */
export function sharpEdgeRule(
  mesh: SurfaceMesh,
  elements: readonly CopperElement[],
  limits: Limits,
): RuleFinding[] {
  const limit = limits.sharpEdge ?? SHARP;
  const least = cosine((limit * Math.PI) / 180);
  return elements.flatMap((e) => {
    const sides = copperSides(e);
    let worst: { angle: number; at: Vec3 } | null = null;
    for (const [key, at] of sides) {
      const [f, g] = key;
      const c = dot(faceNormal(mesh, f), faceNormal(mesh, g));
      if (c >= least) continue;
      const angle = (Math.acos(Math.max(-1, c)) * 180) / Math.PI;
      if (!worst || angle > worst.angle) worst = { angle, at };
    }
    return worst
      ? [
          {
            rule: 'sharp-edge',
            level: 'warning' as const,
            value: worst.angle,
            limit,
            elements: [e.id],
            at: worst.at,
          },
        ]
      : [];
  });
}

/** Places where copper runs from one face into another: triangles of both on one patch edge. */
function copperSides(e: CopperElement): [readonly [number, number], Vec3][] {
  const { triangles, face, positions: x } = e.copper;
  const first = new Map<number, number>();
  const out: [readonly [number, number], Vec3][] = [];
  const done = new Set<string>();
  const count = x.length / 3;
  for (let h = 0; h < triangles.length; h++) {
    const [a, b] = [triangles[h], triangles[next(h)]];
    const key = Math.min(a, b) * count + Math.max(a, b);
    const other = first.get(key);
    if (other === undefined) {
      first.set(key, h);
      continue;
    }
    const [f, g] = [face[faceOf(h)], face[faceOf(other)]];
    if (f === g || done.has(`${f} ${g}`)) continue;
    done.add(`${f} ${g}`).add(`${g} ${f}`);
    out.push([
      [f, g],
      [(x[3 * a] + x[3 * b]) / 2, (x[3 * a + 1] + x[3 * b + 1]) / 2, (x[3 * a + 2] + x[3 * b + 2]) / 2],
    ]);
  }
  return out;
}

/** Least distance of each element's outline from an end of the surface, where nearer than the limit; a warning. */
export function borderRule(
  mesh: SurfaceMesh,
  elements: readonly CopperElement[],
  limits: Limits,
): RuleFinding[] {
  const limit = limits.borderGap ?? BORDER;
  const { positions: x, triangles: t, twin } = mesh;
  const cell = Math.max(limit, 0.05) * 4;
  const cells = new Map<string, number[]>();
  const place = (p: readonly number[]): number[] => p.map((c) => Math.floor(c / cell));
  for (let h = 0; h < twin.length; h++) {
    if (twin[h] >= 0) continue;
    const [a, b] = [3 * t[h], 3 * t[next(h)]];
    const lo = place([0, 1, 2].map((k) => Math.min(x[a + k], x[b + k]) - limit));
    const hi = place([0, 1, 2].map((k) => Math.max(x[a + k], x[b + k]) + limit));
    for (let i = lo[0]; i <= hi[0]; i++)
      for (let j = lo[1]; j <= hi[1]; j++)
        for (let k = lo[2]; k <= hi[2]; k++) {
          const list = cells.get(`${i},${j},${k}`);
          if (list) list.push(h);
          else cells.set(`${i},${j},${k}`, [h]);
        }
  }
  if (cells.size === 0) return [];
  return elements.flatMap((e) => {
    let worst: { d: number; at: Vec3 } | null = null;
    for (const loop of e.outline)
      for (let i = 0; i < loop.length; i += 3) {
        const p: Vec3 = [loop[i], loop[i + 1], loop[i + 2]];
        for (const h of cells.get(place(p).join()) ?? []) {
          const d = toEdge(p, x, 3 * t[h], 3 * t[next(h)]);
          if (d < limit && (!worst || d < worst.d)) worst = { d, at: p };
        }
      }
    return worst
      ? [{ rule: 'border', level: 'warning' as const, value: worst.d, limit, elements: [e.id], at: worst.at }]
      : [];
  });
}

function toEdge(p: Vec3, x: Float64Array, a: number, b: number): number {
  const e = [x[b] - x[a], x[b + 1] - x[a + 1], x[b + 2] - x[a + 2]];
  const q = [p[0] - x[a], p[1] - x[a + 1], p[2] - x[a + 2]];
  const t = Math.max(
    0,
    Math.min(1, (q[0] * e[0] + q[1] * e[1] + q[2] * e[2]) / (e[0] ** 2 + e[1] ** 2 + e[2] ** 2)),
  );
  return Math.hypot(q[0] - t * e[0], q[1] - t * e[1], q[2] - t * e[2]);
}
