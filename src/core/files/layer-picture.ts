/** Picture of a layer for the job sheet, drawn from its strokes: what the beam will follow, seen from the head. */
import type { Head } from '../project/schema.ts';
import type { LayerScan } from '../scan/strokes.ts';

/** Room around the strokes, as a share of their size. */
const MARGIN = 0.06;

export function layerPicture(scan: LayerScan, head: Pick<Head, 'field'>, label: string): string {
  const [fx, fy] = head.field;
  const [x0, y0, x1, y1] = extentOf(scan);
  const size = Math.max(x1 - x0, y1 - y0, 1);
  const pad = size * MARGIN;
  const box = [x0 - pad, -y1 - pad, x1 - x0 + 2 * pad, y1 - y0 + 3 * pad];
  const path: string[] = [];
  for (const s of scan.strokes) {
    path.push(`M${n(s.points[0])} ${n(-s.points[1])}`);
    for (let i = 2; i < s.points.length; i += 2) path.push(`L${n(s.points[i])} ${n(-s.points[i + 1])}`);
  }
  const font = size / 22;
  const bar = niceLength(size / 4);
  const bx = x0;
  const by = -y0 + 1.4 * pad;
  return `<svg class="picture" role="img" aria-label="${label}" viewBox="${box.map(n).join(' ')}">
<rect class="frame" x="${n(-fx / 2)}" y="${n(-fy / 2)}" width="${n(fx)}" height="${n(fy)}" stroke-width="${n(size / 300)}"/>
<path class="cross" d="M${n(-size / 40)} 0H${n(size / 40)}M0 ${n(-size / 40)}V${n(size / 40)}" stroke-width="${n(size / 200)}"/>
<path class="stroke" stroke-width="${n(size / 600)}" d="${path.join('')}"/>
<path class="cross" d="M${n(bx)} ${n(by)}h${n(bar)}" stroke-width="${n(size / 120)}"/><text class="tag" x="${n(bx + bar + pad / 3)}" y="${n(by + font / 3)}" font-size="${n(font)}">${bar} mm · +X right, +Y up, × is the field’s middle</text>
</svg>`;
}

/** Least and greatest command of a layer: x0, y0, x1, y1. */
export function extentOf(scan: LayerScan): [number, number, number, number] {
  let [x0, y0, x1, y1] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const s of scan.strokes)
    for (let i = 0; i < s.points.length; i += 2) {
      x0 = Math.min(x0, s.points[i]);
      x1 = Math.max(x1, s.points[i]);
      y0 = Math.min(y0, s.points[i + 1]);
      y1 = Math.max(y1, s.points[i + 1]);
    }
  return x0 > x1 ? [0, 0, 0, 0] : [x0, y0, x1, y1];
}

/** 1, 2 or 5 times a power of ten, not above x. */
function niceLength(x: number): number {
  const p = 10 ** Math.floor(Math.log10(x));
  const m = x / p;
  return (m >= 5 ? 5 : m >= 2 ? 2 : 1) * p;
}

const n = (x: number): string => String(Math.round(x * 1000) / 1000 + 0);
