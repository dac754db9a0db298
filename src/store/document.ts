/** Acts on the project: plain data, each with a name for the Edit menu, applied by one pure function. */
import type { Vec3 } from '../core/base/vec.ts';
import type { Drape, Element, Project } from '../core/project/schema.ts';

export type DrapeChange = { readonly [K in keyof Drape]?: Drape[K] | undefined };

export type Act =
  | { kind: 'add-element'; element: Element }
  | { kind: 'add-drape'; drape: Drape }
  | { kind: 'move-drape'; id: string; at: Vec3 }
  /** What is undefined in the change is taken out of the drape. */
  | { kind: 'edit-drape'; id: string; what: string; change: DrapeChange }
  | { kind: 'delete'; ids: readonly string[] }
  | { kind: 'move-point'; id: string; index: number; at: Vec3 }
  | { kind: 'add-point'; id: string; index: number; at: Vec3 }
  | { kind: 'remove-point'; id: string; index: number }
  | { kind: 'move-pad'; id: string; at: Vec3 }
  | { kind: 'edit-element'; id: string; what: string; change: Readonly<Record<string, unknown>> }
  | { kind: 'set'; path: readonly (string | number)[]; what: string; value: unknown };

/** Name of an act, as it follows "Undo" in a menu. */
export function nameOf(act: Act): string {
  switch (act.kind) {
    case 'add-element':
      return `${act.element.kind === 'trace' ? 'draw trace' : act.element.kind === 'pad' ? 'place pad' : 'draw region'} ${act.element.id}`;
    case 'add-drape':
      return `lay drawing ${lastName(act.drape.drawing)}`;
    case 'move-drape':
      return `move drawing ${act.id}`;
    case 'edit-drape':
      return `change ${act.what} of ${act.id}`;
    case 'delete':
      return act.ids.length === 1 ? `delete ${act.ids[0]}` : `delete ${act.ids.length} elements`;
    case 'move-point':
      return `move point ${act.index + 1} of ${act.id}`;
    case 'add-point':
      return `add point to ${act.id}`;
    case 'remove-point':
      return `remove point ${act.index + 1} of ${act.id}`;
    case 'move-pad':
      return `move pad ${act.id}`;
    case 'edit-element':
      return `change ${act.what} of ${act.id}`;
    case 'set':
      return `change ${act.what}`;
  }
}

/** Name of a file without its folders. */
export const lastName = (file: string): string => file.split(/[\\/]/).pop() ?? file;

/**
 * The project after the act; the same object when nothing changed. Never writes into its argument.
 * An act that does not fit (no such element, a route that would be too short) changes nothing.
 */
export function apply(project: Project, act: Act): Project {
  switch (act.kind) {
    case 'add-element':
      return withElements(project, (list) => [...list, act.element]);
    case 'delete': {
      const gone = new Set(act.ids);
      return withDrapes(
        withElements(project, (list) => list.filter((e) => !gone.has(e.id))),
        (list) => list.filter((d) => !gone.has(d.id)),
      );
    }
    case 'add-drape':
      return withDrapes(project, (list) => [...list, act.drape]);
    case 'move-drape':
      return editDrape(project, act.id, (d) => ({ ...d, anchor: [...act.at] }));
    case 'edit-drape':
      return editDrape(project, act.id, (d) => changed(d, act.change));
    case 'move-point':
      return edit(project, act.id, (e) =>
        withPoints(e, (p) => p.map((q, i) => (i === act.index ? { ...q, at: [...act.at] } : q))),
      );
    case 'add-point':
      return edit(project, act.id, (e) =>
        withPoints(e, (p) => [...p.slice(0, act.index), { at: [...act.at] }, ...p.slice(act.index)]),
      );
    case 'remove-point':
      return edit(project, act.id, (e) =>
        withPoints(e, (p) => (p.length > leastPoints(e) ? p.filter((_, i) => i !== act.index) : p)),
      );
    case 'move-pad':
      return edit(project, act.id, (e) => (e.kind === 'pad' ? { ...e, at: [...act.at] } : e));
    case 'edit-element':
      return edit(project, act.id, (e) => ({ ...e, ...act.change }) as Element);
    case 'set':
      return setAt(project, act.path, act.value) as Project;
  }
}

const leastPoints = (e: Element): number => (e.kind === 'region' ? 3 : 2);

function withElements(project: Project, f: (list: Element[]) => Element[]): Project {
  const elements = f(project.circuit.elements);
  if (
    elements.length === project.circuit.elements.length &&
    elements.every((e, i) => e === project.circuit.elements[i])
  )
    return project;
  return { ...project, circuit: { ...project.circuit, elements } };
}

function withDrapes(project: Project, f: (list: Drape[]) => Drape[]): Project {
  const before = project.circuit.drapes;
  const drapes = f(before);
  if (drapes.length === before.length && drapes.every((d, i) => d === before[i])) return project;
  return { ...project, circuit: { ...project.circuit, drapes } };
}

const editDrape = (project: Project, id: string, f: (d: Drape) => Drape): Project =>
  withDrapes(project, (list) => list.map((d) => (d.id === id ? f(d) : d)));

function changed(drape: Drape, change: DrapeChange): Drape {
  const after: Record<string, unknown> = { ...drape, ...change };
  for (const [key, value] of Object.entries(change)) if (value === undefined) delete after[key];
  return after as Drape;
}

const edit = (project: Project, id: string, f: (e: Element) => Element): Project =>
  withElements(project, (list) => list.map((e) => (e.id === id ? f(e) : e)));

type Place = { at: [number, number, number] };

function withPoints(e: Element, f: (points: Place[]) => Place[]): Element {
  if (e.kind === 'pad') return e;
  const points = e.kind === 'trace' ? e.route : e.outline;
  const after = f(points as Place[]);
  if (after === points) return e;
  return e.kind === 'trace'
    ? { ...e, route: after as typeof e.route }
    : { ...e, outline: after as typeof e.outline };
}

function setAt(node: unknown, path: readonly (string | number)[], value: unknown): unknown {
  const [key, ...rest] = path;
  if (key === undefined) return value;
  const old = (node as Record<string | number, unknown> | undefined)?.[key];
  const fresh = setAt(old, rest, value);
  if (Object.is(old, fresh)) return node;
  if (Array.isArray(node)) return node.map((v, i) => (i === key ? fresh : v));
  const copy = { ...(node as object) } as Record<string | number, unknown>;
  if (fresh === undefined) delete copy[key];
  else copy[key] = fresh;
  return copy;
}

/** The first free id with this letter: t1, t2 … */
export function freeId(project: Project, letter: string): string {
  const taken = new Set([...project.circuit.elements, ...project.circuit.drapes].map((e) => e.id));
  for (let n = 1; ; n++) if (!taken.has(`${letter}${n}`)) return `${letter}${n}`;
}
