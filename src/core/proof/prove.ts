/**
 * The read-back proof (model.md §7): reads the exported files, burns them virtually, compares with the drawn copper.
 * It shares the numbers of the head with the code that plans, and none of the code.
 */
import { InputError } from '../base/news.ts';
import type { RunContext } from '../base/run-context.ts';
import type { Copper } from '../drape/copper.ts';
import type { SurfaceMesh } from '../mesh/surface-mesh.ts';
import { buildNormals, type CornerNormals } from '../part/normals.ts';
import type { ProofReport } from '../project/report.ts';
import type { Project } from '../project/schema.ts';
import type { LayerPlace } from './burn.ts';
import { leanOf } from './forward.ts';
import { takeInventory } from './inventory.ts';
import { judge, prepareDrawn } from './judge.ts';
import { readReport } from './reader-report.ts';
import { type LayerPulses, type ProofFormat, type TraceTask, tracePulses } from './trace.ts';

export type { LayerPulses, ProofFormat, TraceTask } from './trace.ts';
export { tracePulses } from './trace.ts';

export interface ProofInput {
  project: Project;
  /** The part, part frame, mm. */
  mesh: SurfaceMesh;
  /** Of the part; made here when left out. */
  normals?: CornerNormals;
  /** The drawn copper, from a fresh drape. */
  copper: Copper;
  /** `report.json` and the scan files, paths below the output folder such as `top/layer-01.svg`. */
  files: readonly { path: string; bytes: Uint8Array }[];
  /** Formats to prove, each on its own. */
  formats: readonly ProofFormat[];
}

export interface Proof {
  /** The worst of all formats, number by number. */
  report: ProofReport;
  byFormat: { format: ProofFormat; report: ProofReport }[];
}

/** What one format's files ask to be traced, and all that is wrong with the set already. */
export interface ProofPlan {
  format: ProofFormat;
  tasks: TraceTask[];
  findings: string[];
}

/**
 * @throws InputError `no-report`, `bad-report`, `bad-svg`, `bad-csv`, `not-yet`, `too-many-pulses`, `beyond-pivot`
 * @throws Cancelled
 */
export function prove(input: ProofInput, ctx: RunContext): Proof {
  const plans = planProof(input);
  const files = plans.reduce((n, plan) => n + plan.tasks.length, 0);
  let done = 0;
  const traced = plans.map((plan) =>
    plan.tasks.map((task) => {
      ctx.step('proof', done++, files + 1);
      return tracePulses(task);
    }),
  );
  const proof = verdict(input, plans, traced, ctx);
  ctx.step('proof', files + 1, files + 1);
  return proof;
}

/** The tracing that a proof needs, one independent task a file: they may run on other threads, in any order. */
export function planProof(input: ProofInput): ProofPlan[] {
  const { project, mesh } = input;
  const normals = input.normals ?? buildNormals(mesh);
  const report = input.files.find((f) => f.path === 'report.json');
  if (!report)
    throw new InputError({
      code: 'no-report',
      file: 'report.json',
      place: '',
      problem: 'it is missing',
      mend: 'give the whole output folder of a run',
    });
  const setups = readReport(report.bytes, report.path);
  return input.formats.map((format) => {
    const { found, findings } = takeInventory(project, setups, input.files, format);
    const tasks = found.map(({ path, bytes, pose, offset }) => ({
      file: path,
      format,
      bytes,
      head: project.head,
      pose,
      offset,
      mesh,
      normals,
    }));
    return { format, tasks, findings };
  });
}

/** @param traced  results of the tasks of each plan, in the plans' order */
export function verdict(
  input: ProofInput,
  plans: readonly ProofPlan[],
  traced: readonly (readonly LayerPulses[])[],
  ctx: RunContext,
): Proof {
  const { project, mesh, copper } = input;
  const files = plans.reduce((n, plan) => n + plan.tasks.length, 0);
  const alive = () => ctx.step('proof', files, files + 1); // every file is traced, the verdict is out
  alive();
  const drawn = prepareDrawn(copper, mesh, input.normals ?? buildNormals(mesh));
  const lean = leanOf(project.head);
  interface Judged {
    layers: { pulses: LayerPulses; place: LayerPlace }[];
    findings: readonly string[];
    report: ProofReport;
  }
  const judged: Judged[] = [];
  const byFormat = plans.map(({ format, tasks, findings }, i) => {
    const layers = tasks.map((task, k): { pulses: LayerPulses; place: LayerPlace } => ({
      pulses: traced[i][k],
      place: { pose: task.pose, offset: task.offset, lean },
    }));
    // Two formats that burn the very same pulses get the very same verdict: worked out once.
    const twin = judged.find(
      (j) => j.findings.length + findings.length === 0 && samePulses(j.layers, layers),
    );
    const report = twin ? twin.report : judge(project, drawn, layers, findings, alive);
    judged.push({ layers, findings, report });
    return { format, report };
  });
  return { report: worst(byFormat), byFormat };
}

type Burnt = readonly { pulses: LayerPulses; place: LayerPlace }[];

/** Whether two sets of files burn the same places with the same light, number for number. */
function samePulses(a: Burnt, b: Burnt): boolean {
  return (
    a.length === b.length &&
    a.every(({ pulses: p, place }, i) => {
      const { pulses: q, place: other } = b[i];
      // a verdict on pulses outside the field names the file
      return (
        p.outside === 0 &&
        place.offset === other.offset &&
        sameData(place.pose, other.pose) &&
        sameData({ ...p, file: '' }, { ...q, file: '' })
      );
    })
  );
}

/** Deep equality of plain data and typed arrays. */
function sameData(a: unknown, b: unknown): boolean {
  if (Object.is(a, b)) return true;
  if (typeof a !== 'object' || typeof b !== 'object' || a === null || b === null) return false;
  if (ArrayBuffer.isView(a) && ArrayBuffer.isView(b)) {
    const [x, y] = [a as Float64Array, b as Float64Array];
    if (x.length !== y.length) return false;
    for (let i = 0; i < x.length; i++) if (x[i] !== y[i]) return false;
    return true;
  }
  const [ka, kb] = [Object.keys(a), Object.keys(b)];
  return (
    ka.length === kb.length &&
    ka.every((k) => sameData((a as Record<string, unknown>)[k], (b as Record<string, unknown>)[k]))
  );
}

/** Nothing to prove is no proof. */
function worst(byFormat: readonly { format: ProofFormat; report: ProofReport }[]): ProofReport {
  const reports = byFormat.map((f) => f.report);
  if (reports.length === 0)
    return {
      ok: false,
      covered: 0,
      coveredElement: '',
      focus: 0,
      stray_mm2: 0,
      opens: [],
      shorts: [],
      files: 0,
      findings: ['There is no scan file to prove.'],
    };
  const least = reports.reduce((a, b) => (b.covered < a.covered ? b : a));
  return {
    ok: reports.every((r) => r.ok),
    covered: least.covered,
    coveredElement: least.coveredElement,
    focus: Math.min(...reports.map((r) => r.focus)),
    stray_mm2: Math.max(...reports.map((r) => r.stray_mm2)),
    opens: distinct(reports.map((r) => r.opens)),
    shorts: distinct(reports.map((r) => r.shorts)),
    files: reports.reduce((n, r) => n + r.files, 0),
    findings: [...new Set(reports.flatMap((r) => r.findings))],
  };
}

const distinct = (lists: readonly string[][][]): string[][] => [
  ...new Map(lists.flat().map((one) => [JSON.stringify(one), one])).values(),
];
