import { beforeEach, describe, expect, test } from 'vitest';
import { quiet } from '../../src/core/base/run-context.ts';
import type { Vec3 } from '../../src/core/base/vec.ts';
import { writeProject } from '../../src/core/project/read.ts';
import type { Project } from '../../src/core/project/schema.ts';
import { stretchRows } from '../../src/store/drapes.ts';
import { current } from '../../src/store/state.ts';
import { createStore, type OpenedDrawing, type Store } from '../../src/store/store.ts';
import { stepWords } from '../../src/store/words.ts';
import { createSession } from '../../src/worker/session.ts';
import { flatForTests } from '../core/helpers/flat.ts';
import { domeHeight, domeProject, domeStl } from '../flows/dome.ts';
import { comb } from '../flows/drawings.ts';
import { type FakeWorker, fakeWorker, until } from './fakes.ts';

let heavy: FakeWorker;
let live: FakeWorker;
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
  live = fakeWorker();
  store = createStore({ heavy: heavy.client, live: live.client });
});

const down = (x: number, y: number) => ({ origin: [x, y, 100] as Vec3, direction: [0, 0, -1] as Vec3 });

describe('a drawing in hand', () => {
  beforeEach(() => open(combProject(), [theComb()]));
  const drape = () => s().project!.circuit.drapes[0]!;
  const spine = () => s().copper!.value.elements.find((e) => e.id === 'd1/spine')!;

  test('a click on its copper selects the whole of it, a second one the element', async () => {
    const at = spine().stretched!.at;
    await store.press(down(at[0], at[1]), 0.1, false);
    expect(s().selection).toEqual(['d1']);
    await store.press(down(at[0], at[1]), 0.1, false);
    expect(s().selection).toEqual(['d1/spine']);
    store.select(['d1']);
    store.deleteSelected();
    expect(s().project!.circuit.drapes).toEqual([]);
    expect(s().history.past.at(-1)!.name).toBe('delete d1');
  });

  test('its lines follow the pointer where they will lie, the copper when it is let go, in one step', async () => {
    const { revision } = s().copper!;
    for (let i = 0; i <= 5; i++) store.dragDrape('d1', down(4 - i, 5 - 2 * i));
    await until(() => Math.abs(drape().anchor[0] + 1) < 1e-3);
    await until(() => s().preview.length === 3);
    expect(s().copper!.revision).toBe(revision);
    await store.endDrapeDrag();
    const shown = await lastSketch();
    await store.settled();
    expect(s().preview).toEqual([]);
    expect(s().history.past.map((h) => h.name)).toEqual(['move drawing d1']);
    expect(s().copper!.revision).toBe(s().revision);
    // Lengths are evened when it is laid, which moves nothing by more than they were off.
    const path = spine().path!;
    for (const end of [0, -3])
      expect(Math.hypot(...[0, 1, 2].map((k) => path.at(end + k)! - shown.at(end + k)!))).toBeLessThan(0.2);
    expect(length(shown)).toBeCloseTo(spine().length, 1);
  });

  /** The spine where the project now has it, by a session of its own. */
  const lastSketch = async (): Promise<Float32Array> => {
    const { anchor: at, turn, mirror, origin } = drape();
    const flat = s().copper!.value.drawings[0]!.flat;
    const lines = [flat.points.slice(0, 2 * flat.ends[0]!).map((x, i) => x - origin[i % 2]!)];
    return (await live.client.call('sketch', { at, turn, mirror, lines }))[0]!;
  };

  test('turned notch by notch it is one step, and its copper lies turned', async () => {
    const way = () => {
      const p = spine().path!;
      const [dx, dy] = [p.at(-3)! - p[0]!, p.at(-2)! - p[1]!];
      return (Math.atan2(dy, dx) * 180) / Math.PI;
    };
    const first = way();
    for (let i = 0; i < 4; i++) store.turnDrape('d1', 5);
    expect(drape().turn).toBe(45);
    await until(() => s().preview.length > 0);
    await until(() => s().preview.length === 0);
    await store.settled();
    expect(way() - first).toBeGreaterThan(15);
    expect(way() - first).toBeLessThan(25);
    expect(s().history.past.map((h) => h.name)).toEqual(['change turn of d1']);
    store.turnDrape('d1', -50);
    expect(drape().turn).toBe(355);
    await until(() => s().preview.length === 0);
  });

  test('pulled straight, without one layer, mirrored: each is an act that lays it anew', async () => {
    store.act({ kind: 'edit-drape', id: 'd1', what: 'mirror', change: { mirror: true } });
    expect(s().history.past.at(-1)!.name).toBe('change mirror of d1');
    await store.settled();
    expect(s().copper!.value.elements.filter((e) => e.drape === 'd1')).toHaveLength(3);
    expect(s().copper!.revision).toBe(s().revision);
  });
});

test('the legend of stretch counts each element once, at the limits of the project, and what is drawn here apart', async () => {
  const p = combProject();
  await open(p, [theComb()]);
  const { value: copper } = s().copper!;
  const stretches = copper.elements.map((e) => e.stretch);
  const rows = (limits: Partial<Project['limits']>) =>
    stretchRows(copper, { ...p.limits, ...limits }).map((r) => [r.look, r.elements.map((e) => e.id).join()]);
  const all = 'd1/spine,d1/2,d1/pad';
  expect(Math.min(...stretches.slice(2))).toBeGreaterThan(0);
  expect(rows({ safeStretch: 0, maxStretch: 0 })).toEqual([
    ['little', ''],
    ['some', ''],
    ['much', ''],
    ['too-much', all],
    ['drawn-here', 'p1,t3'],
  ]);
  expect(rows({ safeStretch: 2, maxStretch: 3 })[0]).toEqual(['little', all]);
  const spine = copper.elements[2]!.stretch;
  expect(rows({ safeStretch: spine, maxStretch: 3 })[1]![1]).toContain('d1/spine');
  expect(rows({ safeStretch: 0.99 * spine, maxStretch: spine })[2]![1]).toContain('d1/spine');
  expect(stretchRows(copper, p.limits)[1]!.words).toBe('2.5 to 5 %, safe');
});

const length = (loop: Float32Array): number => {
  let sum = 0;
  for (let i = 3; i < loop.length; i += 3)
    sum += Math.hypot(loop[i]! - loop[i - 3]!, loop[i + 1]! - loop[i - 2]!, loop[i + 2]! - loop[i - 1]!);
  return sum;
};

describe('laying a drawing', () => {
  beforeEach(async () => {
    await open({ ...domeProject(), circuit: { elements: [], drapes: [] } }, []);
  });

  test('puts the middle of its box on the first ray that meets the part, as one act with its name', async () => {
    const files = [{ file: 'ring.svg', ref: null, bytes: bytes(comb) }];
    expect(await store.layDrawings(files, [down(50, 50), down(-3, 6)])).toBe('laid');
    const [d1] = s().project!.circuit.drapes;
    expect(d1).toMatchObject({ id: 'd1', drawing: 'ring.svg', origin: [5, -2.4] });
    expect(d1!.anchor[0]).toBeCloseTo(-3, 3);
    expect(s().history.past.map((h) => h.name)).toEqual(['lay drawing ring.svg']);
    expect(s().selection).toEqual(['d1']);
    await store.settled();
    expect(s().copper!.value.elements).toHaveLength(3);
    store.undo();
    expect(s().project!.circuit.drapes).toEqual([]);
    expect(s().selection).toEqual([]);
    store.redo();
    await store.settled();
    expect(s().copper!.value.elements).toHaveLength(3);
  });

  test('other bytes under the same name get a name of their own; the same bytes share one', async () => {
    const lay = (text: string) =>
      store.layDrawings([{ file: 'ring.svg', ref: null, bytes: bytes(text) }], [down(0, 0)]);
    await lay(comb);
    await lay(comb.replace('0.6', '0.7'));
    await lay(comb);
    expect(s().project!.circuit.drapes.map((d) => [d.id, d.drawing])).toEqual([
      ['d1', 'ring.svg'],
      ['d2', 'ring-2.svg'],
      ['d3', 'ring.svg'],
    ]);
  });

  test('files that come together share anchor and origin and are undone together', async () => {
    const left = comb.replace('<rect id="pad" x="7"', '<rect id="pad" x="0"');
    await store.layDrawings(
      [
        { file: 'a.svg', ref: null, bytes: bytes(comb.replace('H9', 'H6')) },
        { file: 'b.svg', ref: null, bytes: bytes(left) },
      ],
      [down(2, 3)],
    );
    const [a, b] = s().project!.circuit.drapes;
    expect(b!.origin).toEqual(a!.origin);
    expect(b!.anchor).toEqual(a!.anchor);
    // From 0, the left of the pad, to 9.3, half a line's width past the end of the spine.
    expect(a!.origin[0]).toBe(4.65);
    store.undo();
    expect(s().project!.circuit.drapes).toEqual([]);
  });

  test('a bad drawing, none at all, no surface and no unit change nothing, each with its own news', async () => {
    const lay = (file: string, text: string, ...rays: ReturnType<typeof down>[]) =>
      store.layDrawings([{ file, ref: null, bytes: bytes(text) }], rays);
    expect(await lay('bad.svg', '<svg', down(0, 0))).toBe('not');
    expect(s().notices.at(-1)!.text).toMatch(/^bad\.svg/);
    expect(await lay('a.svg', '<svg xmlns="http://www.w3.org/2000/svg" width="1mm" height="1mm"/>')).toBe(
      'not',
    );
    expect(s().notices.at(-1)!.text).toMatch(/holds nothing/);
    expect(await lay('ring.svg', comb, down(50, 0))).toBe('not');
    expect(s().notices.at(-1)!.text).toMatch(/no surface/);
    const gerber = '%FSLAX24Y24*%\n%ADD10C,0.8*%\nD10*\nX0Y0D02*\nX30000Y0D01*\nM02*\n';
    const before = s().notices;
    expect(await lay('tail.gbr', gerber, down(0, 0))).toBe('no-units');
    expect(s().notices).toBe(before);
    expect(s().history.past).toEqual([]);
  });
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

  test('hands the drawing over once, whatever else changes', async () => {
    await open(combProject(), [theComb()]);
    store.act({ kind: 'delete', ids: ['t3'] });
    await store.settled();
    expect(heavy.calls.filter((c) => c === 'holdDrawings')).toHaveLength(1);
  });

  test('is laid again only when its drape or its bytes change', async () => {
    const session = createSession(flatForTests);
    session.openPart({ bytes: domeStl(20, 40), file: 'dome.stl', units: 'mm' }, quiet);
    const files = (text: string) => ({ files: [{ file: 'art/comb.svg', bytes: bytes(text) }] });
    await session.holdDrawings(files(comb));
    const p = combProject();
    /** Without patience only what lies there already is given. */
    const there = (project: Project) => {
      const { elements, pending } = session.drape({ project, patience: -1 }, quiet);
      return [elements.filter((e) => e.drape === 'd1').length, pending];
    };
    session.drape({ project: p }, quiet);
    expect(there(p)).toEqual([3, 0]);
    const pad = { ...p.circuit.elements[0]!, id: 'p9', net: 'new' };
    expect(there({ ...p, circuit: { ...p.circuit, elements: [...p.circuit.elements, pad] } })).toEqual([
      3, 1,
    ]);
    await session.holdDrawings(files(comb));
    expect(there(p)).toEqual([3, 0]);
    const turned = { ...p, circuit: { ...p.circuit, drapes: [{ ...p.circuit.drapes[0]!, turn: 26 }] } };
    expect(there(turned)).toEqual([0, 1]);
    session.drape({ project: p }, quiet);
    await session.holdDrawings(files(comb.replace('0.6', '0.7')));
    expect(there(p)).toEqual([0, 1]);
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
