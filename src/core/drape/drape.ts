/** Circuit + part → copper on the surface. */
import { Fault, InputError, type InputProblem } from '../base/news.ts';
import { quiet, type RunContext } from '../base/run-context.ts';
import type { Vec2 } from '../base/vec.ts';
import type { Drawing, Hole } from '../drawing/drawing.ts';
import { WindowSolver } from '../geodesic/windows.ts';
import { restoreQueries, type SurfaceQueries, type SurfaceTree, serializeQueries } from '../mesh/queries.ts';
import type { SurfaceMesh } from '../mesh/surface-mesh.ts';
import type { Drape, Element, Project } from '../project/schema.ts';
import type { Copper } from './copper.ts';
import { type DrawingDraped, drapeDrawing } from './drape-drawing.ts';
import type { Draped, DrapeFinding } from './element.ts';
import { drapePad } from './pad.ts';
import { drapeRegion } from './region.ts';
import { type Place, pull } from './route.ts';
import { drapeTrace } from './trace.ts';

/** The part as draping needs it. */
export interface DrapePart {
  mesh: SurfaceMesh;
  queries: SurfaceQueries;
}

/** Prepared for one part: draping many elements shares its solvers. */
export interface Draper {
  part: DrapePart;
  solver: WindowSolver;
  /** A second one, for a field that is read while the first still holds another. */
  second: WindowSolver;
}

export const prepareDraper = (part: DrapePart): Draper => ({
  part,
  solver: new WindowSolver(part.mesh),
  second: new WindowSolver(part.mesh),
});

export interface CircuitDraped {
  copper: Copper;
  findings: DrapeFinding[];
}

/**
 * Lays every element of the circuit on the part, one after the other.
 * @throws InputError `far-from-surface` with every point that is
 */
export function drapeCircuit(
  project: Project,
  file: string,
  part: DrapePart,
  ctx: RunContext,
  drawings: ReadonlyMap<string, Drawing> = new Map(),
): CircuitDraped {
  const draper = prepareDraper(part);
  checkPlaces(project, file, part);
  const tasks = drapeTasks(project, file);
  const drawn = drawingTasks(project, drawings, file);
  const draped = tasks.map(({ element, path }, i) => {
    ctx.step('drape', i, tasks.length);
    return drapeElement(draper, element, path, file);
  });
  ctx.step('drape', tasks.length, tasks.length);
  return gatherCircuit(
    draped,
    drawn.map((task) => drapeDrawingOn(draper, task, ctx)),
  );
}

/** What the elements of a circuit share when they are laid on other threads: plain data. */
export interface DrapeShared {
  mesh: SurfaceMesh;
  tree: SurfaceTree;
}

export interface DrapeTask {
  element: Element;
  /** JSON path of the element, and the file it stands in. */
  path: string;
  file: string;
}

/** A drawing to be laid whole: its own task. */
export interface DrawingTask {
  drape: Drape;
  drawing: Drawing;
  /** Holes of other drawings that lie in the same place, in this one's axes: copper keeps out of them too. */
  holes?: readonly Hole[];
  /** JSON path of the drape, and the file it stands in. */
  path: string;
  file: string;
}

/** @param drawings  by the id of the drape that needs them */
export const drawingTasks = (
  project: Project,
  drawings: ReadonlyMap<string, Drawing>,
  file: string,
): DrawingTask[] =>
  project.circuit.drapes.map((drape, i) => {
    const drawing = drawings.get(drape.id);
    if (!drawing) throw new Fault(`the drawing of drape ${drape.id} was not read`);
    const others = project.circuit.drapes.map((d) => ({ drape: d, drawing: drawings.get(d.id) as Drawing }));
    return {
      drape,
      drawing,
      holes: holesBeside(drape, others),
      path: `$.circuit.drapes[${i}]`,
      file,
    };
  });

/** Holes of other drawings with the anchor, turn and mirror of this one: a drill file comes beside the copper that it goes through. */
export const holesBeside = (drape: Drape, others: readonly { drape: Drape; drawing: Drawing }[]): Hole[] =>
  others
    .filter(({ drape: d }) => d.id !== drape.id && placeOf(d) === placeOf(drape))
    .flatMap(({ drape: d, drawing }) => {
      const by = ([u, v]: Vec2): Vec2 => [
        u - d.origin[0] + drape.origin[0],
        v - d.origin[1] + drape.origin[1],
      ];
      return drawing.holes.map((h) => ({ ...h, at: by(h.at), to: by(h.to) }));
    });

const placeOf = ({ anchor, turn, mirror }: Drape): string => JSON.stringify([anchor, turn, mirror]);

/** A task on whatever thread it runs. @throws InputError `far-from-surface` */
export function layDrawing(shared: DrapeShared, task: DrawingTask): DrawingDraped {
  return drapeDrawingOn(draperOf(shared), task);
}

/** A drawing of more points is read and shown flat, but not laid: that would take many minutes. */
const MOST_LAID = 200_000;

/** @throws InputError `far-from-surface`, `too-large`, Cancelled */
export function drapeDrawingOn(
  draper: Draper,
  { drape, drawing, holes, path, file }: DrawingTask,
  ctx: RunContext = quiet,
): DrawingDraped {
  const { mesh, queries } = draper.part;
  const anchor = pull(queries, mesh, drape.anchor, { file, place: `${path}.anchor` });
  const points = drawing.shapes
    .filter((s) => drape.drawingLayers[s.layer] !== 'skip')
    .reduce(
      (n, { figure: f }) =>
        n + (f.kind === 'stroke' ? f.points.length : f.rings.reduce((m, r) => m + r.length, 0)) / 2,
      0,
    );
  if (points > MOST_LAID)
    throw new InputError({
      code: 'too-large',
      file,
      place: `${path}.drawing`,
      problem: `${drape.drawing} has ${points} points once its curves are flattened, more than the ${MOST_LAID} that are laid`,
      mend: 'leave out layers that are no copper, or draw with fewer points',
    });
  return drapeDrawing(draper.solver, drape, drawing, anchor, ctx, holes);
}

/** One independent task an element. */
export const drapeTasks = (project: Project, file: string): DrapeTask[] =>
  project.circuit.elements.map((element, i) => ({ element, path: `$.circuit.elements[${i}]`, file }));

export const drapeShared = (part: DrapePart): DrapeShared => ({
  mesh: part.mesh,
  tree: serializeQueries(part.queries),
});

const drapers = new WeakMap<DrapeShared, Draper>();

/** A task on whatever thread it runs; the draper is prepared once for the same shared data. */
export function layElement(shared: DrapeShared, task: DrapeTask): Draped {
  return drapeElement(draperOf(shared), task.element, task.path, task.file);
}

function draperOf(shared: DrapeShared): Draper {
  let draper = drapers.get(shared);
  if (!draper) {
    draper = prepareDraper({ mesh: shared.mesh, queries: restoreQueries(shared.mesh, shared.tree) });
    drapers.set(shared, draper);
  }
  return draper;
}

/** Results of the tasks, in their order, as one circuit. */
export function gatherCircuit(
  draped: readonly Draped[],
  drawn: readonly DrawingDraped[] = [],
): CircuitDraped {
  return {
    copper: {
      elements: [
        ...draped.flatMap((d) => (d.element ? [d.element] : [])),
        ...drawn.flatMap((d) => d.elements),
      ],
    },
    findings: [...draped, ...drawn].flatMap((d) => d.findings),
  };
}

/** One element. @throws InputError `far-from-surface` */
export function drapeElement(draper: Draper, element: Element, path: string, file: string): Draped {
  const { solver } = draper;
  const places = placesOf(draper.part, element, path, file);
  if (element.kind === 'trace') return drapeTrace(solver, element, places);
  if (element.kind === 'pad') return drapePad(solver, element, places[0]);
  return drapeRegion(solver, draper.second, element, places);
}

function placesOf(part: DrapePart, element: Element, path: string, file: string): Place[] {
  const { mesh, queries } = part;
  if (element.kind === 'pad') return [pull(queries, mesh, element.at, { file, place: `${path}.at` })];
  const [list, name] = element.kind === 'trace' ? [element.route, 'route'] : [element.outline, 'outline'];
  return list.map((p, i) => pull(queries, mesh, p.at, { file, place: `${path}.${name}[${i}].at` }));
}

/** Names every bad point of the file at once, before any work is done. */
export function checkPlaces(project: Project, file: string, part: DrapePart): void {
  const problems: InputProblem[] = [];
  const collect = (check: () => unknown): void => {
    try {
      check();
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      problems.push(...error.problems);
    }
  };
  project.circuit.drapes.forEach((drape, i) => {
    collect(() =>
      pull(part.queries, part.mesh, drape.anchor, { file, place: `$.circuit.drapes[${i}].anchor` }),
    );
  });
  project.circuit.elements.forEach((element, i) => {
    collect(() => placesOf(part, element, `$.circuit.elements[${i}]`, file));
  });
  if (problems.length > 0) throw new InputError(problems[0], ...problems.slice(1));
}
