/** The drawings of the document as the host handed them over, each read once for each way that a drape wants it read. */
import { Fault, InputError } from '../core/base/news.ts';
import type { RunContext } from '../core/base/run-context.ts';
import type { Vec2 } from '../core/base/vec.ts';
import { DEFAULTS, type Drawing } from '../core/drawing/drawing.ts';
import type { Flat } from '../core/drawing/flat.ts';
import { readDrawing } from '../core/drawing/read-drawing.ts';
import { MM_PER_UNIT } from '../core/mesh/build.ts';
import type { Drape, Project } from '../core/project/schema.ts';
import type { NamedFile } from './stand-alone.ts';

export type LoadFlat = () => Promise<Flat>;

/** How a drape wants its drawing read. */
export type Reading = Pick<Drape, 'drawing' | 'units' | 'lineWidth'>;

/** Bytes of one file, told apart from other bytes under the same name. */
interface Held extends NamedFile {
  key: string;
  read: Map<string, Drawing | InputError>;
}

export class HeldDrawings {
  private files = new Map<string, Held>();
  private flat: Flat | null = null;
  private count = 0;
  private readonly load: LoadFlat;

  constructor(load: LoadFlat) {
    this.load = load;
  }

  /** Takes the place of what was held before; files whose bytes did not change stay read. */
  async hold(files: readonly NamedFile[]): Promise<void> {
    if (files.length > 0) this.flat ??= await this.load();
    this.files = new Map(
      files.map((f): [string, Held] => {
        const before = this.files.get(f.file);
        return [
          f.file,
          before && sameBytes(before.bytes, f.bytes)
            ? before
            : { ...f, key: `${f.file} ${++this.count}`, read: new Map() },
        ];
      }),
    );
  }

  /**
   * @param place  JSON path of the drape, in `project`
   * @returns `key` differs where bytes or reading differ
   * @throws InputError `no-drawing`, and what the reader throws
   */
  read(how: Reading, project: string, place: string, ctx: RunContext): { key: string; drawing: Drawing } {
    const held = this.files.get(how.drawing);
    if (!held) throw missing(how.drawing, project, place);
    const way = JSON.stringify([how.units, how.lineWidth]);
    let drawing = held.read.get(way);
    if (!drawing) {
      if (!this.flat) throw new Fault('a drawing is held without plane booleans');
      const options = {
        ...DEFAULTS,
        unit: how.units ? MM_PER_UNIT[how.units] : null,
        ...(how.lineWidth ? { lineWidth: how.lineWidth } : {}),
      };
      try {
        drawing = readDrawing(held.bytes, held.file, options, this.flat, ctx);
      } catch (error) {
        if (!(error instanceof InputError)) throw error;
        drawing = error;
      }
      held.read.set(way, drawing);
    }
    if (drawing instanceof InputError) throw drawing;
    return { key: `${held.key} ${way}`, drawing };
  }

  /**
   * Files of a project, each once, in the order of its drapes, then its netlist: as the command line reads them.
   * @throws InputError `no-drawing` with every one that is not there
   */
  of(project: Project, file: string): NamedFile[] {
    const { drapes } = project.circuit;
    const lost = drapes.flatMap((d, i) =>
      this.files.has(d.drawing) ? [] : missing(d.drawing, file, `$.circuit.drapes[${i}]`).problems,
    );
    const { netlist } = project;
    if (netlist !== undefined && !this.files.has(netlist))
      lost.push(...missing(netlist, file, '$.netlist', '').problems);
    if (lost.length > 0) throw new InputError(lost[0], ...lost.slice(1));
    const names = [...drapes.map((d) => d.drawing), ...(netlist === undefined ? [] : [netlist])];
    return [...new Set(names)].map((name) => {
      const { file: own, bytes } = this.files.get(name) as Held;
      return { file: own, bytes };
    });
  }
}

/** Box of all that a drawing holds, lines with their width, mm: lower left and upper right; null where it is empty. */
export function boxOf({ shapes, holes }: Drawing): [Vec2, Vec2] | null {
  const [lo, hi] = [
    [Infinity, Infinity],
    [-Infinity, -Infinity],
  ];
  const take = (points: ArrayLike<number>, by: number): void => {
    for (let i = 0; i < points.length; i++) {
      lo[i % 2] = Math.min(lo[i % 2], points[i] - by);
      hi[i % 2] = Math.max(hi[i % 2], points[i] + by);
    }
  };
  for (const { figure } of shapes)
    if (figure.kind === 'stroke') take(figure.points, figure.width / 2);
    else for (const ring of figure.rings) take(ring, 0);
  for (const h of holes) take([...h.at, ...h.to], h.diameter / 2);
  return lo[0] > hi[0]
    ? null
    : [
        [lo[0], lo[1]],
        [hi[0], hi[1]],
      ];
}

const missing = (drawing: string, file: string, place: string, field = '.drawing'): InputError =>
  new InputError({
    code: 'no-drawing',
    file,
    place: `${place}${field}`,
    problem: `${drawing} is not there`,
    mend: 'put the file back and open the project again',
  });

function sameBytes(a: Uint8Array, b: Uint8Array): boolean {
  if (a.length !== b.length) return false;
  for (let i = 0; i < a.length; i++) if (a[i] !== b[i]) return false;
  return true;
}
