/**
 * What touches is one net: nets that lie in several pieces, nets that copper joins, and both against a netlist
 * (IPC-D-356A: the points that a board test would probe).
 */
import type { Vec3 } from '../base/vec.ts';
import type { CopperElement } from '../drape/copper.ts';
import type { RuleFinding } from '../project/report.ts';
import { contacts } from './contacts.ts';

/** Number of the connected piece of each element: all copper that touches, whatever its net. */
export function joinedPieces(elements: readonly CopperElement[]): Int32Array {
  const parent = Int32Array.from(elements, (_, i) => i);
  const find = (i: number): number => {
    while (parent[i] !== i) i = parent[i] = parent[parent[i]];
    return i;
  };
  for (const { a, b } of contacts(elements)) parent[find(Math.max(a, b))] = find(Math.min(a, b));
  return parent.map((_, i) => find(i));
}

/** Opens (a net in several pieces: a warning, it may be joined off the part) and shorts (an error). */
export function connectivityRule(elements: readonly CopperElement[], piece: Int32Array): RuleFinding[] {
  const findings: RuleFinding[] = [];
  const pieces = new Map<string, number[]>();
  const nets = new Map<number, string[]>();
  elements.forEach((e, i) => {
    if (e.net === '') return;
    const of = pieces.get(e.net) ?? [];
    if (!of.includes(piece[i])) of.push(piece[i]);
    pieces.set(e.net, of);
    const on = nets.get(piece[i]) ?? [];
    if (!on.includes(e.net)) on.push(e.net);
    nets.set(piece[i], on);
  });
  for (const [net, of] of pieces) {
    if (of.length < 2) continue;
    // The first element of each piece that carries the net.
    const firsts = of.map((p) => elements.findIndex((e, i) => piece[i] === p && e.net === net));
    findings.push({
      ...told('open', 'warning', firsts, elements),
      text: `net ${net} lies in ${of.length} pieces that do not touch: ${firsts.map((i) => elements[i].id).join(', ')}`,
    });
  }
  for (const [p, on] of nets) {
    if (on.length < 2) continue;
    const firsts = on.map((net) => elements.findIndex((e, i) => piece[i] === p && e.net === net));
    findings.push({
      ...told('short', 'error', firsts, elements),
      text: `nets ${on.join(' and ')} are joined by copper that touches; move it apart or give it one net`,
    });
  }
  return findings;
}

/** A point of a netlist (`drawing/netlist.ts`) with the element that lies there, -1 where none does. */
export interface ProbedPoint {
  kind: 'through' | 'surface' | 'tooling';
  net: string | null;
  part: string | null;
  pin: string | null;
  place: string;
  element: number;
}

/** The same against a netlist: points of one net must be joined, points of two must not. */
export function netlistRule(
  points: readonly ProbedPoint[],
  file: string,
  elements: readonly CopperElement[],
  piece: Int32Array,
): RuleFinding[] {
  const findings: RuleFinding[] = [];
  const named = points.filter((p) => p.net !== null && p.kind !== 'tooling');
  const name = (p: ProbedPoint): string =>
    p.part && p.pin ? `${p.part}-${p.pin}` : `the point of ${p.place}`;
  for (const p of named)
    if (p.element < 0)
      findings.push({
        ...told('open', 'error', [], elements),
        text: `${file}, ${p.place}: ${name(p)} of net ${p.net} lies on no copper`,
      });
  const on = named.filter((p) => p.element >= 0);
  for (const net of new Set(on.map((p) => p.net!))) {
    const own = on.filter((p) => p.net === net);
    const first = own[0];
    const apart = own.filter((p) => piece[p.element] !== piece[first.element]);
    if (apart.length > 0)
      findings.push({
        ...told('open', 'error', [first.element, apart[0].element], elements),
        text: `${file}: net ${net} is open: ${name(first)} and ${apart.map(name).join(', ')} are not joined`,
      });
  }
  const seen = new Map<number, ProbedPoint>();
  const said = new Set<string>();
  for (const p of on) {
    const other = seen.get(piece[p.element]);
    if (!other) seen.set(piece[p.element], p);
    else if (other.net !== p.net && !said.has(`${other.net} ${p.net}`)) {
      said.add(`${other.net} ${p.net}`);
      findings.push({
        ...told('short', 'error', [other.element, p.element], elements),
        text: `${file}: nets ${other.net} and ${p.net} are joined: ${name(other)} and ${name(p)} are on copper that touches`,
      });
    }
  }
  return findings;
}

function told(
  rule: string,
  level: RuleFinding['level'],
  of: readonly number[],
  elements: readonly CopperElement[],
): RuleFinding {
  const at: Vec3 = of.length > 0 ? elements[of[of.length - 1]].anchor : [0, 0, 0];
  return { rule, level, value: 0, limit: 0, elements: of.map((i) => elements[i].id), at };
}
