import { describe, expect, test } from 'vitest';
import { parseCommand } from '../../src/cli/args.ts';
import { InputError } from '../../src/core/base/news.ts';
import { runCli } from '../helpers/cli.ts';

const problem = (line: string) => {
  try {
    parseCommand(line.split(' ').filter((w) => w !== ''));
  } catch (e) {
    if (e instanceof InputError) return e.problems[0];
    throw e;
  }
  throw new Error(`"${line}" was taken`);
};

describe('bad usage is named', () => {
  const cases: [string, string, RegExp][] = [
    ['', '', /no command/],
    ['frobnicate', '', /frobnicate/],
    ['run', 'run', /PROJECT is missing/],
    ['run a.drape.json', 'run', /--out is missing/],
    ['run a b --out c', 'run', /"b" is one word too many/],
    ['run a --out b --json', '--json', /takes no such option/],
    ['run a --aut b', '--aut', /no such option/],
    ['run a --out', '--out', /not used as it should be/],
    ['run a --out b --threads 0', '--threads', /"0"/],
    ['run a --out b --threads 1.5', '--threads', /"1.5"/],
    ['run a --out b --seed x', '--seed', /"x"/],
    ['run a --out b --progress loud', '--progress', /"loud"/],
    ['check', 'check', /PROJECT is missing/],
    ['prove', 'prove', /DIR is missing/],
    ['prove d --formats svg,png', '--formats', /"png"/],
    ['inspect a.stl --units feet', '--units', /"feet"/],
    ['demo extra --out d', 'demo', /"extra"/],
    ['demo', 'demo', /--out is missing/],
  ];
  for (const [line, place, words] of cases)
    test(line === '' ? 'nothing at all' : line, () => {
      const p = problem(line);
      expect(p.code).toBe('usage');
      expect(p.place).toBe(place);
      expect(p.problem).toMatch(words);
      expect(p.mend).not.toBe('');
    });
});

test('good usage is read', () => {
  expect(parseCommand(['prove', 'd', '--formats', 'csv,svg', '--threads', '3'])).toEqual({
    name: 'prove',
    dir: 'd',
    formats: ['csv', 'svg'],
    json: false,
    settings: { progress: null, threads: 3, seed: 1, setups: null, timing: true },
  });
  expect(
    parseCommand([
      'run',
      'p',
      '--out',
      'o',
      '--no-timing',
      '--seed',
      '7',
      '--setups',
      '2',
      '--progress',
      'json',
    ]),
  ).toEqual({
    name: 'run',
    project: 'p',
    out: 'o',
    settings: { progress: 'json', threads: null, seed: 7, setups: 2, timing: false },
  });
  expect(parseCommand(['window', '--browser', 'a.stl'])).toEqual({
    name: 'window',
    args: ['--browser', 'a.stl'],
  });
});

describe('the program', () => {
  test('bad usage is status 2, one line on stderr, nothing on stdout', async () => {
    const r = await runCli(['run', 'a', '--aut', 'b']);
    expect(r.status).toBe(2);
    expect(r.stdout).toBe('');
    expect(r.stderr.trim().split('\n')).toHaveLength(1);
  });
  test('--help names every command and every status', async () => {
    const r = await runCli(['--help']);
    expect(r.status).toBe(0);
    for (const word of ['inspect', 'check', 'run', 'prove', 'demo', 'window', '130'])
      expect(r.stdout).toContain(word);
  });
  test('--version is that of package.json', async () => {
    const r = await runCli(['--version']);
    expect(r.status).toBe(0);
    expect(r.stdout).toMatch(/^\d+\.\d+\.\d+\n$/);
  });
  test('a reader that leaves early is no fault', async () => {
    const r = await runCli(['--help'], { act: (child) => child.stdout?.destroy() });
    expect(r.status).toBe(0);
    expect(r.stderr).toBe('');
  });
});
