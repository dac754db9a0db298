import { expect, test } from 'vitest';
import { quiet } from '../../src/core/base/run-context.ts';
import { DEFAULTS, type Drawing, type Shape } from '../../src/core/drawing/drawing.ts';
import { readProject, writeProject } from '../../src/core/project/read.ts';
import type { Drape } from '../../src/core/project/schema.ts';
import { apply, nameOf } from '../../src/store/document.ts';
import { LINE_WIDTH } from '../../src/store/drapes.ts';
import { netNames, withNet } from '../../src/store/drawing-nets.ts';
import { flatPicture } from '../../src/worker/flat-picture.ts';
import { HeldDrawings } from '../../src/worker/held-drawings.ts';
import { flatForTests } from '../core/helpers/flat.ts';
import { domeProject } from '../flows/dome.ts';

const drape: Drape = {
  id: 'd1',
  drawing: 'a.svg',
  anchor: [0, 0, 14],
  origin: [0, 0],
  turn: 0,
  mirror: false,
  evenLengths: true,
  drawingLayers: {},
  nets: {},
};
const shape = (id: string | null, layer: string, net: string | null): Shape => ({
  id,
  layer,
  net,
  role: 'trace',
  pin: null,
  figure: {
    kind: 'stroke',
    points: Float64Array.of(0, 0, 3, 1),
    closed: false,
    width: 0.4,
    ends: 'round',
    bends: 'round',
  },
  place: '',
});
const drawing: Drawing = {
  file: 'a.svg',
  shapes: [
    shape('spine', 'top', null),
    shape(null, 'top', 'GND'),
    shape('rib', 'rest', 'VCC'),
    shape('spine', 'rest', null),
    shape('gone', 'off', null),
  ],
  holes: [],
  layers: ['top', 'rest', 'off'],
  notes: [],
};
const names = (d: Drape) => netNames(d, flatPicture(drawing, d, 'k'));

test('names that a net can be given to are its layers and its shapes, each once, without what is left out', () => {
  const own = { ...drape, drawingLayers: { off: 'skip' }, nets: { top: 'A', spine: 'S' } };
  expect(names(own)).toEqual([
    { kind: 'layer', name: 'top', given: 'A', otherwise: '' },
    { kind: 'layer', name: 'rest', given: '', otherwise: '' },
    { kind: 'shape', name: 'spine', given: 'S', otherwise: 'A' },
    { kind: 'shape', name: 'rib', given: '', otherwise: 'VCC' },
  ]);
});

test('a name without a net is taken out, blanks around one are too', () => {
  expect(withNet({ a: 'X', b: 'Y' }, 'a', ' ')).toEqual({ b: 'Y' });
  expect(withNet({ b: 'Y' }, 'a', ' Z ')).toEqual({ a: 'Z', b: 'Y' });
});

test('what a change leaves undefined is gone from the drape, and stays gone when it is written', () => {
  const p = domeProject();
  p.circuit.drapes = [{ ...drape, units: 'inch', lineWidth: 0.3 }];
  const act = {
    kind: 'edit-drape' as const,
    id: 'd1',
    what: 'unit',
    change: { units: undefined, lineWidth: 0.7 },
  };
  expect(nameOf(act)).toBe('change unit of d1');
  const after = apply(p, act).circuit.drapes[0]!;
  expect('units' in after).toBe(false);
  expect(after.lineWidth).toBe(0.7);
  const read = readProject(writeProject(apply(p, act)), 'x').project.circuit.drapes[0]!;
  expect(read).toEqual(after);
  expect(p.circuit.drapes[0]!.units).toBe('inch');
});

test('lines without a width are as wide as the panel says when nothing is said', async () => {
  expect(LINE_WIDTH).toBe(DEFAULTS.lineWidth);
  const dxf = [
    '0 SECTION 2 HEADER 9 $INSUNITS 70 4 0 ENDSEC 0 SECTION 2 ENTITIES',
    '0 LINE 8 top 10 0 20 0 11 5 21 2 0 ENDSEC 0 EOF',
  ].join(' ');
  const bytes = new TextEncoder().encode(dxf.split(' ').join('\n') + '\n');
  const held = new HeldDrawings(flatForTests);
  await held.hold([{ file: 'a.dxf', bytes }]);
  const width = (how: { lineWidth?: number }) => {
    const { shapes } = held.read({ drawing: 'a.dxf', ...how }, '', '', quiet).drawing;
    return shapes[0]!.figure.kind === 'stroke' ? shapes[0]!.figure.width : 0;
  };
  expect(width({})).toBe(LINE_WIDTH);
  expect(width({ lineWidth: 0.35 })).toBe(0.35);
});
