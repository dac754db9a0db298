import { expect, test } from 'vitest';
import { readNumber, show, signed } from '../../src/store/units.ts';

test.each([
  // 1 in = 25.4 mm exactly (international inch, 1959); 1 mil = 1/1000 in.
  ['0.02in', 0.508],
  ['20 mil', 0.508],
  ['1"', 25.4],
  ['0.5', 0.5],
  ['0,5', 0.5],
  ['.5mm', 0.5],
  ['500 um', 0.5],
  ['500µm', 0.5],
  ['2 CM', 20],
  ['1e-3 m', 1],
  ['-3', -3],
  ['−3.25', -3.25],
])('"%s" is %f mm', (text, mm) => {
  expect(readNumber(text, 'length', 'mm')).toEqual({ value: mm });
});

test.each(['', 'abc', '1.2.3', '5 kg', '1 in in', '--2', '1,000.5', 'NaN', 'Infinity'])(
  '"%s" is refused with words',
  (text) => {
    expect(readNumber(text, 'length', 'mm')).toHaveProperty('problem', expect.stringMatching(/\w/));
  },
);

test('angles take degrees and radians, plain numbers their own unit and no other', () => {
  expect(readNumber('90°', 'angle', '°')).toEqual({ value: 90 });
  const half = readNumber('0.5 rad', 'angle', '°');
  expect('value' in half && half.value).toBeCloseTo(28.64788975654116, 9);
  expect(readNumber('1.5 W', 'plain', 'W')).toEqual({ value: 1.5 });
  expect(readNumber('1.5 mm', 'plain', 'W')).toHaveProperty('problem');
});

test('numbers are shown short, with a true minus and no minus zero', () => {
  expect([show(1.5, 2), show(2, 2), show(-0.001, 2), show(-1.25, 2), show(100, 0), show(Number.NaN)]).toEqual(
    ['1.5', '2', '0', '−1.25', '100', '–'],
  );
  expect([signed(3.2), signed(-1), signed(0), signed(-0.001)]).toEqual(['+3.20', '−1.00', '0.00', '0.00']);
});
