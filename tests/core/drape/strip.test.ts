import { describe, expect, it } from 'vitest';
import { drapeTrace } from '../../../src/core/drape/trace.ts';
import { WindowSolver } from '../../../src/core/geodesic/windows.ts';
import { projectSchema, type Trace } from '../../../src/core/project/schema.ts';
import { exampleHead } from '../helpers/proof-scene.ts';
import { placeAt, plate } from '../helpers/surfaces.ts';

const project = (trace: object) =>
  projectSchema.safeParse({
    format: 'beamdrape',
    version: 1,
    name: 'x',
    part: { file: 'x.stl' },
    head: exampleHead,
    material: { activationFluence: 0.4, damageFluence: 6 },
    setups: 'auto',
    circuit: {
      elements: [
        { id: 't', kind: 'trace', width: 0.5, route: [{ at: [0, 0, 0] }, { at: [1, 0, 0] }], ...trace },
      ],
    },
  });

describe('ends and bends in the project file', () => {
  it('are kept as written, and left out where they were left out', () => {
    const [e] = project({ ends: 'butt', bends: 'miter' }).data!.circuit.elements;
    expect(e).toMatchObject({ ends: 'butt', bends: 'miter' });
    expect(Object.keys(project({}).data!.circuit.elements[0])).not.toContain('ends');
  });

  it('another word is refused', () => {
    expect(project({ ends: 'flat' }).error?.issues[0].path).toEqual(['circuit', 'elements', 0, 'ends']);
    expect(project({ bends: 'bevel' }).success).toBe(false);
  });

  it('left out, they are round', () => {
    const mesh = plate(20, 14, 3, 2);
    const places = [
      [-4, -3, 0],
      [2, 1, 0],
      [2, 5, 0],
    ].map(([x, y, z]) => placeAt(mesh, [x, y, z]));
    const lay = (change: Partial<Trace>) =>
      drapeTrace(
        new WindowSolver(mesh),
        { id: 't', kind: 'trace', net: '', width: 0.6, route: [], ...change },
        places,
      ).element!;
    expect(lay({}).outline).toEqual(lay({ ends: 'round', bends: 'round' }).outline);
    expect(lay({ ends: 'square' }).area).toBeGreaterThan(lay({}).area + 0.05);
  });

  it.each([-10, -9.8])('a square end is cut by the rim that it reaches over, start at %d', (x) => {
    const mesh = plate(20, 14, 3, 2);
    const places = [
      [x, 1.3, 0],
      [-7.2, 1.3, 0],
    ].map(([a, b, c]) => placeAt(mesh, [a, b, c]));
    const e = drapeTrace(
      new WindowSolver(mesh),
      { id: 't', kind: 'trace', net: '', width: 0.6, route: [], ends: 'square' },
      places,
    ).element!;
    // From the rim at -10 to 0.3 past the end.
    expect(e.area).toBeCloseTo(0.6 * 3.1, 3);
    expect(e.length).toBeCloseTo(-7.2 - x, 9);
  });

  it('the fill runs into a mitre and to the corners of a square end', () => {
    const mesh = plate(20, 14, 3, 2);
    const places = [
      [-4, -3, 0],
      [2, -3, 0],
      [2, 5, 0],
    ].map(([x, y, z]) => placeAt(mesh, [x, y, z]));
    const e = drapeTrace(
      new WindowSolver(mesh),
      { id: 't', kind: 'trace', net: '', width: 1, route: [], ends: 'square', bends: 'miter' },
      places,
    ).element!;
    const { positions: x, hatch, edge } = e.field;
    let corner = 0;
    for (let v = 0; v < edge.length; v++) {
      if (edge[v] > 0) continue;
      // Nothing of the copper lies past the last fill line's distance from the middle.
      expect(Math.abs(hatch[v])).toBeLessThanOrEqual(0.5 + 1e-9);
      if (x[3 * v] > 2.4 && x[3 * v + 1] < -3.4) corner++;
    }
    expect(corner).toBeGreaterThan(3);
  });
});
