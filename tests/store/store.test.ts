import { beforeEach, describe, expect, test } from 'vitest';
import type { Vec3 } from '../../src/core/base/vec.ts';
import { writeProject } from '../../src/core/project/read.ts';
import { current, isUnsaved } from '../../src/store/state.ts';
import { createStore, type Store } from '../../src/store/store.ts';
import { stepWords } from '../../src/store/words.ts';
import { domeHeight, domeProject, domeStl } from '../flows/dome.ts';
import { type FakeWorker, fakeWorker, until } from './fakes.ts';

let heavy: FakeWorker;
let live: FakeWorker;
let store: Store;

beforeEach(async () => {
  heavy = fakeWorker();
  live = fakeWorker();
  store = createStore({ heavy: heavy.client, live: live.client });
  await store.openProject(writeProject(domeProject()), 'dome.drape.json', 'ref', {
    ref: 'part',
    bytes: domeStl(20, 40),
  });
  await store.settled();
});

const s = () => store.getState();
/** A ray straight down through x, y of the part. */
const down = (x: number, y: number) => ({ origin: [x, y, 100] as Vec3, direction: [0, 0, -1] as Vec3 });
const element = (id: string) => s().project!.circuit.elements.find((e) => e.id === id);

describe('following the document', () => {
  test('copper, reach and plan carry the revision of the document', () => {
    expect(s().copper?.revision).toBe(s().revision);
    expect(s().reach?.revision).toBe(s().revision);
    expect(s().plan?.revision).toBe(s().revision);
    expect(current(s()).plan!.layers.length).toBeGreaterThan(1);
  });

  test('a result for an older document is dropped', async () => {
    heavy.hold = 'reach';
    store.act({ kind: 'delete', ids: ['t1'] });
    const late = s().revision;
    await until(() => s().copper?.revision === late);
    store.act({ kind: 'delete', ids: ['t2'] });
    heavy.release();
    await store.settled();
    expect(s().reach?.revision).toBe(s().revision);
    expect(s().revision).toBe(late + 1);
    expect(s().copper!.value.elements.map((e) => e.id)).toEqual(['p1', 'p2', 't3']);
    expect(s().notices).toEqual([]);
  });

  test('reach that belongs to other copper counts as none', async () => {
    heavy.hold = 'reach';
    store.act({ kind: 'delete', ids: ['t1'] });
    await until(() => s().copper?.revision === s().revision);
    expect(s().reach).not.toBeNull();
    expect(current(s()).reach).toBeNull();
    heavy.release();
    await store.settled();
    expect(current(s()).reach).not.toBeNull();
  });

  test('an element that cannot be laid is named, and the others stay', async () => {
    store.act({ kind: 'move-pad', id: 'p1', at: [0, 0, 60] });
    await store.settled();
    expect(s().copper!.value.problems).toEqual([
      expect.objectContaining({ code: 'far-from-surface', place: '$.circuit.elements[0].at' }),
    ]);
    expect(s().copper!.value.elements.map((e) => e.id)).toEqual(['p2', 't1', 't2', 't3']);
    expect(stepWords(s()).circuit.words).toContain('1 cannot be laid');
  });

  test('heights set by hand are used, a layer too few leaves copper out, and fewest puts the plan back', async () => {
    const fewest = current(s()).plan!.layers.map((l) => l.focusHeight);
    store.moveLayer(0, fewest[0]! - 1.5, null);
    await store.settled();
    const moved = current(s()).plan!;
    expect(moved.layers[0]!.focusHeight).toBeCloseTo(fewest[0]! - 1.5, 6);
    expect(moved.layers.slice(1).map((l) => l.focusHeight)).toEqual(fewest.slice(1));
    expect(moved.unreached.length).toBeGreaterThan(0);
    expect([...moved.layerOf]).toContain(-1);
    expect(stepWords(s()).heights).toMatchObject({
      mark: 'look',
      words: expect.stringContaining('left out'),
    });
    expect(s().history.past.at(-1)!.name).toBe('change height of layer 1');
    store.fewest();
    await store.settled();
    expect(current(s()).plan!.layers.map((l) => l.focusHeight)).toEqual(fewest);
  });

  test('a height that the stage cannot reach is bad input, named by its place', async () => {
    store.act({ kind: 'set', path: ['setups', 0, 'focusHeights'], what: 'heights', value: [1, -99] });
    await store.settled();
    expect(s().notices.at(-1)!.text).toContain('$.setups[0].focusHeights[1]');
  });

  test('a layer dragged while the plan is worked out goes all the way: no move is lost', async () => {
    const [first] = current(s()).plan!.layers.map((l) => l.focusHeight);
    const height = () => (s().project!.setups as { focusHeights?: number[] }[])[0]!.focusHeights![0];
    for (let i = 1; i <= 8; i++) {
      store.moveLayer(0, first! - 0.1 * i, 'band');
      expect(height()).toBeCloseTo(first! - 0.1 * i, 6);
      // The copper of this move is there, its plan not yet.
      await until(() => s().copper!.revision === s().revision);
    }
    store.seal();
    await store.settled();
    expect(s().history.past.map((h) => h.name)).toEqual(['change height of layer 1']);
  });

  test('a layer does not pass its neighbour', async () => {
    const fewest = current(s()).plan!.layers.map((l) => l.focusHeight);
    store.moveLayer(0, fewest[1]! + 5, null);
    const heights = (s().project!.setups as { focusHeights?: number[] }[])[0]!.focusHeights!;
    expect(heights[0]).toBeLessThan(fewest[1]!);
    await store.settled();
  });
});

describe('drawing', () => {
  test('clicks lie on the surface in the order they were made, though each waits for its place', async () => {
    store.setTool('trace');
    const clicks: [number, number][] = [
      [-6, -9],
      [3, -8],
      [9, -2],
    ];
    for (const [x, y] of clicks) void store.press(down(x, y), 0.5, false);
    await store.finish();
    const t4 = element('t4');
    if (t4?.kind !== 'trace') throw new Error('no trace');
    t4.route.forEach((r, i) => {
      expect(r.at[0]).toBeCloseTo(clicks[i]![0], 3);
      expect(r.at[1]).toBeCloseTo(clicks[i]![1], 3);
      expect(Math.abs(r.at[2] - domeHeight(...clicks[i]!))).toBeLessThan(0.1);
    });
    expect(s().history.past.map((x) => x.name)).toEqual(['draw trace t4']);
    await store.settled();
    expect(s().copper!.value.elements.map((e) => e.id)).toContain('t4');
  });

  test('a click near a pad takes its middle, and the trace takes its net', async () => {
    store.setTool('trace');
    await store.press(down(12.6, 9.4), 1, false);
    await store.press(down(3, 3), 0.2, false);
    await store.finish();
    const pad = element('p2');
    const trace = element('t4');
    if (pad?.kind !== 'pad' || trace?.kind !== 'trace') throw new Error('missing');
    expect(trace.route[0]!.at).toEqual(pad.at);
    expect(trace.net).toBe('B');
  });

  test('beside the part a click places nothing', async () => {
    store.setTool('pad');
    await store.press(down(50, 50), 1, false);
    expect(s().history.past).toEqual([]);
  });

  test('taking back, dropping and one lone point leave no trace', async () => {
    store.setTool('trace');
    await store.press(down(0, -9), 0.1, false);
    await store.press(down(5, -9), 0.1, false);
    await store.takeBack();
    await store.finish();
    expect(element('t4')).toBeUndefined();
    await store.press(down(0, -9), 0.1, false);
    await store.drop();
    expect(s().tool).toMatchObject({ kind: 'trace', route: [] });
    await store.drop();
    expect(s().tool.kind).toBe('look');
  });

  test('the run to the pointer is the way over the surface, and only the last place asked for is answered', async () => {
    store.setTool('trace');
    await store.press(down(-10, 0), 0.1, false);
    for (let i = 0; i < 20; i++) store.point(down(-10 + i, 2), 0.1);
    await until(() => {
      const { tool } = s();
      return tool.kind === 'trace' && tool.live !== null && Math.abs(tool.live.to[0] - 9) < 1e-3;
    });
    const { tool } = s();
    if (tool.kind !== 'trace') throw new Error('no tool');
    expect(tool.live!.length).toBeGreaterThan(19.1);
    expect(tool.live!.length).toBeLessThan(24);
    expect(live.calls.filter((c) => c === 'run').length).toBeLessThan(10);
  });

  test('a click on a selected run puts a point in where it was clicked', async () => {
    await store.press(down(0, 10.9), 0.1, false);
    const id = s().selection[0];
    if (!id) {
      // The trace t2 runs from (12, 9) by (2, 12) to (-9, 9): find it where it is.
      store.select(['t2']);
    }
    const path = s().copper!.value.elements.find((e) => e.id === 't2')!.path!;
    const k = 3 * Math.floor(path.length / 3 / 4);
    store.select(['t2']);
    await store.press(down(path[k]!, path[k + 1]!), 0.1, false);
    const t2 = element('t2');
    if (t2?.kind !== 'trace') throw new Error('no trace');
    expect(t2.route).toHaveLength(4);
    expect(t2.route[1]!.at[0]).toBeCloseTo(path[k]!, 2);
  });

  test('a drag ends as one step; the copper follows when it is let go', async () => {
    const before = element('t1');
    const revision = s().copper!.revision;
    for (let i = 0; i <= 6; i++) store.drag('t1', 1, down(-4 + i / 3, 3 - i / 2), 0.1);
    await until(() => s().preview.length === 2);
    expect(s().copper!.revision).toBe(revision);
    await store.endDrag();
    await store.settled();
    expect(s().preview).toEqual([]);
    expect(s().history.past.map((x) => x.name)).toEqual(['move point 2 of t1']);
    expect(s().copper!.revision).toBe(s().revision);
    store.undo();
    expect(element('t1')).toEqual(before);
    await store.settled();
  });
});

describe('saved or not', () => {
  test('a change makes it unsaved, undo makes it saved again, and a save moves the mark', () => {
    expect(isUnsaved(s())).toBe(false);
    store.act({ kind: 'delete', ids: ['t1'] });
    expect(isUnsaved(s())).toBe(true);
    store.undo();
    expect(isUnsaved(s())).toBe(false);
    store.redo();
    store.saved({}, s().project!, 'text');
    expect(isUnsaved(s())).toBe(false);
    store.undo();
    expect(isUnsaved(s())).toBe(true);
  });

  test('a bad project is told with its places, and the one at hand stays', async () => {
    const bad = domeProject();
    bad.head.pivot = [100, 178];
    await store.openProject(writeProject(bad), 'bad.drape.json', null, null);
    expect(s().notices[0]!.text).toContain('bad.drape.json, $.head.pivot[0]');
    expect(s().project!.name).toBe('lumpy dome');
  });

  test('selecting, undoing and deleting keep the selection to what exists', () => {
    store.select(['t1', 'p1']);
    store.deleteSelected();
    expect(s().selection).toEqual([]);
    expect(s().history.past.at(-1)!.name).toBe('delete 2 elements');
    store.undo();
    store.select(['t1']);
    store.redo();
    expect(s().selection).toEqual([]);
  });
});

describe('a wall thinner than any rounding', () => {
  /** A sheet of 0.02 µm: rounded to 0.1 µm both its sides go to the upper one. */
  const sheet = (): Uint8Array => {
    const [x, y, low, high] = [30, 20, 5.12346, 5.12348];
    const v = (i: number) => [i & 1 ? x : 0, i & 2 ? y : 0, i & 4 ? high : low];
    const quads = [
      [0, 2, 3, 1],
      [4, 5, 7, 6],
      [0, 1, 5, 4],
      [2, 6, 7, 3],
      [0, 4, 6, 2],
      [1, 3, 7, 5],
    ];
    const facets = quads.flatMap(([a, b, c, d]) => [
      [a!, b!, c!],
      [a!, c!, d!],
    ]);
    const bytes = new Uint8Array(84 + 50 * facets.length);
    const view = new DataView(bytes.buffer);
    view.setUint32(80, facets.length, true);
    facets.forEach((f, i) => {
      f.flatMap(v).forEach((n, k) => {
        view.setFloat32(84 + 50 * i + 12 + 4 * k, n, true);
      });
    });
    return bytes;
  };
  const up = (x: number, y: number) => ({ origin: [x, y, -100] as Vec3, direction: [0, 0, 1] as Vec3 });
  /** Which way the copper of an element looks: +1 up, -1 down, 0 mixed. */
  const looks = (id: string) => {
    const c = current(s()).copper!;
    const e = c.elements.find((x) => x.id === id)!;
    const z = [...c.corners.subarray(3 * e.first, 3 * (e.first + e.count))].map((v) =>
      Math.sign(c.normals[3 * v + 2]!),
    );
    return z.every((n) => n > 0) ? 1 : z.every((n) => n < 0) ? -1 : 0;
  };
  beforeEach(async () => {
    const project = domeProject('sheet.stl');
    project.circuit.elements = [];
    await store.openProject(writeProject(project), 'sheet.drape.json', 'ref', {
      ref: 'part',
      bytes: sheet(),
    });
    await store.settled();
  });

  test('copper is laid on the side that was clicked', async () => {
    store.setTool('pad');
    for (const [i, x] of [4.3, 9.1, 15.7, 22.2].entries())
      await store.press(i % 2 === 0 ? down(x, 11.3) : up(x, 11.3), 0, false);
    await store.settled();
    const ids = s().project!.circuit.elements.map((e) => e.id);
    expect(ids.map(looks)).toEqual([1, -1, 1, -1]);
  });

  test('a trace drawn on one side does not end on a pad of the other', async () => {
    store.setTool('pad');
    await store.press(up(9.1, 11.3), 0, false);
    await store.press(down(20.3, 11.3), 0, false);
    await store.settled();
    store.setTool('trace');
    await store.press(down(9.15, 11.32), 0.5, false);
    await store.press(down(20.35, 11.32), 0.5, false);
    await store.finish();
    await store.settled();
    const [under, over, trace] = s().project!.circuit.elements;
    expect(trace!.kind === 'trace' && trace.route.map((p) => [p.at[0], p.at[1]])).toEqual([
      [9.15, 11.32],
      [20.3, 11.3],
    ]);
    expect([under!, over!, trace!].map((e) => looks(e.id))).toEqual([-1, 1, 1]);
  });
});
