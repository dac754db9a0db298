/** Pictures of a setup's layers for the job sheet, drawn from their strokes: what the beam will follow, seen from the head. */
import type { Head } from '../project/schema.ts';
import type { LayerScan } from '../scan/strokes.ts';

/** Room around the strokes, as a share of their size. */
const MARGIN = 0.06;

type Box = readonly [number, number, number, number];

/** Outlines of all layers of a setup, drawn pale under each picture so that the eye finds its place; used by its id. */
export function setupGhost(scans: readonly LayerScan[], id: string): string {
  const d = scans.flatMap((s) => s.strokes.filter((k) => k.kind === 'outline').map((k) => path(k.points)));
  return `<svg class="defs" aria-hidden="true"><defs><path id="${id}" d="${d.join('')}"/></defs></svg>`;
}

/** All pictures of a setup show the same piece of the field, so that layers can be compared. */
export function layerPicture(
  scan: LayerScan,
  view: Box,
  head: Pick<Head, 'field'>,
  ghost: string,
  label: string,
): string {
  const [fx, fy] = head.field;
  const [x0, y0, x1, y1] = view;
  const size = Math.max(x1 - x0, y1 - y0, 1);
  const pad = size * MARGIN;
  const box = [x0 - pad, -y1 - pad, x1 - x0 + 2 * pad, y1 - y0 + 2 * pad];
  const strokes = scan.strokes.map((s) => path(s.points)).join('');
  const bar = niceLength(size / 4);
  return `<figure><svg class="picture" role="img" aria-label="${label}" viewBox="${box.map(n).join(' ')}">
<rect class="frame" x="${n(-fx / 2)}" y="${n(-fy / 2)}" width="${n(fx)}" height="${n(fy)}" stroke-width="${n(size / 300)}"/>
<use class="ghost" href="#${ghost}" stroke-width="${n(size / 300)}"/>
<path class="stroke" stroke-width="${n(size / 600)}" d="${strokes}"/>
<path class="cross" d="M${n(-size / 40)} 0H${n(size / 40)}M0 ${n(-size / 40)}V${n(size / 40)}" stroke-width="${n(size / 200)}"/>
<path class="cross" d="M${n(x0)} ${n(-y0 + pad / 2)}h${n(bar)}" stroke-width="${n(size / 120)}"/>
</svg><figcaption>Seen from the head: +X right, +Y up. The bar is ${bar} mm, the cross the field’s middle.</figcaption></figure>`;
}

/** Least and greatest command of some layers: x0, y0, x1, y1. */
export function extentOf(...scans: LayerScan[]): [number, number, number, number] {
  let [x0, y0, x1, y1] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const scan of scans)
    for (const s of scan.strokes)
      for (let i = 0; i < s.points.length; i += 2) {
        x0 = Math.min(x0, s.points[i]);
        x1 = Math.max(x1, s.points[i]);
        y0 = Math.min(y0, s.points[i + 1]);
        y1 = Math.max(y1, s.points[i + 1]);
      }
  return x0 > x1 ? [0, 0, 0, 0] : [x0, y0, x1, y1];
}

function path(points: Float64Array): string {
  let d = `M${n(points[0])} ${n(-points[1])}`;
  for (let i = 2; i < points.length; i += 2) d += `L${n(points[i])} ${n(-points[i + 1])}`;
  return d;
}

/** 1, 2 or 5 times a power of ten, not above x. */
function niceLength(x: number): number {
  const p = 10 ** Math.floor(Math.log10(x));
  const m = x / p;
  return (m >= 5 ? 5 : m >= 2 ? 2 : 1) * p;
}

/** A hundredth of a millimetre is more than a picture can show. */
const n = (x: number): string => String(Math.round(x * 100) / 100 + 0);
