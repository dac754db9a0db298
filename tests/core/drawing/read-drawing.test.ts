import { beforeAll, describe, expect, it } from 'vitest';
import { InputError } from '../../../src/core/base/news.ts';
import { quiet } from '../../../src/core/base/run-context.ts';
import { encodeUtf8 } from '../../../src/core/base/utf8.ts';
import { DEFAULTS, type DrawingOptions } from '../../../src/core/drawing/drawing.ts';
import type { Flat } from '../../../src/core/drawing/flat.ts';
import { readDrawing } from '../../../src/core/drawing/read-drawing.ts';
import { flatForTests } from '../helpers/flat.ts';

let flat: Flat;
beforeAll(async () => {
  flat = await flatForTests();
});

const read = (text: string, file: string, options: Partial<DrawingOptions> = {}) =>
  readDrawing(encodeUtf8(text), file, { ...DEFAULTS, ...options }, flat, quiet);

const DXF = (units: string) =>
  `0\nSECTION\n2\nHEADER\n${units}0\nENDSEC\n0\nSECTION\n2\nENTITIES\n0\nLINE\n8\nTOP\n10\n0\n20\n0\n11\n10\n21\n5\n0\nENDSEC\n0\nEOF\n`;

describe('a drawing is what it says of itself, whatever its name', () => {
  it.each([
    [
      'SVG',
      '<?xml version="1.0"?>\n<svg xmlns="http://www.w3.org/2000/svg" width="10mm" height="10mm" viewBox="0 0 10 10"><rect width="2" height="3"/></svg>',
      1,
      0,
    ],
    ['DXF', DXF('9\n$INSUNITS\n70\n4\n'), 1, 0],
    ['Gerber', '%FSLAX46Y46*%\n%MOMM*%\n%ADD10C,1*%\nD10*\nX0Y0D03*\nM02*\n', 1, 0],
    ['drill file', 'M48\nMETRIC,LZ\nT1C0.8\n%\nT1\nX0127Y005\nM30\n', 0, 1],
  ])('%s', (_, text, shapes, holes) => {
    const drawing = read(text, 'board.txt');
    expect([drawing.shapes.length, drawing.holes.length]).toEqual([shapes, holes]);
  });

  it('a file without units asks for them, and takes the unit it is given', () => {
    try {
      read(DXF(''), 'plan.dxf');
      expect.unreachable();
    } catch (error) {
      expect(error).toBeInstanceOf(InputError);
      expect((error as InputError).problems[0]).toMatchObject({ code: 'no-units', file: 'plan.dxf' });
    }
    const { figure } = read(DXF(''), 'plan.dxf', { unit: 25.4 }).shapes[0];
    expect(figure.kind === 'stroke' && [...figure.points]).toEqual([0, 0, 254, 127]);
  });

  it('anything else is told so', () => {
    for (const text of ['', 'hello', '\u0000\u0001\u0002', '{}'])
      expect(() => read(text, 'x.bin')).toThrow(
        expect.objectContaining({ problems: [expect.objectContaining({ code: 'unknown-drawing' })] }),
      );
  });
});
