import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, test } from 'vitest';
import { binaryStl, box, bytesOf, flip, textStl } from '../core/mesh/parts.ts';
import { emptyFolder, runCli } from '../helpers/cli.ts';

const folder = emptyFolder();
const put = (name: string, bytes: Uint8Array): string => {
  const path = join(folder, name);
  writeFileSync(path, bytes);
  return path;
};

test('--json gives the part in numbers, in mm whatever the unit of the file', async () => {
  const file = put('box.stl', binaryStl(box(1, 2, 3).map((f, i) => (i === 4 ? flip(f) : f))));
  const r = await runCli(['inspect', file, '--json', '--units', 'cm', '--progress', 'none']);
  expect(r.status).toBe(0);
  expect(r.stderr).toBe('');
  const part = JSON.parse(r.stdout);
  expect(part).toMatchObject({
    triangles: 12,
    vertices: 8,
    pieces: 1,
    closed: true,
    bounds: [
      [0, 0, 0],
      [10, 20, 30],
    ],
  });
  expect(part.volume).toBeCloseTo(6000, 6);
  expect(part.area).toBeCloseTo(2200, 6);
  expect(part.mended).toEqual({
    welded: 0,
    degenerate: 0,
    duplicate: 0,
    flipped: 1,
    split: 0,
    nonManifoldEdges: 0,
  });
});

test('the table says what was mended, in words', async () => {
  const file = put('twice.stl', bytesOf(textStl([...box(1, 2, 3), box(1, 2, 3)[5]])));
  const r = await runCli(['inspect', file]);
  expect(r.status).toBe(0);
  expect(r.stdout).toContain('1 facet drawn twice left out');
  expect(r.stdout).toContain('1.00 × 2.00 × 3.00 mm');
  expect(r.stderr).toContain('Reading the part');
});

test('--progress json is one object a line on stderr', async () => {
  const r = await runCli(['inspect', put('b.stl', binaryStl(box(1, 2, 3))), '--progress', 'json']);
  const lines = r.stderr
    .trim()
    .split('\n')
    .map((l) => JSON.parse(l));
  expect(lines.length).toBeGreaterThan(0);
  for (const l of lines)
    expect(l).toMatchObject({ phase: 'load', done: expect.any(Number), of: expect.any(Number) });
});

describe('a bad part is status 2, one line that names the file and the place, nothing on stdout', () => {
  const good = binaryStl(box(1, 2, 3));
  const withNaN = good.slice();
  new DataView(withNaN.buffer).setFloat32(84 + 50 * 7 + 12, Number.NaN, true);
  const cases: [string, Uint8Array, RegExp][] = [
    ['empty', new Uint8Array(), /is empty/],
    ['truncated', good.slice(0, 400), /promises 12 facets and holds 6/],
    ['nan', withNaN, /facet 8, corner 1, x/],
    ['text', bytesOf(textStl(box(1, 2, 3)).replace('vertex', 'vortex')), /line 4.*vortex/],
  ];
  for (const [name, bytes, words] of cases)
    test(name, async () => {
      const file = put(`${name}.stl`, bytes);
      const r = await runCli(['inspect', file, '--progress', 'none']);
      expect(r.status).toBe(2);
      expect(r.stdout).toBe('');
      expect(r.stderr.trim().split('\n')).toHaveLength(1);
      expect(r.stderr).toContain(`${name}.stl`);
      expect(r.stderr).toMatch(words);
    });
  test('a file that is not there', async () => {
    const r = await runCli(['inspect', join(folder, 'nothing.stl')]);
    expect(r.status).toBe(2);
    expect(r.stderr).toMatch(/nothing\.stl: there is no such file/);
  });
});
