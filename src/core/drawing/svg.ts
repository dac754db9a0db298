/**
 * SVG drawings (W3C SVG 2): strokes are traces as wide as they are drawn, fills are regions. Its y runs down, so v = -y, with
 * the page's upper left corner at (0, 0).
 */
import { InputError } from '../base/news.ts';
import type { RunContext } from '../base/run-context.ts';
import { areasOf, strokesOf } from './chains.ts';
import type { Drawing, DrawingOptions, Shape } from './drawing.ts';
import { BadShape, type Findings, findings, tooLarge } from './findings.ts';
import type { Flat } from './flat.ts';
import { type Chain, flatten } from './flatten.ts';
import { determinant, type Matrix, scaling, stretches, times, translation } from './matrix.ts';
import { lengthOf, PX } from './svg-length.ts';
import { diagonalOf, drawShape, SHAPES } from './svg-shapes.ts';
import { classesOf, INITIAL, type Sheet, type Style, styleOf, styleSheet } from './svg-style.ts';
import { readTransform } from './svg-transform.ts';
import { type Box, fitted, type Page, readPage, readViewBox } from './svg-viewport.ts';
import { MOST_DEPTH, readXml, tooDeep, type XmlNode } from './svg-xml.ts';
import { type Tangle, tangle } from './tangle.ts';

/** Elements drawn, those that `use` draws again counted each time: ten lines of `use` can ask for 10¹⁰. */
const MOST_DRAWN = 200_000;

/** Between one word to the run and the next, elements. */
const STRIDE = 1024;

/**
 * Shapes come in the order of the file. An element that is filled and stroked gives its regions first; a path of several
 * separate pieces gives a shape for each, with the same id. The layer is the nearest group's id, or else its class.
 *
 * @param options  `unit` counts for a drawing whose size is not in units of length: mm in one px; null means 96 px an inch
 * @param flat     fill rules are worked out by it
 * @throws InputError `broken-xml`, `not-svg`, `entities`, `too-large`, `too-deep`, `use-cycle`, `bad-path`, `bad-number`,
 *   `bad-transform`, `bad-size`, `out-of-range`, `too-tangled`, with the line
 */
export function readSvg(
  text: string,
  file: string,
  options: DrawingOptions,
  flat: Flat,
  ctx: RunContext,
): Drawing {
  const root = readXml(text, file);
  const found = findings(file, 'mend this element or export the drawing again');
  const page = found.at(`line ${root.line}`, () =>
    readPage((name) => root.attributes.get(name) ?? null, options.unit),
  );
  const byId = new Map<string, XmlNode>();
  const styles: XmlNode[] = [];
  collect(root, byId, styles);
  const shapes: Shape[] = [];
  const layers = new Set<string>();
  const sheet = found.at('', () => styleSheet(styles, found));
  if (page && sheet) {
    const walk: Walk = {
      ...{ file, options, flat, ctx, byId, sheet, shapes, layers },
      found,
      tangle: tangle(),
      drawn: 0,
    };
    if (page.assumed !== null) found.note('px-size', `line ${root.line}`, sizeNote(page.assumed, options));
    walkChildren(root, aroundRoot(root, page, walk), walk);
  }
  found.settle();
  return { file, shapes, holes: [], layers: [...layers], notes: found.notes() };
}

function sizeNote(px: number, options: DrawingOptions): string {
  const mm = Number(px.toPrecision(6));
  return options.unit === null
    ? `the drawing says no size in units of length: one px is taken for ${mm} mm, 96 px an inch`
    : `the drawing says no size in units of length: one px is taken for the ${mm} mm that were asked for`;
}

interface Walk {
  file: string;
  options: DrawingOptions;
  flat: Flat;
  tangle: Tangle;
  ctx: RunContext;
  found: Findings;
  byId: Map<string, XmlNode>;
  sheet: Sheet;
  shapes: Shape[];
  layers: Set<string>;
  drawn: number;
}

/** What an element finds around it. */
interface Around {
  /** User units → mm, v up. */
  matrix: Matrix;
  style: Style;
  view: Box | null;
  layer: string;
  /** Id of the `use` that draws this element alone. */
  usedAs: string | null;
  depth: number;
  /** Elements that are being drawn by `use`. */
  uses: readonly XmlNode[];
}

function collect(node: XmlNode, byId: Map<string, XmlNode>, styles: XmlNode[]): void {
  const id = node.attributes.get('id');
  if (id !== undefined && !byId.has(id)) byId.set(id, node);
  if (node.name === 'style') styles.push(node);
  for (const child of node.children) collect(child, byId, styles);
}

function aroundRoot(root: XmlNode, page: Page, walk: Walk): Around {
  const base: Around = {
    matrix: times(scaling(1, -1), page.toMm),
    style: INITIAL,
    view: page.view,
    layer: '',
    usedAs: null,
    depth: 0,
    uses: [],
  };
  // The root is no layer, whatever its id.
  return { ...inside(root, base, walk), layer: '' };
}

function walkChildren(node: XmlNode, around: Around, walk: Walk): void {
  for (const child of node.children) visit(child, around, walk);
}

function visit(node: XmlNode, around: Around, walk: Walk): void {
  const { found } = walk;
  const { name } = node;
  if (SILENT.has(name)) return;
  if (++walk.drawn > MOST_DRAWN) throw tooLarge(walk.file, placeOf(node), `more than ${MOST_DRAWN} elements`);
  if (walk.drawn % STRIDE === 0) walk.ctx.step('load', walk.drawn, 2 * walk.drawn);
  if (around.depth > MOST_DEPTH) throw tooDeep(walk.file, placeOf(node));
  if (hidden(node, walk)) return;
  if (name === 'g' || name === 'a' || name === 'use' || name === 'svg' || SHAPES.has(name))
    found.at(placeOf(node), () => {
      const here = inside(node, around, walk);
      if (name === 'use') drawUse(node, here, walk);
      else if (name === 'svg') walkChildren(node, viewport(node, null, here), walk);
      else if (SHAPES.has(name)) emit(node, here, walk);
      else walkChildren(node, here, walk);
    });
  else
    found.note(
      LEFT_OUT.has(name) ? name : 'unknown-element',
      placeOf(node),
      LEFT_OUT.get(name) ?? `<${name.slice(0, 40)}> is not understood and left out`,
    );
}

/** They draw nothing where they stand; where something refers to them, that is noted there. */
const SILENT: ReadonlySet<string> = new Set([
  '', // other vocabularies
  'defs',
  'symbol',
  'style',
  'title',
  'desc',
  'metadata',
  'script',
  'view',
  'clipPath',
  'mask',
  'marker',
  'filter',
  'pattern',
  'linearGradient',
  'radialGradient',
  'stop',
]);

const LEFT_OUT = new Map([
  ['text', 'texts are left out: turn letters into paths to burn them'],
  ['image', 'pictures are left out'],
  ['foreignObject', 'what is not SVG is left out'],
  ['switch', 'a choice between drawings is left out'],
  ...['animate', 'animateMotion', 'animateTransform', 'set'].map((n) => [n, 'movement is left out'] as const),
]);

function hidden(node: XmlNode, walk: Walk): boolean {
  const declared = walk.sheet.declared(node);
  const unseen = Number.parseFloat(declared.get('opacity') ?? '1') === 0;
  if (declared.get('display') !== 'none' && !unseen) return false;
  walk.found.note('hidden', placeOf(node), 'what is not displayed is left out');
  return true;
}

function placeOf(node: XmlNode): string {
  const id = node.attributes.get('id');
  return `line ${node.line}, ${node.name}${id === undefined ? '' : ` "${id.slice(0, 60)}"`}`;
}

/** What the element's own attributes make of what is around it. */
function inside(node: XmlNode, around: Around, walk: Walk): Around {
  const transform = node.attributes.get('transform');
  const diagonal = around.view ? diagonalOf(around.view) : Number.NaN;
  const declared = walk.sheet.declared(node);
  let layer = around.layer;
  const shape = SHAPES.has(node.name);
  if (shape) layer ||= classesOf(node)[0] ?? '';
  else if (node.name !== 'use') layer = node.attributes.get('id') ?? classesOf(node)[0] ?? layer;
  if (layer !== '' && around.depth > 0) walk.layers.add(layer);
  return {
    ...around,
    matrix: transform ? times(around.matrix, readTransform(transform)) : around.matrix,
    style: styleOf(declared, around.style, diagonal, placeOf(node), walk.found),
    layer,
    usedAs: shape || node.name === 'use' ? around.usedAs : null,
    depth: around.depth + 1,
  };
}

/** A nested `svg`, or the `symbol` that a `use` draws at its own size. */
function viewport(node: XmlNode, use: XmlNode | null, here: Around): Around {
  const get = (name: string): string | undefined => use?.attributes.get(name) ?? node.attributes.get(name);
  const side = (name: string, whole: number | undefined, otherwise: number | undefined): number => {
    const text = get(name);
    const value = text === undefined || text === 'auto' ? otherwise : lengthOf(text, whole ?? Number.NaN);
    return value ?? Number.NaN;
  };
  const [w, h] = [here.view?.width, here.view?.height];
  const box = {
    // The place of a `use` is in its matrix already.
    x: use ? 0 : side('x', w, 0),
    y: use ? 0 : side('y', h, 0),
    width: side('width', w, w),
    height: side('height', h, h),
  };
  const viewBox = node.attributes.get('viewBox');
  if (viewBox === undefined)
    return {
      ...here,
      matrix: times(here.matrix, translation(box.x, box.y)),
      view: box.width > 0 ? box : null,
    };
  const inner = readViewBox(viewBox);
  if (!(box.width > 0 && box.height > 0))
    throw new BadShape('bad-size', `this ${node.name} has no size that could be worked out`);
  return {
    ...here,
    matrix: times(here.matrix, fitted(inner, box, node.attributes.get('preserveAspectRatio') ?? null)),
    view: inner,
  };
}

function drawUse(node: XmlNode, here: Around, walk: Walk): void {
  const reference = (node.attributes.get('href') ?? '').trim();
  const target = reference.startsWith('#') ? walk.byId.get(reference.slice(1)) : undefined;
  if (!target) {
    walk.found.note(
      'use',
      placeOf(node),
      `what "${reference.slice(0, 40)}" names is not in the file and left out`,
    );
    return;
  }
  if (here.uses.includes(target))
    throw new InputError({
      code: 'use-cycle',
      file: walk.file,
      place: placeOf(node),
      problem: `"${reference.slice(0, 40)}" draws itself`,
      mend: 'take one of the references out',
    });
  const at = (name: 'x' | 'y'): number =>
    lengthOf(node.attributes.get(name) ?? '0', here.view?.[name === 'x' ? 'width' : 'height'] ?? Number.NaN);
  const there: Around = {
    ...here,
    matrix: times(here.matrix, translation(at('x'), at('y'))),
    uses: [...here.uses, target],
    usedAs: node.attributes.get('id') ?? here.usedAs,
  };
  if (target.name !== 'symbol') visit(target, there, walk);
  else if (!hidden(target, walk))
    walkChildren(target, viewport(target, node, inside(target, there, walk)), walk);
}

function emit(node: XmlNode, here: Around, walk: Walk): void {
  const { style, matrix } = here;
  const { found, options } = walk;
  if (!style.visible) {
    found.note('hidden', placeOf(node), 'what is not displayed is left out');
    return;
  }
  if (!style.fill && !style.stroke) {
    found.note('no-paint', placeOf(node), 'what is neither filled nor stroked is left out');
    return;
  }
  const pen = flatten(matrix, options.tolerance, found.spend);
  drawShape(node, here.view, pen);
  if (determinant(matrix) === 0) {
    found.note('flat-transform', placeOf(node), 'what a transform presses flat is left out');
    return;
  }
  const chains = pen.chains();
  const id = here.usedAs ?? node.attributes.get('id') ?? null;
  const common = { id, layer: here.layer, net: null, pin: null, place: placeOf(node) };
  if (style.fill && node.name !== 'line') {
    const role = isPad([id, here.layer, ...classesOf(node)]) ? 'pad' : 'region';
    for (const figure of areasOf(chains, style.rule, walk.flat, walk.tangle))
      walk.shapes.push({ ...common, role, figure });
  }
  const width = style.stroke ? strokeWidth(node, here, chains, found) : 0;
  if (width > 0)
    for (const figure of strokesOf(chains, width, style.ends, style.bends, options.tolerance))
      walk.shapes.push({ ...common, role: figure.kind === 'stroke' ? 'trace' : 'region', figure });
}

/** `pad`, `pads`, `pad-3`, `Pad_A1`: a name that begins with the word. */
const isPad = (names: (string | null)[]): boolean =>
  names.some((n) => n !== null && /^pads?(?![a-z])/i.test(n));

/** Stretches that differ by less than this share are rounding of turns written with a few digits. */
const ALIKE = 1e-4;

/** mm. A stroke that is stretched unevenly has no one width: it takes the mean that keeps the area of its straight pieces. */
function strokeWidth(node: XmlNode, here: Around, chains: Chain[], found: Findings): number {
  const { strokeWidth: width, fixedWidth } = here.style;
  if (fixedWidth) return width * PX;
  const [most, least] = stretches(here.matrix);
  const mean = width * Math.sqrt(most * least);
  if (most - least > ALIKE * most && width > 0 && chains.length > 0) {
    const [a, b, m] = [width * least, width * most, mean].map((w) => Number(w.toPrecision(3)));
    found.note(
      'uneven-stroke',
      placeOf(node),
      `a line stretched unevenly, ${a} to ${b} mm wide, is taken as ${m} mm wide`,
    );
  }
  return mean;
}
