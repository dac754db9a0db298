import { describe, expect, it } from 'vitest';
import { benchPoint, fieldPoint } from '../../../src/core/base/brands.ts';
import { randomFrom } from '../../../src/core/base/random.ts';
import { beamDirection, beamPoint, landing } from '../../../src/core/beam/landing.ts';
import { source } from '../../reference/sources.ts';

const head = { pivot: [190, 178] as [number, number] };
const telecentric = { pivot: [null, null] as [null, null] };

describe(source('similar-triangles'), () => {
  it.each([
    [30, -20, 5, 29.210526316, -19.438202247, [-0.155010816, 0.110307322, 0.981735169], 0.968960997],
    [-45, 40, -12, -47.842105263, 42.696629213, [0.225146387, -0.21362204, 0.950618077], 3.917827388],
    [55, 55, 2, 54.421052632, 54.382022472, [-0.266564698, -0.284535352, 0.920859867], 0.846803567],
    [55, 0, -2, 55.578947368, 0, [-0.278058077, 0, 0.960564264], 0.578947368],
    [0, 55, 20, 0, 48.820224719, [0, -0.295217188, 0.955430171], 6.179775281],
  ])(
    'command %d, %d at d %d: where it lands, its direction, and the miss of a plain projection',
    (X, Y, d, x, y, u, miss) => {
      const command = fieldPoint([X, Y]);
      const p = beamPoint(command, d, head);
      expect(p[0]).toBeCloseTo(x, 8);
      expect(p[1]).toBeCloseTo(y, 8);
      beamDirection(command, head).forEach((v, k) => {
        expect(v).toBeCloseTo(u[k], 8);
      });
      expect(Math.hypot(X - p[0], Y - p[1])).toBeCloseTo(miss, 8);
      // A plain projection misses by d · tan(tilt).
      const [ux, uy, uz] = beamDirection(command, head);
      expect((Math.abs(d) * Math.hypot(ux, uy)) / uz).toBeCloseTo(miss, 8);
    },
  );

  it.each([
    [30, -20, 5, 30.810810811, -20.578034682],
    [-45, 40, -12, -42.326732673, 37.473684211],
    [20, 10, 8, 20.879120879, 10.470588235],
  ])('the command for %d, %d at %d', (x, y, d, X, Y) => {
    const c = landing(benchPoint([x, y, d]), head);
    expect(c[0]).toBeCloseTo(X, 8);
    expect(c[1]).toBeCloseTo(Y, 8);
  });

  it('there and back is closer than a nanometre, seed 21', () => {
    const random = randomFrom(21);
    for (let k = 0; k < 500; k++) {
      const at = benchPoint([110 * random() - 55, 110 * random() - 55, 60 * random() - 30]);
      const back = beamPoint(landing(at, head), at[2], head);
      expect(Math.hypot(back[0] - at[0], back[1] - at[1])).toBeLessThan(1e-6);
    }
  });

  it('telecentric: the command is the position at every height', () => {
    expect(landing(benchPoint([12, -7, 19]), telecentric)).toEqual([12, -7]);
    expect(beamDirection(fieldPoint([12, -7]), telecentric)).toEqual([0, 0, 1]);
  });

  it('level with a pivot there is no command', () => {
    expect(() => landing(benchPoint([1, 1, 178]), head)).toThrow(
      expect.objectContaining({ code: 'beyond-pivot' }),
    );
  });
});
