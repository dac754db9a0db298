/** The read-back proof on the files of an earlier run: its own part and its own drawing, laid anew. */
import type { RunContext } from '../core/base/run-context.ts';
import { drapeCircuit } from '../core/drape/drape.ts';
import type { OutputFile } from '../core/files/output.ts';
import { loadPart, proveFiles, type Workers } from '../core/pipeline.ts';
import type { Project } from '../core/project/schema.ts';
import type { Proof, ProofFormat } from '../core/proof/prove.ts';
import type { NamedFile } from '../worker/stand-alone.ts';

export function proveRun(
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
  const { mesh, queries, normals } = loadPart(run.part.bytes, run.part.file, project.part.units, ctx);
  const { copper } = drapeCircuit(project, run.projectFile, { mesh, queries }, ctx);
  return proveFiles(
    { project, mesh, normals, copper, files: run.runFiles, formats: run.formats },
    ctx,
    workers,
  );
}
