/** The basic shapes as paths (SVG 2, ch. 10), piece by piece in the order that the specification gives. */
import { BadShape } from './findings.ts';
import type { Pen } from './flatten.ts';
import { lengthOf } from './svg-length.ts';
import { drawPath, numbers } from './svg-path.ts';
import type { Box } from './svg-viewport.ts';
import type { XmlNode } from './svg-xml.ts';

export const SHAPES: ReadonlySet<string> = new Set([
  'path',
  'rect',
  'circle',
  'ellipse',
  'line',
  'polyline',
  'polygon',
]);

/**
 * @param view  what shares are of, user units
 * @throws BadShape `bad-number`, `bad-path`, `out-of-range`
 */
export function drawShape(node: XmlNode, view: Box | null, pen: Pen): void {
  const { name, attributes } = node;
  const whole = { x: view?.width, y: view?.height, r: view ? diagonalOf(view) : undefined };
  const length = (attribute: string, along: 'x' | 'y' | 'r'): number | null => {
    const text = attributes.get(attribute);
    if (text === undefined || text.trim() === 'auto' || text.trim() === '') return null;
    const value = lengthOf(text, whole[along] ?? Number.NaN);
    if (Number.isNaN(value))
      throw new BadShape('bad-number', `${attribute} is a share of a page whose size is not known`);
    return value;
  };
  const place = (attribute: string, along: 'x' | 'y'): number => length(attribute, along) ?? 0;
  /** A size: below 0 it is a mistake. */
  const size = (attribute: string, along: 'x' | 'y' | 'r'): number | null => {
    const value = length(attribute, along);
    if (value !== null && value < 0) throw new BadShape('bad-number', `${attribute} is below 0`);
    return value;
  };

  if (name === 'path') drawPath(attributes.get('d') ?? '', pen);
  else if (name === 'line') {
    pen.move(place('x1', 'x'), place('y1', 'y'));
    pen.line(place('x2', 'x'), place('y2', 'y'));
  } else if (name === 'polyline' || name === 'polygon')
    drawPoints(attributes.get('points') ?? '', name === 'polygon', pen);
  else if (name === 'circle') {
    const r = size('r', 'r') ?? 0;
    drawEllipse(place('cx', 'x'), place('cy', 'y'), r, r, pen);
  } else if (name === 'ellipse') {
    const [rx, ry] = [size('rx', 'x'), size('ry', 'y')];
    drawEllipse(place('cx', 'x'), place('cy', 'y'), rx ?? ry ?? 0, ry ?? rx ?? 0, pen);
  } else {
    const [w, h] = [size('width', 'x') ?? 0, size('height', 'y') ?? 0];
    const [rx, ry] = [size('rx', 'x'), size('ry', 'y')];
    const [a, b] = [Math.min(rx ?? ry ?? 0, w / 2), Math.min(ry ?? rx ?? 0, h / 2)];
    drawRect(place('x', 'x'), place('y', 'y'), w, h, a, b, pen);
  }
}

/** Shares in what has no direction of its own are of the diagonal over √2. */
export const diagonalOf = (view: Box): number => Math.hypot(view.width, view.height) / Math.SQRT2;

function drawPoints(text: string, closed: boolean, pen: Pen): void {
  const v = numbers(text, 'bad-number');
  if (v.length % 2 !== 0) throw new BadShape('bad-number', 'its points end with half a point');
  for (let i = 0; i < v.length; i += 2) {
    if (i === 0) pen.move(v[0], v[1]);
    else pen.line(v[i], v[i + 1]);
  }
  if (closed && v.length > 0) pen.close();
}

function drawEllipse(cx: number, cy: number, rx: number, ry: number, pen: Pen): void {
  if (rx === 0 || ry === 0) return;
  pen.move(cx + rx, cy);
  pen.arc({ centre: [cx, cy], p: [rx, 0], q: [0, ry], start: 0, sweep: 2 * Math.PI }, cx + rx, cy);
  pen.close();
}

function drawRect(x: number, y: number, w: number, h: number, rx: number, ry: number, pen: Pen): void {
  if (w === 0 || h === 0) return;
  const [r, b] = [x + w, y + h];
  if (rx === 0 || ry === 0) {
    pen.move(x, y);
    pen.line(r, y);
    pen.line(r, b);
    pen.line(x, b);
    pen.close();
    return;
  }
  const corner = (cx: number, cy: number, quarter: number, toX: number, toY: number): void =>
    pen.arc(
      { centre: [cx, cy], p: [rx, 0], q: [0, ry], start: (quarter * Math.PI) / 2, sweep: Math.PI / 2 },
      toX,
      toY,
    );
  pen.move(x + rx, y);
  pen.line(r - rx, y);
  corner(r - rx, y + ry, 3, r, y + ry);
  pen.line(r, b - ry);
  corner(r - rx, b - ry, 0, r - rx, b);
  pen.line(x + rx, b);
  corner(x + rx, b - ry, 1, x, b - ry);
  pen.line(x, y + ry);
  corner(x + rx, y + ry, 2, x + rx, y);
  pen.close();
}
