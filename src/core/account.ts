/** What the stages found, in the words and units of the report (job.md): degrees, mm, J/cm². */
import { degreesFromRadians } from './base/brands.ts';
import type { RunContext } from './base/run-context.ts';
import type { Vec3 } from './base/vec.ts';
import { focusedBeam, halfDepth } from './beam/beam.ts';
import { netReports } from './copper/nets.ts';
import { plating } from './copper/plating.ts';
import { unionArea } from './copper/union-area.ts';
import type { Copper, CopperElement } from './drape/copper.ts';
import type { DrapeFinding } from './drape/element.ts';
import { triangleArea } from './drape/level-lines.ts';
import type { Drawing } from './drawing/drawing.ts';
import { extentOf } from './files/layer-picture.ts';
import { reportNumber as r } from './files/numbers.ts';
import { layerOfSamples } from './layers/assign.ts';
import type { Layer, SetupPlan } from './layers/plan.ts';
import { bestSetup, canGo, heightGrid } from './layers/plan-layers.ts';
import { partReport } from './mesh/summary.ts';
import type { Part } from './part/part.ts';
import type { DrawingReport, ElementReport, Report, SetupReport } from './project/report.ts';
import type { Project, Setup } from './project/schema.ts';
import { collision } from './reach/collision.ts';
import { fieldShare } from './reach/field.ts';
import { reachElement } from './reach/reach.ts';
import { type ElementReach, REASONS, type Reason, type SetupReach } from './reach/result.ts';
import { shopRules } from './rules/shop-rules.ts';
import type { LayerScan } from './scan/strokes.ts';

const drawingReports = (project: Project, drawings: ReadonlyMap<string, Drawing>): DrawingReport[] =>
  project.circuit.drapes.flatMap((drape) => {
    const drawing = drawings.get(drape.id);
    return drawing
      ? [
          {
            drape: drape.id,
            file: drape.drawing,
            shapes: drawing.shapes.length,
            holes: drawing.holes.length,
            layers: [...drawing.layers],
            notes: drawing.notes.map((n) => ({ ...n })),
          },
        ]
      : [];
  });

export function openReport(
  project: Project,
  unknown: readonly string[],
  part: Part,
  copper: Copper,
  findings: readonly DrapeFinding[],
  drawings: ReadonlyMap<string, Drawing> = new Map(),
): Report {
  const beam = focusedBeam(project.head);
  // Whatever its net: where elements lie over each other there is one layer of copper.
  const plated = plating(unionArea(copper.elements.map((e) => e.copper)), project.copper);
  return {
    format: 'beamdrape-report',
    version: 1,
    project: project.name,
    ok: false,
    unknownFields: [...unknown],
    part: partReport(part.mesh),
    beam: {
      waistRadius_um: r(beam.waist * 1e3),
      rayleighRange: r(beam.rayleigh),
      pulseEnergy_uJ: r(beam.pulseEnergy * 1e6),
      peakPower_kW: r(beam.peakPower / 1e3),
      halfDepth: r(halfDepth(beam, project.limits.depth, project.material)),
      truncated: beam.truncated,
    },
    ...(drawings.size > 0 ? { drawings: drawingReports(project, drawings) } : {}),
    elements: [],
    rules: [
      ...findings.map((f) => ({
        rule: f.rule,
        level: f.rule === 'not-evened' ? ('warning' as const) : ('error' as const),
        value: 0,
        limit: 0,
        elements: [f.element],
        at: at(f.at),
        text: f.text,
      })),
      ...shopRules(part, copper.elements, project.limits).map((x) => ({
        ...x,
        value: r(x.value),
        at: at(x.at),
      })),
    ],
    setups: [],
    unreached: { length: 0, elements: [] },
    collisions: [],
    nets: netReports(project, copper).map((n) => ({
      ...n,
      area: r(n.area),
      length: r(n.length),
      current_A: r(n.current_A),
      resistance_mohm: n.resistance_mohm.map((x) => ({ ...x, value: r(x.value), within: r(x.within) })),
    })),
    plating: {
      area_dm2: r(plated.area_dm2),
      load: r(plated.load),
      copper_g: r(plated.copper_g),
      formaldehyde_g: r(plated.formaldehyde_g),
      naoh_g: r(plated.naoh_g),
      time_min: r(plated.time_min),
    },
    proof: null,
  };
}

/** Setups and copper that no layer writes. */
export function partsOfReport(
  report: Report,
  setups: readonly Setup[],
  copper: Copper,
  plans: readonly SetupPlan[],
): void {
  report.setups = plans.map((p): SetupReport => {
    const { pose } = setups[p.setup];
    return { name: p.name, pose: { rotate: pose.rotate, move: pose.move }, layers: [] };
  });
  const lost = plans.flatMap((p) => p.unreached);
  report.unreached = {
    length: r(lost.reduce((sum, u) => sum + u.length, 0)),
    elements: [...new Set(lost.map((u) => copper.elements[u.element].id))],
  };
}

export function collisionsOf(
  project: Project,
  setups: readonly Setup[],
  part: Part,
  plans: readonly SetupPlan[],
): Report['collisions'] {
  return plans.flatMap((plan, i) =>
    plan.layers.flatMap((layer) => {
      const hit = collision(part.mesh, setups[i].pose, layer.stageOffset, project.head, project.limits);
      return hit ? [{ setup: plan.name, layer: layer.index, height: r(hit.height), at: at(hit.at) }] : [];
    }),
  );
}

/** @param plans  null before layers are planned: everything is then taken at d = 0 */
export function elementReports(
  project: Project,
  setups: readonly Setup[],
  part: Part,
  copper: Copper,
  reach: readonly SetupReach[],
  plans: readonly SetupPlan[] | null,
  ctx: RunContext,
): ElementReport[] {
  return copper.elements.map((element, e) => {
    ctx.step(plans ? 'layers' : 'reach', e, copper.elements.length);
    const plan = plans?.find((p) => p.elements.includes(e)) ?? null;
    const s = plan ? plan.setup : bestSetup(reach.map((x) => x.elements[e]));
    const before = reach[s].elements[e];
    if (!plan) return elementReport(project, element, [], [], before, null);
    const layerOf = layerOfSamples(plan, element, e, before, (t) => canGo(before, t));
    const defocus = new Float64Array(layerOf.length);
    layerOf.forEach((k, t) => {
      if (k >= 0) defocus[t] = before.height[t] + plan.layers[k].stageOffset;
    });
    const after = reachElement(project, setups[s], part, element, defocus);
    const used = [...new Set(layerOf)].filter((k) => k >= 0).sort((a, b) => a - b);
    return elementReport(
      project,
      element,
      used.length > 0 ? [plan.name] : [],
      used.map((k) => plan.layers[k].index),
      after,
      { layerOf, plan, before },
    );
  });
}

function elementReport(
  project: Project,
  element: CopperElement,
  setups: string[],
  layers: number[],
  reach: ElementReach,
  written: { layerOf: Int16Array; plan: SetupPlan; before: ElementReach } | null,
): ElementReport {
  const n = element.copper.face.length;
  const fails = (reason: Reason): boolean => {
    const bit = 1 << REASONS.indexOf(reason);
    return reach.fails.some((f) => (f & bit) !== 0);
  };
  const grid = heightGrid(project.stage);
  const before = written?.before ?? reach;
  // What no layer writes is out of focus by the way to the nearest layer, or to the nearest height of the stage.
  const defocus = (t: number): number => {
    const from = (h: number) => Math.max(reach.high[t] - h, h - reach.low[t]);
    const k = written ? written.layerOf[t] : -1;
    if (k >= 0) return from(written!.plan.layers[k].focusHeight);
    if (!canGo(before, t)) return 0;
    const layers = written?.plan.layers ?? [];
    if (layers.length > 0) return Math.min(...layers.map((l) => from(l.focusHeight)));
    return Math.max(0, reach.high[t] - grid.most, grid.least - reach.low[t]);
  };
  const worst = (value: (t: number) => number): { value: number; at: Vec3; t: number } => {
    let best = 0;
    let most = -Infinity;
    for (let t = 0; t < n; t++) {
      const v = value(t);
      if (v > most) {
        most = v;
        best = t;
      }
    }
    return { value: most, at: at(middle(element, best)), t: best };
  };
  const share = shadedShare(element, reach);
  const focus = worst(defocus);
  const incidence = worst((t) => reach.incidence[t]);
  const shade = worst((t) => reach.blocked[t]);
  const field = worst((t) => fieldShare(reach.command[2 * t], reach.command[2 * t + 1], project.head));
  const least = worst((t) => -reach.fluence[t]);
  const most = worst((t) => reach.fluence[t]);
  const unwritten = written
    ? written.layerOf.some((k, t) => k < 0 && canGo(before, t))
    : reach.usable.some((usable, t) => canGo(before, t) && defocus(t) > usable);
  const damaged = most.value > project.material.damageFluence;
  return {
    id: element.id,
    kind: element.kind,
    net: element.net,
    length: r(element.length),
    area: r(element.area),
    drawnLength: r(element.drawnLength),
    stretch: r(element.stretch),
    ...(element.stretched
      ? {
          stretched: {
            along: r(element.stretched.along),
            across: r(element.stretched.across),
            at: at(element.stretched.at),
          },
        }
      : {}),
    setups,
    layers,
    focus: { ok: !fails('focus') && !unwritten, worst: r(focus.value), at: focus.at },
    incidence: { ok: !fails('incidence'), worst: r(degreesFromRadians(incidence.value)), at: incidence.at },
    shade: { ok: !fails('shade'), share: r(share), at: shade.at },
    field: { ok: !fails('field'), worst: r(field.value), at: field.at },
    dose: { ok: !fails('dose'), min: r(-least.value), max: r(most.value), at: damaged ? most.at : least.at },
  };
}

function shadedShare(element: CopperElement, reach: ElementReach): number {
  const bit = 1 << REASONS.indexOf('shade');
  let shaded = 0;
  let all = 0;
  for (let t = 0; t < reach.fails.length; t++) {
    const a = triangleArea(element.copper, t);
    all += a;
    if (reach.fails[t] & bit) shaded += a;
  }
  return all > 0 ? shaded / all : 0;
}

export function layerReport(
  project: Project,
  copper: Copper,
  reach: SetupReach,
  plan: SetupPlan,
  layer: Layer,
  scan: LayerScan,
  files: string[],
): SetupReport['layers'][number] {
  let area = 0;
  let low = Infinity;
  let high = -Infinity;
  const place = plan.layers.indexOf(layer);
  for (const e of new Set(layer.runs.map((x) => x.element))) {
    const element = copper.elements[e];
    const re = reach.elements[e];
    layerOfSamples(plan, element, e, re, (t) => canGo(re, t)).forEach((k, t) => {
      if (k !== place) return;
      area += triangleArea(element.copper, t);
      low = Math.min(low, re.low[t]);
      high = Math.max(high, re.high[t]);
    });
  }
  const [x0, y0, x1, y1] = extentOf(scan);
  return {
    index: layer.index,
    focusHeight: r(layer.focusHeight),
    zOffset: r(project.stage.zMoves === 'head' ? layer.focusHeight : layer.stageOffset),
    zMoves: project.stage.zMoves,
    worstDefocus: r(layer.worstDefocus),
    copperArea: r(area),
    heights: [r(low), r(high)],
    extent: [
      [r(x0), r(y0)],
      [r(x1), r(y1)],
    ],
    markLength: r(scan.markLength),
    jumpLength: r(scan.jumpLength),
    time: r(scan.time),
    classes: scan.classes.map((c) => ({ ...c })),
    files,
  };
}

function middle(element: CopperElement, t: number): Vec3 {
  const { positions: x, triangles } = element.copper;
  const [a, b, c] = [3 * triangles[3 * t], 3 * triangles[3 * t + 1], 3 * triangles[3 * t + 2]];
  return [
    (x[a] + x[b] + x[c]) / 3,
    (x[a + 1] + x[b + 1] + x[c + 1]) / 3,
    (x[a + 2] + x[b + 2] + x[c + 2]) / 3,
  ];
}

/** Places to the nanometre. */
const at = (p: Vec3): Vec3 => [
  Math.round(p[0] * 1e6) / 1e6 + 0,
  Math.round(p[1] * 1e6) / 1e6 + 0,
  Math.round(p[2] * 1e6) / 1e6 + 0,
];
