import { describe, expect, it } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import { quiet } from '../../../src/core/base/run-context.ts';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import { drapeCircuit } from '../../../src/core/drape/drape.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import { positionOf } from '../../../src/core/mesh/surface-point.ts';
import type { Project } from '../../../src/core/project/schema.ts';
import { meshFrom, partFrom } from '../helpers/surfaces.ts';

/** A rough grid with holes, fins on three-facet edges, facets drawn on others turned over, slivers and torn heights. */
function dirtyMesh(random: () => number, kind: number): SurfaceMesh {
  const n = 6 + Math.floor(random() * 10);
  const height = [
    () => 0,
    (x: number, y: number) => 3 * Math.sin(0.7 * x) * Math.cos(0.5 * y),
    (x: number) => (x > 4 ? 3 * (x - 4) : 0),
    (_: number, y: number) => Math.abs(y - 4) * 2,
    () => 2 * random(),
  ][kind];
  const at = Array.from({ length: n + 1 }, (_, i) =>
    Array.from({ length: n + 1 }, (_, j): Vec3 => {
      const x = (10 * i) / n;
      const y = ((10 * j) / n) * (kind === 0 ? 0.001 + (0.999 * j) / n : 1);
      const shift = i > 0 && i < n ? ((random() - 0.5) * 2.4) / n : 0;
      return [x + shift, y, height(x, y)];
    }),
  );
  const out: number[] = [];
  for (let i = 0; i < n; i++)
    for (let j = 0; j < n; j++) {
      if (random() < 0.06) continue;
      const [a, b, c, d] = [at[i][j], at[i + 1][j], at[i + 1][j + 1], at[i][j + 1]];
      if (random() < 0.5) out.push(...a, ...b, ...c, ...a, ...c, ...d);
      else out.push(...a, ...b, ...d, ...b, ...c, ...d);
      if (random() < 0.03) out.push(...a, ...b, a[0], a[1], a[2] + 4);
      if (random() < 0.03) out.push(...a, ...c, ...b);
    }
  return meshFrom(out);
}

describe('on dirty meshes', () => {
  it('copper is laid, or it is said why not: no hang, no NaN, seeds 1 to 60', () => {
    const told = new Map<string, number>();
    let laid = 0;
    for (let seed = 1; seed <= 60; seed++) {
      const random = randomFrom(seed);
      const part = partFrom(dirtyMesh(random, seed % 5));
      const { mesh } = part;
      const place = () => {
        const u = random();
        const v = random() * (1 - u);
        const face = Math.floor(random() * (mesh.triangles.length / 3));
        return { at: positionOf(mesh, { face, bary: [1 - u - v, u, v] }) };
      };
      const elements = [
        {
          id: 't',
          kind: 'trace',
          net: '',
          width: 0.3 + random(),
          route: [place(), place(), place()],
          ends: (['round', 'square', 'butt'] as const)[seed % 3],
          bends: (['round', 'miter'] as const)[seed % 2],
        },
        {
          id: 'p',
          kind: 'pad',
          net: '',
          ...place(),
          shape: { rect: [0.5 + 2 * random(), 0.3 + random()] },
          turn: 360 * random(),
        },
        { id: 'r', kind: 'region', net: '', outline: [place(), place(), place(), place()] },
      ];
      const project = { circuit: { elements, drapes: [] } } as unknown as Project;
      const { copper, findings } = drapeCircuit(project, 'x', part, quiet);
      for (const f of findings) told.set(f.rule, (told.get(f.rule) ?? 0) + 1);
      // A pad may be both: laid as far as the surface goes, and told so.
      expect(new Set([...copper.elements.map((e) => e.id), ...findings.map((f) => f.element)]).size).toBe(3);
      for (const e of copper.elements) {
        laid++;
        expect(e.area).toBeGreaterThan(0);
        expect(e.area).toBeLessThanOrEqual(mesh.area * (1 + 1e-9));
        expect(e.field.edge.every(Number.isFinite)).toBe(true);
        expect(e.copper.positions.every(Number.isFinite)).toBe(true);
      }
    }
    // Four corners at random cross in about half of all cases.
    expect(laid).toBeGreaterThan(120);
    expect([...told.keys()].sort()).toEqual(['beyond-map', 'crossed', 'no-way']);
  });
});
