/** Reads from disk what a job needs: the project, its part, its drawings. */
import { createHash } from 'node:crypto';
import { readdir, readFile } from 'node:fs/promises';
import { dirname, isAbsolute, join } from 'node:path';
import { InputError } from '../core/base/news.ts';
import type { OutputFile } from '../core/files/output.ts';
import { type ReadProject, readProject } from '../core/project/read.ts';
import { type NamedFile, PROJECT_COPY } from '../worker/stand-alone.ts';

export interface ProjectFiles extends ReadProject {
  projectFile: string;
  projectText: string;
  part: NamedFile;
  /** Drawings and netlist. */
  others: NamedFile[];
  /** What the person should know though the job goes on. */
  notices: string[];
}

/** @throws InputError `cannot-read`, and what `readProject` throws */
export async function readProjectFiles(projectFile: string): Promise<ProjectFiles> {
  const projectText = new TextDecoder().decode(await readInput(projectFile, '', projectFile));
  const { project, unknown } = readProject(projectText, projectFile);
  const beside = (file: string): string => (isAbsolute(file) ? file : join(dirname(projectFile), file));
  const get = async (file: string, place: string): Promise<NamedFile> => ({
    file,
    bytes: await readInput(beside(file), place, projectFile),
  });
  const part = await get(project.part.file, '$.part.file');
  const others = new Map<string, NamedFile>();
  for (const [i, drape] of project.circuit.drapes.entries())
    others.set(drape.drawing, await get(drape.drawing, `$.circuit.drapes[${i}].drawing`));
  if (project.netlist !== undefined) others.set(project.netlist, await get(project.netlist, '$.netlist'));
  const notices: string[] = [];
  const { sha256 } = project.part;
  if (sha256 !== undefined && sha256.toLowerCase() !== createHash('sha256').update(part.bytes).digest('hex'))
    notices.push(
      `${project.part.file} is not the file that the project was saved with ($.part.sha256 differs).`,
    );
  return { project, unknown, projectFile, projectText, part, others: [...others.values()], notices };
}

/**
 * Everything in the folder of an earlier run.
 * @returns paths below the folder, with `/` between names, in order of name
 * @throws InputError `not-a-run`, `cannot-read`
 */
export async function readRunFolder(dir: string): Promise<OutputFile[]> {
  const notARun = (problem: string): InputError =>
    new InputError({
      code: 'not-a-run',
      file: dir,
      place: '',
      problem,
      mend: 'give the folder that "run --out" wrote',
    });
  const paths: string[] = [];
  const walk = async (below: string): Promise<void> => {
    for (const e of await readdir(join(dir, below), { withFileTypes: true }))
      if (e.isDirectory()) await walk(`${below}${e.name}/`);
      else if (e.isFile()) paths.push(below + e.name);
  };
  try {
    await walk('');
  } catch (error) {
    if ((error as { code?: string }).code === 'ENOENT') throw notARun('there is no such folder');
    if ((error as { code?: string }).code === 'ENOTDIR') throw notARun('this is a file, not a folder');
    throw error;
  }
  for (const needed of ['report.json', PROJECT_COPY])
    if (!paths.includes(needed)) throw notARun(`it holds no ${needed}`);
  const files: OutputFile[] = [];
  for (const path of paths.sort()) files.push({ path, bytes: await readInput(join(dir, path), '', '') });
  return files;
}

/** @param place  where `namedBy` names the file; empty when the person named it */
export async function readInput(path: string, place: string, namedBy: string): Promise<Uint8Array> {
  try {
    const bytes = await readFile(path);
    // A copy of its own: a small file otherwise shares a buffer with others and cannot be handed to a thread.
    return Uint8Array.from(bytes);
  } catch (error) {
    const code = (error as { code?: string }).code;
    const why =
      code === 'ENOENT' || code === 'ENOTDIR'
        ? 'there is no such file'
        : code === 'EISDIR'
          ? 'this is a folder, not a file'
          : code === 'EACCES' || code === 'EPERM'
            ? 'reading it is not allowed'
            : `it cannot be read (${(error as Error).message})`;
    if (place === '')
      throw new InputError({
        code: 'cannot-read',
        file: path,
        place: '',
        problem: why,
        mend: 'check the name',
      });
    throw new InputError({
      code: 'cannot-read',
      file: namedBy,
      place,
      problem: `${path}: ${why}`,
      mend: 'give the path relative to the project file',
    });
  }
}
