import { describe, expect, it } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import { quiet } from '../../../src/core/base/run-context.ts';
import {
  connectivityRule,
  joinedPieces,
  netlistRule,
  type ProbedPoint,
} from '../../../src/core/copper/connectivity.ts';
import { contacts } from '../../../src/core/copper/contacts.ts';
import { drapeCircuit } from '../../../src/core/drape/drape.ts';
import type { Project } from '../../../src/core/project/schema.ts';
import { partFrom, plate } from '../helpers/surfaces.ts';
import { netOf, rect, region } from './patches.ts';

const pad = (id: string, net: string, x: number, y: number, d = 2) => ({
  id,
  kind: 'pad',
  net,
  at: [x, y, 0],
  shape: { circle: d },
  turn: 0,
});
const trace = (id: string, net: string, ...at: [number, number][]) => ({
  id,
  kind: 'trace',
  net,
  width: 0.6,
  route: at.map(([x, y]) => ({ at: [x, y, 0] })),
});
const lay = (...elements: object[]) => {
  const project = { circuit: { elements, drapes: [] } } as unknown as Project;
  return drapeCircuit(project, 'x', partFrom(plate(40, 30, 4, 3)), quiet).copper.elements;
};
const told = (...elements: object[]) => {
  const laid = lay(...elements);
  return connectivityRule(laid, joinedPieces(laid)).map((f) => [f.rule, f.level, f.text]);
};

describe('what touches is one net', () => {
  it('a net whose copper hangs together is neither open nor short', () => {
    expect(
      told(pad('a', 'N', -6, 0), trace('t', 'N', [-6, 0], [6, 1]), pad('b', 'N', 6, 1), pad('c', 'M', 0, 8)),
    ).toEqual([]);
  });

  it('a net in two pieces is open, a lost pad between them or not', () => {
    expect(told(pad('a', 'N', -6, 0), trace('t', 'N', [-6, 0], [3, 1]), pad('b', 'N', 6, 1))).toEqual([
      ['open', 'warning', 'net N lies in 2 pieces that do not touch: a, b'],
    ]);
  });

  it('two nets that copper joins are short, through copper without a net, and where one lies wholly inside the other', () => {
    expect(
      told(pad('a', 'N', -6, 0), trace('t', '', [-6, 0], [6, 1]), pad('b', 'M', 6, 1)).map((f) =>
        f.slice(0, 2),
      ),
    ).toEqual([['short', 'error']]);
    expect(told(pad('a', 'N', 0, 0, 6), pad('b', 'M', 0.5, 0.3, 1)).map((f) => f[2])).toEqual([
      'nets N and M are joined by copper that touches; move it apart or give it one net',
    ]);
  });
});

describe('contacts', () => {
  const strip = (x: number, y = 0) => region(rect(x, y, 3, 0.4, 11, 2));
  it('elements touch where copper conducts into copper: overlapping, edge to edge, by a micrometre; not 5 µm apart', () => {
    for (const [x, y] of [
      [2, 0.1],
      [3, 0],
      [2.999, 0.2],
      [3.0005, 0],
      [1, 0.4],
    ])
      expect(contacts([strip(0), strip(x, y)])).toEqual([{ a: 0, b: 1 }]);
    for (const [x, y] of [
      [3.005, 0],
      [1, 0.405],
      [-3.005, -0.1],
    ])
      expect(contacts([strip(0), strip(x, y)])).toEqual([]);
    // Small within large, without a side that crosses.
    expect(contacts([region(rect(0, 0, 9, 9)), region(rect(5, 2, 0.05, 0.05))])).toEqual([{ a: 0, b: 1 }]);
    expect(contacts([region(rect(5, 2, 0.05, 0.05)), region(rect(0, 0, 9, 9))])).toEqual([{ a: 0, b: 1 }]);
  });

  it('say the same as the sheet of all: strips thrown at random, seeds 1 to 40', () => {
    for (let seed = 1; seed <= 40; seed++) {
      const random = randomFrom(seed);
      const thrown = Array.from({ length: 5 }, () => strip(7 * random(), 1.5 * random()));
      expect(new Set(joinedPieces(thrown)).size).toBe(netOf(...thrown).pieces);
    }
  });
});

describe('against a netlist', () => {
  const point = (net: string | null, pin: string, element: number) =>
    ({ kind: 'surface', net, part: 'J1', pin, place: `line ${pin}`, element }) satisfies ProbedPoint;

  it('points of one net must be joined, points of two must not, and each must lie on copper', () => {
    const laid = lay(
      pad('a', '', -6, 0),
      trace('t', '', [-6, 0], [6, 1]),
      pad('b', '', 6, 1),
      pad('c', '', 0, 8),
    );
    const piece = joinedPieces(laid);
    const rule = (...points: ReturnType<typeof point>[]) =>
      netlistRule(points, 'n.ipc', laid, piece).map((f) => [f.rule, f.text]);
    expect(rule(point('N', '1', 0), point('N', '2', 2), point('M', '3', 3))).toEqual([]);
    expect(rule(point('N', '1', 0), point('N', '3', 3))).toEqual([
      ['open', 'n.ipc: net N is open: J1-1 and J1-3 are not joined'],
    ]);
    expect(rule(point('N', '1', 0), point('M', '2', 2))).toEqual([
      ['short', 'n.ipc: nets N and M are joined: J1-1 and J1-2 are on copper that touches'],
    ]);
    expect(rule(point('N', '1', -1))).toEqual([['open', 'n.ipc, line 1: J1-1 of net N lies on no copper']]);
    expect(rule(point(null, '1', -1))).toEqual([]);
  });
});
