/** Functions of the core that may run on another thread, by name. Each is a plain function: (shared, argument) → result. */
import type { TaskTable } from './pool.ts';

export const tasks: TaskTable = {};
