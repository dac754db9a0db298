import { describe, expect, it } from 'vitest';
import { InputError } from '../../../src/core/base/news.ts';
import { beamAt, belowPivots, leanOf, towardHead } from '../../../src/core/proof/forward.ts';
import { projectWith, turned } from '../helpers/proof-scene.ts';

const head = projectWith(turned([0, 0, 1], 0)).head;
const lean = leanOf(head);
const degrees = (r: number) => (r * 180) / Math.PI;

/** Command, d, landing, u, tilt: computed from model.md §2 in double precision, pivots [190, 178]. */
const TABLE: [[number, number], number, [number, number], [number, number, number], number][] = [
  [[30, -20], 5, [29.210526316, -19.438202247], [-0.155010816, 0.110307322, 0.981735169], 10.967527],
  [[-45, 40], -12, [-47.842105263, 42.696629213], [0.225146387, -0.21362204, 0.950618077], 18.081116],
  [[55, 55], 2, [54.421052632, 54.382022472], [-0.266564698, -0.284535352, 0.920859867], 22.947886],
  [[55, 0], -2, [55.578947368, 0], [-0.278058077, 0, 0.960564264], 16.144339],
  [[0, 55], 20, [0, 48.820224719], [0, -0.295217188, 0.955430171], 17.170561],
];

describe('forward map of the proof (formula of two pivots, model.md §2)', () => {
  it.each(TABLE)('command %j at d %d lands at %j', ([X, Y], d, [x, y], u, tilt) => {
    const at = beamAt(lean, X, Y, d);
    expect(Math.abs(at[0] - x)).toBeLessThan(1e-9);
    expect(Math.abs(at[1] - y)).toBeLessThan(1e-9);
    expect(at[2]).toBe(d);
    const toward = towardHead(lean, X, Y);
    u.forEach((c, i) => {
      expect(Math.abs(toward[i] - c)).toBeLessThan(1e-9);
    });
    expect(Math.abs(degrees(Math.acos(toward[2])) - tilt)).toBeLessThan(1e-6);
  });

  it.each([
    [[30.810810811, -20.578034682], 5, [30, -20]],
    [[-42.326732673, 37.473684211], -12, [-45, 40]],
    [[20.879120879, 10.470588235], 8, [20, 10]],
  ])('and back: the corrected command %j at d %d hits %j', ([X, Y], d, [x, y]) => {
    const at = beamAt(lean, X, Y, d);
    expect(Math.abs(at[0] - x)).toBeLessThan(1e-8); // the command is given to 1e-9
    expect(Math.abs(at[1] - y)).toBeLessThan(1e-8);
  });

  it('a beam runs straight: its points at three heights lie on its direction', () => {
    const a = beamAt(lean, 41, -13, -20);
    const b = beamAt(lean, 41, -13, 30);
    const u = towardHead(lean, 41, -13);
    const l = Math.hypot(b[0] - a[0], b[1] - a[1], 50);
    expect([0, 1, 2].map((i) => (b[i] - a[i]) / l - u[i]).every((e) => Math.abs(e) < 1e-14)).toBe(true);
  });

  it('a telecentric axis stands upright and lands where it is commanded at any height', () => {
    const straight = leanOf({ ...head, pivot: [null, 178] });
    expect(beamAt(straight, 30, 20, 40)[0]).toBe(30);
    expect(towardHead(straight, 30, 0)).toEqual([-0, -0, 1]);
    expect(beamAt(straight, 30, 20, 40)[1]).not.toBe(20);
  });

  it('heights at a pivot are beyond every command, below it they are not', () => {
    expect(belowPivots(lean, 177)).toBe(true);
    expect(belowPivots(lean, 178)).toBe(false);
    expect(belowPivots(leanOf({ ...head, pivot: [null, null] }), 1e6)).toBe(true);
  });

  it.each([
    { flipX: true },
    { flipY: true },
    { swap: true },
    { turn: 0.1 },
    { scale: 1.01 },
    { scale: [1, 0.99] as [number, number] },
  ])('a head with axes %j is refused, not ignored', (axes) => {
    let code = '';
    try {
      leanOf({ ...head, axes });
    } catch (error) {
      if (error instanceof InputError) code = error.code;
    }
    expect(code).toBe('not-yet');
  });

  it('axes that change nothing change nothing', () => {
    expect(leanOf({ ...head, axes: { swap: false, turn: 0, scale: [1, 1] } })).toEqual(lean);
  });
});
