import { expect, it } from 'vitest';
import { quiet } from '../../../src/core/base/run-context.ts';
import { drapeCircuit } from '../../../src/core/drape/drape.ts';
import type { Drawing } from '../../../src/core/drawing/drawing.ts';
import type { Drape, Project } from '../../../src/core/project/schema.ts';
import { partFrom, plate } from '../helpers/surfaces.ts';

const drape = (id: string, more: Partial<Drape> = {}): Drape => ({
  id,
  drawing: `${id}.x`,
  anchor: [3, 1, 0],
  origin: [0, 0],
  turn: 20,
  mirror: false,
  evenLengths: false,
  drawingLayers: {},
  nets: {},
  ...more,
});
const copper: Drawing = {
  file: 'copper.x',
  layers: [],
  holes: [],
  notes: [],
  shapes: [
    {
      id: 'bar',
      layer: '',
      net: null,
      pin: null,
      role: 'region',
      place: '',
      figure: { kind: 'area', rings: [Float64Array.of(-5, -2, 5, -2, 5, 2, -5, 2)] },
    },
  ],
};
const drill: Drawing = {
  file: 'drill.x',
  layers: [],
  notes: [],
  shapes: [],
  holes: [
    { at: [11, 3.5], to: [11, 3.5], diameter: 1.6, plated: true, place: '' } as Drawing['holes'][number],
  ],
};
const area = (drapes: Drape[]): number => {
  const project = { circuit: { elements: [], drapes } } as unknown as Project;
  const drawings = new Map([
    ['copper', copper],
    ['drill', drill],
  ]);
  return drapeCircuit(project, 'x', partFrom(plate(40, 30, 3, 2)), quiet, drawings).copper.elements[0].area;
};

it('copper keeps out of the holes of a drill file that is laid in the same place, whatever the origins', () => {
  // The hole stands at (1, -0.5) of the copper's own axes.
  const cut = area([drape('copper'), drape('drill', { origin: [10, 4] })]);
  expect(Math.abs(cut - (40 - Math.PI * 0.64))).toBeLessThan(0.01);
  for (const apart of [{ anchor: [3.5, 1, 0] as [number, number, number] }, { turn: 0 }, { mirror: true }])
    expect(
      Math.abs(area([drape('copper'), drape('drill', { origin: [10, 4], ...apart })]) - 40),
    ).toBeLessThan(0.01);
});
