/** What tests of Gerber share: files written line by line, and what a drawing covers. */
import { quiet } from '../../../src/core/base/run-context.ts';
import {
  DEFAULTS,
  type Drawing,
  type DrawingOptions,
  type Shape,
} from '../../../src/core/drawing/drawing.ts';
import { type Flat, ringArea } from '../../../src/core/drawing/flat.ts';
import { readGerber } from '../../../src/core/drawing/gerber.ts';
import { flatForTests } from '../helpers/flat.ts';

export const MM = ['%FSLAX46Y46*%', '%MOMM*%'];

export async function read(
  lines: readonly string[],
  options: Partial<DrawingOptions> = {},
): Promise<Drawing> {
  return readGerber(lines.join('\n'), 'a.gbr', { ...DEFAULTS, ...options }, quiet, await flatForTests());
}

/** mm²; of a stroke in closed form: its length, and half a disc or half a square at each end. For straight ones. */
export function areaOf({ figure }: Shape): number {
  if (figure.kind === 'area') return figure.rings.reduce((s, r) => s + ringArea(r), 0);
  const { points: p, width: w, closed } = figure;
  if (closed || p.length !== 4) throw new Error('only for straight strokes');
  const length = Math.hypot(p[2] - p[0], p[3] - p[1]);
  return (
    length * w + (figure.ends === 'round' ? (Math.PI * w * w) / 4 : figure.ends === 'square' ? w * w : 0)
  );
}

export const box = (shapes: readonly Shape[]): [number, number, number, number] => {
  const b: [number, number, number, number] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const { figure } of shapes) {
    const out = figure.kind === 'stroke' ? figure.width / 2 : 0;
    for (const r of figure.kind === 'stroke' ? [figure.points] : figure.rings)
      for (let i = 0; i < r.length; i += 2) {
        b[0] = Math.min(b[0], r[i] - out);
        b[1] = Math.min(b[1], r[i + 1] - out);
        b[2] = Math.max(b[2], r[i] + out);
        b[3] = Math.max(b[3], r[i + 1] + out);
      }
  }
  return b;
};

/** Rings that together cover what the shapes cover. */
export async function covered(
  flat: Flat,
  shapes: readonly Shape[],
  tolerance: number,
): Promise<Float64Array[]> {
  const { outline } = await import('../../../src/core/drawing/gerber-marks.ts');
  return flat.union(shapes.flatMap((s) => flat.union(outline(s.figure, tolerance, () => {}))));
}
