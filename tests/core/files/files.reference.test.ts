import { describe, expect, it } from 'vitest';
import { layerCsv } from '../../../src/core/files/csv.ts';
import { layerFile, safeName, safeNames } from '../../../src/core/files/names.ts';
import { coordinate } from '../../../src/core/files/numbers.ts';
import { layerSvg, xmlId } from '../../../src/core/files/svg.ts';
import type { LayerScan } from '../../../src/core/scan/strokes.ts';
import { source } from '../../reference/sources.ts';

const layer: LayerScan = {
  index: 1,
  classes: [
    { speed: 800, power: 1, passes: 1 },
    { speed: 666.667, power: 0.5, passes: 2 },
  ],
  strokes: [
    { kind: 'outline', element: 'a "b",1', processClass: 0, points: Float64Array.of(1, 2, 3, -4.00004) },
    { kind: 'fill', element: 'p1', processClass: 1, points: Float64Array.of(-0.00001, 0, 5, 6, 7, 8) },
  ],
  markLength: 0,
  jumpLength: 0,
  time: 0,
};

describe(source('rfc-4180'), () => {
  it('a field with quotes and commas is quoted, its quotes doubled; four decimals, never -0', () => {
    expect(layerCsv(layer)).toBe(
      [
        'x_mm,y_mm,mark,speed_mm_s,element,power',
        '1.0000,2.0000,0,800,"a ""b"",1",1',
        '3.0000,-4.0000,1,800,"a ""b"",1",1',
        '0.0000,0.0000,0,666.667,p1,0.5',
        '5.0000,6.0000,1,666.667,p1,0.5',
        '7.0000,8.0000,1,666.667,p1,0.5',
        '',
      ].join('\n'),
    );
    expect(coordinate(-0.00004)).toBe('0.0000');
  });
});

describe(source('xml-1'), () => {
  const svg = layerSvg(layer, { field: [110, 100] }, 0.05);
  it('ids are XML names, unique, and different for different elements', () => {
    const ids = [...svg.matchAll(/ id="([^"]+)"/g)].map((m) => m[1]);
    expect(new Set(ids).size).toBe(ids.length);
    for (const id of ids) expect(id).toMatch(/^[A-Za-z_][\w.-]*$/);
    expect(xmlId('a b')).not.toBe(xmlId('a-b'));
    expect(xmlId('a_20_b')).not.toBe(xmlId('a b'));
  });
  it('the page is the field in mm, y is written as -Y, nothing is transformed', () => {
    expect(svg).toContain('width="110mm" height="100mm" viewBox="-55 -50 110 100"');
    expect(svg).toContain('points="1.0000,-2.0000 3.0000,4.0000"');
    expect(svg).not.toContain('transform');
    expect(svg).toContain('data-speed-mm-s="666.667" data-power="0.5" data-passes="2"');
  });
});

describe('file names', () => {
  it('never leave the folder, whatever a setup is called', () => {
    for (const name of [
      '../../etc',
      'C:\\x',
      '/abs',
      '..',
      '.',
      'a/b',
      'con',
      'ß?*',
      '',
      '  ',
      'x'.repeat(300),
    ]) {
      const safe = safeName(name);
      expect(safe).toMatch(/^[a-z0-9_-]{1,61}$/);
      expect(safe).not.toBe('con');
    }
  });
  it('setups that would share a folder get one each', () => {
    expect(safeNames(['Top', 'top', 'TOP!'])).toEqual(['top', 'top-2', 'top-3']);
    expect(layerFile('top', 3, 'svg')).toBe('top/layer-03.svg');
  });
});
