/** From traced pulses to the verdict on one set of files (model.md §7). */
import type { Copper } from '../drape/copper.ts';
import type { SurfaceMesh } from '../mesh/surface-mesh.ts';
import type { CornerNormals } from '../part/normals.ts';
import type { ProofReport } from '../project/report.ts';
import type { Project } from '../project/schema.ts';
import { ACTIVATED, burnLayer, type LayerPlace, OUT_OF_DEPTH } from './burn.ts';
import { gatherPulses } from './burnt-pulses.ts';
import { type CopperGrid, copperGrid } from './copper-grid.ts';
import { findJoins } from './joins.ts';
import { type Samples, sampleCopper } from './samples.ts';
import { spotOf } from './spot.ts';
import { strayArea } from './stray.ts';
import { touchingPairs } from './touching.ts';
import type { LayerPulses } from './trace.ts';

/** Below this share of its area an element counts as not activated. */
const HARDLY = 0.5;

/** The drawn copper, prepared once for all formats. */
export interface Drawn {
  copper: Copper;
  mesh: SurfaceMesh;
  normals: CornerNormals;
  samples: Samples;
  grid: CopperGrid;
  /** Pairs of elements of one net that touch in the drawing, lower index first. */
  touching: [number, number][];
  /** Net names in order, and the number of each element's net; an element without a net is a net of its own, `(id)`. */
  nets: string[];
  netOf: Int32Array;
}

export function prepareDrawn(copper: Copper, mesh: SurfaceMesh, normals: CornerNormals): Drawn {
  const samples = sampleCopper(copper, mesh, normals);
  const grid = copperGrid(copper);
  const names = copper.elements.map((e) => (e.net === '' ? `(${e.id})` : e.net));
  const nets = [...new Set(names)].sort();
  const number = new Map(nets.map((name, i) => [name, i]));
  const netOf = Int32Array.from(names, (name) => number.get(name)!);
  return {
    copper,
    mesh,
    normals,
    samples,
    grid,
    touching: touchingPairs(copper, mesh, samples, grid),
    nets,
    netOf,
  };
}

/** @param alive  called between the steps of the work; it throws Cancelled when the person has asked to stop */
export function judge(
  project: Project,
  drawn: Drawn,
  layers: readonly { pulses: LayerPulses; place: LayerPlace }[],
  findings: readonly string[],
  alive: () => void,
): ProofReport {
  const { copper, mesh, normals, samples, grid, nets, netOf } = drawn;
  const spot = spotOf(project.head, project.material);
  const flags = new Uint8Array(samples.count);
  const burnt = layers.map(({ pulses, place }) => {
    alive();
    return {
      pulses,
      place,
      burn: burnLayer(pulses, place, samples, spot, project.limits, project.material, flags),
    };
  });
  const all = gatherPulses(burnt);
  alive();

  const share = coverage(samples, flags);
  let least = 0;
  share.covered.forEach((c, e) => {
    if (c < share.covered[least]) least = e;
  });
  const joins = findJoins(all, mesh, grid, copper.elements.length, netOf, nets.length);
  alive();
  const stray = strayArea(all, mesh, normals, grid, project.limits.proof.strayTolerance);

  const opens: string[][] = [];
  copper.elements.forEach((e, i) => {
    if (share.covered[i] < HARDLY || joins.pieces[i] > 1) opens.push([e.id]);
  });
  for (const [e, f] of drawn.touching)
    if (!joins.touching.has(e * copper.elements.length + f))
      opens.push([copper.elements[e].id, copper.elements[f].id]);
  const shorts = [...joins.joined]
    .sort((a, b) => a - b)
    .map((k) => [nets[Math.floor(k / nets.length)], nets[k % nets.length]]);

  const covered = copper.elements.length > 0 ? share.covered[least] : 1;
  const said = [
    ...findings,
    ...layers.flatMap(({ pulses }) =>
      pulses.outside > 0 ? [`${pulses.outside} pulses of ${pulses.file} lie outside the field.`] : [],
    ),
  ];
  const limits = project.limits.proof;
  return {
    ok:
      covered >= limits.covered &&
      share.focus === 1 &&
      stray <= limits.stray * share.drawn &&
      opens.length === 0 &&
      shorts.length === 0 &&
      said.length === 0,
    covered,
    coveredElement: copper.elements[least]?.id ?? '',
    focus: share.focus,
    stray_mm2: stray,
    opens,
    shorts,
    files: layers.length,
    findings: said,
  };
}

/** Shares of area: activated for each element, and of the activated copper what was written within the usable depth. */
function coverage(
  samples: Samples,
  flags: Uint8Array,
): { covered: Float64Array; focus: number; drawn: number } {
  const covered = new Float64Array(samples.elementArea.length);
  let [activated, beyond, drawn] = [0, 0, 0];
  for (let s = 0; s < samples.count; s++) {
    if (!(flags[s] & ACTIVATED)) continue;
    covered[samples.element[s]] += samples.area[s];
    activated += samples.area[s];
    if (flags[s] & OUT_OF_DEPTH) beyond += samples.area[s];
  }
  // an element of which nothing was laid on the part is lost
  samples.elementArea.forEach((a, e) => {
    covered[e] = a > 0 ? Math.min(1, covered[e] / a) : 0;
    drawn += a;
  });
  return { covered, focus: activated > 0 ? 1 - beyond / activated : 1, drawn };
}
