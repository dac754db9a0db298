/**
 * A drawing that reaches over a part's rim, where the log map tears triangles far beyond their size: the search for folds took
 * those for crushed when they came back to their true size, and left the whole map uneven, copper a third too small.
 * And electrodes in a ring of leads: what had to give way folded the narrow gaps between them.
 */
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { quiet } from '../../src/core/base/run-context.ts';
import { drapeCircuit } from '../../src/core/drape/drape.ts';
import { DEFAULTS } from '../../src/core/drawing/drawing.ts';
import { readSvg } from '../../src/core/drawing/svg.ts';
import { loadPart } from '../../src/core/part/part.ts';
import { readDrawings } from '../../src/core/pipeline.ts';
import { readProject } from '../../src/core/project/read.ts';
import { flatForTests } from '../core/helpers/flat.ts';
import { domeHeight, domeProject, domeStl } from '../flows/dome.ts';
import { board } from '../flows/drawings.ts';

describe('evened lengths', () => {
  it('near a rim every line has the copper that it was drawn with', async () => {
    const part = loadPart(domeStl(), 'dome.stl', 'mm', quiet);
    const drawing = readSvg(board, 'board.svg', DEFAULTS, await flatForTests(), quiet);
    const project = domeProject();
    project.circuit = {
      elements: [],
      drapes: [
        {
          id: 'd1',
          drawing: 'board.svg',
          anchor: [2, 1, domeHeight(2, 1)],
          origin: [12, -9],
          turn: 15,
          mirror: false,
          evenLengths: true,
          drawingLayers: {},
          nets: {},
        },
      ],
    };
    const { copper, findings } = drapeCircuit(project, 'x', part, quiet, new Map([['d1', drawing]]));
    expect(findings.filter((f) => f.rule === 'not-evened')).toEqual([]);
    const slant = copper.elements.find((e) => e.id === 'd1/slant')!;
    const drawn = 0.8 * (Math.hypot(6, 6) + Math.hypot(6, 5)) + Math.PI * 0.16;
    expect(Math.abs(slant.area / drawn - 1)).toBeLessThan(0.03);
  });

  it('in the demonstration no element is stretched by more than by the log map alone', async () => {
    const folder = new URL('../../assets/demo/', import.meta.url);
    const { project } = readProject(readFileSync(new URL('touch-dial.drape.json', folder), 'utf8'), 'x');
    const part = loadPart(readFileSync(new URL('dial.stl', folder)), 'dial.stl', 'mm', quiet);
    const files = [{ file: 'electrodes.svg', bytes: readFileSync(new URL('electrodes.svg', folder)) }];
    const worst = async (evenLengths: boolean) => {
      const own = structuredClone(project);
      own.circuit.elements = [];
      own.circuit.drapes = [{ ...own.circuit.drapes[0], evenLengths }];
      const read = await readDrawings(own, files, flatForTests, quiet);
      const { copper, findings } = drapeCircuit(own, 'x', part, quiet, read);
      expect(findings).toEqual([]);
      return Math.max(...copper.elements.map((e) => e.stretch));
    };
    const [even, plain] = [await worst(true), await worst(false)];
    // About the dome's middle circles of 16.6 mm are short by 4 to 6 %.
    expect(plain).toBeGreaterThan(0.04);
    expect(even).toBeLessThan(0.8 * plain);
  });
});
