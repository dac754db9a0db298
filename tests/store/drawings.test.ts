import { beforeEach, describe, expect, test } from 'vitest';
import { writeProject } from '../../src/core/project/read.ts';
import type { Project } from '../../src/core/project/schema.ts';
import { current } from '../../src/store/state.ts';
import { createStore, type OpenedDrawing, type Store } from '../../src/store/store.ts';
import { stepWords } from '../../src/store/words.ts';
import { domeHeight, domeProject, domeStl } from '../flows/dome.ts';
import { comb } from '../flows/drawings.ts';
import { type FakeWorker, fakeWorker } from './fakes.ts';

let heavy: FakeWorker;
let store: Store;
const s = () => store.getState();
const bytes = (text: string) => new TextEncoder().encode(text);

const on = (x: number, y: number): [number, number, number] => [x, y, domeHeight(x, y)];
function combProject(): Project {
  const p = domeProject();
  p.circuit.elements = p.circuit.elements.filter((e) => e.id === 'p1' || e.id === 't3');
  p.circuit.drapes = [
    {
      id: 'd1',
      drawing: 'art/comb.svg',
      anchor: on(4, 5),
      origin: [4, -2],
      turn: 25,
      mirror: false,
      evenLengths: true,
      drawingLayers: {},
      nets: { spine: 'S' },
    },
  ];
  return p;
}

async function open(project: Project, drawings: OpenedDrawing[]): Promise<void> {
  const part = { ref: 'part', bytes: domeStl(20, 40) };
  await store.openProject(writeProject(project), 'comb.drape.json', 'ref', part, drawings);
  await store.settled();
}
const theComb = (text = comb): OpenedDrawing => ({ file: 'art/comb.svg', ref: 'r1', bytes: bytes(text) });

beforeEach(() => {
  heavy = fakeWorker();
  store = createStore({ heavy: heavy.client, live: fakeWorker().client });
});

describe('a project with drapes', () => {
  test('is shown with the copper of its drawing, which knows its drape, its net and its stretch', async () => {
    await open(combProject(), [theComb()]);
    const { elements, drawings, problems, findings } = s().copper!.value;
    expect([problems, findings]).toEqual([[], []]);
    expect(elements.map((e) => [e.id, e.drape])).toEqual([
      ['p1', null],
      ['t3', null],
      ['d1/spine', 'd1'],
      ['d1/2', 'd1'],
      ['d1/pad', 'd1'],
    ]);
    expect(elements[2]!.net).toBe('S');
    expect(elements[2]!.length).toBeCloseTo(8, 1);
    expect(elements[2]!.stretched!.along).toBeGreaterThan(0.9);
    expect(drawings).toEqual([
      expect.objectContaining({
        drape: 'd1',
        shapes: 3,
        notes: [expect.objectContaining({ text: expect.stringMatching(/text/i), count: 1 })],
      }),
    ]);
    expect(stepWords(s()).circuit.words).toMatch(/^1 trace, 1 pad, 1 drawing/);
    expect(current(s()).plan!.layers.length).toBeGreaterThan(0);
  });

  test('without its drawing it shows the rest, and names file, place and mend', async () => {
    await open(combProject(), [{ file: 'art/comb.svg', ref: null, bytes: null, problem: 'it is not there' }]);
    expect(s().copper!.value.elements.map((e) => e.id)).toEqual(['p1', 't3']);
    expect(s().copper!.value.problems).toEqual([
      {
        code: 'no-drawing',
        file: 'lumpy dome',
        place: '$.circuit.drapes[0].drawing',
        problem: 'art/comb.svg is not there',
        mend: 'put the file back and open the project again',
      },
    ]);
    expect(s().notices.map((n) => n.text)).toEqual([
      'comb.drape.json: the drawing art/comb.svg is missing: it is not there',
    ]);
  });

  test('with a drawing that cannot be read it shows the rest and the reader’s own words', async () => {
    await open(combProject(), [theComb('<svg xmlns="http://www.w3.org/2000/svg" width="8mm"><path')]);
    expect(s().copper!.value.elements.map((e) => e.id)).toEqual(['p1', 't3']);
    expect(s().copper!.value.problems).toEqual([expect.objectContaining({ file: 'art/comb.svg' })]);
  });

  test('hands the drawing over once, and an act elsewhere lays it no second time', async () => {
    await open(combProject(), [theComb()]);
    const before = s().copper!.value.elements.find((e) => e.id === 'd1/spine')!;
    store.act({ kind: 'delete', ids: ['t3'] });
    await store.settled();
    expect(heavy.calls.filter((c) => c === 'holdDrawings')).toHaveLength(1);
    const after = s().copper!.value.elements.find((e) => e.id === 'd1/spine')!;
    expect(after).toEqual({ ...before, first: expect.any(Number) });
  });

  test('exports with the drawing beside the part', async () => {
    await open(combProject(), [theComb()]);
    const result = (await store.exportFiles(writeProject(s().project!)))!;
    expect(result.report.elements.map((e) => e.id)).toContain('d1/spine');
    expect(result.files.map((f) => f.path)).toContain('source/comb.svg');
  });

  test('saved elsewhere, it names its drawing from there, and undo still finds it', async () => {
    await open(combProject(), [theComb()]);
    store.act({ kind: 'delete', ids: ['t3'] });
    store.placeDrawings([{ was: 'art/comb.svg', file: '../art/comb.svg', ref: 'r1' }]);
    await store.settled();
    expect(s().project!.circuit.drapes[0]!.drawing).toBe('../art/comb.svg');
    expect(s().copper!.value.problems).toEqual([]);
    store.undo();
    await store.settled();
    expect(s().project!.circuit.drapes[0]!.drawing).toBe('art/comb.svg');
    expect(s().copper!.value.problems).toEqual([]);
    expect(store.drawingsInUse()).toEqual([expect.objectContaining({ file: 'art/comb.svg', ref: 'r1' })]);
  });
});
