/** Functions of the core that may run on another thread, by name. Each is a plain function: (shared, argument) → result. */

import {
  type DrapeShared,
  type DrapeTask,
  type DrawingTask,
  layDrawing,
  layElement,
} from '../core/drape/drape.ts';
import type { DrawingDraped } from '../core/drape/drape-drawing.ts';
import type { Draped } from '../core/drape/element.ts';
import { type LayerPulses, type TraceTask, tracePulses } from '../core/proof/prove.ts';
import type { TaskTable } from './pool.ts';

/** What all files of a proof have in common, and what one of them has of its own. */
export type TraceShared = Pick<TraceTask, 'head' | 'mesh' | 'normals'>;
export type TraceOwn = Omit<TraceTask, keyof TraceShared>;

export const tasks = {
  'lay element': (shared: DrapeShared, own: DrapeTask): Draped => layElement(shared, own),
  'lay drawing': (shared: DrapeShared, own: DrawingTask): DrawingDraped => layDrawing(shared, own),
  'trace pulses': (shared: TraceShared, own: TraceOwn): LayerPulses => tracePulses({ ...shared, ...own }),
} satisfies TaskTable;
