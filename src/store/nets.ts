/** The nets of the circuit as the window lists them: what the copper says at once, and what has to be worked out. */
import type { CopperPicture, NetPicture } from '../worker/pictures.ts';
import type { State } from './state.ts';

export interface NetRow {
  name: string;
  /** Ids of its elements. */
  elements: string[];
  /** Centre lines of its traces, mm. */
  length: number;
  /** Null while it is worked out, or when that failed. */
  found: NetPicture | null;
}

/** @returns one a net, in the order of first appearance; elements without a net are left out */
export function netRows(copper: CopperPicture, found: readonly NetPicture[] | null): NetRow[] {
  const rows = new Map<string, NetRow>();
  for (const e of copper.elements) {
    if (e.net === '') continue;
    let row = rows.get(e.net);
    if (!row) {
      row = {
        name: e.net,
        elements: [],
        length: 0,
        found: found?.find((n) => n.name === e.net) ?? null,
      };
      rows.set(e.net, row);
    }
    row.elements.push(e.id);
    if (e.kind === 'trace') row.length += e.length;
  }
  return [...rows.values()];
}

/** What was worked out for the copper as it is: `working` while it is not there yet, null when it could not be had. */
export function netsNow(s: State): NetPicture[] | 'working' | null {
  if (!s.copper || s.copper.value.pending > 0 || s.nets?.revision !== s.copper.revision) return 'working';
  return s.nets.value;
}
