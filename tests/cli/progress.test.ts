import { expect, test } from 'vitest';
import type { ProgressMode } from '../../src/cli/args.ts';
import { progressTo } from '../../src/cli/progress.ts';
import { duration, fixed, grouped, signed, table } from '../../src/cli/table.ts';
import type { Phase } from '../../src/core/base/run-context.ts';

function written(mode: ProgressMode, steps: [Phase, number, number][]): string {
  let text = '';
  const p = progressTo({ write: (t) => (text += t), columns: 60 }, mode);
  for (const s of steps) p.step(...s);
  p.end();
  return text;
}

const STEPS: [Phase, number, number][] = [
  ['load', 0, 3],
  ['load', 1, 3],
  ['load', 3, 3],
  ['reach', 0, 100],
  ...Array.from({ length: 100 }, (_, i): [Phase, number, number] => ['reach', i + 1, 100]),
];

test('json: one object a line, each step as it was', () => {
  const lines = written('json', STEPS)
    .trim()
    .split('\n')
    .map((l) => JSON.parse(l));
  expect(lines).toEqual(STEPS.map(([phase, done, of]) => ({ phase, done, of })));
});

test('lines: a line when a phase begins and at each quarter, however many steps there are', () => {
  const lines = written('lines', STEPS).trim().split('\n');
  expect(lines).toEqual([
    'Reading the part …',
    'Reading the part: 25 %',
    'Checking what the beam reaches …',
    'Checking what the beam reaches: 25 %',
    'Checking what the beam reaches: 50 %',
    'Checking what the beam reaches: 75 %',
  ]);
});

test('bar: stays on one line, never wider than the terminal, and is wiped at the end', () => {
  const text = written('bar', STEPS);
  expect(text).not.toContain('\n');
  // biome-ignore lint/suspicious/noControlCharactersInRegex: the escape that clears a line is what is looked for.
  const shown = text.split(/\r\u001b\[K/);
  expect(Math.max(...shown.map((s) => s.length))).toBeLessThan(60);
  expect(shown.at(-1)).toBe('');
  expect(shown.at(-2)).toMatch(/█{24} 100 %/);
});

test('none: silence', () => expect(written('none', STEPS)).toBe(''));

test('numbers for people: no minus zero, a sign on what is to be set, thousands apart, minutes', () => {
  expect(fixed(-0.0001, 2)).toBe('0.00');
  expect(fixed(-1.005, 1)).toBe('-1.0');
  expect(signed(2.5, 3)).toBe('+2.500');
  expect(signed(-2.5, 1)).toBe('-2.5');
  expect(signed(-0.0001, 1)).toBe('0.0');
  expect([7, 1234, 999996, 12345678].map(grouped)).toEqual(['7', '1 234', '999 996', '12 345 678']);
  expect([3.4, 59.6, 125].map(duration)).toEqual(['3 s', '1 min 00 s', '2 min 05 s']);
});

test('a table lines up: words on the left, numbers on the right', () => {
  expect(
    table(
      ['name', 'mm'],
      [
        ['a', '1.5'],
        ['longer', '-12.25'],
      ],
    ).split('\n'),
  ).toEqual(['  name        mm', '  ──────  ──────', '  a          1.5', '  longer  -12.25']);
});
