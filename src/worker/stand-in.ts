/** Rough copper for the window until the drape stage is there: ribbons and discs. Not for files. */
import { partPoint } from '../core/base/brands.ts';
import { InputError } from '../core/base/news.ts';
import { poseFrame } from '../core/base/pose.ts';
import { add, addScaled, at3, cross, dot, normalize, scale, sub, type Vec3 } from '../core/base/vec.ts';
import type { Copper, CopperElement, FieldPatch, Patch } from '../core/drape/copper.ts';
import type { SetupPlan } from '../core/layers/plan.ts';
import type { ElementReach, SetupReach } from '../core/reach/result.ts';
import { shortestPath } from '../core/geodesic/shortest.ts';
import type { SurfaceQueries } from '../core/mesh/queries.ts';
import type { SurfaceMesh } from '../core/mesh/surface-mesh.ts';
import { barycentric, faceNormal, type SurfacePoint } from '../core/mesh/surface-point.ts';
import type { Element, Project, Setup } from '../core/project/schema.ts';

/** Stand-in for reach: incidence and field by the chief ray, nothing shaded. */
export function standInReach(project: Project, copper: Copper, setups: Setup[], mesh: SurfaceMesh): SetupReach[] {
  const depth = project.limits.depth.mode === 'distance' ? project.limits.depth.halfDepth - project.limits.heightUncertainty : 1;
  return setups.map((setup, s) => {
    const frame = poseFrame(setup.pose);
    return {
      setup: s,
      name: setup.name,
      elements: copper.elements.map((e): ElementReach => {
        const n = e.copper.triangles.length / 3;
        const make = () => new Float64Array(n);
        const r: ElementReach = { height: make(), low: make(), high: make(), incidence: make(), blocked: make(), command: new Float64Array(2 * n), fluence: make().fill(3), usable: make().fill(depth), fails: new Uint8Array(n) };
        for (let i = 0; i < n; i++) {
          const p = [0, 1, 2].map((c) => frame.point(partPoint(at3(e.copper.positions, e.copper.triangles[3 * i + c]))));
          const mid = [0, 1, 2].map((k) => (p[0][k] + p[1][k] + p[2][k]) / 3);
          r.height[i] = mid[2];
          r.low[i] = Math.min(p[0][2], p[1][2], p[2][2]);
          r.high[i] = Math.max(p[0][2], p[1][2], p[2][2]);
          r.command[2 * i] = mid[0];
          r.command[2 * i + 1] = mid[1];
          const u = normalize([project.head.pivot[0] ? -mid[0] / project.head.pivot[0] : 0, project.head.pivot[1] ? -mid[1] / project.head.pivot[1] : 0, 1]);
          r.incidence[i] = Math.acos(Math.max(-1, Math.min(1, dot(frame.direction(faceNormal(mesh, e.copper.face[i])), u))));
          if ((r.incidence[i] * 180) / Math.PI > project.limits.maxIncidence) r.fails[i] |= 2;
          if (Math.abs(mid[0]) > project.head.field[0] / 2 || Math.abs(mid[1]) > project.head.field[1] / 2) r.fails[i] |= 8;
        }
        return r;
      }),
    };
  });
}

/** Stand-in for the plan: greedy heights from below. */
export function standInPlan(reach: SetupReach[]): SetupPlan[] {
  return reach.map((r) => {
    const spans = r.elements.flatMap((e, element) => [...e.height].map((z, i) => ({ element, lo: z - e.usable[i], hi: z + e.usable[i], z })));
    spans.sort((a, b) => a.hi - b.hi);
    const layers: SetupPlan['layers'] = [];
    for (const s of spans) {
      const last = layers[layers.length - 1];
      if (last && last.focusHeight >= s.lo) continue;
      layers.push({ index: layers.length + 1, focusHeight: s.hi, stageOffset: -s.hi, worstDefocus: 0, runs: [] });
    }
    return { setup: r.setup, name: r.name, layers, unreached: [] };
  });
}
