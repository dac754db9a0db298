import { expect, test } from 'vitest';
import type { Vec3 } from '../../src/core/base/vec.ts';
import { newProject } from '../../src/core/project/new-project.ts';
import { writeProject } from '../../src/core/project/read.ts';
import { createStore } from '../../src/store/store.ts';
import { fakeWorker } from './fakes.ts';

const R = 9;
const on = (turn: number, z: number): [number, number, number] => [R * Math.cos(turn), R * Math.sin(turn), z];

/** A closed post of 64 sides, 30 mm high, as a binary STL. */
function post(): Uint8Array {
  const n = 64;
  const at = (k: number, z: number): Vec3 => on((2 * Math.PI * k) / n, z);
  const facets: Vec3[][] = [];
  for (let k = 0; k < n; k++) {
    facets.push([at(k, 0), at(k + 1, 0), at(k + 1, 30)], [at(k, 0), at(k + 1, 30), at(k, 30)]);
    facets.push([[0, 0, 30], at(k, 30), at(k + 1, 30)], [[0, 0, 0], at(k + 1, 0), at(k, 0)]);
  }
  const bytes = new Uint8Array(84 + 50 * facets.length);
  const view = new DataView(bytes.buffer);
  view.setUint32(80, facets.length, true);
  facets.forEach((f, i) => {
    f.flat().forEach((x, k) => {
      view.setFloat32(96 + 50 * i + 4 * k, x, true);
    });
  });
  return bytes;
}

/** A ray that comes from outside and meets the post at an angle and a height. */
const toward = (turn: number, z: number) => ({
  origin: [40 * Math.cos(turn), 40 * Math.sin(turn), z] as Vec3,
  direction: [-Math.cos(turn), -Math.sin(turn), 0] as Vec3,
});

test('a trace dragged more than half round a post stays on its side when it is let go, in one step of undo', async () => {
  const store = createStore({ heavy: fakeWorker().client, live: fakeWorker().client });
  const project = newProject('post.stl', [
    [-R, -R, 0],
    [R, R, 30],
  ]);
  const route = [{ at: on(0.1, 14) }, { at: on(1.1, 15) }];
  const element = { id: 't1', kind: 'trace' as const, net: 'A', width: 0.5, route };
  const text = writeProject({ ...project, circuit: { ...project.circuit, elements: [element] } });
  await store.openProject(text, 'post.drape.json', 'ref', { ref: 'part', bytes: post() });
  await store.settled();
  const s = () => store.getState();
  const t1 = () => s().project!.circuit.elements[0] as typeof element;

  for (let turn = 1.2; turn < 4.4; turn += 0.2) {
    store.drag('t1', 1, toward(turn, 15), 0);
    // One place after the other, as a hand moves: none may be skipped.
    const to = on(turn, 15);
    await expect
      .poll(() => Math.hypot(...t1().route[1]!.at.map((x, k) => x - to[k]!)), { interval: 2 })
      .toBeLessThan(0.1);
  }
  await store.endDrag();
  await store.settled();
  expect(t1().route.length).toBeGreaterThan(2);
  expect(t1().route[0]).toEqual(route[0]);
  const copper = s().copper!.value.elements[0]!;
  // About 4.3 - 0.1 radians the long way round, not the rest of the circle.
  const end = t1().route[t1().route.length - 1]!.at;
  const turn = Math.atan2(end[1], end[0]) + 2 * Math.PI;
  expect(copper.length).toBeGreaterThan(0.995 * R * (turn - 0.1));
  expect(copper.length).toBeLessThan(1.005 * Math.hypot(R * (turn - 0.1), 1));
  expect(s().notices.map((n) => n.text)).toEqual([expect.stringContaining('added to t1')]);
  expect(s().history.past.map((x) => x.name)).toEqual(['move point 2 of t1']);
  store.undo();
  expect(t1().route).toEqual(route);
});

test('a trace that is still the shortest gets no points', async () => {
  const store = createStore({ heavy: fakeWorker().client, live: fakeWorker().client });
  const project = newProject('post.stl', [
    [-R, -R, 0],
    [R, R, 30],
  ]);
  const route = [{ at: on(0.1, 14) }, { at: on(1.1, 15) }, { at: on(1.9, 20) }];
  const element = { id: 't1', kind: 'trace' as const, net: 'A', width: 0.5, route };
  const text = writeProject({ ...project, circuit: { ...project.circuit, elements: [element] } });
  await store.openProject(text, 'post.drape.json', 'ref', { ref: 'part', bytes: post() });
  await store.settled();
  for (let k = 0; k < 5; k++) store.drag('t1', 1, toward(1 + 0.1 * k, 15 - k), 0);
  await store.endDrag();
  const t1 = store.getState().project!.circuit.elements[0] as typeof element;
  expect(t1.route).toHaveLength(3);
  expect(store.getState().notices).toEqual([]);
});
