import { describe, expect, test } from 'vitest';
import { source } from '../../reference/sources.ts';
import { areaOf, box, MM, read } from './gerber-helpers.ts';

/** mm² that the grid of the booleans may cost: half a step along every side. */
const GRID_AREA = 60 * 2 ** -28;

describe(source('gerber-2022'), () => {
  test('a draw and the four standard apertures have the areas of their formulas, whatever the tolerance', async () => {
    for (const tolerance of [0.05, 0.005, 0.0001]) {
      const d = await read(
        [
          ...MM,
          ...['%ADD10C,0.5*%', '%ADD11R,2X1*%', '%ADD12O,3X1*%', '%ADD13P,2X6*%', '%ADD14C,2X1*%'],
          ...['G01*', 'D10*', 'X0Y0D02*', 'X10000000Y0D01*', 'D11*', 'X0Y5000000D03*'],
          ...['D12*', 'X5000000Y5000000D03*', 'D13*', 'X10000000Y5000000D03*'],
          ...['D14*', 'X15000000Y5000000D03*', 'M02*'],
        ],
        { tolerance },
      );
      expect(d.notes).toEqual([]);
      expect(d.shapes.map((s) => s.role)).toEqual(['trace', 'pad', 'pad', 'pad', 'pad']);
      const want = [5.196349541, 2, 2.785398163, 2.598076211, 2.35619449];
      d.shapes.forEach((s, k) => {
        expect(Math.abs(areaOf(s) - want[k])).toBeLessThan(1e-9 + GRID_AREA);
      });
      const sum = d.shapes.reduce((a, s) => a + areaOf(s), 0);
      expect(Math.abs(sum - 14.936018406)).toBeLessThan(1e-9 + GRID_AREA);
      const hexagon = d.shapes[3].figure;
      if (hexagon.kind !== 'area') throw new Error('a flash is an area');
      expect([...hexagon.rings[0].slice(0, 2)]).toEqual([11, 5]);
    }
  });

  test('a region with an arc, a clear flash, and a pad on what was cleared', async () => {
    const d = await read([
      ...MM,
      ...['%ADD10C,4*%', '%ADD11R,1X1*%', 'G75*', '%LPD*%', 'G36*', 'X0Y0D02*', 'G01*', 'X10000000Y0D01*'],
      ...['G03*', 'X10000000Y10000000I0J5000000D01*', 'G01*', 'X0Y10000000D01*', 'X0Y0D01*', 'G37*'],
      ...['%LPC*%', 'D10*', 'X5000000Y5000000D03*', '%LPD*%', 'D11*', 'X5000000Y5000000D03*', 'M02*'],
    ]);
    expect(d.notes).toEqual([]);
    expect(d.shapes.map((s) => [s.role, s.figure.kind === 'area' && s.figure.rings.length])).toEqual([
      ['region', 2],
      ['pad', 1],
    ]);
    const sum = d.shapes.reduce((a, s) => a + areaOf(s), 0);
    expect(Math.abs(sum - 127.703537555)).toBeLessThan(1e-9 + GRID_AREA);
    const [x0, y0, x1, y1] = box(d.shapes);
    for (const [have, want] of [
      [x0, 0],
      [y0, 0],
      [x1, 15],
      [y1, 10],
    ])
      expect(Math.abs(have - want)).toBeLessThan(0.005);
  });

  test('a macro’s hole spares what lies below; six copies with their net', async () => {
    const d = await read([
      ...MM,
      ...['%AMDONUT*1,1,$1,0,0*1,0,$2,0,0*%', '%ADD20DONUT,3X1.5*%', '%ADD21R,1X1*%', '%TO.N,SENSE1*%'],
      ...['%SRX3Y2I5.0J4.0*%', 'D21*', 'X0Y0D03*', 'D20*', 'X0Y0D03*', '%SR*%', '%TD*%', 'M02*'],
    ]);
    expect(d.notes).toEqual([]);
    expect(d.shapes.length).toBe(12);
    expect(d.shapes.every((s) => s.net === 'SENSE1')).toBe(true);
    const sum = d.shapes.reduce((a, s) => a + areaOf(s), 0);
    expect(Math.abs(sum - 37.808625618)).toBeLessThan(1e-9 + 6 * GRID_AREA);
    const [x0, y0, x1, y1] = box(d.shapes);
    for (const [have, want] of [
      [x0, -1.5],
      [y0, -1.5],
      [x1, 11.5],
      [y1, 5.5],
    ])
      expect(Math.abs(have - want)).toBeLessThan(0.005);
  });
});

describe(`digits of coordinates: ${source('gerber-2022')}`, () => {
  const place = async (format: string, unit: string, word: string): Promise<number[]> => {
    const d = await read([format, unit, '%ADD10R,1X1*%', 'D10*', `${word}D03*`, 'M02*']);
    const [x0, y0, x1, y1] = box(d.shapes);
    return [(x0 + x1) / 2, (y0 + y1) / 2];
  };
  test.each([
    ['%FSLAX46Y46*%', '%MOMM*%', 'X10000000Y-1', 10, -1e-6],
    ['%FSLAX24Y24*%', '%MOIN*%', 'X12345Y0', 31.3563, 0],
    ['%FSTAX24Y24*%', '%MOIN*%', 'X012345Y-1', 31.3563, -254],
    ['%FSTAX35Y35*%', '%MOMM*%', 'X0127Y005', 12.7, 5],
    ['%FSDAX33Y33*%', '%MOMM*%', 'X012700Y000005', 12.7, 0.005],
    ['%FSLAX34Y25*%', '%MOMM*%', 'X10000Y10000', 1, 0.1],
    ['%FSLAX46Y46*%', '%MOMM*%', 'X12.7Y-3.5', 12.7, -3.5],
  ])('%s %s %s', async (format, unit, word, x, y) => {
    const [u, v] = await place(format, unit, word);
    expect(Math.abs(u - x)).toBeLessThan(1e-9);
    expect(Math.abs(v - y)).toBeLessThan(1e-9);
  });

  test('incremental coordinates go on from the last place, and a letter not written keeps its value', async () => {
    const d = await read([
      '%FSLIX33Y33*%',
      '%MOMM*%',
      '%ADD10R,1X1*%',
      'D10*',
      'X1000Y2000D03*',
      'X500D03*',
      'M02*',
    ]);
    expect(box(d.shapes.slice(1))).toEqual([1, 1.5, 2, 2.5]);
  });
});

describe(`arcs: ${source('circular-segments')}`, () => {
  /** The region between an arc from (0, 0) to (10, 0) and its chord. */
  const cut = async (move: string, quadrants = 'G75*'): Promise<number> => {
    const d = await read([...MM, quadrants, 'G36*', 'X0Y0D02*', move, 'G01*', 'X0Y0D01*', 'G37*', 'M02*']);
    expect(d.notes).toEqual([]);
    return d.shapes.reduce((s, x) => s + areaOf(x), 0);
  };
  test.each([
    ['bulge 1', 'G03*X10000000Y0I5000000J0D01*', 39.26990817],
    ['bulge tan 22.5°', 'G03*X10000000Y0I5000000J5000000D01*', 14.26990817],
    ['bulge −tan 22.5°', 'G02*X10000000Y0I5000000J-5000000D01*', 14.26990817],
    ['bulge 0.5', 'G03*X10000000Y0I5000000J3750000D01*', 17.472469453],
    ['bulge 2', 'G03*X10000000Y0I5000000J-3750000D01*', 105.245993578],
  ])('a contour’s arc of %s', async (_, move, want) => {
    expect(Math.abs((await cut(move)) - want)).toBeLessThan(1e-8 + GRID_AREA);
  });

  test('a single quadrant takes I and J without signs', async () => {
    // A quarter of the circle of radius 5 about (5, 0) from (0, 0) up to (5, 5), and its chord.
    const quarter = await cut('G02*X5000000Y5000000I5000000J0D01*', 'G74*');
    const mirrored = await cut('G03*X-5000000Y5000000I5000000J0D01*', 'G74*');
    const want = (25 * Math.PI) / 4 - 12.5;
    expect(Math.abs(quarter - want)).toBeLessThan(1e-8 + GRID_AREA);
    expect(Math.abs(mirrored - want)).toBeLessThan(1e-8 + GRID_AREA);
  });

  test('start and end the same are a full circle with many quadrants', async () => {
    const disc = await read([
      ...MM,
      'G75*',
      'G36*',
      'X2000000Y0D02*',
      'G02*',
      'X2000000Y0I-2000000J0D01*',
      'G37*',
      'M02*',
    ]);
    expect(Math.abs(areaOf(disc.shapes[0]) - 4 * Math.PI)).toBeLessThan(1e-8 + GRID_AREA);
  });

  test('a drawn arc stays within the tolerance of its circle and runs the right way', async () => {
    for (const [word, side] of [
      ['G03', -1],
      ['G02', 1],
    ] as const) {
      const d = await read([
        ...MM,
        '%ADD10C,0.3*%',
        'D10*',
        'G75*',
        'X0Y0D02*',
        `${word}X10000000Y0I5000000J0D01*`,
        'M02*',
      ]);
      const f = d.shapes[0].figure;
      if (f.kind !== 'stroke') throw new Error('a draw is a stroke');
      expect(f.width).toBe(0.3);
      expect([f.points[0], f.points[1]]).toEqual([0, 0]);
      expect([...f.points.slice(-2)]).toEqual([10, 0]);
      let length = 0;
      for (let i = 2; i < f.points.length; i += 2) {
        const [ax, ay, bx, by] = f.points.slice(i - 2, i + 2);
        length += Math.hypot(bx - ax, by - ay);
        // The middle of a chord lies within the tolerance of the circle; corners on it.
        expect(Math.abs(Math.hypot((ax + bx) / 2 - 5, (ay + by) / 2) - 5)).toBeLessThan(0.005 + 1e-12);
        expect(Math.abs(Math.hypot(bx - 5, by) - 5)).toBeLessThan(1e-12);
        if (i + 2 < f.points.length) expect(Math.sign(by)).toBe(side);
      }
      expect(15.707963268 - length).toBeGreaterThan(0);
      expect(15.707963268 - length).toBeLessThan(0.02);
    }
  });
});
