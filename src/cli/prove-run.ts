/** The read-back proof on the files of an earlier run: its own part and its own drawing, laid anew. */
import type { RunContext } from '../core/base/run-context.ts';
import type { OutputFile } from '../core/files/output.ts';
import { layCircuit, loadPart, proveFiles, readDrawings, type Workers } from '../core/pipeline.ts';
import type { Project } from '../core/project/schema.ts';
import type { Proof, ProofFormat } from '../core/proof/prove.ts';
import type { NamedFile } from '../worker/stand-alone.ts';
import { flatForNode } from './flat.ts';

export async function proveRun(
  run: {
    projectFile: string;
    part: NamedFile;
    others: readonly NamedFile[];
    runFiles: readonly OutputFile[];
    formats: readonly ProofFormat[];
  },
  project: Project,
  ctx: RunContext,
  workers: Workers,
): Promise<Proof> {
  const part = loadPart(run.part.bytes, run.part.file, project.part.units, ctx);
  const drawings = await readDrawings(project, run.others, flatForNode, ctx);
  const { copper } = await layCircuit(project, run.projectFile, part, drawings, ctx, workers);
  const { mesh, normals } = part;
  return proveFiles(
    { project, mesh, normals, copper, files: run.runFiles, formats: run.formats },
    ctx,
    workers,
  );
}
