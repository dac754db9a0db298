import { describe, expect, it } from 'vitest';
import { quiet } from '../../../src/core/base/run-context.ts';
import { drapeCircuit } from '../../../src/core/drape/drape.ts';
import { drapeDrawing } from '../../../src/core/drape/drape-drawing.ts';
import type { Drawing } from '../../../src/core/drawing/drawing.ts';
import { WindowSolver } from '../../../src/core/geodesic/windows.ts';
import type { Drape, Limits, Project } from '../../../src/core/project/schema.ts';
import { widthRule } from '../../../src/core/rules/width.ts';
import { partFrom, placeAt, plate, sphere } from '../helpers/surfaces.ts';

const limits = { minWidth: 0.25, safeWidth: 0.5 } as Limits;
const widths = (...elements: object[]) => {
  const part = partFrom(plate(30, 20, 3, 2));
  const project = { circuit: { elements, drapes: [] } } as unknown as Project;
  return widthRule(part, drapeCircuit(project, 'x', part, quiet).copper.elements, limits);
};
const pad = (shape: object) => ({ id: 'p', kind: 'pad', net: 'A', at: [1, 2, 0], shape, turn: 20 });
const region = (...outline: number[][]) => ({
  id: 'r',
  kind: 'region',
  net: 'A',
  outline: outline.map(([x, y]) => ({ at: [x, y, 0] })),
});

describe('width', () => {
  it('of a trace is the one it was drawn with, to the last digit, whatever its ends and bends', () => {
    const trace = (width: number) =>
      widths({
        id: 't',
        kind: 'trace',
        net: 'A',
        width,
        route: [
          [-8, 1, 0],
          [0, 2, 0],
          [1, -6, 0],
        ].map((at) => ({ at })),
      });
    expect(trace(0.5)).toEqual([]);
    expect(trace(0.25)).toMatchObject([{ level: 'warning', value: 0.25, limit: 0.5 }]);
    expect(trace(0.2)).toMatchObject([{ level: 'error', value: 0.2, limit: 0.25 }]);
  });

  it('of a pad is what it measures across, round ones too', () => {
    // Outlines are true to 1.5 µm on either side.
    const measured = (shape: object, width: number) => {
      const [found] = widths(pad(shape));
      expect(Math.abs(found.value - width)).toBeLessThan(0.003);
      expect(found.level).toBe('warning');
    };
    measured({ rect: [3, 0.4] }, 0.4);
    measured({ circle: 0.4 }, 0.4);
    measured({ slot: [2, 0.3] }, 0.3);
    measured({ circle: 0.25 }, 0.25);
    expect(widths(pad({ circle: 0.6 }))).toEqual([]);
  });

  it('of an area is that of its neck; corners, tips and slits are no necks', () => {
    // An hourglass on its side, 0.3 mm at the waist.
    const hourglass = region([-4, -2], [0, -0.1], [4, -2], [4, 2.4], [0, 0.2], [-4, 2.4]);
    const [neck] = widths(hourglass);
    expect(neck).toMatchObject({ level: 'warning', elements: ['r'] });
    expect(neck.at[0]).toBeCloseTo(0, 1);
    // Its sides meet at 55°: no circle fits closer than the waist.
    expect(widths(region([-4, -2], [5, 0.3], [-4, 2]))).toEqual([]);
    const slit = region([-4, -3], [4, -3], [4, 3], [0.1, 3], [0.1, 0], [-0.1, 0], [-0.1, 3], [-4, 3]);
    expect(widths(slit)).toEqual([]);
  });

  it('of a draped line is what the surface makes of it: squeezed on a dome', () => {
    const mesh = sphere(6, 6);
    const drawing: Drawing = {
      file: 'x.svg',
      layers: [],
      holes: [],
      notes: [],
      shapes: [
        {
          id: 'far',
          layer: '',
          net: null,
          pin: null,
          role: 'trace',
          place: '',
          figure: {
            kind: 'stroke',
            points: Float64Array.of(6, -2, 6, 2),
            closed: false,
            width: 0.4,
            ends: 'butt',
            bends: 'round',
          },
        },
      ],
    };
    const drape: Drape = {
      id: 'd',
      drawing: 'x.svg',
      anchor: [0, 0, 6],
      origin: [0, 0],
      turn: 0,
      mirror: false,
      evenLengths: false,
      drawingLayers: {},
      nets: {},
    };
    const lines = (turned: boolean) => {
      const shape = drawing.shapes[0];
      const points = turned ? Float64Array.of(1, 0, 4, 0) : Float64Array.of(3, -1, 3, 1);
      const own = { ...drawing, shapes: [{ ...shape, figure: { ...shape.figure, points } }] } as Drawing;
      const at = placeAt(mesh, [0.01, 0.02, 6]);
      return drapeDrawing(new WindowSolver(mesh), drape, own, at).elements;
    };
    const part = partFrom(mesh);
    // Radially nothing changes; around, lengths at r = 4 mm from the anchor shrink to R sin(r / R) / r of what was drawn.
    const [radial] = widthRule(part, lines(true), limits);
    expect(Math.abs(radial.value - (0.4 * 6 * Math.sin(4 / 6)) / 4)).toBeLessThan(0.01);
    const around = widthRule(part, lines(false), limits);
    expect(around[0].value).toBeGreaterThan(0.392);
  });
});
