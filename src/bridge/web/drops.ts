/** Dropped files of which only the bytes are known: what a browser gives, or a drag out of another program. */
import {
  beginsLikeDrawing,
  type DrawingFile,
  HostError,
  isDrawingName,
  isRead,
  type Opened,
} from '../host.ts';
import { drawingFilesIn } from '../project-files.ts';

/** A project dropped like this brings its part and its drawings along, or finds none. */
export async function openDropped(files: readonly File[]): Promise<Opened | null> {
  const bytesOf = async (f: File) => new Uint8Array(await f.arrayBuffer());
  const project = files.find((f) => /\.json$/i.test(f.name));
  const part = files.find((f) => /\.stl$/i.test(f.name));
  if (project) {
    const text = await project.text();
    return {
      kind: 'project',
      ref: null,
      name: project.name,
      text,
      part: part ? { file: part.name, ref: null, bytes: await bytesOf(part) } : null,
      ...(part ? {} : { partProblem: 'drop the project together with its part' }),
      drawings: await Promise.all(
        drawingFilesIn(text).map(async (file): Promise<DrawingFile> => {
          const last = file.split(/[\\/]/).pop();
          const found = files.find((f) => f.name === last);
          const missing = (problem: string) => ({ file, ref: null, bytes: null, problem });
          if (!found) return missing('it was not dropped together with the project');
          const bytes = await bytesOf(found);
          return isRead(found.name, bytes)
            ? { file, ref: null, bytes }
            : missing('it is neither a drawing nor a netlist');
        }),
      ),
    };
  }
  if (part)
    return {
      kind: 'part',
      name: part.name,
      part: { file: part.name, ref: null, bytes: await bytesOf(part) },
    };
  const drawings = await Promise.all(
    files.map(async (f) => ({ file: f.name, ref: null, bytes: await bytesOf(f) })),
  );
  const other = drawings.find((d) => !isDrawingName(d.file) && !beginsLikeDrawing(d.bytes));
  if (other)
    throw new HostError({
      problem: `${other.file} is neither a part nor a project nor a drawing`,
      mend: 'drop an .stl, a .drape.json, or an SVG, DXF, Gerber or drill file',
    });
  return files.length === 0 ? null : { kind: 'drawings', drawings };
}
