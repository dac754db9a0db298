/**
 * The whole line on one page: part + drawing → drape → reach → layers → scan → files → proof.
 * The window, the command line and the tests all run this, so that all of them get the same bytes.
 */

import { collisionsOf, elementReports, layerReport, openReport, partsOfReport } from './account.ts';
import { Fault, InputError } from './base/news.ts';
import type { RunContext } from './base/run-context.ts';
import { decodeUtf8 } from './base/utf8.ts';
import { focusedBeam } from './beam/beam.ts';
import { connectivityRule, joinedPieces, netlistRule } from './copper/connectivity.ts';
import type { Copper } from './drape/copper.ts';
import {
  type CircuitDraped,
  checkPlaces,
  type DrapeTask,
  type DrawingTask,
  drapeShared,
  drapeTasks,
  drawingTasks,
  gatherCircuit,
} from './drape/drape.ts';
import { type DrawingDraped, elementsAt } from './drape/drape-drawing.ts';
import type { Draped } from './drape/element.ts';
import { DEFAULTS, type Drawing } from './drawing/drawing.ts';
import type { Flat } from './drawing/flat.ts';
import { readNetlist } from './drawing/netlist.ts';
import { readDrawing } from './drawing/read-drawing.ts';
import { layerCsv } from './files/csv.ts';
import { layerFile, safeNames } from './files/names.ts';
import { type OutputFile, textFile } from './files/output.ts';
import { jobSheet } from './files/sheet.ts';
import { layerSvg } from './files/svg.ts';
import type { SetupPlan } from './layers/plan.ts';
import { planLayers } from './layers/plan-layers.ts';
import { MM_PER_UNIT } from './mesh/build.ts';
import { loadPart, type Part } from './part/part.ts';
import type { ProofReport, Report } from './project/report.ts';
import type { Project, Setup } from './project/schema.ts';
import {
  type LayerPulses,
  type Proof,
  type ProofFormat,
  type ProofInput,
  planProof,
  verdict,
} from './proof/prove.ts';
import { checkReach } from './reach/reach.ts';
import type { SetupReach } from './reach/result.ts';
import { prepareGround, scanLayer } from './scan/scan-layer.ts';
import type { LayerScan } from './scan/strokes.ts';

export { loadPart, type Part } from './part/part.ts';

/** Named plain functions on worker threads, results in order; see `src/worker`. */
export interface Workers {
  readonly threads: number;
  map<A, R>(task: string, shared: unknown, args: readonly A[], tell?: (done: number) => void): Promise<R[]>;
}

export interface JobInput {
  project: Project;
  projectFile: string;
  projectText: string;
  /** Fields of the file that the project does not know, by JSON path. */
  unknown?: readonly string[];
  part: NamedBytes;
  /** Drawings by the names that the project gives them. */
  drawings?: readonly NamedBytes[];
  /** Loads what drawings need for the outlines of overlapping figures. */
  flat?: () => Promise<Flat>;
}

export interface NamedBytes {
  file: string;
  bytes: Uint8Array;
}

export interface JobOptions {
  seed: number;
  stopAfter?: 'reach';
}

export interface JobResult {
  report: Report;
  /** `report.json`, `sheet.html` and the scan files. Empty after `stopAfter`. */
  files: OutputFile[];
}

/** Opens and shorts of the copper as it lies, against its nets and against the project's netlist. */
export function connections(
  project: Project,
  copper: Copper,
  drawings: ReadonlyMap<string, Drawing>,
  files: readonly NamedBytes[],
  ctx: RunContext,
): Report['rules'] {
  const { elements } = copper;
  const piece = joinedPieces(elements);
  const found = connectivityRule(elements, piece);
  if (project.netlist === undefined) return found;
  const file = files.find((f) => f.file === project.netlist);
  if (!file) throw new Fault(`the bytes of ${project.netlist} were not handed over`);
  const netlist = readNetlist(decodeUtf8(file.bytes), project.netlist, null, ctx);
  // A point belongs to the first drape that has copper there: a netlist does not say which drawing it is of.
  const at = netlist.points.map((p) => p.at);
  const index = new Map(elements.map((e, i) => [e.id, i]));
  const on = netlist.points.map(() => -1);
  for (const drape of project.circuit.drapes)
    elementsAt(drape, drawings.get(drape.id)!, at).forEach((id, i) => {
      if (on[i] < 0 && id !== null) on[i] = index.get(id) ?? -1;
    });
  const points = netlist.points.map((p, i) => ({ ...p, element: on[i] }));
  return [...found, ...netlistRule(points, project.netlist, elements, piece)];
}

const noFlat = (): Promise<Flat> => {
  throw new Fault('a job with drawings needs plane booleans');
};

const FORMATS: readonly ProofFormat[] = ['csv', 'svg'];

/**
 * @throws InputError for everything in the files that cannot be used
 * @throws Cancelled
 */
export async function runJob(
  input: JobInput,
  options: JobOptions,
  ctx: RunContext,
  workers: Workers,
): Promise<JobResult> {
  const { project, projectFile } = input;
  const setups = setupsOf(project, projectFile);
  const part = loadPart(input.part.bytes, input.part.file, project.part.units, ctx);
  const drawings = await readDrawings(project, input.drawings ?? [], input.flat ?? noFlat, ctx);
  const { copper, findings } = await layCircuit(project, projectFile, part, drawings, ctx, workers);
  const reach = checkReach(project, setups, part, copper, ctx);
  const report = openReport(project, input.unknown ?? [], part, copper, findings, drawings);
  report.rules.push(...connections(project, copper, drawings, input.drawings ?? [], ctx));
  if (options.stopAfter === 'reach') {
    report.elements = elementReports(project, setups, part, copper, reach, null, ctx);
    report.ok = holds(report);
    return { report, files: [] };
  }
  if (copper.elements.length === 0 && findings.length === 0)
    throw new InputError({
      code: 'nothing-to-write',
      file: projectFile,
      place: '$.circuit.elements',
      problem: 'there is no copper to write',
      mend: 'add a trace, a pad or a region',
    });
  const plans = planLayers(project, setups, copper, reach, ctx);
  report.elements = elementReports(project, setups, part, copper, reach, plans, ctx);
  report.collisions = collisionsOf(project, setups, part, plans);
  partsOfReport(report, setups, copper, plans);
  if (report.collisions.length > 0) {
    report.ok = false;
    return { report, files: [reportFile(report), textFile('sheet.html', jobSheet(project, report, []))] };
  }
  const written = scanFiles(project, setups, part, copper, reach, plans, report, ctx);
  // The proof reads the report from the files, as it would after a run.
  const drawn = { project, mesh: part.mesh, normals: part.normals, copper };
  const proof = await proveFiles(
    { ...drawn, files: [...written.files, reportFile(report)], formats: FORMATS },
    ctx,
    workers,
  );
  report.proof = proof.report;
  report.ok = holds(report);
  const sheet = jobSheet(
    project,
    report,
    written.scans.map((scans, i) => ({ report: report.setups[i], scans })),
  );
  return { report, files: [...written.files, reportFile(report), textFile('sheet.html', sheet)] };
}

/** Strokes and files of every layer of every setup; their numbers go into the report. */
function scanFiles(
  project: Project,
  setups: readonly Setup[],
  part: Part,
  copper: Copper,
  reach: readonly SetupReach[],
  plans: readonly SetupPlan[],
  report: Report,
  ctx: RunContext,
) {
  const files: OutputFile[] = [];
  const folders = safeNames(setups.map((s) => s.name));
  const spot = 2 * focusedBeam(project.head).waist;
  const total = plans.reduce((n, p) => n + p.layers.length, 0);
  let done = 0;
  const scans = plans.map((plan, i): LayerScan[] => {
    const ground = prepareGround(part, setups[i], copper, reach[i], plan);
    const layers = plan.layers.map((layer) => {
      ctx.step('scan', done++, total);
      const scan = scanLayer(project, setups[i], layer, ground);
      const names = [layerFile(folders[i], layer.index, 'svg'), layerFile(folders[i], layer.index, 'csv')];
      files.push(textFile(names[0], layerSvg(scan, project.head, spot)), textFile(names[1], layerCsv(scan)));
      report.setups[i].layers.push(layerReport(project, copper, reach[i], plan, layer, scan, names));
      return scan;
    });
    return layers;
  });
  ctx.step('scan', total, total);
  return { files, scans };
}

/** Every element laid on the part, one a task. @throws InputError as `drapeCircuit` */
export async function layCircuit(
  project: Project,
  file: string,
  part: Part,
  drawings: ReadonlyMap<string, Drawing>,
  ctx: RunContext,
  workers: Workers,
): Promise<CircuitDraped> {
  checkPlaces(project, file, part);
  const tasks = drapeTasks(project, file);
  const drawn = drawingTasks(project, drawings, file);
  const all = tasks.length + drawn.length;
  ctx.step('drape', 0, all);
  const shared = drapeShared(part);
  const draped = await workers.map<DrapeTask, Draped>('lay element', shared, tasks, (done) =>
    ctx.step('drape', done, all),
  );
  const laid = await workers.map<DrawingTask, DrawingDraped>('lay drawing', shared, drawn, (done) =>
    ctx.step('drape', tasks.length + done, all),
  );
  return gatherCircuit(draped, laid);
}

/**
 * Every drawing that a drape needs, read.
 * @param files  drawings by the names that the project gives them
 * @returns by the id of the drape
 * @throws InputError of the readers
 */
export async function readDrawings(
  project: Project,
  files: readonly NamedBytes[],
  flat: () => Promise<Flat>,
  ctx: RunContext,
): Promise<Map<string, Drawing>> {
  const read = new Map<string, Drawing>();
  for (const drape of project.circuit.drapes) {
    const file = files.find((f) => f.file === drape.drawing);
    if (!file) throw new Fault(`the bytes of ${drape.drawing} were not handed over`);
    const options = {
      ...DEFAULTS,
      unit: drape.units ? MM_PER_UNIT[drape.units] : null,
      ...(drape.lineWidth ? { lineWidth: drape.lineWidth } : {}),
    };
    read.set(drape.id, readDrawing(file.bytes, drape.drawing, options, await flat(), ctx));
  }
  return read;
}

/** The read-back proof, one file a task. */
export async function proveFiles(input: ProofInput, ctx: RunContext, workers: Workers): Promise<Proof> {
  const plans = planProof(input);
  const first = plans.flatMap((p) => p.tasks)[0];
  const tasks = plans.flatMap((p) => p.tasks.map(({ head: _, mesh: __, normals: ___, ...own }) => own));
  ctx.step('proof', 0, tasks.length + 1);
  const shared = first ? { head: first.head, mesh: first.mesh, normals: first.normals } : {};
  const traced = await workers.map<unknown, LayerPulses>('trace pulses', shared, tasks, (done) =>
    ctx.step('proof', done, tasks.length + 1),
  );
  let next = 0;
  const byPlan = plans.map((p) => traced.slice(next, (next += p.tasks.length)));
  const proof = verdict(input, plans, byPlan, ctx);
  ctx.step('proof', tasks.length + 1, tasks.length + 1);
  return proof;
}

const reportFile = (report: Report): OutputFile =>
  textFile('report.json', JSON.stringify(report, null, 2) + '\n');

/** Every check of every element, every rule of level error, and the proof. */
function holds(report: Report): boolean {
  const proof: ProofReport | null = report.proof;
  return (
    report.elements.every((e) => e.focus.ok && e.incidence.ok && e.shade.ok && e.field.ok && e.dose.ok) &&
    report.rules.every((r) => r.level !== 'error') &&
    report.collisions.length === 0 &&
    (proof === null || proof.ok)
  );
}

/**
 * Setups with their poses, and what this release cannot use named.
 * @throws InputError `not-yet`
 */
export function setupsOf(project: Project, file: string): Setup[] {
  const no = (place: string, problem: string, mend: string) =>
    new InputError({ code: 'not-yet', file, place, problem, mend });
  if (project.setups === 'auto')
    throw no('$.setups', 'this release does not choose setups by itself', 'give each setup its pose');
  project.setups.forEach((s, i) => {
    if (s.measured)
      throw no(
        `$.setups[${i}].measured`,
        'this release does not fit a pose to measured points',
        'give the pose itself',
      );
  });
  if (project.cradle !== undefined)
    throw no('$.cradle', 'this release makes no cradles', 'leave the field out');
  const { axes } = project.head;
  if (axes && (axes.swap || axes.flipX || axes.flipY || axes.turn || axes.scale))
    throw no(
      '$.head.axes',
      'this release does not turn or mirror the field',
      'leave it out and turn the field at the machine',
    );
  return project.setups;
}
