import { expect, test } from 'vitest';
import { partPoint } from '../../src/core/base/brands.ts';
import { type Pose, poseFrame } from '../../src/core/base/pose.ts';
import { turned } from '../../src/store/turns.ts';

const start: Pose = {
  rotate: [0.18257418583505536, 0.3651483716701107, 0.5477225575051661, 0.7302967433402214],
  move: [3, -7, 2],
};
const p = partPoint([1.5, -2.25, 4]);

test.each([
  // A quarter turn, counter-clockwise seen from the tip of the axis: Y → Z, Z → X, X → Y.
  [0, ([x, y, z]: readonly number[]) => [x, -z!, y]],
  [1, ([x, y, z]: readonly number[]) => [z, y, -x!]],
  [2, ([x, y, z]: readonly number[]) => [-y!, x, z]],
] as const)('a quarter turn about axis %i turns every point about the bench’s origin', (axis, expected) => {
  const before = poseFrame(start).point(p);
  const after = poseFrame(turned(start, axis, 90)).point(p);
  const want = expected(before) as number[];
  for (const [k, v] of after.entries()) expect(v).toBeCloseTo(want[k]!, 5);
});

test('four quarter turns change nothing', () => {
  let pose = start;
  for (let i = 0; i < 4; i++) pose = turned(pose, 1, 90);
  const [a, b] = [poseFrame(start).point(p), poseFrame(pose).point(p)];
  for (const [k, v] of a.entries()) expect(b[k]).toBeCloseTo(v, 5);
});
