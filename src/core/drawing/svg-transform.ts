/** Lists of transforms (SVG 2, 8.5; CSS Transforms 1): the last is applied first. */
import { tangent } from '../base/trig.ts';
import { BadShape } from './findings.ts';
import { IDENTITY, type Matrix, rotation, scaling, times, translation } from './matrix.ts';
import { numbers } from './svg-path.ts';

/** @param text  such as `translate(10,0) scale(2)`. @throws BadShape `bad-transform` */
export function readTransform(text: string): Matrix {
  let m = IDENTITY;
  const one = /[\s,]*([a-zA-Z]+)\s*\(([^()]*)\)[\s,]*/y;
  const whole = text.trim();
  if (whole === 'none') return m;
  while (one.lastIndex < whole.length) {
    const found = one.exec(whole);
    const step = found && single(found[1], numbers(found[2], 'bad-transform'));
    if (!step) throw new BadShape('bad-transform', `the transform "${whole.slice(0, 60)}" cannot be read`);
    m = times(m, step);
  }
  return m;
}

function single(name: string, v: number[]): Matrix | null {
  const given = (...counts: number[]): boolean => counts.includes(v.length);
  if (name === 'matrix' && given(6)) return v as unknown as Matrix;
  if (name === 'translate' && given(1, 2)) return translation(v[0], v[1] ?? 0);
  if (name === 'scale' && given(1, 2)) return scaling(v[0], v[1] ?? v[0]);
  if (name === 'skewX' && given(1)) return [1, 0, slope(v[0]), 1, 0, 0];
  if (name === 'skewY' && given(1)) return [1, slope(v[0]), 0, 1, 0, 0];
  if (name === 'rotate' && given(1)) return rotation(v[0]);
  if (name === 'rotate' && given(3))
    return times(times(translation(v[1], v[2]), rotation(v[0])), translation(-v[1], -v[2]));
  return null;
}

const slope = (degrees: number): number => tangent((degrees * Math.PI) / 180);
