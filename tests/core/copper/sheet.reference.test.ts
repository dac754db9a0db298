import { describe, expect, it } from 'vitest';
import { guideCurrent } from '../../../src/core/copper/conduct.ts';
import { NEAR } from '../../../src/core/copper/sheet-solve.ts';
import { source } from '../../reference/sources.ts';
import { netOf, pad, polygon, rect, region, resistance, ring, squares } from './patches.ts';

/** The value, and what the program says of its own error, are both held to the truth. */
function expectSquares(elements: Parameters<typeof netOf>, truth: number): void {
  const [{ value, within }] = netOf(...elements).resistance_mohm;
  expect(Math.abs(value - truth)).toBeLessThanOrEqual(within + 1e-5 * truth);
  expect(within).toBeLessThanOrEqual(NEAR * value);
  expect(Math.abs(value / truth - 1)).toBeLessThan(NEAR);
}

describe(source('thin-films'), () => {
  it('a straight strip has as many squares as it is longer than wide, however it is cut', () => {
    for (const cut of [
      [1, 1],
      [7, 3],
      [40, 1],
    ])
      expect(
        resistance(pad(rect(-1, 0, 1, 0.4)), pad(rect(9.2, 0, 1, 0.4)), region(rect(0, 0, 9.2, 0.4, ...cut))),
      ).toBeCloseTo(23, 9);
  });

  it('the square in the corner of a right-angled bend counts 1 - 2 ln 2 / π = 0.5587', () => {
    const arms = [region(rect(0, 0, 4, 0.5, 9, 2)), region(rect(0, 0, 0.5, 3, 1, 5))];
    expectSquares(
      [pad(rect(4, 0, 1, 0.5)), pad(rect(0, 3, 0.5, 1)), ...arms],
      3.5 / 0.5 + 2.5 / 0.5 + 1 - (2 * Math.LN2) / Math.PI,
    );
  });

  it.each([1.5, 2, 5])(
    'a strip that widens %d times in one step has what the spreading of the current adds',
    (k) => {
      const more =
        (((k * k + 1) / k) * Math.log((k + 1) / (k - 1)) - 2 * Math.log((4 * k) / (k * k - 1))) / Math.PI;
      // Both strips have one straight side: half of a strip that widens on both.
      expectSquares(
        [
          pad(rect(-6, 0, 1, 1)),
          pad(rect(5 * k, 0, 1, k)),
          region(rect(-5, 0, 5, 1)),
          region(rect(0, 0, 5 * k, k, 3, 2)),
        ],
        5 + 5 + more,
      );
    },
  );

  it('between circles of one centre: ln (b / a) / 2π', () => {
    const n = 360;
    // Sides of a polygon against the circle: the true radius is between the two.
    expectSquares(
      [pad(ring(1, 2, 0, 0.7, n)), pad(ring(1, 2, 3.1, 4, n)), region(ring(1, 2, 0.3, 3.5, n))],
      Math.log(3.1 / 0.7) / (2 * Math.PI),
    );
  });

  it('between circles beside each other inside one: arcosh of their distance, the same by inversion', () => {
    const [a, b, d] = [0.5, 3, 1.2];
    const cosh = (a * a + b * b - d * d) / (2 * a * b);
    expectSquares(
      [pad(ring(d, 0, 0, a, 360)), pad(ring(0, 0, b, b + 1, 360)), region(ring(0, 0, 0, b + 0.5, 360))],
      Math.acosh(cosh) / (2 * Math.PI),
    );
  });

  it('a wedge between two radii, cut with straight rays: ln (b / a) over the angle', () => {
    const [n, angle, a, b] = [180, 0.9, 1, 4];
    const at = (r: number, i: number): [number, number] => [
      r * Math.cos((angle * i) / n),
      r * Math.sin((angle * i) / n),
    ];
    const band = (r: number, s: number) =>
      Array.from({ length: n }, (_, i) => polygon(at(r, i), at(s, i), at(s, i + 1), at(r, i + 1))).flat();
    expectSquares(
      [pad(band(a - 0.3, a)), pad(band(b, b + 0.3)), region(band(a, b))],
      Math.log(b / a) / angle,
    );
  });
});

describe(`${source('ipc-2221')}, at the narrowest place`, () => {
  const width = (...elements: Parameters<typeof netOf>): number => {
    const { current_A } = netOf(...elements);
    // The guide's current goes with the width to the power 0.725.
    return (current_A / guideCurrent(1, squares)) ** (1 / 0.725);
  };

  it('a straight strip, a tapered one, a strip with a neck, and a plate with a slot', () => {
    expect(
      width(pad(rect(-1, 0, 1, 0.4)), pad(rect(9, 0, 1, 0.4)), region(rect(0, 0, 9, 0.4, 5, 2))),
    ).toBeCloseTo(0.4, 6);
    const taper = polygon([0, 0], [6, 0], [6, 0.5], [0, 2]);
    expect(width(pad(rect(-1, 0, 1, 2)), pad(rect(6, 0, 1, 0.5)), region(taper))).toBeCloseTo(0.5, 2);
    expect(
      width(
        pad(rect(-1, 0, 1, 2)),
        pad(rect(8, 0, 1, 2)),
        region(rect(0, 0, 3, 2)),
        region(rect(3, 0.5, 1.5, 0.3)),
        region(rect(4.5, 0, 3.5, 2)),
      ),
    ).toBeCloseTo(0.3, 3);
    // A plate 10 × 6 with a slot from above that leaves 0.8, twice as thin as the pads.
    expect(
      width(
        pad(rect(-1, 0, 1, 6)),
        pad(rect(10, 0, 1, 6)),
        region(rect(0, 0, 4, 6)),
        region(rect(4, 0, 0.2, 0.8)),
        region(rect(4.2, 0, 5.8, 6)),
      ),
    ).toBeCloseTo(0.8, 2);
  });

  it('two ways beside each other count together; without two joined pads the narrowest trace counts', () => {
    expect(
      width(
        pad(rect(-1, 0, 1, 3)),
        pad(rect(5, 0, 1, 3)),
        region(rect(0, 0, 5, 0.4)),
        region(rect(0, 2, 5, 0.7)),
      ),
    ).toBeCloseTo(1.1, 6);
  });
});
