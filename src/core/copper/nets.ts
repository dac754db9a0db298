/** Nets as they lie on the part: what touches, how much copper, and the resistance between its pads (model.md §8). */
import type { Copper, CopperElement } from '../drape/copper.ts';
import type { NetReport } from '../project/report.ts';
import type { Project } from '../project/schema.ts';
import { guideCurrent, stripResistance } from './conduct.ts';
import { type Contact, contacts } from './contacts.ts';
import { solveResistance } from './network.ts';
import { unionArea } from './union-area.ts';

/**
 * @returns one a net, in the order of first appearance; elements without a net are left out.
 * Resistances count traces along their centre lines between the places where other copper of the net meets them;
 * pads and regions count as one potential. The area is that of all copper of the net together, each place counted once.
 */
export function netReports(project: Project, copper: Copper): NetReport[] {
  const names = [...new Set(copper.elements.map((e) => e.net).filter((n) => n !== ''))];
  return names.map((name) => {
    const elements = copper.elements.filter((e) => e.net === name);
    const joined = contacts(elements);
    const widths = elements.filter((e) => e.kind === 'trace').map((e) => e.width);
    return {
      name,
      pieces: pieceCount(elements.length, joined),
      area: unionArea(elements.map((e) => e.copper)),
      resistance_mohm: padPairs(project, elements, joined),
      current_A: widths.length > 0 ? guideCurrent(Math.min(...widths), project.copper) : 0,
    };
  });
}

function pieceCount(n: number, joined: readonly Contact[]): number {
  const parent = Array.from({ length: n }, (_, i) => i);
  const find = (i: number): number => {
    while (parent[i] !== i) i = parent[i] = parent[parent[i]];
    return i;
  };
  for (const c of joined) parent[find(c.a)] = find(c.b);
  return new Set(parent.map((_, i) => find(i))).size;
}

/** Resistances between pads: every pad from the first one of its piece. */
function padPairs(
  project: Project,
  elements: readonly CopperElement[],
  joined: readonly Contact[],
): NetReport['resistance_mohm'] {
  // Nodes: one for each pad or region, and one for each place on a trace where something meets it.
  let nodes = 0;
  const body = elements.map((e) => (e.kind === 'trace' ? -1 : nodes++));
  const taps: { s: number; node: number }[][] = elements.map(() => []);
  const links: { a: number; b: number; ohm: number }[] = [];
  const nodeOn = (i: number, s: number): number => {
    if (body[i] >= 0) return body[i];
    const known = taps[i].find((t) => Math.abs(t.s - s) < 1e-6);
    if (known) return known.node;
    taps[i].push({ s, node: nodes });
    return nodes++;
  };
  const same: [number, number][] = joined.map((c) => [nodeOn(c.a, c.alongA), nodeOn(c.b, c.alongB)]);
  elements.forEach((e, i) => {
    if (e.kind !== 'trace') return;
    const sorted = [...taps[i]].sort((a, b) => a.s - b.s);
    for (let k = 0; k + 1 < sorted.length; k++)
      links.push({
        a: sorted[k].node,
        b: sorted[k + 1].node,
        ohm: stripResistance(sorted[k + 1].s - sorted[k].s, e.width, project.copper),
      });
  });
  const pads = elements.flatMap((e, i) => (e.kind === 'pad' ? [i] : []));
  const out: NetReport['resistance_mohm'] = [];
  for (const p of pads.slice(1)) {
    const value = solveResistance(nodes, links, same, body[pads[0]], body[p]);
    if (value !== null) out.push({ from: elements[pads[0]].id, to: elements[p].id, value });
  }
  return out;
}
