/** Which paint, width and ends an element has: presentation attributes, style sheets with plain selectors, `style` (SVG 2, ch. 6). */
import type { Bends, Ends } from './drawing.ts';
import { BadShape, type Findings } from './findings.ts';
import type { Rule } from './flat.ts';
import { lengthOf } from './svg-length.ts';
import type { XmlNode } from './svg-xml.ts';

export interface Style {
  fill: boolean;
  stroke: boolean;
  rule: Rule;
  /** User units. */
  strokeWidth: number;
  ends: Ends;
  bends: Bends;
  visible: boolean;
  /** Width counts in px whatever the transform. Not inherited. */
  fixedWidth: boolean;
}

export const INITIAL: Style = {
  fill: true,
  stroke: false,
  rule: 'nonzero',
  strokeWidth: 1,
  ends: 'butt',
  bends: 'miter',
  visible: true,
  fixedWidth: false,
};

/** Declarations that hold for the element itself, by property. */
export type Declared = Map<string, string>;

/**
 * @param diagonal  what a share in a stroke's width is of: the view's diagonal over √2, user units
 * @throws BadShape `bad-number`
 */
export function styleOf(
  declared: Declared,
  around: Style,
  diagonal: number,
  place: string,
  findings: Findings,
): Style {
  const style = { ...around, fixedWidth: false };
  for (const [property, value] of declared) {
    if (value === 'inherit' || value === 'unset') continue;
    if (property === 'fill' || property === 'stroke') {
      const paint = paintOf(value);
      if (paint === 'server')
        findings.note(
          'paint',
          place,
          'gradients and patterns are left out: what they paint is copper all over',
        );
      if (paint === 'white')
        findings.note('white', place, 'what is drawn in white is taken for copper like any other colour');
      style[property] = paint !== 'none';
    } else if (property === 'fill-rule') style.rule = value === 'evenodd' ? 'evenodd' : 'nonzero';
    else if (property === 'stroke-width') {
      style.strokeWidth = lengthOf(value, diagonal);
      if (style.strokeWidth < 0) throw new BadShape('bad-number', `the stroke width ${value} is below 0`);
    } else if (property === 'stroke-linecap') {
      if (value === 'round' || value === 'square' || value === 'butt') style.ends = value;
    } else if (property === 'stroke-linejoin') {
      style.bends = value === 'round' || value === 'bevel' ? value : 'miter';
    } else if (property === 'visibility') style.visible = value !== 'hidden' && value !== 'collapse';
    else if (property === 'vector-effect') style.fixedWidth = value === 'non-scaling-stroke';
    else if (LEFT_OUT.has(property) && !NOTHING.test(value))
      findings.note(property.startsWith('marker') ? 'marker' : property, place, LEFT_OUT.get(property)!);
  }
  // Paint that cannot be seen is none, whatever its colour.
  for (const of of ['fill', 'stroke'] as const) {
    const opacity = declared.get(`${of}-opacity`);
    if (opacity !== undefined && Number.parseFloat(opacity) === 0) style[of] = false;
  }
  return style;
}

const NOTHING = /^(none|0|0%|4|normal|0 0)$/;
const LEFT_OUT = new Map([
  ['clip-path', 'clip paths are left out: what they hide is drawn'],
  ['mask', 'masks are left out: what they hide is drawn'],
  ['filter', 'filters are left out'],
  ['stroke-dasharray', 'dashed lines are taken as whole ones'],
  ['stroke-miterlimit', 'limits of mitres are left out'],
  ...['marker', 'marker-start', 'marker-mid', 'marker-end'].map(
    (m) => [m, 'markers on lines are left out'] as const,
  ),
  ...['transform', 'transform-origin', 'translate', 'rotate', 'scale', 'd', 'cx', 'cy', 'r', 'rx', 'ry'].map(
    (p) => [`css ${p}`, 'shapes and transforms in styles are left out'] as const,
  ),
]);

function paintOf(value: string): 'none' | 'white' | 'server' | 'paint' {
  const v = value.slice(0, 64).toLowerCase();
  if (v === 'none' || v === 'transparent') return 'none';
  if (v.startsWith('url(')) return 'server';
  if (/^#([0-9a-f]{3}0|[0-9a-f]{6}00)$/.test(v)) return 'none';
  if (/^(rgb|hsl)a?\(.*[,/]\s*0*\.?0*%?\s*\)$/.test(v) && /a\(|\//.test(v)) return 'none';
  if (/^(white|#fff|#ffffff|rgb\(255, *255, *255\))$/.test(v)) return 'white';
  return 'paint';
}

/** Properties that may also stand as attributes. */
const ATTRIBUTES = [
  'fill',
  'fill-rule',
  'fill-opacity',
  'stroke',
  'stroke-width',
  'stroke-linecap',
  'stroke-linejoin',
  'stroke-miterlimit',
  'stroke-dasharray',
  'stroke-opacity',
  'vector-effect',
  'visibility',
  'display',
  'opacity',
  'clip-path',
  'mask',
  'filter',
  'marker-start',
  'marker-mid',
  'marker-end',
];

/** What else a style may say that moves copper: named `css …`, since as attributes these mean something of their own. */
const GEOMETRY = /^(transform|transform-origin|translate|rotate|scale|d|cx|cy|r|rx|ry)$/;

export interface Sheet {
  declared(node: XmlNode): Declared;
}

interface SheetRule {
  tag: string | null;
  id: string | null;
  classes: string[];
  /** Specificity of CSS, then the order of the file. */
  weight: number;
  body: Declared;
}

/**
 * @param styles  all `style` elements of the drawing, in order
 * @throws BadShape `too-large`
 */
export function styleSheet(styles: readonly XmlNode[], findings: Findings): Sheet {
  const rules: SheetRule[] = [];
  for (const style of styles) readRules(style, rules, findings);
  rules.sort((a, b) => a.weight - b.weight);
  const byId = group(rules, (r) => (r.id === null ? [] : [r.id]));
  const byClass = group(rules, (r) => (r.id === null ? r.classes.slice(0, 1) : []));
  const known = new Map<XmlNode, Declared>();
  const others = rules.filter((r) => r.id === null && r.classes.length === 0);
  return {
    declared(node) {
      const before = known.get(node);
      if (before) return before;
      const out: Declared = new Map();
      known.set(node, out);
      for (const name of ATTRIBUTES) {
        const value = node.attributes.get(name);
        if (value !== undefined) out.set(name, value.trim());
      }
      if (rules.length > 0) {
        const id = node.attributes.get('id') ?? null;
        const classes = classesOf(node);
        const near = [
          ...others,
          ...(id === null ? [] : (byId.get(id) ?? [])),
          ...classes.flatMap((c) => byClass.get(c) ?? []),
        ];
        near.sort((a, b) => a.weight - b.weight);
        for (const r of near)
          if (
            (r.tag === null || r.tag === node.name) &&
            (r.id === null || r.id === id) &&
            r.classes.every((c) => classes.includes(c))
          )
            for (const [property, value] of r.body) out.set(property, value);
      }
      const own = node.attributes.get('style');
      if (own) for (const [property, value] of readBody(own)) out.set(property, value);
      return out;
    },
  };
}

export const classesOf = (node: XmlNode): string[] =>
  (node.attributes.get('class') ?? '').split(/\s+/).filter((c) => c !== '');

function group(rules: SheetRule[], keys: (r: SheetRule) => string[]): Map<string, SheetRule[]> {
  const out = new Map<string, SheetRule[]>();
  for (const r of rules)
    for (const key of keys(r)) {
      const list = out.get(key);
      if (list) list.push(r);
      else out.set(key, [r]);
    }
  return out;
}

function readRules(style: XmlNode, rules: SheetRule[], findings: Findings): void {
  const text = style.text.replace(/\/\*[\s\S]*?(\*\/|$)|<!--|-->/g, ' ');
  const leaveOut = (what: string): void =>
    findings.note('css', `line ${style.line}`, `"${what.slice(0, 40)}" in a style sheet is left out`);
  let at = 0;
  for (let open = text.indexOf('{'); open >= 0; open = text.indexOf('{', at)) {
    // Statements such as @import end with a semicolon and have no body.
    const statements = text.slice(at, open).split(';');
    const head = statements.pop()!.trim();
    for (const s of statements) if (s.trim() !== '') leaveOut(s.trim());
    if (head.startsWith('@')) {
      leaveOut(head);
      at = bodyEnd(text, open);
      continue;
    }
    const close = text.indexOf('}', open);
    at = close < 0 ? text.length : close + 1;
    const body = readBody(text.slice(open + 1, close < 0 ? text.length : close));
    for (const selector of head.split(',')) {
      const found = SELECTOR.exec(selector.trim());
      if (!found || found[0] === '') leaveOut(selector.trim());
      else {
        const classes = found[3].split('.').filter((c) => c !== '');
        const tag = found[1] === undefined || found[1] === '*' ? null : found[1];
        const id = found[2]?.slice(1) ?? null;
        const specificity = (id === null ? 0 : 10_000) + 100 * classes.length + (tag === null ? 0 : 1);
        if (rules.length >= MOST_RULES)
          throw new BadShape('too-large', `the style sheets have more than ${MOST_RULES} rules`);
        rules.push({ tag, id, classes, weight: specificity * MOST_RULES + rules.length, body });
      }
    }
  }
}

/** Each may hold for each element: this keeps the work in bounds. */
const MOST_RULES = 500;

const SELECTOR = /^(\*|[\w-]+)?(#[^\s.#>+~:[\]*,]+)?((?:\.[^\s.#>+~:[\]*,]+)*)$/;

/** Behind the brace that closes the one at `open`. */
function bodyEnd(text: string, open: number): number {
  let depth = 0;
  for (let i = open; i < text.length; i++) {
    if (text[i] === '{') depth++;
    else if (text[i] === '}' && --depth === 0) return i + 1;
  }
  return text.length;
}

function readBody(text: string): Declared {
  const out: Declared = new Map();
  for (const part of text.split(';')) {
    const colon = part.indexOf(':');
    if (colon < 0) continue;
    const property = part.slice(0, colon).trim().toLowerCase();
    const value = part
      .slice(colon + 1)
      .replace(/!\s*important\s*$/, '')
      .trim();
    if (value !== '') out.set(GEOMETRY.test(property) ? `css ${property}` : property, value);
  }
  return out;
}
