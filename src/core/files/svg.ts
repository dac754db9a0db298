/**
 * Scan file as SVG (SVG 2): the field in mm, a group for each process class, in it outline and fill. y is
 * written as -Y, and there are no transforms (job.md).
 */
import type { Head } from '../project/schema.ts';
import type { LayerScan, Stroke } from '../scan/strokes.ts';
import { coordinate, plainNumber } from './numbers.ts';

/** @param spot  width at which strokes are drawn, mm: for the eye alone */
export function layerSvg(layer: LayerScan, head: Pick<Head, 'field'>, spot: number): string {
  const [fx, fy] = head.field;
  const used = new Map<string, number>();
  const lines = [
    '<?xml version="1.0" encoding="UTF-8"?>',
    `<svg xmlns="http://www.w3.org/2000/svg" width="${plainNumber(fx)}mm" height="${plainNumber(fy)}mm" viewBox="${plainNumber(-fx / 2)} ${plainNumber(-fy / 2)} ${plainNumber(fx)} ${plainNumber(fy)}">`,
  ];
  layer.classes.forEach((c, i) => {
    lines.push(
      `<g id="class-${i + 1}" data-speed-mm-s="${plainNumber(c.speed)}" data-power="${plainNumber(c.power)}" data-passes="${c.passes}" fill="none" stroke="#000000" stroke-width="${coordinate(spot)}">`,
    );
    for (const kind of ['outline', 'fill'] as const) {
      lines.push(`<g id="class-${i + 1}-${kind}" data-kind="${kind}">`);
      for (const stroke of layer.strokes)
        if (stroke.processClass === i && stroke.kind === kind) lines.push(polyline(stroke, used));
      lines.push('</g>');
    }
    lines.push('</g>');
  });
  lines.push('</svg>');
  return lines.join('\n') + '\n';
}

function polyline(stroke: Stroke, used: Map<string, number>): string {
  const base = xmlId(stroke.element);
  const n = (used.get(base) ?? 0) + 1;
  used.set(base, n);
  const points: string[] = [];
  for (let i = 0; i < stroke.points.length; i += 2)
    points.push(`${coordinate(stroke.points[i])},${coordinate(-stroke.points[i + 1])}`);
  return `<polyline id="${base}.${n}" points="${points.join(' ')}"/>`;
}

/**
 * An XML name made from an element's id, different for different ids: what a name may not hold is written as its
 * code point between underscores, as is the underscore itself.
 */
export function xmlId(id: string): string {
  let out = 'e-';
  for (const c of id) out += /[A-Za-z0-9-]/.test(c) ? c : `_${c.codePointAt(0)!.toString(16)}_`;
  return out;
}
