import { beforeAll, describe, expect, it } from 'vitest';
import { InputError, type InputProblem } from '../../../src/core/base/news.ts';
import { quiet } from '../../../src/core/base/run-context.ts';
import { type Area, DEFAULTS, type Drawing, type Stroke } from '../../../src/core/drawing/drawing.ts';
import type { Flat } from '../../../src/core/drawing/flat.ts';
import { readSvg } from '../../../src/core/drawing/svg.ts';
import { tangle } from '../../../src/core/drawing/tangle.ts';
import { flatForTests } from '../helpers/flat.ts';

let flat: Flat;
beforeAll(async () => {
  flat = await flatForTests();
});

const read = (text: string, unit: number | null = null): Drawing =>
  readSvg(text, 'a.svg', { ...DEFAULTS, unit }, flat, quiet);
const page = (body: string): string =>
  `<svg xmlns="http://www.w3.org/2000/svg" xmlns:xlink="http://www.w3.org/1999/xlink" width="100mm" height="80mm" viewBox="0 0 100 80">${body}</svg>`;
const brief = (d: Drawing): string[] =>
  d.shapes.map((s) => `${s.layer}/${s.id ?? '-'} ${s.role} ${s.figure.kind}`);
const codes = (d: Drawing): string[] => d.notes.map((n) => `${n.code}×${n.count}`);
const width = (d: Drawing, i = 0): number => (d.shapes[i].figure as Stroke).width;

function problems(text: string): readonly InputProblem[] {
  try {
    read(text);
  } catch (error) {
    if (error instanceof InputError) return error.problems;
    throw error;
  }
  throw new Error('it was read');
}
const refused = (text: string): string[] => problems(text).map((p) => `${p.code} @ ${p.place}`);

describe('names', () => {
  it('layers are the nearest groups, ids are the elements’ own, pads are what is called so', () => {
    const d = read(
      page(`<g id="top"><path id="ring" stroke="red" fill="none" d="M0,0H5"/>
        <g class="guard shield"><rect id="pad-3" width="2" height="1"/><rect class="pads" x="5" width="2" height="1"/></g>
        <g><circle id="padding" r="3"/></g></g>
        <g id="empty"/><rect class="loose" x="9" width="1" height="4"/>`),
    );
    expect(brief(d)).toEqual([
      'top/ring trace stroke',
      'guard/pad-3 pad area',
      'guard/- pad area',
      'top/padding region area',
      'loose/- region area',
    ]);
    expect(d.layers).toEqual(['top', 'guard', 'empty', 'loose']);
    expect(d.shapes[1].place).toBe('line 2, rect "pad-3"');
    expect(d.notes).toEqual([]);
  });

  it('a shape drawn by use has the name of the use; what is filled and stroked is both', () => {
    const d = read(
      page(`<defs><rect id="r" width="2" height="1" stroke="#00f" stroke-width="0.25"/><g id="pair"><use xlink:href="#r"/></g></defs>
        <use id="a1" href="#r" x="10" y="20"/><use id="a2" href="#pair" transform="rotate(90)" x="3"/>`),
    );
    expect(brief(d)).toEqual([
      '/a1 region area',
      '/a1 trace stroke',
      'pair/r region area',
      'pair/r trace stroke',
    ]);
    expect([...(d.shapes[1].figure as Stroke).points]).toEqual([10, -20, 12, -20, 12, -21, 10, -21]);
    // translate(3, 0) first, then a quarter turn: x 3 … 5, y 0 … 1 lies at x −1 … 0, y 3 … 5 with y down.
    const { points } = d.shapes[3].figure as Stroke;
    [0, -3, 0, -5, -1, -5, -1, -3].forEach((c, i) => {
      expect(points[i]).toBeCloseTo(c, 12);
    });
  });

  it('pieces that lie apart are shapes of their own', () => {
    const d = read(page('<path id="two" d="M0,0H4V3H0Z M10,0H14V3H10Z M11,1V2H12V1Z"/>'));
    expect(d.shapes.map((s) => (s.figure as Area).rings.length)).toEqual([1, 2]);
    expect(d.shapes.map((s) => s.id)).toEqual(['two', 'two']);
  });
});

it('shares are of the page’s width, its height, or its diagonal over √2', () => {
  const d = read(
    page('<rect width="50%" height="25%"/><path d="M0,0H9" fill="none" stroke="red" stroke-width="1%"/>'),
  );
  expect(flat.area((d.shapes[0].figure as Area).rings)).toBeCloseTo(50 * 20, 9);
  expect(width(d, 1)).toBeCloseTo(Math.hypot(100, 80) / Math.SQRT2 / 100, 12);
});

describe('paint', () => {
  const line = (more: string): string => `<path d="M0,0 L9,2" fill="none" ${more}/>`;

  it('style beats sheet, sheet beats attribute, an id beats a class beats a tag', () => {
    const sheet = `<style>/* widths */ #b{stroke-width:5} path.w{stroke-width:4} .w{stroke-width:3} path{stroke-width:2;stroke:#0a0}
      g > path {stroke-width:9} @media print { path { stroke-width: 7 } } .late, .w2{stroke-width:6 !important}</style>`;
    const d = read(
      page(
        `${sheet}${line('')}${line('class="w"')}${line('class="w" id="b"')}${line('class="w" style="stroke-width: 8"')}${line('stroke-width="1"')}${line('class="w2"')}`,
      ),
    );
    expect(d.shapes.map((_s, i) => width(d, i))).toEqual([2, 4, 5, 8, 2, 6]);
    expect(codes(d)).toEqual(['css×2']);
  });

  it('is inherited, ends and bends too; a stroke of width 0 or of no paint is none', () => {
    const d = read(
      page(`<g stroke="red" stroke-width="3" stroke-linecap="round" stroke-linejoin="bevel">${line('')}${line('stroke="none"')}
        ${line('stroke-width="0"')}${line('stroke-opacity="0"')}${line('stroke="rgba(1,2,3,0)"')}${line('stroke-linecap="square" stroke-linejoin="round"')}</g>`),
    );
    expect(d.shapes.map((s) => s.figure)).toMatchObject([
      { width: 3, ends: 'round', bends: 'bevel' },
      { width: 3, ends: 'square', bends: 'round' },
    ]);
  });

  it('a width grows with its transform; stretched unevenly it takes the mean, and says so', () => {
    const d = read(
      page(`<g stroke="red" stroke-width="0.5"><g transform="rotate(33) scale(2,-2)">${line('')}</g>
        <g transform="scale(8,2)">${line('')}${line('vector-effect="non-scaling-stroke"')}</g></g>`),
    );
    expect(width(d, 0)).toBeCloseTo(1, 12);
    expect(width(d, 1)).toBeCloseTo(2, 12);
    expect(width(d, 2)).toBeCloseTo((0.5 * 25.4) / 96, 12);
    expect(codes(d)).toEqual(['uneven-stroke×1']);
    expect(d.notes[0].text).toContain('1 to 4 mm');
  });

  it('a line of no length is a disc or a square where its ends are, and nothing where they are cut off', () => {
    const dot = (ends: string, d: string): string =>
      `<path d="${d}" fill="none" stroke="red" stroke-width="2" stroke-linecap="${ends}"/>`;
    const d = read(
      page(dot('round', 'M5,6h0') + dot('square', 'M5,6z') + dot('butt', 'M5,6h0') + dot('round', 'M5,6')),
    );
    expect(d.shapes.length).toBe(2);
    const [disc, square] = d.shapes.map((s) => flat.area((s.figure as Area).rings));
    expect(square).toBeCloseTo(4, 12);
    expect(Math.abs(disc - Math.PI)).toBeLessThan(2 * Math.PI * DEFAULTS.tolerance);
  });

  it('there and back is a line once, with ends as its bends were', () => {
    const d = read(page('<path d="M1,1 L5,1Z" fill="none" stroke="red" stroke-linejoin="round"/>'));
    expect(d.shapes[0].figure).toMatchObject({ closed: false, ends: 'round' });
    expect([...(d.shapes[0].figure as Stroke).points]).toEqual([1, -1, 5, -1]);
  });
});

describe('what is left out or assumed is said, with its place', () => {
  it.each([
    ['<text>A</text>', 'text'],
    ['<image href="x.png"/>', 'image'],
    ['<wheel/>', 'unknown-element'],
    ['<g display="none"><rect width="1" height="1"/></g>', 'hidden'],
    ['<rect width="1" height="1" visibility="hidden"/>', 'hidden'],
    ['<rect width="1" height="1" fill="none"/>', 'no-paint'],
    ['<rect width="1" height="1" fill="url(#g)"/>', 'paint'],
    ['<rect width="1" height="1" fill="white"/>', 'white'],
    ['<rect width="1" height="1" clip-path="url(#c)"/>', 'clip-path'],
    ['<rect width="1" height="1" style="transform:scale(2)"/>', 'css transform'],
    ['<path d="M0,0H1" stroke="red" stroke-dasharray="1 2"/>', 'stroke-dasharray'],
    ['<path d="M0,0H1" stroke="red" marker-end="url(#m)"/>', 'marker'],
    ['<use href="#nowhere"/>', 'use'],
    ['<g transform="scale(0,1)"><rect width="1" height="1"/></g>', 'flat-transform'],
  ])('%s', (body, code) => {
    const d = read(page(`\n<g>${body}</g>`));
    expect(d.notes.map((n) => n.code)).toEqual([code]);
    expect(d.notes[0].place).toMatch(/^line 2, /);
    expect(d.notes[0].count).toBe(1);
  });

  it('other vocabularies and descriptions are nothing to speak of', () => {
    const d = read(
      page(
        '<title>t</title><metadata><a/></metadata><x:y xmlns:x="urn:x"><rect width="1" height="1"/></x:y><defs><text/></defs>',
      ),
    );
    expect(d.notes).toEqual([]);
    expect(d.shapes).toEqual([]);
  });

  it('a drawing without a physical size counts 96 px an inch, or the unit that was asked for', () => {
    const text = '<svg viewBox="0 0 50 50" width="100" height="100px"><path d="M0,0H10" stroke="red"/></svg>';
    const end = (d: Drawing): number => (d.shapes[0].figure as Stroke).points[2];
    expect(end(read(text))).toBeCloseTo((20 * 25.4) / 96, 12);
    expect(end(read(text, 0.5))).toBeCloseTo(10, 12);
    for (const d of [read(text), read(text, 0.5)]) expect(codes(d)).toEqual(['px-size×1']);
    const sized = text.replace('"100"', '"100mm"').replace('"100px"', '"100mm"');
    expect(end(read(sized, 0.5))).toBeCloseTo(20, 12);
    expect(codes(read(sized, 0.5))).toEqual([]);
  });
});

describe('hostile and broken files', () => {
  const long = (n: number, at: (i: number) => string): string =>
    `M0,0${Array.from({ length: n }, (_, i) => at(i + 1)).join('')}`;

  // Of broken XML the library tells the last tag that it still understood.
  it.each<[string, string, string[]]>([
    ['nothing', '', ['broken-xml @ ']],
    ['no XML', 'G01 X0 Y0', ['broken-xml @ ']],
    ['another vocabulary', '<html/>', ['not-svg @ line 1']],
    ['tags that do not match', '<svg>\n<g>\n</svg>', ['broken-xml @ line 2']],
    ['a tag that does not end', '<svg>\n<g id="', ['broken-xml @ line 2']],
    ['entities', '<!DOCTYPE svg [<!ENTITY a "b">]><svg>&a;</svg>', ['entities @ line 1']],
    ['an unknown entity', '<svg>\n&lol;</svg>', ['broken-xml @ line 1']],
    ['deep nesting', `<svg>${'<g>'.repeat(200_000)}`, ['too-deep @ line 1']],
    ['too many elements', `<svg>${'<g/>\n'.repeat(200_000)}</svg>`, ['too-large @ line 100000']],
    [
      'ten steps of ten uses',
      `<svg>${Array.from({ length: 10 }, (_, i) => `<g id="a${i + 1}">${`<use href="#a${i}"/>`.repeat(10)}</g>`).join('')}<path id="a0" d="M0,0H1"/></svg>`,
      ['too-large @ line 1, path "a0"'],
    ],
    ['a use of itself', '<svg>\n<g id="a"><use href="#a"/></g></svg>', ['use-cycle @ line 2, use']],
    [
      'uses in a ring',
      '<svg><g id="a"><use href="#b"/></g>\n<g id="b"><use id="u" href="#a"/></g></svg>',
      ['use-cycle @ line 1, use'],
    ],
    ['a viewBox of no area', '<svg viewBox="0 0 0 1"/>', ['bad-size @ line 1']],
    ['a page of no size', '<svg width="0" height="5mm"/>', ['bad-size @ line 1']],
    ['a page in steps', '<svg width="5parsec"/>', ['bad-number @ line 1']],
  ])('%s', (_what, text, found) => {
    expect(refused(text)).toEqual(found);
  });

  it.each([
    ['<path id="p" d="M0,0 L NaN,1" stroke="red"/>', 'bad-path'],
    ['<path id="p" d="M0,0 L1e999,1" stroke="red"/>', 'bad-path'],
    ['<path id="p" d="L1,1"/>', 'bad-path'],
    ['<path id="p" d="M0,0 L1"/>', 'bad-path'],
    ['<path id="p" d="M0,0 1,,2"/>', 'bad-path'],
    ['<path id="p" d="M0,0 B1,1"/>', 'bad-path'],
    ['<path id="p" d="M0,0 a1,1 0 x 0 1,1"/>', 'bad-path'],
    ['<path id="p" d="M0,0 h1 z 4"/>', 'bad-path'],
    ['<path id="p" d="M0,0 C1e300,0 1,1 2,2"/>', 'out-of-range'],
    ['<path id="p" d="M0,0 h1e300"/>', 'out-of-range'],
    ['<path id="p" d="M0,0 a1e300,1e300 0 0 0 1,1"/>', 'out-of-range'],
    ['<polygon id="p" points="0,0 1,1 2"/>', 'bad-number'],
    ['<rect id="p" width="-1" height="1"/>', 'bad-number'],
    ['<circle id="p" r="two"/>', 'bad-number'],
    ['<rect id="p" width="1" height="1" transform="turn(3)"/>', 'bad-transform'],
    ['<rect id="p" width="1" height="1" transform="scale(1,2,3)"/>', 'bad-transform'],
    ['<rect id="p" width="1" height="1" transform="matrix(1e300 0 0 1 0 0)"/>', 'out-of-range'],
    ['<path id="p" d="M0,0H1" stroke="red" stroke-width="-1"/>', 'bad-number'],
  ])('%s is refused', (body, code) => {
    expect(refused(page(`\n${body}`))[0]).toMatch(new RegExp(`^${code} @ line 2, \\w+ "p"$`));
  });

  it('all bad elements are told at once, twenty at most', () => {
    expect(refused(page('<circle r="a"/>\n<circle r="b"/><g transform="x"><circle r="c"/></g>'))).toEqual([
      'bad-number @ line 1, circle',
      'bad-number @ line 2, circle',
      'bad-transform @ line 2, g',
    ]);
    expect(problems(page('<circle r="a"/>'.repeat(50))).length).toBe(20);
  });

  it('a path of a million points is read as a stroke, and refused as a fill that tangles', () => {
    const path = long(1_000_000, (i) => `L${(i % 1000) / 10} ${((i * 7919) % 997) / 20}`);
    const d = read(page(`<path fill="none" stroke="red" d="${path}"/>`));
    expect((d.shapes[0].figure as Stroke).points.length).toBe(2_000_002);
    expect(refused(page(`<path d="${path}"/>`))).toEqual(['too-tangled @ line 1, path']);
  });

  it('figures that would take minutes to clip are refused: many abreast, many crossings, many of them', () => {
    const spiral = long(60_000, (i) => `L${(i / 1200) * Math.cos(i / 10)} ${(i / 1200) * Math.sin(i / 10)}`);
    const scribble = (n: number): number[] =>
      Array.from({ length: n }, (_, i) => [
        ((i * 7919) % 1000) / 10 + i / 1e4,
        ((i * 104_729) % 997) / 20,
      ]).flat();
    expect(refused(page(`<path d="${spiral}"/>`))).toEqual(['too-tangled @ line 1, path']);
    expect(refused(page(`<polygon points="${scribble(9000).join(' ')}"/>`))).toEqual([
      'too-tangled @ line 1, polygon',
    ]);
    const comb = Float64Array.from({ length: 200_000 }, (_, k) =>
      k % 2 === 0 ? k / 2000 : ((k >> 1) % 2) * 50,
    );
    expect(() => tangle().check([comb])).toThrow(expect.objectContaining({ code: 'too-tangled' }));
    const budget = tangle();
    const one = Float64Array.from(scribble(1000));
    budget.check([one]);
    expect(() => {
      for (let i = 0; i < 120; i++) budget.check([one]);
    }).toThrow(expect.objectContaining({ code: 'too-tangled' }));
  });

  it('curves of more points than a drawing may have are refused', () => {
    const many = '<circle r="900000" cx="1"/>'.repeat(2000);
    expect(refused(page(many))).toEqual(['too-large @ ']);
  });
});
