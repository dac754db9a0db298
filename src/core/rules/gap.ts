/** Shop rule: copper of different nets no nearer than the shop can keep apart (model.md §9; common practice, no published source). */
import type { Vec3 } from '../base/vec.ts';
import type { CopperElement } from '../drape/copper.ts';
import type { RuleFinding } from '../project/report.ts';
import type { Limits } from '../project/schema.ts';

/**
 * Least straight distance between outlines of elements of different nets, for pairs nearer than `safeGap`. Elements without a
 * net count as nets of their own. Gaps are shorter than a millimetre, where the way over a printed surface and the straight
 * way agree to far less than a rule's tolerance.
 */
export function gapRule(elements: readonly CopperElement[], limits: Limits): RuleFinding[] {
  const cell = Math.max(limits.safeGap, 0.05);
  const cells = new Map<string, { element: number; loop: Float64Array; i: number }[]>();
  const key = (x: number, y: number, z: number) =>
    `${Math.floor(x / cell)},${Math.floor(y / cell)},${Math.floor(z / cell)}`;
  elements.forEach((e, n) => {
    for (const loop of e.outline)
      for (let i = 0; i + 3 < loop.length; i += 3) {
        const k = key(loop[i], loop[i + 1], loop[i + 2]);
        const list = cells.get(k);
        if (list) list.push({ element: n, loop, i });
        else cells.set(k, [{ element: n, loop, i }]);
      }
  });
  const worst = new Map<string, { a: number; b: number; d: number; at: Vec3 }>();
  elements.forEach((e, n) => {
    for (const loop of e.outline)
      for (let i = 0; i + 3 < loop.length; i += 3) {
        const p: Vec3 = [loop[i], loop[i + 1], loop[i + 2]];
        for (let k = 0; k < 27; k++) {
          const list = cells.get(
            key(
              p[0] + ((k % 3) - 1) * cell,
              p[1] + ((Math.floor(k / 3) % 3) - 1) * cell,
              p[2] + (Math.floor(k / 9) - 1) * cell,
            ),
          );
          for (const o of list ?? []) {
            if (o.element === n || sameNet(e, elements[o.element])) continue;
            const d = toSegment(p, o.loop, o.i);
            if (d >= limits.safeGap) continue;
            const [a, b] = n < o.element ? [n, o.element] : [o.element, n];
            const known = worst.get(`${a},${b}`);
            if (!known || d < known.d) worst.set(`${a},${b}`, { a, b, d, at: p });
          }
        }
      }
  });
  return [...worst.values()]
    .sort((x, y) => x.a - y.a || x.b - y.b)
    .map(({ a, b, d, at }) => {
      const error = d < limits.minGap;
      return {
        rule: 'gap',
        level: error ? 'error' : 'warning',
        value: d,
        limit: error ? limits.minGap : limits.safeGap,
        elements: [elements[a].id, elements[b].id],
        at,
      };
    });
}

const sameNet = (a: CopperElement, b: CopperElement): boolean => a.net !== '' && a.net === b.net;

function toSegment(p: Vec3, loop: Float64Array, i: number): number {
  const e = [loop[i + 3] - loop[i], loop[i + 4] - loop[i + 1], loop[i + 5] - loop[i + 2]];
  const q = [p[0] - loop[i], p[1] - loop[i + 1], p[2] - loop[i + 2]];
  const ee = e[0] ** 2 + e[1] ** 2 + e[2] ** 2;
  const t = ee > 0 ? Math.min(1, Math.max(0, (q[0] * e[0] + q[1] * e[1] + q[2] * e[2]) / ee)) : 0;
  return Math.hypot(q[0] - t * e[0], q[1] - t * e[1], q[2] - t * e[2]);
}
