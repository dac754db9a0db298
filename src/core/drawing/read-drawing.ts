/** Which reader a drawing needs, by what it says of itself and by its name. */
import { InputError } from '../base/news.ts';
import type { RunContext } from '../base/run-context.ts';
import { decodeUtf8 } from '../base/utf8.ts';
import type { Drawing, DrawingOptions } from './drawing.ts';
import { readDrill } from './drill.ts';
import { readDxf } from './dxf.ts';
import type { Flat } from './flat.ts';
import { readGerber } from './gerber.ts';
import { readSvg } from './svg.ts';

/** So much of a file says what it is. */
const HEAD = 4096;

/**
 * @param file  name for messages
 * @throws InputError `unknown-drawing`, and what the reader throws
 */
export function readDrawing(
  bytes: Uint8Array,
  file: string,
  options: DrawingOptions,
  flat: Flat,
  ctx: RunContext,
): Drawing {
  const text = decodeUtf8(bytes);
  const head = text.slice(0, HEAD);
  if (/<svg[\s>]/i.test(head) || /\.svg$/i.test(file)) return readSvg(text, file, options, flat, ctx);
  if (/^\s*0\s*\r?\n\s*SECTION/i.test(head) || /\.dxf$/i.test(file))
    return readDxf(text, file, options, flat, ctx);
  if (/^M48\s*$/m.test(head) || /\.(drl|xln)$/i.test(file)) return readDrill(text, file, options, ctx);
  if (/%(FS|MO|AD|TF)/.test(head) || /\.(gbr|ger|g[tb][lso])$/i.test(file))
    return readGerber(text, file, options, ctx, flat);
  throw new InputError({
    code: 'unknown-drawing',
    file,
    place: '',
    problem: 'this is no drawing that can be read',
    mend: 'give an SVG, DXF or Gerber drawing, or a drill file',
  });
}
