/**
 * Reads an SVG scan file (job.md, "Scan files"), also after another program has saved it again. The one file of this
 * room that knows the XML library.
 */
import { DOMParser, type Element } from '@xmldom/xmldom';
import { InputError } from '../base/news.ts';
import { decodeUtf8 } from '../base/utf8.ts';
import { type BurnPath, burnPathBuilder } from './burn-path.ts';
import { fieldMatrix } from './svg-page.ts';
import {
  BadShape,
  type Draw,
  drawPath,
  drawPoints,
  type Matrix,
  readTransform,
  times,
} from './svg-shapes.ts';

const SVG = 'http://www.w3.org/2000/svg';
/** Elements that hold strokes in them. */
const GROUPS = new Set(['svg', 'g', 'a', 'switch']);
/** Elements of which nothing is burnt. */
const SILENT = new Set([
  'title',
  'desc',
  'metadata',
  'style',
  'script',
  'defs',
  'symbol',
  'clipPath',
  'mask',
  'marker',
  'pattern',
]);

interface Process {
  speed: number;
  power: number;
}

/**
 * Each stroke is a chain of its own; speed and power come from the nearest group around it that names them. The passes
 * stand in the file one after the other, so `data-passes` multiplies nothing.
 *
 * @throws InputError `bad-svg` with the line
 */
export function readSvg(bytes: Uint8Array, file: string): BurnPath {
  const root = parse(decodeUtf8(bytes), file);
  const path = burnPathBuilder(file);
  const page = at(root, file, () =>
    fieldMatrix(
      root.getAttribute('width'),
      root.getAttribute('height'),
      root.getAttribute('viewBox'),
      root.getAttribute('preserveAspectRatio'),
    ),
  );
  walk(root, page, null, path, file);
  return path.done();
}

function parse(text: string, file: string): Element {
  const broken = (line: number, problem: string) =>
    new InputError({
      code: 'bad-svg',
      file,
      place: line > 0 ? `line ${line}` : '',
      problem,
      mend: 'write the scan files again',
    });
  let first: InputError | null = null;
  let root: Element | null = null;
  try {
    root = new DOMParser({
      onError: (_level, message, context) => {
        first ??= broken(
          context?.locator?.lineNumber ?? 0,
          `the XML is broken (${message.split('\n')[0].trim()})`,
        );
      },
    }).parseFromString(text.charCodeAt(0) === 0xfeff ? text.slice(1) : text, 'image/svg+xml').documentElement;
  } catch (error) {
    if (!first) throw broken(0, `the XML is broken (${(error as Error).message.split('\n')[0].trim()})`);
  }
  if (first) throw first;
  if (root?.localName !== 'svg' || (root.namespaceURI !== SVG && root.namespaceURI))
    throw broken(1, 'this is not an SVG drawing');
  return root;
}

function walk(
  element: Element,
  outer: Matrix,
  process: Process | null,
  path: ReturnType<typeof burnPathBuilder>,
  file: string,
): void {
  if (element.getAttribute('display') === 'none') return;
  const transform = element.getAttribute('transform');
  const matrix = transform ? at(element, file, () => times(outer, readTransform(transform))) : outer;
  const inner = processOf(element, process, file);
  for (let node = element.firstChild; node; node = node.nextSibling) {
    if (node.nodeType !== 1) continue;
    const child = node as Element;
    const name = child.localName ?? '';
    if (child.namespaceURI && child.namespaceURI !== SVG) continue; // another program's notes
    if (SILENT.has(name)) continue;
    if (GROUPS.has(name)) walk(child, matrix, inner, path, file);
    else stroke(child, name, matrix, inner, path, file);
  }
}

function stroke(
  element: Element,
  name: string,
  outer: Matrix,
  around: Process | null,
  path: ReturnType<typeof burnPathBuilder>,
  file: string,
): void {
  if (element.getAttribute('display') === 'none') return;
  const process = processOf(element, around, file);
  at(element, file, () => {
    const transform = element.getAttribute('transform');
    const m = transform ? times(outer, readTransform(transform)) : outer;
    const draw: Draw = (x, y, move) => {
      if (!process) throw new BadShape('no group around this stroke names data-speed-mm-s and data-power');
      path.add(m[0] * x + m[2] * y + m[4], m[1] * x + m[3] * y + m[5], !move, process.speed, process.power);
    };
    const number = (attribute: string) => Number(element.getAttribute(attribute) ?? 0);
    if (name === 'polyline' || name === 'polygon')
      drawPoints(element.getAttribute('points') ?? '', name === 'polygon', draw);
    else if (name === 'path') drawPath(element.getAttribute('d') ?? '', draw);
    else if (name === 'line') {
      draw(number('x1'), number('y1'), true);
      draw(number('x2'), number('y2'), false);
    } else throw new BadShape(`<${name}> is no stroke of a scan file`);
  });
}

function processOf(element: Element, around: Process | null, file: string): Process | null {
  const speed = element.getAttribute('data-speed-mm-s');
  const power = element.getAttribute('data-power');
  if (speed === null && power === null) return around;
  return at(element, file, () => {
    const process = {
      speed: speed === null ? (around?.speed ?? Number.NaN) : Number(speed),
      power: power === null ? (around?.power ?? 1) : Number(power),
    };
    if (!(process.speed > 0 && process.speed < Infinity))
      throw new BadShape(`data-speed-mm-s is "${speed ?? ''}"`);
    if (!(process.power >= 0 && process.power < Infinity))
      throw new BadShape(`data-power is "${power ?? ''}"`);
    return process;
  });
}

/** Says on which line of the file it went wrong. */
function at<T>(element: Element, file: string, work: () => T): T {
  try {
    return work();
  } catch (error) {
    if (!(error instanceof BadShape)) throw error;
    throw new InputError({
      code: 'bad-svg',
      file,
      place: `line ${element.lineNumber ?? '?'}`,
      problem: error.message,
      mend: 'write the scan files again',
    });
  }
}
