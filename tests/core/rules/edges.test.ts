import { describe, expect, it } from 'vitest';
import { quiet } from '../../../src/core/base/run-context.ts';
import { drapeCircuit } from '../../../src/core/drape/drape.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import type { Limits, Project } from '../../../src/core/project/schema.ts';
import { borderRule, sharpEdgeRule } from '../../../src/core/rules/edges.ts';
import { gridMesh, partFrom, plate, tube } from '../helpers/surfaces.ts';

const lay = (mesh: SurfaceMesh, ...elements: object[]) => {
  const project = { circuit: { elements, drapes: [] } } as unknown as Project;
  return drapeCircuit(project, 'x', partFrom(mesh), quiet).copper.elements;
};
const trace = (id: string, ...at: number[][]) => ({
  id,
  kind: 'trace',
  net: '',
  width: 0.6,
  route: at.map((p) => ({ at: p })),
});
const limits = (more: Partial<Limits> = {}) => more as Limits;

describe('sharp edges', () => {
  /** A sheet bent by 100° along x = 4. */
  const bent = gridMesh(10, 4, (i, j) =>
    i <= 4
      ? [i, 3 * j, 0]
      : [4 + (i - 4) * Math.cos(1.7453292519943295), 3 * j, -(i - 4) * Math.sin(1.7453292519943295)],
  );
  it('copper over a bend of 100° is told with the angle and the place, copper beside it is not', () => {
    const over = [4 + 2 * Math.cos(1.7453292519943295), 7, -2 * Math.sin(1.7453292519943295)];
    const laid = lay(bent, trace('over', [1, 5, 0], over), trace('beside', [1, 2, 0], [3.5, 3, 0]));
    const found = sharpEdgeRule(bent, laid, limits());
    expect(found.map((f) => [f.rule, f.level, f.elements])).toEqual([['sharp-edge', 'warning', ['over']]]);
    expect(found[0].value).toBeCloseTo(100, 6);
    expect(found[0].at[0]).toBeCloseTo(4, 9);
    expect(found[0].at[2]).toBeCloseTo(0, 9);
    expect(sharpEdgeRule(bent, laid, limits({ sharpEdge: 110 }))).toEqual([]);
  });
  it('the small bends of a round wall are none', () => {
    const mesh = tube(10, 20, 60, 2);
    const at = (a: number, z: number) => [10 * Math.cos(a), 10 * Math.sin(a), z];
    expect(sharpEdgeRule(mesh, lay(mesh, trace('t', at(0.1, 5), at(1.4, 15))), limits())).toEqual([]);
  });
});

describe('the end of the surface', () => {
  it('copper nearer to it than the limit is told with the distance, and a closed part has none', () => {
    const mesh = plate(20, 10, 4, 2);
    const laid = lay(mesh, trace('near', [-6, 4.5, 0], [6, 4.4, 0]), trace('far', [-6, 0, 0], [6, 1, 0]));
    const found = borderRule(mesh, laid, limits());
    expect(found.map((f) => [f.rule, f.elements])).toEqual([['border', ['near']]]);
    // Half the width from the centre line, which comes within half a millimetre of the edge.
    expect(found[0].value).toBeCloseTo(0.2, 2);
    expect(borderRule(mesh, laid, limits({ borderGap: 0.15 }))).toEqual([]);
    expect(borderRule({ ...mesh, twin: mesh.twin.map(() => 0) }, laid, limits())).toEqual([]);
  });
});
