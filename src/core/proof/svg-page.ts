/** From an SVG's own units to millimetres on its page (SVG 2, chapter 8; CSS Values: 1 in = 25.4 mm = 96 px). */
import { BadShape, type Matrix, scanner } from './svg-shapes.ts';

const MM: Record<string, number> = {
  mm: 1,
  cm: 10,
  in: 25.4,
  px: 25.4 / 96,
  '': 25.4 / 96,
  pt: 25.4 / 72,
  pc: 25.4 / 6,
  q: 0.25,
};

/**
 * User units → field commands. The middle of the page is the middle of the field, and the page's y runs down.
 * A page without a size is as large as its viewBox in px: what a program that draws it would do.
 *
 * @throws BadShape
 */
export function fieldMatrix(
  width: string | null,
  height: string | null,
  viewBox: string | null,
  align: string | null,
): Matrix {
  const box = viewBox === null ? null : readBox(viewBox);
  const w = width === null || width.trim() === '' ? (box ? box[2] * MM['px'] : Number.NaN) : length(width);
  const h = height === null || height.trim() === '' ? (box ? box[3] * MM['px'] : Number.NaN) : length(height);
  if (!(w > 0 && h > 0)) throw new BadShape('the drawing has neither a size nor a viewBox');
  if (!box) return [MM['px'], 0, 0, -MM['px'], -w / 2, h / 2];
  let sx = w / box[2];
  let sy = h / box[3];
  let [ax, ay] = [0, 0];
  const [how = 'xMidYMid', fit = 'meet'] = (align ?? '')
    .trim()
    .split(/\s+/)
    .filter((s) => s !== '' && s !== 'defer');
  if (how !== 'none') {
    const at = /^x(Min|Mid|Max)Y(Min|Mid|Max)$/.exec(how);
    if (!at) throw new BadShape(`preserveAspectRatio "${align}" cannot be read`);
    sx = sy = fit === 'slice' ? Math.max(sx, sy) : Math.min(sx, sy);
    const share = { Min: 0, Mid: 0.5, Max: 1 };
    ax = (w - sx * box[2]) * share[at[1] as 'Min'];
    ay = (h - sy * box[3]) * share[at[2] as 'Min'];
  }
  return [sx, 0, 0, -sy, ax - sx * box[0] - w / 2, h / 2 - (ay - sy * box[1])];
}

function readBox(text: string): [number, number, number, number] {
  const scan = scanner(text);
  const box = [scan.number(), scan.number(), scan.number(), scan.number()] as [
    number,
    number,
    number,
    number,
  ];
  if (!scan.ended() || !(box[2] > 0 && box[3] > 0))
    throw new BadShape(`the viewBox "${text}" cannot be used`);
  return box;
}

function length(text: string): number {
  const found = /^\s*([+-]?(?:\d+\.?\d*|\.\d+)(?:e[+-]?\d+)?)\s*([a-z]*)\s*$/i.exec(text);
  const unit = found ? MM[found[2].toLowerCase()] : undefined;
  if (!found || unit === undefined) throw new BadShape(`the length "${text}" cannot be read`);
  return Number(found[1]) * unit;
}
