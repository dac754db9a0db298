/** Scan file as CSV: one row a point, in the order in which it is burnt (job.md). */
import type { LayerScan } from '../scan/strokes.ts';
import { coordinate, plainNumber } from './numbers.ts';

export const CSV_HEADER = 'x_mm,y_mm,mark,speed_mm_s,element,power';

export function layerCsv(layer: LayerScan): string {
  const rows: string[] = [CSV_HEADER];
  for (const stroke of layer.strokes) {
    const c = layer.classes[stroke.processClass];
    const tail = `${plainNumber(c.speed)},${quoted(stroke.element)},${plainNumber(c.power)}`;
    for (let i = 0; i < stroke.points.length; i += 2)
      rows.push(
        `${coordinate(stroke.points[i])},${coordinate(stroke.points[i + 1])},${i === 0 ? 0 : 1},${tail}`,
      );
  }
  return rows.join('\n') + '\n';
}

/** RFC 4180. */
const quoted = (text: string): string => (/[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text);
