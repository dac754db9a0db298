/** Where a viewBox goes (SVG 2, 8.6 and 8.7), and how large a drawing is on paper. */
import { BadShape } from './findings.ts';
import { type Matrix, scaling, times, translation } from './matrix.ts';
import { isPhysical, type Length, millimetres, PX, readLength } from './svg-length.ts';
import { numbers } from './svg-path.ts';

export interface Box {
  x: number;
  y: number;
  width: number;
  height: number;
}

/** @throws BadShape `bad-size` */
export function readViewBox(text: string): Box {
  const v = numbers(text, 'bad-size');
  if (v.length !== 4 || !(v[2] > 0 && v[3] > 0))
    throw new BadShape('bad-size', `the viewBox "${text.slice(0, 40)}" has no area`);
  return { x: v[0], y: v[1], width: v[2], height: v[3] };
}

/**
 * Units of the viewBox → units around it.
 * @param to      where it goes, in units around it
 * @param aspect  value of preserveAspectRatio; null for the default, xMidYMid meet
 * @throws BadShape `bad-size`
 */
export function fitted(box: Box, to: Box, aspect: string | null): Matrix {
  let [sx, sy] = [to.width / box.width, to.height / box.height];
  let [x, y] = [to.x, to.y];
  const words = (aspect ?? '').split(/\s+/).filter((w) => w !== '' && w !== 'defer');
  const [align = 'xMidYMid', how = 'meet'] = words;
  if (align !== 'none') {
    const share = /^x(Min|Mid|Max)Y(Min|Mid|Max)$/.exec(align);
    if (!share || (how !== 'meet' && how !== 'slice'))
      throw new BadShape('bad-size', `preserveAspectRatio "${aspect?.slice(0, 40)}" cannot be read`);
    sx = sy = how === 'slice' ? Math.max(sx, sy) : Math.min(sx, sy);
    x += (to.width - sx * box.width) * SHARE[share[1]];
    y += (to.height - sy * box.height) * SHARE[share[2]];
  }
  return times(times(translation(x, y), scaling(sx, sy)), translation(-box.x, -box.y));
}

const SHARE: Record<string, number> = { Min: 0, Mid: 0.5, Max: 1 };

export interface Page {
  /** User units → mm on the page, y still down. */
  toMm: Matrix;
  /** What percentages are shares of, user units; null where the drawing does not say. */
  view: Box | null;
  /** No size in units of length: a px was taken to be this many mm. Null where the file says it. */
  assumed: number | null;
}

/**
 * Size of the outermost `svg`. A page without a size is as large as its viewBox in px, as viewers take it.
 * @param unit  mm in one px, for a page that gives no size in units of length; null for the 96 px an inch of CSS
 * @throws BadShape `bad-size`, `bad-number`
 */
export function readPage(get: (name: string) => string | null, unit: number | null): Page {
  const viewBox = get('viewBox');
  const box = viewBox === null ? null : readViewBox(viewBox);
  const width = side(get('width'), 'width');
  const height = side(get('height'), 'height');
  const said = [width, height].some((l) => l !== null && isPhysical(l));
  const px = said ? PX : (unit ?? PX);
  const assumed = said ? null : px;
  const [w, h] = [width && millimetres(width, px), height && millimetres(height, px)];
  if (!box) {
    const view = w && h ? { x: 0, y: 0, width: w / px, height: h / px } : null;
    return { toMm: scaling(px, px), view, assumed };
  }
  // One side alone fixes the other by the viewBox's own shape.
  const page = {
    x: 0,
    y: 0,
    width: w ?? (h ? (h * box.width) / box.height : box.width * px),
    height: h ?? (w ? (w * box.height) / box.width : box.height * px),
  };
  return { toMm: fitted(box, page, get('preserveAspectRatio')), view: box, assumed };
}

/** A share of a window that nobody knows is no size. */
function side(text: string | null, name: string): Length | null {
  if (text === null || text.trim() === '' || text.trim() === 'auto') return null;
  const length = readLength(text);
  if (length.unit === '%') return null;
  if (!(length.value > 0))
    throw new BadShape('bad-size', `the ${name} "${text.slice(0, 20)}" is not above 0`);
  return length;
}
