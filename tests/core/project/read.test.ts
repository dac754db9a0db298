import { describe, expect, it } from 'vitest';
import { InputError, type InputProblem } from '../../../src/core/base/news.ts';
import { readProject, writeProject } from '../../../src/core/project/read.ts';
import { exampleHead } from '../helpers/proof-scene.ts';

const good = () => ({
  format: 'beamdrape',
  version: 1,
  name: 'x',
  part: { file: 'x.stl' },
  head: { ...exampleHead } as Record<string, unknown>,
  material: { activationFluence: 0.4, damageFluence: 6 } as Record<string, unknown>,
  setups: [{ name: 'top', pose: { rotate: [0, 0, 0, 1], move: [0, 0, 0] } }] as unknown,
  circuit: {
    elements: [
      { id: 't', kind: 'trace', net: 'N', width: 0.5, route: [{ at: [0, 0, 0] }, { at: [1, 0, 0] }] },
    ] as unknown[],
  },
});
const problems = (data: unknown): InputProblem[] => {
  try {
    readProject(typeof data === 'string' ? data : JSON.stringify(data), 'x.drape.json');
  } catch (error) {
    if (error instanceof InputError) return [...error.problems];
    throw error;
  }
  return [];
};

describe('reading a project', () => {
  it('fills in the defaults of the job', () => {
    const { project } = readProject(JSON.stringify(good()), 'x');
    expect(project.limits.proof).toEqual({ covered: 0.995, strayTolerance: 0.05, stray: 0.001 });
    expect(project.scan.stitch).toBe(0.2);
    expect(project.stage.zMoves).toBe('stage');
  });

  it('keeps and names what it does not know, and writes it out again', () => {
    const data = { ...good(), mood: 'fine', head: { ...exampleHead, colour: 3 } };
    const { project, unknown } = readProject(JSON.stringify(data), 'x');
    expect(unknown.sort()).toEqual(['$.head.colour', '$.mood']);
    const again = JSON.parse(writeProject(project));
    expect(again.mood).toBe('fine');
    expect(again.head.colour).toBe(3);
  });

  it('what was read, written and read again is the same', () => {
    const once = readProject(JSON.stringify(good()), 'x').project;
    expect(readProject(writeProject(once), 'x').project).toEqual(once);
  });

  it('broken JSON is named by line and column', () => {
    expect(problems('{\n  "format": "beamdrape",\n  oops\n}')).toEqual([
      expect.objectContaining({ code: 'not-json', place: 'line 3, column 3' }),
    ]);
  });

  it.each([
    [
      'a missing head',
      (d: ReturnType<typeof good>) => Reflect.deleteProperty(d, 'head'),
      'bad-value',
      '$.head',
    ],
    [
      'a missing number',
      (d: ReturnType<typeof good>) => Reflect.deleteProperty(d.head, 'focalLength'),
      'bad-value',
      '$.head.focalLength',
    ],
    [
      'text for a number',
      (d: ReturnType<typeof good>) => Object.assign(d.head, { focalLength: 'long' }),
      'bad-value',
      '$.head.focalLength',
    ],
    [
      'M² below 1',
      (d: ReturnType<typeof good>) => Object.assign(d.head, { beamQuality: 0.9 }),
      'bad-value',
      '$.head.beamQuality',
    ],
    [
      'a trace of no width',
      (d: ReturnType<typeof good>) => Object.assign(d.circuit.elements[0] as object, { width: 0 }),
      'bad-value',
      '$.circuit.elements[0].width',
    ],
    [
      'a place of two numbers',
      (d: ReturnType<typeof good>) =>
        Object.assign(d.circuit.elements[0] as object, { route: [{ at: [0, 0] }, { at: [1, 0, 0] }] }),
      'bad-value',
      '$.circuit.elements[0].route[0].at',
    ],
    [
      'an unknown kind',
      (d: ReturnType<typeof good>) => Object.assign(d.circuit.elements[0] as object, { kind: 'blob' }),
      'bad-value',
      '$.circuit.elements[0].kind',
    ],
    [
      'an id used twice',
      (d: ReturnType<typeof good>) => d.circuit.elements.push(d.circuit.elements[0]),
      'same-id',
      '$.circuit.elements[1].id',
    ],
    [
      'a pivot inside the lens',
      (d: ReturnType<typeof good>) => Object.assign(d.head, { pivot: [100, 178] }),
      'bad-head',
      '$.head.pivot[0]',
    ],
    [
      'damage below activation',
      (d: ReturnType<typeof good>) => Object.assign(d.material, { damageFluence: 0.41 }),
      'bad-range',
      '$.material.damageFluence',
    ],
    [
      'a newer version',
      (d: ReturnType<typeof good>) => Object.assign(d, { version: 2 }),
      'newer-version',
      '$.version',
    ],
    [
      'a quaternion of length 2',
      (d: ReturnType<typeof good>) =>
        Object.assign(d, { setups: [{ name: 'a', pose: { rotate: [0, 0, 0, 2], move: [0, 0, 0] } }] }),
      'bad-value',
      '$.setups[0].pose.rotate',
    ],
  ])('%s is an error with its JSON path', (_, spoil, code, place) => {
    const data = good();
    spoil(data);
    const found = problems(data);
    expect(found.map((p) => [p.code, p.place])).toContainEqual([code, place]);
    for (const p of found) expect(p.mend).not.toBe('');
  });

  it('some other JSON is no project', () => {
    expect(problems({ hello: 1 })[0].code).toBe('not-a-project');
    expect(problems('[]')[0].code).toBe('not-a-project');
  });
});
