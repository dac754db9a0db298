import { describe, expect, it } from 'vitest';
import { InputError } from '../../../src/core/base/news.ts';
import { burnPathBuilder } from '../../../src/core/proof/burn-path.ts';
import { layPulses } from '../../../src/core/proof/pulses.ts';

/** [x, y, burns, speed, power] */
const pathOf = (...points: [number, number, boolean, number?, number?][]) => {
  const b = burnPathBuilder('a.csv');
  for (const [x, y, burns, speed = 100, power = 1] of points) b.add(x, y, burns, speed, power);
  return b.done();
};
const field = [110, 90] as const;
const xs = (c: Float64Array) => [...c].filter((_, i) => i % 2 === 0).map((v) => Number(v.toFixed(9)));

describe('pulses along a path', () => {
  it('fire at the start of a chain and then every speed / rate', () => {
    const p = layPulses(pathOf([1, 2, false], [1.35, 2, true]), 1000, field);
    expect(xs(p.command)).toEqual([1, 1.1, 1.2, 1.3]);
  });

  it('carry their phase over a corner', () => {
    const p = layPulses(pathOf([0, 0, false], [0.25, 0, true], [0.25, 0.3, true]), 1000, field);
    expect([...p.command].map((v) => Number(v.toFixed(9)))).toEqual([
      0, 0, 0.1, 0, 0.2, 0, 0.25, 0.05, 0.25, 0.15, 0.25, 0.25,
    ]);
  });

  it('carry it in time where the speed changes', () => {
    // half a period is left at x = 0.25, which is 0.1 mm at 200 mm/s
    const p = layPulses(
      pathOf([0, 0, false], [0.25, 0, true, 100, 1], [0.65, 0, true, 200, 0.5]),
      1000,
      field,
    );
    expect(xs(p.command)).toEqual([0, 0.1, 0.2, 0.35, 0.55]);
    expect([...p.share]).toEqual([1, 1, 1, 0.5, 0.5]);
  });

  it('begin anew after a jump, and none falls on the jump', () => {
    const p = layPulses(pathOf([0, 0, false], [0.15, 0, true], [5, 0, false], [5.15, 0, true]), 1000, field);
    expect(xs(p.command)).toEqual([0, 0.1, 5, 5.1]);
  });

  it('one due at the last point is not lost to rounding', () => {
    // 0.1 three times is not 0.3 in binary
    expect(
      xs(
        layPulses(pathOf([0, 0, false], [0.1, 0, true], [0.2, 0, true], [0.3, 0, true]), 1000, field).command,
      ),
    ).toEqual([0, 0.1, 0.2, 0.3]);
  });

  it('outside the field are counted, not burnt', () => {
    const p = layPulses(
      pathOf([54.95, 10, false], [55.25, 10, true], [10, 44.95, false], [10, 45.15, true]),
      1000,
      field,
    );
    expect(p.outside).toBe(5); // x 55.05, 55.15, 55.25; y 45.05, 45.15: the field is narrower there
    expect(xs(p.command)).toEqual([54.95, 10]);
  });

  it('more than any layer holds are refused', () => {
    let found: InputError | null = null;
    try {
      layPulses(pathOf([0, 0, false], [50, 0, true, 1e-6]), 30000, field);
    } catch (error) {
      if (error instanceof InputError) found = error;
    }
    expect(found?.code).toBe('too-many-pulses');
    expect(found?.problems[0].file).toBe('a.csv');
  });
});
