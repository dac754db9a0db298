import { describe, expect, test } from 'vitest';
import { InputError } from '../../../src/core/base/news.ts';
import type { DrawingOptions } from '../../../src/core/drawing/drawing.ts';
import { areaOf, box, MM, read } from './gerber-helpers.ts';

const C = '%ADD10C,0.5*%';
const problem = async (lines: string[], options: Partial<DrawingOptions> = {}): Promise<[string, string]> => {
  try {
    await read(lines, options);
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    return [error.code, error.problems[0].place];
  }
  throw new Error('it was read');
};
const codes = async (lines: string[]): Promise<[string, string, number][]> =>
  (await read(lines)).notes.map((n) => [n.code, n.place, n.count]);

describe('draws', () => {
  test('draws in a row are one stroke; a move, another net or another width begins a new one', async () => {
    const d = await read([
      ...[...MM, C, '%ADD11C,0.3*%', 'D10*', 'X0Y0D02*', 'X1000000D01*', 'Y2000000D01*', 'Y2000000D01*'],
      ...['%TO.N,B*%', 'X3000000D01*', 'D11*', 'Y3000000D01*', 'X0Y0D02*', 'X-1000000D01*', 'M02*'],
    ]);
    const strokes = d.shapes.map(
      (s) => s.figure.kind === 'stroke' && [[...s.figure.points], s.figure.width, s.net],
    );
    expect(strokes).toEqual([
      [[0, 0, 1, 0, 1, 2], 0.5, null],
      [[1, 2, 3, 2], 0.5, 'B'],
      [[3, 2, 3, 3], 0.3, 'B'],
      [[0, 0, -1, 0], 0.3, 'B'],
    ]);
    expect(d.shapes.map((s) => s.place)).toEqual(['line 7', 'line 11', 'line 13', 'line 15']);
  });

  test('a row that comes back to its start is closed, and one that goes nowhere is a disc', async () => {
    const d = await read([
      ...[
        ...MM,
        C,
        'D10*',
        'X0Y0D02*',
        'X1000000D01*',
        'Y2000000D01*',
        'X0Y0D01*',
        'X5000000D02*',
        'D01*',
        'M02*',
      ],
    ]);
    const [ring, dot] = d.shapes;
    expect(ring.figure.kind === 'stroke' && [ring.figure.closed, ring.figure.points.length]).toEqual([
      true,
      6,
    ]);
    expect(Math.abs(areaOf(dot) - Math.PI / 16)).toBeLessThan(1e-12);
    expect(dot.role).toBe('trace');
  });

  test('a rectangle drawn aslant, or turned, covers the hull of its two ends', async () => {
    const draw = (aperture: string, turn: number): string[] => [
      ...[
        ...MM,
        `%ADD10${aperture}*%`,
        `%LR${turn}*%`,
        'D10*',
        'X1000000Y2000000D02*',
        'X4000000Y6000000D01*',
        'M02*',
      ],
    ];
    // w h + w |dy| + h |dx|, in the rectangle's own axes
    for (const [w, h] of [
      [1, 1],
      [2, 0.5],
    ]) {
      const flat = await read(draw(`R,${w}X${h}`, 0));
      expect(flat.shapes.map((s) => s.figure.kind)).toEqual(['area']);
      expect(Math.abs(areaOf(flat.shapes[0]) - (w * h + w * 4 + h * 3))).toBeLessThan(1e-9);
      const turned = await read(draw(`R,${w}X${h}`, 30));
      const [c, s] = [Math.cos(Math.PI / 6), Math.sin(Math.PI / 6)];
      const want = w * h + w * Math.abs(-3 * s + 4 * c) + h * Math.abs(3 * c + 4 * s);
      expect(Math.abs(areaOf(turned.shapes[0]) - want)).toBeLessThan(1e-9);
    }
    const along = await read([...MM, '%ADD10R,1X1*%', '%LR90*%', 'D10*', 'X0Y0D02*', 'X4000000D01*', 'M02*']);
    expect(along.shapes[0].figure).toMatchObject({ kind: 'stroke', width: 1, ends: 'square' });
    const turnedAlong = await read([
      ...MM,
      '%ADD10R,1X1*%',
      '%LR45*%',
      'D10*',
      'X0Y0D02*',
      'X4000000D01*',
      'M02*',
    ]);
    expect(Math.abs(areaOf(turnedAlong.shapes[0]) - (1 + 4 * Math.SQRT2))).toBeLessThan(1e-9);
  });

  test('of two circles through both ends a single quadrant takes the one that turns 90° at most', async () => {
    const d = await read([
      ...[
        ...MM,
        'G74*',
        'G36*',
        'X0Y0D02*',
        'G02*',
        'X6000000Y0I3000000J4000000D01*',
        'G01*',
        'X0D01*',
        'G37*',
        'M02*',
      ],
    ]);
    const angle = 2 * Math.asin(0.6);
    expect(Math.abs(areaOf(d.shapes[0]) - 12.5 * (angle - Math.sin(angle)))).toBeLessThan(1e-6);
    expect(box(d.shapes)[3]).toBeGreaterThan(0.99);
  });
});

describe('regions', () => {
  test('a cut-in is a hole, and contours are filled each for itself', async () => {
    const d = await read([
      ...[...MM, 'G36*', 'X0Y0D02*', 'X10000000D01*', 'Y10000000D01*', 'X0D01*', 'Y5000000D01*'],
      // In along y = 5, round a square of 4 the other way, and out again.
      ...[
        'X3000000D01*',
        'Y7000000D01*',
        'X7000000D01*',
        'Y3000000D01*',
        'X3000000D01*',
        'Y5000000D01*',
        'X0D01*',
        'Y0D01*',
      ],
      // Clockwise, over the first.
      ...['X9000000Y0D02*', 'Y1000000D01*', 'X12000000D01*', 'Y0D01*', 'X9000000D01*', 'G37*', 'M02*'],
    ]);
    expect(d.notes).toEqual([]);
    expect(d.shapes.map((s) => [s.role, s.figure.kind === 'area' && s.figure.rings.length])).toEqual([
      ['region', 2],
    ]);
    expect(Math.abs(areaOf(d.shapes[0]) - (100 - 16 + 2))).toBeLessThan(1e-6);
  });

  test('what is wrong in a region is noted', async () => {
    const region = (...lines: string[]): string[] => [
      ...MM,
      C,
      'D10*',
      'G36*',
      'X0Y0D02*',
      ...lines,
      'G37*',
      'M02*',
    ];
    expect(await codes(region('X1000000D01*', 'Y1000000D01*'))).toEqual([['open-contour', 'line 5', 1]]);
    expect(await codes(region('X1000000D01*', 'X0D01*'))).toEqual([['empty-region', 'line 5', 1]]);
    expect((await codes(region('X1000000D03*')))[0]).toEqual(['region-flash', 'line 7', 1]);
  });
});

describe('attributes', () => {
  test('nets and pins hold until they change, and the file’s function is the layer', async () => {
    const d = await read([
      ...[
        '%TF.FileFunction,Copper,L1,Top*%',
        ...MM,
        C,
        '%TO.N,SENSE*%',
        '%TO.P,U1,3,IN*%',
        'D10*',
        'X0Y0D03*',
      ],
      ...['%TD.P*%', 'X1D03*', '%TD*%', 'X2D03*', 'G04 #@! TO.N,OLD*', 'X3D03*', 'M02*'],
    ]);
    expect(d.layers).toEqual(['Copper,L1,Top']);
    expect(d.shapes.map((s) => [s.layer, s.net, s.pin])).toEqual([
      ['Copper,L1,Top', 'SENSE', 'U1-3'],
      ['Copper,L1,Top', 'SENSE', null],
      ['Copper,L1,Top', null, null],
      ['Copper,L1,Top', 'OLD', null],
    ]);
    expect((await read([...MM, C, 'M02*'])).layers).toEqual(['a']);
  });

  test('a file that is not copper, or negative, says so', async () => {
    const d = await codes([
      '%TF.FileFunction,Soldermask,Top*%',
      '%TF.FilePolarity,Negative*%',
      ...MM,
      'M02*',
    ]);
    expect(d.map((n) => n[0])).toEqual(['not-copper', 'negative']);
  });
});

describe('clear polarity', () => {
  test('a stroke that is not touched stays one; one cut in two is two areas with its net', async () => {
    const d = await read([
      ...[
        ...MM,
        C,
        '%ADD11R,1X4*%',
        '%TO.N,A*%',
        'D10*',
        'X0Y0D02*',
        'X10000000D01*',
        'X0Y9000000D02*',
        'X10000000D01*',
      ],
      ...['%TD*%', '%LPC*%', 'D11*', 'X5000000Y0D03*', 'M02*'],
    ]);
    expect(d.shapes.map((s) => [s.figure.kind, s.net, s.role])).toEqual([
      ['area', 'A', 'trace'],
      ['area', 'A', 'trace'],
      ['stroke', 'A', 'trace'],
    ]);
    const half = 4.5 * 0.5 + Math.PI / 32;
    for (const s of d.shapes.slice(0, 2)) expect(Math.abs(areaOf(s) - half)).toBeLessThan(1e-7);
  });

  test('what clear covers whole is gone, and clear alone leaves nothing', async () => {
    const d = await read([
      ...MM,
      C,
      '%ADD11R,9X9*%',
      'D10*',
      'X0Y0D03*',
      '%LPC*%',
      'D11*',
      'X0Y0D03*',
      'M02*',
    ]);
    expect(d.shapes).toEqual([]);
  });
});

describe('macros', () => {
  const macro = async (body: string, numbers = '1'): Promise<number> => {
    const d = await read(
      [...MM, `%AMM*${body}*%`, `%ADD10M,${numbers}*%`, 'D10*', 'X1000000Y2000000D03*', 'M02*'],
      { tolerance: 1e-7 },
    );
    expect(d.notes).toEqual([]);
    return d.shapes.reduce((s, x) => s + areaOf(x), 0);
  };
  test.each([
    ['circle', '1,1,2,0,0', Math.PI],
    ['vector line', '20,1,0.5,0,0,3,4,15', 2.5],
    ['the old vector line', '2,1,0.5,0,0,3,4,15', 2.5],
    ['centre line', '21,1,3,2,5,5,45', 6],
    ['lower left line', '22,1,3,2,5,5,45', 6],
    ['outline, clockwise', '4,1,3,0,0,0,4,3,0,0,0,30', 6],
    ['polygon', '5,1,6,0,0,2,0', (3 * Math.sqrt(3)) / 2],
    ['thermal', '7,0,0,3,2,0.4,20', thermal(3, 2, 0.4)],
    ['a cut that misses', '1,1,2,0,0*1,0,2,5,5', Math.PI],
    ['a cut before what it would cut', '1,0,2,0,0*1,1,2,0,0', Math.PI],
    ['a sum', '$2=$1x2+1*21,1,$2,$2/3,0,0,0', 3],
    ['a sign', '21,1,3,2,-$1,--1,-(45)', 6],
    ['a comment', '0 a comment, 1,1,2*1,1,2,0,0', Math.PI],
  ])('%s', async (_, body, want) => {
    expect(Math.abs((await macro(body)) - want)).toBeLessThan(1e-6);
  });

  /** Of the ring: the cross covers, of each disc, 2 strips that meet in a square. */
  function thermal(outer: number, inner: number, gap: number): number {
    const strips = (d: number): number => {
      const [r, g] = [d / 2, gap / 2];
      const strip = 2 * (g * Math.sqrt(r * r - g * g) + r * r * Math.asin(g / r));
      return 2 * strip - gap * gap;
    };
    return (Math.PI / 4) * (outer * outer - inner * inner) - (strips(outer) - strips(inner));
  }

  test('a turn is about the macro’s origin', async () => {
    const d = await read([...MM, '%AMM*21,1,2,1,5,0,90*%', '%ADD10M*%', 'D10*', 'X1000000Y0D03*', 'M02*']);
    expect(box(d.shapes)).toEqual([0.5, 4, 1.5, 6]);
  });

  test('a moiré: rings and cross', async () => {
    const area = await macro('6,0,0,4,0.5,0.5,2,0.2,5,0');
    // Rings 4/3 and 2/1; the cross of 5 × 0.2 twice, less what lies on the rings.
    const rings = (Math.PI / 4) * (16 - 9 + 4 - 1);
    const strips = (d: number): number => {
      const [r, g] = [d / 2, 0.1];
      return 4 * (g * Math.sqrt(r * r - g * g) + r * r * Math.asin(g / r)) - 0.04;
    };
    const cross = 2 * 5 * 0.2 - 0.04;
    const shared = strips(4) - strips(3) + strips(2) - strips(1);
    expect(Math.abs(area - (rings + cross - shared))).toBeLessThan(1e-6);
  });

  test('an unknown primitive is noted', async () => {
    expect(await codes([...MM, '%AMM*1,1,2,0,0*99,1,2*%', '%ADD10M*%', 'D10*', 'X0D03*', 'M02*'])).toEqual([
      ['macro-primitive', 'line 3', 1],
    ]);
  });
});

describe('what is not understood is listed', () => {
  test('with its place and how often', async () => {
    const d = await codes([
      ...[
        ...MM,
        C,
        '%ZZTOP*%',
        '%IPNEG*%',
        '%OFA1B0*%',
        '%OFA0B0*%',
        '%IPPOS*%',
        'foo bar*',
        'G99*',
        'D05*',
        'M55*',
      ],
      ...[
        'X0D03*',
        'D77*',
        'X0D03*',
        'X1000D01*',
        'D10*',
        'G02*',
        'X5000000I0J0D01*',
        '%ADD12C,0*%',
        'D12*',
        'X0D03*',
      ],
    ]);
    expect(d).toEqual([
      ['unknown-command', 'line 4', 6],
      ['no-aperture', 'line 13', 3],
      ['no-quadrants', 'line 19', 1],
      ['no-centre', 'line 19', 1],
      ['no-size', 'line 22', 1],
      ['no-end', 'end', 1],
      ['negative', 'start', 1],
    ]);
  });

  test('a file cut short, and blocks and repeats left open', async () => {
    expect((await codes([...MM, C, 'D10*', 'X0D03*', 'X1000000D0'])).map((n) => n[0])).toContain(
      'unfinished',
    );
    expect(await codes([...MM, C, 'D10*', '%SRX2Y1I5J0*%', 'X0D03*', 'M02*'])).toEqual([
      ['unclosed', 'end', 1],
    ]);
  });

  test('nothing after M02 counts', async () => {
    expect((await read([...MM, C, 'D10*', 'M02*', 'X0Y0D03*', 'rubbish'])).shapes).toEqual([]);
  });
});

describe('hostile files', () => {
  const NEST = Array.from({ length: 12 }, (_, k) => [
    `%ABD${20 + k}*%`,
    `D${k === 0 ? 10 : 19 + k}*`,
    ...new Array(10).fill('X0Y0D03*'),
    '%AB*%',
  ]).flat();
  const deep = `${'('.repeat(100_000)}1${')'.repeat(100_000)}`;
  test.each<[string, string[], string, string]>([
    ['nothing', [''], 'not-gerber', ''],
    ['another kind of file', ['solid cube', 'facet normal 0 0 1'], 'not-gerber', ''],
    ['no unit', ['%FSLAX46Y46*%', C, 'D10*', 'X0Y0D03*', 'M02*'], 'no-units', ''],
    ['no format', ['%MOMM*%', C, 'D10*', 'X0Y0D03*', 'M02*'], 'no-format', 'line 4'],
    ['a format that is none', ['%FSLAX99*%', '%MOMM*%'], 'bad-format', 'line 1'],
    ['a unit that is none', ['%FSLAX46Y46*%', '%MOCM*%'], 'bad-format', 'line 2'],
    [
      'a bomb of repeats',
      [...MM, C, 'D10*', '%SRX1000000Y1000000I1J1*%', 'X0Y0D03*', '%SR*%', 'M02*'],
      'too-large',
      '',
    ],
    ['repeats without number', [...MM, C, 'D10*', '%SRX1e9Y1I1J1*%', 'M02*'], 'bad-repeat', 'line 5'],
    ['blocks of blocks of blocks', [...MM, C, ...NEST, 'D31*', 'X0Y0D03*', 'M02*'], 'too-large', ''],
    [
      'a macro that divides by zero',
      [...MM, '%AMM*1,1,1/$1,0,0*%', '%ADD10M,0*%', 'D10*', 'X0D03*', 'M02*'],
      'bad-macro',
      'line 6',
    ],
    [
      'brackets without end',
      [...MM, `%AMM*1,1,${deep},0,0*%`, '%ADD10M,0*%', 'D10*', 'X0D03*', 'M02*'],
      'bad-macro',
      'line 6',
    ],
    [
      'a macro that asks for itself',
      [...MM, '%AMM*$1=$1x$1*M,1*%', '%ADD10M,2*%', 'D10*', 'X0D03*', 'M02*'],
      'bad-macro',
      'line 6',
    ],
    [
      'an outline of a million corners',
      [...MM, '%AMM*4,1,1000000,0,0*%', '%ADD10M*%', 'D10*', 'X0D03*', 'M02*'],
      'bad-macro',
      'line 6',
    ],
    ['no such macro', [...MM, '%ADD10NONE,1*%'], 'no-macro', 'line 3'],
    ['NaN in an aperture', [...MM, '%ADD10C,NaN*%'], 'bad-aperture', 'line 3'],
    ['a negative size', [...MM, '%ADD10C,-1*%', 'D10*', 'X0D03*'], 'bad-aperture', 'line 5'],
    [
      'a polygon of 10⁹ corners',
      [...MM, '%ADD10P,1X1000000000*%', 'D10*', 'X0D03*'],
      'bad-aperture',
      'line 5',
    ],
    [
      'an aperture of a million km',
      [...MM, '%ADD10C,1000000000000*%', 'D10*', 'X0D03*'],
      'out-of-range',
      'line 5',
    ],
    ['a number of many digits', [...MM, C, 'D10*', 'X99999999999999999999D03*'], 'bad-number', 'line 5'],
    ['out of range', [...MM, C, 'D10*', 'X9999999999999.0D03*'], 'out-of-range', 'line 5'],
    ['two points in a number', [...MM, C, 'D10*', 'X1.2.3D03*'], 'bad-number', 'line 5'],
    ['a scale of zero', [...MM, '%LS0*%'], 'bad-placing', 'line 3'],
    [
      'scales within scales',
      [
        ...MM,
        C,
        '%LS99999*%',
        '%ABD20*%',
        'D10*',
        'X1000000D03*',
        'D02*',
        'X0D01*',
        '%AB*%',
        'D20*',
        'X0D03*',
        'M02*',
      ],
      'out-of-range',
      'line 12',
    ],
  ])('%s', async (_, lines, code, place) => {
    expect(await problem(lines)).toEqual([code, place]);
  });

  test('the unit that was given is taken where the file has none', async () => {
    const d = await read(['%FSLAX24Y24*%', '%ADD10R,1X1*%', 'D10*', 'X10000D03*', 'M02*'], { unit: 25.4 });
    expect(box(d.shapes).map((v) => Number(v.toFixed(9)))).toEqual([12.7, -12.7, 38.1, 12.7]);
    expect(d.notes.map((n) => n.code)).toEqual(['units-given']);
  });

  test('a million points in one row are one stroke; more than two million are refused', async () => {
    const row = Array.from({ length: 1000 }, (_, k) => `X${(k * 7919) % 1000}000Y${k}000D01*`).join('\n');
    const many = (k: number): string[] => [...MM, C, 'D10*', ...new Array(k).fill(row), 'M02*'];
    const d = await read(many(1000));
    expect(d.shapes.length).toBe(1);
    expect(d.shapes[0].figure.kind === 'stroke' && d.shapes[0].figure.points.length).toBe(2_000_000);
    expect(await problem(many(2001))).toEqual(['too-large', '']);
  });

  test('clear over dark a thousand times each is refused, not worked on for hours', async () => {
    const pair = ['%LPD*%', 'D10*', 'X0Y0D03*', '%LPC*%', 'D11*', 'X1000000Y1000000D03*'];
    const lines = [...MM, '%ADD10C,90*%', '%ADD11C,80*%', ...new Array(1000).fill(pair).flat(), 'M02*'];
    expect(await problem(lines)).toEqual(['too-large', '']);
  });
});
