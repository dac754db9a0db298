/** Makes an output folder stand alone: beside the files of the run, the project, the part and the drawings as they were. */
import { type OutputFile, textFile } from '../core/files/output.ts';
import type { Report } from '../core/project/report.ts';

/** A file that the project names, under the name that the project gives it. */
export interface NamedFile {
  file: string;
  bytes: Uint8Array;
}

/** Name of the project's copy in the folder. */
export const PROJECT_COPY = 'project.drape.json';
/** Folder of the part and the drawings, so that no name of theirs meets one of the run's. */
const SOURCES = 'source';

/** @param files  of the run; `report.json` among them is written again from `report` */
export function standAlone(
  files: readonly OutputFile[],
  report: Report,
  input: { projectText: string; part: NamedFile; others: readonly NamedFile[] },
): OutputFile[] {
  const taken = new Set<string>();
  const names = new Map([input.part, ...input.others].map((f) => [f.file, copyName(f.file, taken)]));
  const copies = [input.part, ...input.others].map((f) => ({
    path: names.get(f.file) as string,
    bytes: f.bytes,
  }));
  return [
    ...files.filter((f) => f.path !== 'report.json'),
    textFile('report.json', `${JSON.stringify(report, null, 2)}\n`),
    textFile(PROJECT_COPY, projectCopy(input.projectText, names)),
    ...copies,
  ];
}

/** The project's own text as JSON, with the names of its files changed and nothing else. */
function projectCopy(text: string, names: ReadonlyMap<string, string>): string {
  const data = JSON.parse(text.charCodeAt(0) === 0xfeff ? text.slice(1) : text) as {
    part: { file: string };
    circuit?: { drapes?: { drawing: string }[] };
    netlist?: string;
  };
  data.part.file = names.get(data.part.file) ?? data.part.file;
  for (const d of data.circuit?.drapes ?? []) d.drawing = names.get(d.drawing) ?? d.drawing;
  if (data.netlist !== undefined) data.netlist = names.get(data.netlist) ?? data.netlist;
  return `${JSON.stringify(data, null, 2)}\n`;
}

/** Last part of the name, with nothing in it that a file system minds; numbered where two would be the same. */
function copyName(file: string, taken: Set<string>): string {
  const last = file.split(/[\\/]/).pop() ?? '';
  const safe = last.replace(/[^\p{L}\p{N}._ -]/gu, '_').replace(/^[. ]+|[. ]+$/g, '_') || 'file';
  const dot = safe.lastIndexOf('.');
  let name = safe;
  for (let n = 2; taken.has(name.toLowerCase()); n++)
    name = dot > 0 ? `${safe.slice(0, dot)}-${n}${safe.slice(dot)}` : `${safe}-${n}`;
  taken.add(name.toLowerCase());
  return `${SOURCES}/${name}`;
}
