/** XML to a tree of plain elements: the one file through which the XML library enters this room. */
import { DOMParser, type Element } from '@xmldom/xmldom';
import { InputError } from '../base/news.ts';
import { tooLarge } from './findings.ts';

const SVG = 'http://www.w3.org/2000/svg';
const XLINK = 'http://www.w3.org/1999/xlink';

export interface XmlNode {
  /** Local name; '' for an element that is not of SVG. */
  name: string;
  /** Attributes without a prefix, and `xlink:href` as `href` where there is no other. */
  attributes: Map<string, string>;
  children: XmlNode[];
  /** Text right inside it. */
  text: string;
  line: number;
}

/** Characters. A path of a million points takes a fifth of it. */
const MOST_TEXT = 100_000_000;
/** The library takes a second for some 40 000 tags; a drawing of a circuit has fewer. */
const MOST_TAGS = 100_000;
/** Elements within one another, also through `use`. */
export const MOST_DEPTH = 256;

/**
 * The root element, which is an `svg`.
 * @throws InputError `broken-xml`, `not-svg`, `entities`, `too-large`, `too-deep`, with the line
 */
export function readXml(text: string, file: string): XmlNode {
  if (text.length > MOST_TEXT) throw tooLarge(file, '', `more than ${MOST_TEXT} characters`);
  const plain = text.charCodeAt(0) === 0xfeff ? text.slice(1) : text;
  checkNesting(plain, file);
  const fail = (code: string, line: number, problem: string): InputError =>
    new InputError({ code, file, place: line > 0 ? `line ${line}` : '', problem, mend: MEND });

  let first: InputError | null = null;
  let root: Element | null = null;
  const broken = (line: number, message: string): InputError =>
    fail('broken-xml', line, `the XML is broken (${message.split('\n')[0].trim().slice(0, 120)})`);
  try {
    root = new DOMParser({
      onError(level, message, context) {
        if (level !== 'warning') first ??= broken(context?.locator?.lineNumber ?? 0, message);
      },
    }).parseFromString(plain, 'image/svg+xml').documentElement;
  } catch (error) {
    first ??= broken(0, (error as Error).message);
  }
  if (first) throw first;
  if (root?.localName !== 'svg' || (root.namespaceURI && root.namespaceURI !== SVG))
    throw fail('not-svg', 1, 'this is no SVG drawing');
  return plainNode(root);
}

const MEND = 'mend the text at this place or export the drawing again';

/**
 * Counts tags and their depth before the library sees the text: it would take deep nesting, but not in bounded time, and
 * its entities could name one another. Where the text is broken this stops, and the library says so.
 */
function checkNesting(text: string, file: string): void {
  let tags = 0;
  let depth = 0;
  let at = text.indexOf('<');
  const place = (): string => `line ${lineOf(text, at)}`;
  while (at >= 0) {
    let end: number;
    if (text.startsWith('<!--', at)) end = text.indexOf('-->', at + 4);
    else if (text.startsWith('<![CDATA[', at)) end = text.indexOf(']]>', at);
    else if (text.startsWith('<?', at)) end = text.indexOf('?>', at);
    else if (text.startsWith('<!', at)) {
      end = text.indexOf('>', at);
      const inner = text.indexOf('[', at);
      if (inner >= 0 && inner < end)
        throw new InputError({
          code: 'entities',
          file,
          place: place(),
          problem: 'the document type declares entities or attributes of its own',
          mend: 'export the drawing as plain SVG',
        });
    } else {
      end = tagEnd(text, at);
      if (text[at + 1] === '/') depth--;
      else {
        tags++;
        if (end > 0 && text[end - 1] !== '/') depth++;
      }
      if (tags > MOST_TAGS) throw tooLarge(file, place(), `more than ${MOST_TAGS} elements`);
      if (depth > MOST_DEPTH) throw tooDeep(file, place());
    }
    if (end < 0) return;
    at = text.indexOf('<', end);
  }
}

export const tooDeep = (file: string, place: string): InputError =>
  new InputError({
    code: 'too-deep',
    file,
    place,
    problem: `more than ${MOST_DEPTH} elements stand within one another`,
    mend: 'take the groups apart and export the drawing again',
  });

/** Place of the `>` that ends the tag, quoted ones passed over; -1 where there is none. */
function tagEnd(text: string, from: number): number {
  const stop = /["'>]/g;
  stop.lastIndex = from;
  for (let found = stop.exec(text); found; found = stop.exec(text)) {
    if (found[0] === '>') return found.index;
    const close = text.indexOf(found[0], found.index + 1);
    if (close < 0) return -1;
    stop.lastIndex = close + 1;
  }
  return -1;
}

function lineOf(text: string, at: number): number {
  let line = 1;
  for (let i = text.indexOf('\n'); i >= 0 && i < at; i = text.indexOf('\n', i + 1)) line++;
  return line;
}

/** No deeper than `MOST_DEPTH`. */
function plainNode(element: Element): XmlNode {
  const attributes = new Map<string, string>();
  for (let i = 0; i < element.attributes.length; i++) {
    const a = element.attributes.item(i)!;
    if (!a.namespaceURI) attributes.set(a.name, a.value);
    else if (a.namespaceURI === XLINK && a.localName === 'href' && !element.hasAttribute('href'))
      attributes.set('href', a.value);
  }
  const ours = !element.namespaceURI || element.namespaceURI === SVG;
  const node: XmlNode = {
    name: ours ? (element.localName ?? '') : '',
    attributes,
    children: [],
    text: '',
    line: element.lineNumber ?? 0,
  };
  for (let child = element.firstChild; child; child = child.nextSibling) {
    if (child.nodeType === 1) node.children.push(plainNode(child as Element));
    else if (child.nodeType === 3 || child.nodeType === 4) node.text += child.nodeValue ?? '';
  }
  return node;
}
