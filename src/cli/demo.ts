/** The demonstration project, carried inside the program. */
import dial from '../../assets/demo/dial.stl?inline';
import electrodes from '../../assets/demo/electrodes.svg?raw';
import tail from '../../assets/demo/tail.gbr?raw';
import text from '../../assets/demo/touch-dial.drape.json?raw';
import { Fault } from '../core/base/news.ts';
import { readProject } from '../core/project/read.ts';
import type { NamedFile } from '../worker/stand-alone.ts';
import type { ProjectFiles } from './inputs.ts';

export function demonstration(): ProjectFiles {
  const projectFile = 'touch-dial.drape.json';
  const { project, unknown } = readProject(text, projectFile);
  if (project.part.file !== 'dial.stl') throw new Fault(`the demonstration asks for ${project.part.file}`);
  const bytes = Uint8Array.from(Buffer.from(dial.slice(dial.indexOf(',') + 1), 'base64'));
  return {
    project,
    unknown,
    projectFile,
    projectText: text,
    part: { file: 'dial.stl', bytes },
    others: [named('electrodes.svg', electrodes), named('tail.gbr', tail)],
    notices: [],
  };
}

const named = (file: string, text: string): NamedFile => ({ file, bytes: new TextEncoder().encode(text) });
