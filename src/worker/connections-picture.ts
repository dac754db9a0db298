/** Opens and shorts for the window: what the command line reports, with a netlist that cannot be used told beside it. */
import { InputError, type InputProblem } from '../core/base/news.ts';
import type { RunContext } from '../core/base/run-context.ts';
import type { Copper } from '../core/drape/copper.ts';
import type { Drawing } from '../core/drawing/drawing.ts';
import { connections } from '../core/pipeline.ts';
import type { Project } from '../core/project/schema.ts';
import type { HeldDrawings } from './held-drawings.ts';
import type { ConnectionsPicture } from './pictures.ts';

export function connectionsPicture(
  project: Project,
  copper: Copper,
  drawings: HeldDrawings,
  ctx: RunContext,
): ConnectionsPicture {
  const { netlist, ...bare } = project;
  const problems: InputProblem[] = [];
  const unless = <T>(f: () => T): T | null => {
    try {
      return f();
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      problems.push(...error.problems);
      return null;
    }
  };
  if (netlist !== undefined) {
    const read = new Map<string, Drawing>();
    for (const [i, d] of project.circuit.drapes.entries()) {
      const place = `$.circuit.drapes[${i}]`;
      const drawing = unless(() => drawings.read(d, project.name, place, ctx).drawing);
      if (drawing) read.set(d.id, drawing);
    }
    // What is wrong with a drawing is told where it is laid.
    problems.length = 0;
    const drapes = project.circuit.drapes.filter((d) => read.has(d.id));
    const own = { ...project, circuit: { ...project.circuit, drapes } };
    const rules = unless(() => connections(own, copper, read, drawings.of(own, project.name), ctx));
    if (rules) return { rules, problems };
  }
  return { rules: connections(bare as Project, copper, new Map(), [], ctx), problems };
}
