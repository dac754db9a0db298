import { describe, expect, test } from 'vitest';
import { InputError } from '../../../src/core/base/news.ts';
import { quiet } from '../../../src/core/base/run-context.ts';
import { type Netlist, readNetlist } from '../../../src/core/drawing/netlist.ts';
import { source } from '../../reference/sources.ts';

const ONE = '317SENSE1           J1    -2    D0800PA00X+012700Y-003500X1600Y1600R000 S0';
const TWO = '327GUARD            U3    -14         A01X-004250Y+008000X0600Y1500R090 S0';
const read = (lines: string[], unit: number | null = null): Netlist =>
  readNetlist(lines.join('\r\n'), 'a.ipc', unit, quiet);
const problem = (lines: string[]): [string, string] => {
  try {
    read(lines);
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    return [error.code, error.problems[0].place];
  }
  throw new Error('it was read');
};
const near = (have: readonly number[], want: readonly number[]): void => {
  expect(have.length).toBe(want.length);
  have.forEach((v, i) => {
    expect(Math.abs(v - want[i])).toBeLessThan(1e-9);
  });
};

describe(source('ipc-d-356a'), () => {
  test('records 1 and 2 in thousandths of a mm', () => {
    const { points, notes } = read(['C  a comment', 'P  JOB   X', 'P  UNITS CUST 1', ONE, TWO, '999']);
    expect(notes).toEqual([]);
    const [a, b] = points;
    expect([a.kind, a.net, a.part, a.pin, a.middle]).toEqual(['through', 'SENSE1', 'J1', '2', false]);
    near([...a.at, ...a.size!, a.turn!, a.hole!.diameter], [12.7, -3.5, 1.6, 1.6, 0, 0.8]);
    expect([a.hole!.plated, a.access, a.mask, a.place]).toEqual([true, 0, 0, 'line 4']);
    expect([b.kind, b.net, b.part, b.pin, b.hole]).toEqual(['surface', 'GUARD', 'U3', '14', null]);
    near([...b.at, ...b.size!, b.turn!], [-4.25, 8, 0.6, 1.5, 90]);
    expect([b.access, b.mask, b.place]).toEqual([1, 0, 'line 5']);
  });

  test('record 1 in ten-thousandths of an inch', () => {
    for (const cust of ['0', '2']) {
      const [a] = read([`P  UNITS CUST ${cust}`, ONE, '999']).points;
      near([...a.at, a.hole!.diameter], [32.258, -8.89, 2.032]);
    }
  });

  test('turns in radians are left out, and noted', () => {
    const { points, notes } = read(['P  UNITS CUST 2', ONE, TWO, '999']);
    expect(points.map((p) => p.turn)).toEqual([0, null]);
    expect(notes.map((n) => [n.code, n.place])).toEqual([['radians', 'line 3']]);
  });

  test('a height of 0000 is round; an unplated tooling hole; a pad without a net; the middle of a net', () => {
    const round = ONE.replace('X1600Y1600', 'X1600Y0000');
    const tooling = `367${' '.repeat(29)}D3200UA00X+000100Y+000200`;
    const free = TWO.replace('GUARD', 'N/C  ').replace('-14   ', '-14  M');
    const { points } = read(['P  UNITS CUST 1', round, tooling, free, '999']);
    near(points[0].size!, [1.6, 1.6]);
    expect([points[1].kind, points[1].net, points[1].part, points[1].size]).toEqual([
      'tooling',
      null,
      null,
      null,
    ]);
    expect(points[1].hole).toEqual({ diameter: 3.2, plated: false });
    expect([points[2].net, points[2].middle]).toEqual([null, true]);
  });

  test('a continued record takes what it leaves out from the one before', () => {
    const more = `017${' '.repeat(35)}A02X+013000Y-003500`;
    const { points } = read(['P  UNITS CUST 1', ONE, more, '999']);
    expect([points[1].kind, points[1].net, points[1].part, points[1].pin, points[1].access]).toEqual([
      'through',
      'SENSE1',
      'J1',
      '2',
      2,
    ]);
    near(points[1].at, [13, -3.5]);
  });

  test('long names of nets', () => {
    const { points } = read([
      'P  UNITS CUST 1',
      'P  NNAME1 A_VERY_LONG_NAME_OF_A_NET',
      ONE.replace('SENSE1', 'NNAME1'),
      '999',
    ]);
    expect(points[0].net).toBe('A_VERY_LONG_NAME_OF_A_NET');
  });
});

describe('hostile files', () => {
  const head = 'P  UNITS CUST 1';
  test.each([
    ['no netlist', ['solid cube', 'facet'], 'not-netlist', ''],
    ['no unit', [ONE], 'no-units', ''],
    ['a unit of its own', ['P  UNITS CUST 7', ONE], 'bad-units', 'line 1'],
    ['letters among digits', [head, ONE.replace('012700', '0127OO')], 'bad-number', 'line 2'],
    ['columns shifted by one', [head, TWO, ONE.replace('317', '317 ')], 'bad-number', 'line 3'],
    ['cut in the middle of a record', [head, ONE.slice(0, 45)], 'bad-number', 'line 2'],
  ])('%s', (_, text, code, place) => {
    expect(problem(text)).toEqual([code, place]);
  });

  test('a file that stops early, and records of other kinds, are noted', () => {
    const { points, notes } = read([head, ONE, '378SENSE1  L01 X0100 X+0Y+0', '017', '389BOARD']);
    expect(points.length).toBe(1);
    expect(notes.map((n) => [n.code, n.place, n.count])).toEqual([
      ['unknown-record', 'line 3', 2],
      ['continued', 'line 4', 1],
      ['no-end', 'end', 1],
    ]);
  });
});
