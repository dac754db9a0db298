import { describe, expect, test } from 'vitest';
import { InputError } from '../../../src/core/base/news.ts';
import { quiet } from '../../../src/core/base/run-context.ts';
import { DEFAULTS, type Drawing, type DrawingOptions } from '../../../src/core/drawing/drawing.ts';
import { readDrill } from '../../../src/core/drawing/drill.ts';
import { source } from '../../reference/sources.ts';

const read = (text: string[], options: Partial<DrawingOptions> = {}): Drawing =>
  readDrill(text.join('\n'), 'a.drl', { ...DEFAULTS, ...options }, quiet);
const problem = (text: string[], options: Partial<DrawingOptions> = {}): [string, string] => {
  try {
    read(text, options);
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    return [error.code, error.problems[0].place];
  }
  throw new Error('it was read');
};
const one = (units: string, word: string): readonly [number, number] =>
  read(['M48', units, 'T01C0.5', '%', 'T01', word, 'M30']).holes[0].at;

describe(source('nc-drill'), () => {
  test.each([
    ['METRIC,LZ', 'X0127Y005', 12.7, 5],
    ['METRIC,TZ', 'X12700Y-500', 12.7, -0.5],
    ['INCH,LZ', 'X0125Y01', 31.75, 25.4],
    ['INCH,TZ', 'X12500Y1', 31.75, 0.00254],
    ['METRIC', 'X12.7Y-3.5', 12.7, -3.5],
    ['METRIC,LZ', 'X12.7Y-3.5', 12.7, -3.5],
    ['INCH,TZ', 'X.5Y-1.', 12.7, -25.4],
    ['METRIC,TZ,0000.00', 'X1270Y-50', 12.7, -0.5],
    ['METRIC,LZ,0000.00', 'X00127Y-00005', 12.7, -0.5],
    ['METRIC', 'X012700Y-000500', 12.7, -0.5],
  ])('%s %s', (units, word, x, y) => {
    const [u, v] = one(units, word);
    expect(Math.abs(u - x)).toBeLessThan(1e-12);
    expect(Math.abs(v - y)).toBeLessThan(1e-12);
  });

  test('the same digits are one hundred times apart in LZ and TZ', () => {
    expect(one('METRIC,LZ', 'X0127Y0')[0]).toBe(12.7);
    expect(one('METRIC,TZ', 'X0127Y0')[0]).toBe(0.127);
  });

  test('tools, a letter not written, a slot, and the end', () => {
    const d = read([
      ...[
        'M48',
        '; #@! TF.FileFunction,NonPlated,1,2,NPTH',
        'FMT,2',
        'INCH,TZ',
        'T01C0.0315F200S65',
        'T2C0.1',
        '%',
      ],
      ...[
        'G90',
        'G05',
        'T1',
        'X10000Y20000',
        'Y30000',
        'T02',
        'X-10000Y0G85X-15000',
        'T01',
        'X5Y5',
        'M30',
        'X9Y9',
      ],
    ]);
    expect(d.notes).toEqual([]);
    expect(d.shapes).toEqual([]);
    const rounded = d.holes.map((h) => [...h.at, ...h.to, h.diameter].map((v) => Number(v.toFixed(9))));
    expect(rounded).toEqual([
      [25.4, 50.8, 25.4, 50.8, 0.8001],
      [25.4, 76.2, 25.4, 76.2, 0.8001],
      [-25.4, 0, -38.1, 0, 2.54],
      [0.0127, 0.0127, 0.0127, 0.0127, 0.8001],
    ]);
    expect(d.holes.map((h) => h.plated)).toEqual([false, false, false, false]);
    expect(d.holes.map((h) => h.place)).toEqual(['line 11', 'line 12', 'line 14', 'line 16']);
  });

  test('M71 and M72 say the unit in the body; a tool keeps the unit it was defined in', () => {
    const d = read(['M48', 'METRIC,TZ', 'T1C0.8', '%', 'M72', 'T1', 'X10000Y0', 'M71', 'X10000', 'M30']);
    expect(d.holes.map((h) => [h.at[0], h.diameter])).toEqual([
      [25.4, 0.8],
      [10, 0.8],
    ]);
  });

  test('incremental places, and a hole repeated', () => {
    const d = read([
      'M48',
      'METRIC,TZ',
      'T1C1',
      '%',
      'G91',
      'T1',
      'X1000Y2000',
      'X500',
      'R3Y2540',
      'Y100',
      'M30',
    ]);
    expect(d.holes.map((h) => h.at.map((v) => Number(v.toFixed(9))))).toEqual([
      [1, 2],
      [1.5, 2],
      [1.5, 4.54],
      [1.5, 7.08],
      [1.5, 9.62],
      [1.5, 9.72],
    ]);
  });

  test('a router cuts while it is down', () => {
    const d = read([
      ...[
        'M48',
        'METRIC',
        'T1C1',
        '%',
        'T1',
        'G00X1.0Y2.0',
        'M15',
        'G01X3.0Y2.0',
        'X3.0Y5.0',
        'M16',
        'G00X9.0Y9.0',
      ],
      ...['G05', 'X7.0Y7.0', 'M30'],
    ]);
    expect(d.holes.map((h) => [...h.at, ...h.to])).toEqual([
      [1, 2, 3, 2],
      [3, 2, 3, 5],
      [7, 7, 7, 7],
    ]);
  });
});

describe('what a file does not say', () => {
  const body = ['T1C1', '%', 'T1', 'X10Y10', 'M30'];
  test('no unit is asked for', () => {
    expect(problem(['M48', ...body])).toEqual(['no-units', '']);
    const d = read(['M48', 'T1C1', '%', 'T1', 'X10.0Y1.5', 'M30'], { unit: 25.4 });
    expect(d.holes[0].at.map((v) => Number(v.toFixed(9)))).toEqual([254, 38.1]);
    expect(d.notes.map((n) => n.code)).toEqual(['units-given']);
  });

  test('which zeros are written is not guessed where it matters', () => {
    expect(problem(['M48', 'METRIC', ...body])).toEqual(['no-format', 'line 6']);
  });

  test('a file that stops early says so, and so does what is not understood', () => {
    const d = read(['M48', 'METRIC,TZ', 'T1C1', '%', 'X5Y5', 'T1', 'X1Y1', 'M25', 'G32X1Y1A1', 'X2Y2']);
    expect(d.holes.length).toBe(2);
    expect(d.notes.map((n) => [n.code, n.place, n.count])).toEqual([
      ['no-tool', 'line 5', 1],
      ['unknown-command', 'line 8', 2],
      ['no-end', 'end', 1],
    ]);
  });
});

describe('hostile files', () => {
  const head = ['M48', 'METRIC,TZ', 'T1C1', '%', 'T1'];
  test.each([
    ['no drill file', ['solid cube', 'facet normal 0 0 1'], 'not-drill', ''],
    ['nothing', [''], 'not-drill', ''],
    ['a number that is none', [...head, 'X1.2.3Y5'], 'bad-number', 'line 6'],
    ['NaN', [...head, 'XNaNY5'], 'bad-number', 'line 6'],
    ['a tool of no size', ['M48', 'METRIC', 'T1C-1'], 'bad-tool', 'line 3'],
    ['a tool that is no number', ['M48', 'METRIC', 'T1C1e9'], 'bad-tool', 'line 3'],
    ['too far away', [...head, 'X999999999999Y0'], 'out-of-range', 'line 6'],
    ['a bomb of repeats', [...head, 'X1Y1', 'R999999999X1'], 'too-large', ''],
    ['a format of its own', ['M48', 'METRIC,QZ'], 'bad-format', 'line 2'],
  ])('%s', (_, text, code, place) => {
    expect(problem(text)).toEqual([code, place]);
  });

  test('half a million holes are read, a million are refused', () => {
    const line = Array.from({ length: 1000 }, (_, i) => `X${i}Y${i * 7}`).join('\n');
    const many = (k: number): string[] => [...head, ...new Array(k).fill(line), 'M30'];
    expect(read(many(500)).holes.length).toBe(500_000);
    expect(problem(many(1000))[0]).toBe('too-large');
  });
});
