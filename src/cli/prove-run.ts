/** The read-back proof on the files of an earlier run, one file a task. */
import type { RunContext } from '../core/base/run-context.ts';
import { drapeCircuit } from '../core/drape/drape.ts';
import type { OutputFile } from '../core/files/output.ts';
import { loadPart } from '../core/part/part.ts';
import type { Project } from '../core/project/schema.ts';
import { type LayerPulses, type Proof, type ProofFormat, planProof, verdict } from '../core/proof/prove.ts';
import type { Workers } from '../worker/pool.ts';
import type { TraceOwn } from '../worker/tasks.ts';
import type { NamedFile } from './inputs.ts';

export async function proveRun(
  run: {
    projectFile: string;
    part: NamedFile;
    runFiles: readonly OutputFile[];
    formats: readonly ProofFormat[];
  },
  project: Project,
  ctx: RunContext,
  workers: Workers,
): Promise<Proof> {
  const part = loadPart(run.part.bytes, run.part.file, project.part.units, ctx);
  const { copper } = drapeCircuit(project, run.projectFile, part, ctx);
  const { mesh, normals } = part;
  const input = { project, mesh, normals, copper, files: run.runFiles, formats: run.formats };
  const plans = planProof(input);
  const shared = { head: project.head, mesh, normals };
  const own = plans.flatMap((p) =>
    p.tasks.map(({ head: _, mesh: __, normals: ___, ...rest }): TraceOwn => rest),
  );
  ctx.step('proof', 0, own.length + 1);
  const traced = await workers.map<TraceOwn, LayerPulses>('trace pulses', shared, own);
  ctx.step('proof', own.length, own.length + 1);
  let first = 0;
  const byPlan = plans.map((p) => traced.slice(first, (first += p.tasks.length)));
  return verdict(input, plans, byPlan, ctx);
}
