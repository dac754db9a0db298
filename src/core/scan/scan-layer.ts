/** Plan → strokes of a layer, in the order in which they are burnt (model.md §6). */
import { benchPoint, partPoint } from '../base/brands.ts';
import { type PoseFrame, poseFrame } from '../base/pose.ts';
import { focusedBeam } from '../beam/beam.ts';
import { landing } from '../beam/landing.ts';
import type { Copper } from '../drape/copper.ts';
import type { Layer, SetupPlan } from '../layers/plan.ts';
import { canGo } from '../layers/plan-layers.ts';
import type { Part } from '../part/part.ts';
import type { Project, Setup } from '../project/schema.ts';
import type { SetupReach } from '../reach/result.ts';
import { speedSteps, stepSpeed } from './classes.ts';
import { type ElementGround, prepareElement, runLines } from './element-lines.ts';
import { orderStrokes } from './order.ts';
import { type SurfaceLine, thin } from './polyline.ts';
import type { LayerScan, ProcessClass, Stroke, StrokeKind } from './strokes.ts';

/** Points are left out where that moves a stroke by no more than this, mm. */
const THIN = 1e-3;
/** What files hold, mm: four decimals. */
const FILE_STEP = 1e-4;
/** A stroke shorter than this burns nothing that its neighbours do not, mm. */
const SHORTEST = 2e-3;

export const pulseSpacing = (project: Project): number =>
  project.scan.markSpeed / (project.head.repetitionRate_kHz * 1e3);

/** Prepared elements of a setup, shared by its layers. */
export function prepareGround(
  part: Part,
  setup: Setup,
  copper: Copper,
  reach: SetupReach,
  plan: SetupPlan,
): Map<number, ElementGround> {
  const frame = poseFrame(setup.pose);
  return new Map(
    plan.elements.map((e) => [
      e,
      prepareElement(part, frame, copper.elements[e], (t) => canGo(reach.elements[e], t)),
    ]),
  );
}

export function scanLayer(
  project: Project,
  setup: Setup,
  layer: Layer,
  ground: ReadonlyMap<number, ElementGround>,
): LayerScan {
  const frame = poseFrame(setup.pose);
  const beam = focusedBeam(project.head);
  const pieces: Piece[] = [];
  for (const run of layer.runs) {
    const g = ground.get(run.element)!;
    for (const { kind, lines } of runLines(
      g,
      run,
      layer.stageOffset,
      project,
      frame,
      beam,
      pulseSpacing(project),
    ))
      for (const line of lines)
        pieces.push(...strokePieces(line, kind, g.element.id, frame, layer.stageOffset, project));
  }
  return assemble(layer.index, pieces, project);
}

interface Piece {
  kind: StrokeKind;
  element: string;
  step: number;
  points: Float64Array;
}

/** Field commands of a line on the surface, thinned and cut where the speed changes. */
function strokePieces(
  line: SurfaceLine,
  kind: StrokeKind,
  element: string,
  frame: PoseFrame,
  stageOffset: number,
  project: Project,
): Piece[] {
  const keep = thin(line.points, 3, THIN);
  const n = keep.length;
  const commands = new Float64Array(2 * n);
  keep.forEach((i, k) => {
    const b = frame.point(partPoint([line.points[3 * i], line.points[3 * i + 1], line.points[3 * i + 2]]));
    const c = landing(benchPoint([b[0], b[1], b[2] + stageOffset]), project.head);
    commands[2 * k] = Math.round(c[0] / FILE_STEP) * FILE_STEP;
    commands[2 * k + 1] = Math.round(c[1] / FILE_STEP) * FILE_STEP;
  });
  const onSurface = new Float64Array(Math.max(0, n - 1));
  const onCommand = new Float64Array(Math.max(0, n - 1));
  for (let k = 0; k + 1 < n; k++) {
    for (let i = keep[k]; i < keep[k + 1]; i++)
      onSurface[k] += Math.hypot(
        line.points[3 * i + 3] - line.points[3 * i],
        line.points[3 * i + 4] - line.points[3 * i + 1],
        line.points[3 * i + 5] - line.points[3 * i + 2],
      );
    onCommand[k] = Math.hypot(
      commands[2 * k + 2] - commands[2 * k],
      commands[2 * k + 3] - commands[2 * k + 1],
    );
  }
  if (sum(onSurface) < SHORTEST) return [];
  const steps = speedSteps(onSurface, onCommand);
  const out: Piece[] = [];
  for (let k = 0; k < steps.length; ) {
    let end = k + 1;
    while (end < steps.length && steps[end] === steps[k]) end++;
    out.push({ kind, element, step: steps[k], points: commands.slice(2 * k, 2 * end + 2) });
    k = end;
  }
  return out;
}

/** Groups by class and kind, orders each group, and adds lengths and time up. */
function assemble(index: number, pieces: readonly Piece[], project: Project): LayerScan {
  const { scan } = project;
  const steps = [...new Set(pieces.map((p) => p.step))].sort((a, b) => a - b);
  const classes: ProcessClass[] = steps.map((j) => ({
    speed: stepSpeed(scan.markSpeed, j),
    power: 1,
    passes: scan.passes,
  }));
  const strokes: Stroke[] = [];
  let at: readonly [number, number] = [0, 0];
  steps.forEach((step, c) => {
    for (const kind of ['outline', 'fill'] as const) {
      const group = pieces.filter((p) => p.step === step && p.kind === kind);
      const ends = new Float64Array(4 * group.length);
      group.forEach((p, i) => {
        ends.set(p.points.subarray(0, 2), 4 * i);
        ends.set(p.points.subarray(p.points.length - 2), 4 * i + 2);
      });
      for (const { index: i, reversed } of orderStrokes(ends, at)) {
        const points = reversed ? backwards(group[i].points) : group[i].points;
        for (let pass = 0; pass < scan.passes; pass++)
          strokes.push({ kind, element: group[i].element, processClass: c, points });
        at = [points[points.length - 2], points[points.length - 1]];
      }
    }
  });
  return { index, classes, strokes, ...lengths(strokes, classes, scan) };
}

function lengths(
  strokes: readonly Stroke[],
  classes: readonly ProcessClass[],
  scan: Project['scan'],
): { markLength: number; jumpLength: number; time: number } {
  let markLength = 0;
  let jumpLength = 0;
  let time = 0;
  let at: readonly [number, number] | null = null;
  for (const s of strokes) {
    const first: readonly [number, number] = [s.points[0], s.points[1]];
    // The first jump of a layer comes from wherever the beam stood: not counted.
    const jump = at ? Math.hypot(first[0] - at[0], first[1] - at[1]) : 0;
    let mark = 0;
    for (let i = 2; i < s.points.length; i += 2)
      mark += Math.hypot(s.points[i] - s.points[i - 2], s.points[i + 1] - s.points[i - 1]);
    jumpLength += jump;
    markLength += mark;
    time +=
      mark / classes[s.processClass].speed +
      jump / scan.jumpSpeed +
      (scan.jumpDelay_us + scan.markDelay_us) * 1e-6;
    at = [s.points[s.points.length - 2], s.points[s.points.length - 1]];
  }
  return { markLength, jumpLength, time };
}

function backwards(points: Float64Array): Float64Array {
  const out = new Float64Array(points.length);
  for (let i = 0; i < points.length; i += 2) {
    out[i] = points[points.length - 2 - i];
    out[i + 1] = points[points.length - 1 - i];
  }
  return out;
}

const sum = (a: Float64Array): number => a.reduce((s, x) => s + x, 0);
