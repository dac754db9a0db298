import { describe, expect, it } from 'vitest';
import { InputError } from '../../../src/core/base/news.ts';
import { encodeUtf8 } from '../../../src/core/base/utf8.ts';
import type { BurnPath } from '../../../src/core/proof/burn-path.ts';
import { readCsv } from '../../../src/core/proof/reader-csv.ts';
import { readSvg } from '../../../src/core/proof/reader-svg.ts';

const csv = (text: string) => readCsv(encodeUtf8(text), 'a.csv');
const svg = (body: string, root = 'width="110mm" height="80mm" viewBox="-55 -40 110 80"') =>
  readSvg(
    encodeUtf8(
      `<svg xmlns="http://www.w3.org/2000/svg" ${root}>\n<g data-speed-mm-s="700" data-power="0.8">\n${body}\n</g></svg>`,
    ),
    'a.svg',
  );
const points = (p: BurnPath) =>
  [...p.x].map((x, i) => [Number(x.toFixed(6)) + 0, Number(p.y[i].toFixed(6)) + 0, p.mark[i]]);
/** code and place of what is thrown */
const problem = (work: () => unknown): string => {
  try {
    work();
  } catch (error) {
    if (error instanceof InputError)
      return `${error.code}, ${error.problems[0].file}, ${error.problems[0].place}`;
    throw error;
  }
  return 'nothing thrown';
};

describe('CSV scan files', () => {
  const header = 'x_mm,y_mm,mark,speed_mm_s,element,power\n';

  it('are read row by row', () => {
    const p = csv(`${header}1.5,-2,0,3000,t1,1\n3,-2.25,1,800,t1,0.9\n`);
    expect(points(p)).toEqual([
      [1.5, -2, 0],
      [3, -2.25, 1],
    ]);
    expect([[...p.speed], [...p.power]]).toEqual([
      [0, 800],
      [0, 0.9],
    ]);
  });

  it('may have a byte order mark, other line ends, columns in another order, exponents and quoted cells (RFC 4180)', () => {
    const p = csv(
      '\ufeff"element",power,y_mm,x_mm,mark,speed_mm_s\r\n"a,""b""\nc",1,-2e0,+1.50,0,0\r\nt1,1,"-2.25",3e0,1,8e2\r\n\r\n',
    );
    expect(points(p)).toEqual([
      [1.5, -2, 0],
      [3, -2.25, 1],
    ]);
    expect(p.speed[1]).toBe(800);
  });

  it.each([
    ['no header', '1,2,0,3,t,1\n', 'line 1'],
    ['a column less', 'x_mm,mark,speed_mm_s,element,power\n', 'line 1'],
    ['no number', `${header}1,2,0,3,t,1\n1,two,1,3,t,1\n`, 'line 3'],
    ['an empty cell', `${header}1,,0,3,t,1\n`, 'line 2'],
    ['a short row', `${header}1,2\n`, 'line 2'],
    ['a third kind of mark', `${header}1,2,0,3,t,1\n1,2,2,3,t,1\n`, 'line 3'],
    ['no speed', `${header}1,2,0,3,t,1\n1,3,1,0,t,1\n`, 'line 3'],
    ['a first move that burns', `${header}1,2,1,3,t,1\n`, 'line 2'],
    ['an open quote', `${header}1,2,0,3,"t,1\n`, 'line 2'],
    ['a line counted through a quoted line end', `${header}1,2,0,3,"a\nb",1\nx,2,1,3,t,1\n`, 'line 4'],
  ])('with %s are refused with the line', (_, text, place) => {
    expect(problem(() => csv(text))).toBe(`bad-csv, a.csv, ${place}`);
  });
});

describe('SVG scan files', () => {
  it('turn y over: the page runs down, the field up', () => {
    const p = svg('<polyline points="1,2 3,-4"/>');
    expect(points(p)).toEqual([
      [1, -2, 0],
      [3, 4, 1],
    ]);
    expect([p.speed[1], p.power[1]]).toEqual([700, 0.8]);
  });

  it.each([
    [
      'polygon',
      '<polygon points="1 2 3 4 5 2"/>',
      [
        [1, -2, 0],
        [3, -4, 1],
        [5, -2, 1],
        [1, -2, 1],
      ],
    ],
    [
      'line',
      '<line x1="1" y1="2" x2="3"/>',
      [
        [1, -2, 0],
        [3, 0, 1],
      ],
    ],
    [
      'path',
      '<path d="M1 2L3,4H5V2Z"/>',
      [
        [1, -2, 0],
        [3, -4, 1],
        [5, -4, 1],
        [5, -2, 1],
        [1, -2, 1],
      ],
    ],
    [
      'relative path',
      '<path d="m1 2 2 2h2v-2z m1-1l.5.5"/>',
      [
        [1, -2, 0],
        [3, -4, 1],
        [5, -4, 1],
        [5, -2, 1],
        [1, -2, 1],
        [2, -1, 0],
        [2.5, -1.5, 1],
      ],
    ],
    [
      'numbers without separators',
      '<polyline points="1e0-2.5.5.25-.5-1"/>',
      [
        [1, 2.5, 0],
        [0.5, -0.25, 1],
        [-0.5, 1, 1],
      ],
    ],
  ])('hold a %s', (_, body, wanted) => {
    expect(points(svg(body))).toEqual(wanted);
  });

  it('give a stroke the speed and power of the nearest group that names them', () => {
    const p = svg(
      '<g><g data-speed-mm-s="900"><polyline points="0,0 1,0"/></g><polyline points="0,0 1,0" data-power="0.5"/></g>',
    );
    expect([...p.speed]).toEqual([0, 900, 0, 700]);
    expect([...p.power]).toEqual([0, 0.8, 0, 0.5]);
  });

  it.each([
    ['translate(10,0) scale(2)', [12, -2]],
    ['scale(2) translate(10,0)', [22, -2]],
    ['rotate(90)', [-1, -1]],
    ['rotate(90, 1, 0)', [0, -0]],
    ['matrix(1 0 0 1 5 6)', [6, -7]],
    ['skewX(45)', [2, -1]],
  ])('apply transform="%s" right to left (SVG 2)', (transform, [x, y]) => {
    const p = svg(`<g transform="${transform}"><polyline points="1,1 1,1"/></g>`);
    expect(points(p)[0]).toEqual([x, y + 0, 0]);
  });

  it.each([
    ['millimetres', 'width="110mm" height="80mm" viewBox="-55 -40 110 80"', [1, -2]],
    [
      'centimetres and inches of the same size',
      'width="11cm" height="3.149606299in" viewBox="-55 -40 110 80"',
      [1, -2],
    ],
    [
      'px of the same size',
      'width="415.748031496px" height="302.362204724" viewBox="-55 -40 110 80"',
      [1, -2],
    ],
    ['inches', 'width="110in" height="80in" viewBox="-55 -40 110 80"', [25.4, -50.8]],
    ['half the size', 'width="55mm" height="40mm" viewBox="-55 -40 110 80"', [0.5, -1]],
    ['no size: px', 'viewBox="-55 -40 110 80"', [0.264583, -0.529167]],
    [
      'a viewBox from 0: the middle of the page is the middle of the field',
      'width="110mm" height="80mm" viewBox="0 0 110 80"',
      [-54, 38],
    ],
    // SVG 2: 100 × 50 mm, viewBox 0 0 200 200, meet 0.25 mm a unit and shifted by 25 mm
    ['xMidYMid meet', 'width="100mm" height="50mm" viewBox="0 0 200 200"', [0.25 + 25 - 50, 25 - 0.5]],
    [
      'slice',
      'width="100mm" height="50mm" viewBox="0 0 200 200" preserveAspectRatio="xMidYMid slice"',
      [0.5 - 50, 25 - 1 + 25],
    ],
    [
      'none',
      'width="100mm" height="50mm" viewBox="0 0 200 200" preserveAspectRatio="none"',
      [0.5 - 50, 25 - 0.5],
    ],
  ])('honour the page: %s', (_, root, [x, y]) => {
    const [px, py] = points(svg('<polyline points="1,2 2,2"/>', root))[0];
    expect(Math.abs(px - x)).toBeLessThan(1e-6);
    expect(Math.abs(py - y)).toBeLessThan(1e-6);
  });

  it('pass over what is not drawn and what other programs note', () => {
    const p = svg(
      '<defs><path d="M0 0C1 1"/></defs><title>x</title><!-- n --><n:view xmlns:n="urn:n"><n:x/></n:view><g display="none"><path d="M0 0L1 1"/></g>',
    );
    expect(p.x.length).toBe(0);
  });

  it.each([
    ['a curve', svg.bind(null, '\n<path d="M0 0C1 1 2 2 3 3"/>'), 'line 4'],
    ['a circle', svg.bind(null, '<circle r="3"/>'), 'line 3'],
    ['half a point', svg.bind(null, '<polyline points="1,2 3"/>'), 'line 3'],
    ['no number', svg.bind(null, '<polyline points="1,2 x,3"/>'), 'line 3'],
    ['a bad transform', svg.bind(null, '<g transform="turn(3)"/>'), 'line 3'],
    ['a bad speed', svg.bind(null, '<g data-speed-mm-s="fast"/>'), 'line 3'],
    ['a bad page', svg.bind(null, '', 'width="1 foot" height="3mm"'), 'line 1'],
    ['broken XML', svg.bind(null, '\n\n<g></p>'), 'line 5'],
  ])('with %s are refused with the line', (_, work, place) => {
    expect(problem(work)).toBe(`bad-svg, a.svg, ${place}`);
  });

  it('without a process class, or of another kind, are refused', () => {
    const read = (text: string) => problem(() => readSvg(encodeUtf8(text), 'a.svg'));
    expect(
      read(
        '<svg xmlns="http://www.w3.org/2000/svg" width="9mm" height="9mm"><polyline points="0,0 1,1"/></svg>',
      ),
    ).toBe('bad-svg, a.svg, line 1');
    expect(read('<html/>')).toBe('bad-svg, a.svg, line 1');
    expect(read('')).toMatch(/^bad-svg, a.svg/);
    expect(read('<svg xmlns="http://www.w3.org/2000/svg"')).toMatch(/^bad-svg, a.svg/);
  });
});
