/** The window's whole state: the document, what was derived from it, and what the person is doing. */

import type { Vec3 } from '../core/base/vec.ts';
import type { Report, RuleFinding } from '../core/project/report.ts';
import type { PadShape, Project } from '../core/project/schema.ts';
import type {
  ConnectionsPicture,
  CopperPicture,
  NetPicture,
  PartPicture,
  PlanPicture,
  Probe,
  ReachPicture,
} from '../worker/pictures.ts';
import { type History, noHistory } from './history.ts';
import type { Show } from './looks.ts';

/** The six steps of the job. */
export const STEPS = ['part', 'circuit', 'head', 'reach', 'heights', 'files'] as const;
export type StepName = (typeof STEPS)[number];

/** Where the document comes from. */
export interface Origin {
  ref: string | null;
  /** File name, or a name to offer. */
  name: string;
  /** The text as it was read or saved last: what an unchanged project exports. */
  text: string | null;
  /** The project as it was then; compared by identity, so that undo can reach the saved state. */
  saved: Project | null;
  partRef: string | null;
  partBytes: Uint8Array | null;
}

/** A drawing under the name that the project gives it. */
export interface HeldDrawing {
  ref: string | null;
  bytes: Uint8Array;
}

/** Something derived from revision `revision` of the document. */
export interface Derived<T> {
  revision: number;
  value: T;
}

export type Tool =
  | { kind: 'look' }
  | {
      kind: 'trace';
      /** Places clicked so far, part frame. */
      route: Vec3[];
      /** Way over the surface between each two of them. */
      runs: Float32Array[];
      /** From the last place to the pointer. */
      live: { to: Vec3; points: Float32Array | null; length: number; sure: boolean } | null;
    }
  | { kind: 'pad' };

/** What the next trace or pad will be. */
export interface Pen {
  width: number;
  net: string;
  shape: PadShape;
}

export interface Notice {
  id: number;
  level: 'problem' | 'fault' | 'done';
  text: string;
  mend: string;
}

export interface Busy {
  what: string;
  /** 0 … 1, or null when nobody knows. */
  share: number | null;
  since: number;
}

export interface Exported {
  revision: number;
  report: Report;
  folder: string;
  files: number;
}

export interface State {
  project: Project | null;
  /** Grows with every change of the document. */
  revision: number;
  origin: Origin;
  history: History;
  /** By name. One that no drape uses any more is kept: undo may bring the drape back. */
  drawings: Readonly<Record<string, HeldDrawing>>;
  part: PartPicture | null;
  copper: Derived<CopperPicture> | null;
  reach: Derived<ReachPicture[]> | null;
  plan: Derived<PlanPicture[]> | null;
  /** Shop rules that the copper breaks. */
  rules: Derived<RuleFinding[]> | null;
  connections: Derived<ConnectionsPicture> | null;
  /** Null inside: it could not be worked out. */
  nets: Derived<NetPicture[] | null> | null;
  exported: Exported | null;
  busy: Busy | null;
  notices: readonly Notice[];
  step: StepName;
  setup: number;
  /** Stage offset now, mm, up positive. */
  offset: number;
  show: Show;
  /** Copper of drawings is coloured by its stretch instead. */
  stretchShown: boolean;
  /** The flat drawing stands beside the part. */
  flatShown: boolean;
  /** Layer shown alone, counting from 0. */
  isolated: number | null;
  selection: readonly string[];
  tool: Tool;
  pen: Pen;
  /** Ways over the surface to a point being dragged; the copper follows when it is let go. */
  preview: readonly Float32Array[];
  hover: { probe: Probe; element: number; triangle: number } | null;
  /** Element under the pointer in a panel. */
  pointed: string | null;
}

export const firstState: State = {
  project: null,
  revision: 0,
  origin: { ref: null, name: '', text: null, saved: null, partRef: null, partBytes: null },
  history: noHistory,
  drawings: {},
  part: null,
  copper: null,
  reach: null,
  plan: null,
  rules: null,
  connections: null,
  nets: null,
  exported: null,
  busy: null,
  notices: [],
  step: 'part',
  setup: 0,
  offset: 0,
  show: 'layers',
  stretchShown: false,
  flatShown: false,
  isolated: null,
  selection: [],
  tool: { kind: 'look' },
  pen: { width: 0.6, net: '', shape: { circle: 1.6 } },
  preview: [],
  hover: null,
  pointed: null,
};

export const hasCircuit = ({ circuit }: Project): boolean =>
  circuit.elements.length > 0 || circuit.drapes.length > 0;

export const isUnsaved = (s: State): boolean => s.project !== null && s.project !== s.origin.saved;

/** Reach and plan that belong to the copper now shown; late ones count as none. */
export function current(s: State): {
  copper: CopperPicture | null;
  reach: ReachPicture | null;
  plan: PlanPicture | null;
  /** None while they are not known. */
  rules: readonly RuleFinding[];
} {
  const copper = s.copper?.value ?? null;
  const fits = <T>(d: Derived<T[]> | null): T | null =>
    d && s.copper && d.revision === s.copper.revision ? (d.value[s.setup] ?? null) : null;
  const rules = s.rules && s.copper?.revision === s.rules.revision ? s.rules.value : [];
  return { copper, reach: fits(s.reach), plan: fits(s.plan), rules };
}
