import { describe, expect, test } from 'vitest';
import { InputError } from '../../../src/core/base/news.ts';
import { quiet } from '../../../src/core/base/run-context.ts';
import { readStl } from '../../../src/core/mesh/stl.ts';
import { binaryStl, bytesOf, tetra, textStl } from './parts.ts';

const facets = tetra(3, 4.5, -7.25);
const flat = facets.flat(2);
const corners = (bytes: Uint8Array): number[] => [...readStl(bytes, 'part.stl', quiet).corners];

function problemOf(bytes: Uint8Array) {
  try {
    readStl(bytes, 'part.stl', quiet);
  } catch (e) {
    if (e instanceof InputError) return e.problems[0];
    throw e;
  }
  throw new Error('read without an error');
}

describe('good files', () => {
  test('binary holds its corners in order', () => expect(corners(binaryStl(facets))).toEqual(flat));
  test('a binary file whose header begins with "solid facet" is binary', () =>
    expect(corners(binaryStl(facets, 'solid facet normal vertex'))).toEqual(flat));
  test('text holds its corners in order', () => expect(corners(bytesOf(textStl(facets)))).toEqual(flat));
  test('line ends of every kind, tabs and upper case are all one', () => {
    expect(corners(bytesOf(textStl(facets, '\r\n')))).toEqual(flat);
    expect(corners(bytesOf(textStl(facets, '\r')))).toEqual(flat);
    expect(corners(bytesOf(textStl(facets).replaceAll(' ', '\t').toUpperCase()))).toEqual(flat);
  });
  test('a byte order mark and blank lines before "solid" do no harm', () =>
    expect(corners(Uint8Array.of(0xef, 0xbb, 0xbf, 10, 10, ...bytesOf(textStl(facets))))).toEqual(flat));
  test('several solid sections are read one after the other, whatever words their names hold', () =>
    expect(
      corners(bytesOf(textStl(facets).replace('solid test', 'solid facet vertex 1') + textStl(facets))),
    ).toEqual([...flat, ...flat]));
  test('a text file may give a normal that is no number', () =>
    expect(corners(bytesOf(textStl(facets).replace('normal 0 0 0', 'normal nan -nan inf')))).toEqual(flat));
  test('numbers are rounded as the language itself rounds them', () => {
    const words = [
      '1.5e-3',
      '-2.E+01',
      '+.25',
      '7',
      '0.1',
      '123456789.123456789',
      '1.7976931348623157e-300',
      '-0.000000000000000000000000123',
      '3.141592653589793238462643',
    ];
    const text = `solid\nfacet normal 0 0 1\nouter loop\n${[0, 3, 6].map((i) => `vertex ${words.slice(i, i + 3).join(' ')}`).join('\n')}\nendloop\nendfacet\nendsolid`;
    expect(corners(bytesOf(text))).toEqual(words.map(Number));
  });
  test('bytes after the last facet of a binary file are counted, not read', () => {
    const soup = readStl(Uint8Array.of(...binaryStl(facets), 1, 2, 3), 'part.stl', quiet);
    expect([...soup.corners]).toEqual(flat);
    expect(soup.trailingBytes).toBe(3);
  });
  test('bytes that are part of a larger buffer are read at their own place', () => {
    const bytes = binaryStl(facets);
    const larger = new Uint8Array(bytes.length + 7);
    larger.set(bytes, 7);
    expect(corners(larger.subarray(7))).toEqual(flat);
  });
});

describe('bad files are named, with the place', () => {
  const text = textStl(facets);
  const binary = binaryStl(facets);
  const withFloat = (facet: number, i: number, v: number): Uint8Array => {
    const bytes = binary.slice();
    new DataView(bytes.buffer).setFloat32(84 + 50 * facet + 12 + 4 * i, v, true);
    return bytes;
  };
  const cases: [string, Uint8Array, { code: string; place?: string; problem?: RegExp }][] = [
    ['an empty file', new Uint8Array(), { code: 'empty-file' }],
    ['a few bytes', bytesOf('GIF89a\0'), { code: 'not-stl' }],
    [
      'a binary file that breaks off',
      binary.slice(0, 250),
      { code: 'truncated', place: 'byte 250', problem: /promises 4 facets and holds 3/ },
    ],
    ['a binary file of no facets', binaryStl([]), { code: 'no-facets' }],
    ['a text file of no facets', bytesOf('solid x\nendsolid x\n'), { code: 'no-facets' }],
    [
      'NaN in a binary file',
      withFloat(2, 4, Number.NaN),
      { code: 'not-finite', place: 'facet 3, corner 2, y' },
    ],
    [
      'infinity in a binary file',
      withFloat(0, 8, -Infinity),
      { code: 'not-finite', place: 'facet 1, corner 3, z' },
    ],
    [
      'a coordinate out of all range',
      withFloat(3, 0, 1e30),
      { code: 'out-of-range', place: 'facet 4, corner 1, x' },
    ],
    [
      'a facet of two corners',
      bytesOf(text.replace('  vertex 3 0 0\n', '')),
      { code: 'vertex-count', place: 'line 7', problem: /has 2 corners/ },
    ],
    [
      'a facet of four corners',
      bytesOf(text.replace('  vertex 3 0 0\n', '  vertex 3 0 0\n  vertex 9 9 9\n')),
      { code: 'vertex-count', place: 'line 7' },
    ],
    [
      'a word among the numbers',
      bytesOf(text.replace('vertex 3 0 0', 'vertex 3 zero 0')),
      { code: 'bad-number', place: 'line 6' },
    ],
    ['a decimal comma', bytesOf(text.replace('4.5', '4,5')), { code: 'bad-number', place: 'line 5' }],
    [
      'a number too few',
      bytesOf(text.replace('vertex 3 0 0', 'vertex 3 0')),
      { code: 'bad-number', place: 'line 7' },
    ],
    [
      'NaN in a text file',
      bytesOf(text.replace('vertex 3 0 0', 'vertex 3 nan 0')),
      { code: 'not-finite', place: 'line 6, facet 1, corner 3, y' },
    ],
    [
      'infinity in a text file',
      bytesOf(text.replace('vertex 3 0 0', 'vertex 3 0 -inf')),
      { code: 'not-finite', place: 'line 6, facet 1, corner 3, z' },
    ],
    [
      'a word that does not belong',
      bytesOf(text.replace(' endloop', ' endloop colour')),
      { code: 'bad-word', place: 'line 7' },
    ],
    [
      'a text that stops inside a facet',
      bytesOf(text.slice(0, text.lastIndexOf('endloop'))),
      { code: 'truncated' },
    ],
    [
      'a text that stops between facets',
      bytesOf(text.slice(0, text.lastIndexOf('endsolid'))),
      { code: 'truncated' },
    ],
    [
      'a facet that is not closed',
      bytesOf(text.replace('endfacet\n', '')),
      { code: 'vertex-count', place: 'line 8' },
    ],
  ];
  for (const [name, bytes, expected] of cases)
    test(name, () => {
      const p = problemOf(bytes);
      expect(p.file).toBe('part.stl');
      expect(p.code).toBe(expected.code);
      if (expected.place !== undefined) expect(p.place).toBe(expected.place);
      if (expected.problem) expect(p.problem).toMatch(expected.problem);
      expect(p.mend).not.toBe('');
    });
});
