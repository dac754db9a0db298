import { describe, expect, test } from 'vitest';
import type { Vec3 } from '../../src/core/base/vec.ts';
import {
  axesOf,
  between,
  type Eye,
  fitted,
  lookingAt,
  orbited,
  panned,
  rayThrough,
  seenAt,
  VIEWS,
  zoomed,
} from '../../src/view/eye.ts';

const eye: Eye = { target: [3, -5, 2], yaw: 0.7, pitch: 0.4, half: 20 };
const aspect = 1.6;
const dot = (a: Vec3, b: Vec3) => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];

describe('the eye', () => {
  test.each(Object.keys(VIEWS) as (keyof typeof VIEWS)[])(
    '%s has right-handed axes of unit length',
    (name) => {
      const { right, up, back } = axesOf({ ...eye, ...VIEWS[name] });
      for (const v of [right, up, back]) expect(dot(v, v)).toBeCloseTo(1, 12);
      expect(right[1] * up[2] - right[2] * up[1]).toBeCloseTo(back[0], 12);
      expect(right[2] * up[0] - right[0] * up[2]).toBeCloseTo(back[1], 12);
      expect(right[0] * up[1] - right[1] * up[0]).toBeCloseTo(back[2], 12);
    },
  );

  test('the beam’s eye looks down with +X to the right and +Y up: nothing is mirrored', () => {
    const { right, up, back } = axesOf({ ...eye, ...VIEWS.beam });
    for (const [k, v] of right.entries()) expect(v).toBeCloseTo([1, 0, 0][k]!, 12);
    for (const [k, v] of up.entries()) expect(v).toBeCloseTo([0, 1, 0][k]!, 12);
    for (const [k, v] of back.entries()) expect(v).toBeCloseTo([0, 0, 1][k]!, 12);
  });

  test('a ray through a place of the viewport passes what is seen there', () => {
    for (const [x, y] of [
      [0, 0],
      [0.8, -0.3],
      [-1, 1],
    ] as const) {
      const { origin, direction } = rayThrough(eye, x, y, aspect, 500);
      const p = [0, 1, 2].map((k) => origin[k]! + 470 * direction[k]!) as unknown as Vec3;
      const [a, b] = seenAt(eye, p, aspect);
      expect(a).toBeCloseTo(x, 12);
      expect(b).toBeCloseTo(y, 12);
    }
  });

  test('zooming keeps what lies under the pointer where it is', () => {
    const [x, y] = [0.6, -0.4];
    const { origin } = rayThrough(eye, x, y, aspect, 0);
    const near = zoomed(eye, 0.5, x, y, aspect);
    const [a, b] = seenAt(near, origin, aspect);
    expect([a, b].map((v) => Number(v.toFixed(9)))).toEqual([x, y]);
    expect(near.half).toBe(10);
  });

  test('dragging moves the picture with the hand', () => {
    const p: Vec3 = [4, 4, 4];
    const [x, y] = seenAt(eye, p, aspect);
    // 40 px right and 25 px down of a picture 500 px high.
    const [a, b] = seenAt(panned(eye, 40, 25, 500), p, aspect);
    expect(a - x).toBeCloseTo(40 / (250 * aspect), 9);
    expect(b - y).toBeCloseTo(-25 / 250, 9);
  });

  test('turning never goes over the pole', () => {
    expect(orbited(eye, 0, 1e5).pitch).toBe(Math.PI / 2);
    expect(orbited(eye, 0, -1e5).pitch).toBe(-Math.PI / 2);
  });

  test('a fitted ball is seen whole in high and in wide windows', () => {
    for (const shape of [0.5, 1, 2]) {
      const e = fitted(eye, [1, 2, 3], 10, shape);
      expect(e.half).toBeGreaterThan(10);
      expect(e.half * shape).toBeGreaterThan(10);
    }
  });

  test('looking at a place puts it in the middle, seen along its normal', () => {
    const n: Vec3 = [0.48, -0.64, 0.6];
    const e = lookingAt(eye, [7, 8, 9], n);
    for (const [k, v] of axesOf(e).back.entries()) expect(v).toBeCloseTo(n[k]!, 9);
    expect(seenAt(e, [7, 8, 9], aspect).map((v) => Math.abs(v))).toEqual([0, 0]);
  });

  test('a glide ends where it should and turns the shorter way', () => {
    const to: Eye = { ...eye, yaw: eye.yaw + 2 * Math.PI - 0.4, half: 5 };
    expect(between(eye, to, 0).half).toBe(20);
    expect(between(eye, to, 1).half).toBeCloseTo(5, 12);
    expect(between(eye, to, 1).yaw).toBeCloseTo(eye.yaw - 0.4, 9);
  });
});
