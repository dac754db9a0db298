/** Compares the files that are there with those the report names, and says where the stage stands for each. */
import type { Pose } from '../base/pose.ts';
import type { Project } from '../project/schema.ts';
import type { ReportLayer, ReportSetup } from './reader-report.ts';
import type { ProofFormat } from './trace.ts';

export interface FoundFile {
  path: string;
  bytes: Uint8Array;
  pose: Pose;
  /** mm, up positive. */
  offset: number;
}

export interface Inventory {
  found: FoundFile[];
  /** A sentence for each thing that is wrong. */
  findings: string[];
}

/** mm: the report may round its numbers to the micrometre. */
const Z_AGREES = 2e-3;

export function takeInventory(
  project: Project,
  setups: readonly ReportSetup[],
  files: readonly { path: string; bytes: Uint8Array }[],
  format: ProofFormat,
): Inventory {
  const findings: string[] = [];
  const found: FoundFile[] = [];
  const ending = `.${format}`;
  const here = new Map(
    files.filter((f) => f.path.toLowerCase().endsWith(ending)).map((f) => [f.path, f.bytes]),
  );
  const known = new Set<string>();
  const folders = new Set<string>();
  for (const setup of setups)
    for (const layer of setup.layers) {
      findings.push(...checkOffset(project, setup, layer));
      for (const f of layer.files) folders.add(folderOf(f));
      const mine = layer.files.filter((f) => f.toLowerCase().endsWith(ending));
      if (mine.length === 0) findings.push(`Layer ${layer.index} of ${setup.name} has no ${format} file.`);
      for (const path of mine) {
        if (known.has(path)) findings.push(`${path} stands for more than one layer.`);
        known.add(path);
        const bytes = here.get(path);
        if (bytes) found.push({ path, bytes, pose: poseOf(project, setup), offset: stageOffset(layer) });
        else findings.push(`${path} is missing.`);
      }
    }
  for (const path of here.keys())
    if (!known.has(path) && (folders.has(folderOf(path)) || /(^|\/)layer-\d+\.\w+$/i.test(path)))
      findings.push(`${path} belongs to no layer of the report.`);
  return { found, findings };
}

const folderOf = (path: string): string => path.slice(0, path.lastIndexOf('/') + 1);

/** What a person sets: the stage up by zOffset, or the head up by it, which is the part down. */
const stageOffset = (layer: ReportLayer): number =>
  layer.zMoves === 'stage' ? layer.zOffset : -layer.zOffset;

/** The stage offset of a layer is its focus height turned round: s = −h (model.md §1). */
function checkOffset(project: Project, setup: ReportSetup, layer: ReportLayer): string[] {
  const out: string[] = [];
  const where = `Layer ${layer.index} of ${setup.name}`;
  if (Math.abs(stageOffset(layer) + layer.focusHeight) > Z_AGREES)
    out.push(
      `${where} is in focus at ${layer.focusHeight} mm, which zOffset ${layer.zOffset} mm (the ${layer.zMoves} moves) does not bring there.`,
    );
  if (layer.zMoves !== project.stage.zMoves)
    out.push(`${where} moves the ${layer.zMoves}, but the project moves the ${project.stage.zMoves}.`);
  return out;
}

/** The project's own pose where it gives one; a pose that was chosen or fitted stands only in the report. */
function poseOf(project: Project, setup: ReportSetup): Pose {
  const own = project.setups === 'auto' ? undefined : project.setups.find((s) => s.name === setup.name);
  return own && !own.measured ? own.pose : setup.pose;
}
