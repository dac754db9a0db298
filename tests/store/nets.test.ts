import { beforeEach, describe, expect, test } from 'vitest';
import { quiet } from '../../src/core/base/run-context.ts';
import { netReports } from '../../src/core/copper/nets.ts';
import { drapeCircuit } from '../../src/core/drape/drape.ts';
import { loadPart } from '../../src/core/part/part.ts';
import { writeProject } from '../../src/core/project/read.ts';
import { netRows, netsNow } from '../../src/store/nets.ts';
import { createStore, type Store } from '../../src/store/store.ts';
import { WorkFailure } from '../../src/worker/client.ts';
import { domeHeight, domeProject, domeStl } from '../flows/dome.ts';
import { type FakeWorker, fakeWorker, until } from './fakes.ts';

let heavy: FakeWorker;
let store: Store;
const s = () => store.getState();
const bytes = domeStl(20, 40);

/** The dome with a second pad in net A, so that there is a way to measure, and an element of no net. */
function project() {
  const p = domeProject();
  p.circuit.elements.push(
    {
      id: 'p3',
      kind: 'pad',
      net: 'A',
      at: [6, -2, domeHeight(6, -2)],
      shape: { circle: 1.8 },
      turn: 0,
    },
    {
      id: 'p4',
      kind: 'pad',
      net: '',
      at: [-2, -12, domeHeight(-2, -12)],
      shape: { circle: 1.2 },
      turn: 0,
    },
    {
      id: 'p5',
      kind: 'pad',
      net: 'B',
      at: [-13, -11, domeHeight(-13, -11)],
      shape: { circle: 1.2 },
      turn: 0,
    },
  );
  return p;
}

beforeEach(async () => {
  heavy = fakeWorker();
  store = createStore({ heavy: heavy.client, live: fakeWorker().client });
  await store.openProject(writeProject(project()), 'dome.drape.json', 'ref', { ref: 'part', bytes });
});
const there = () => netsNow(s()) !== 'working';

describe('nets beside the document', () => {
  test('are what the core says of all of them together', async () => {
    await until(there);
    const part = loadPart(bytes, 'dome.stl', 'mm', quiet);
    const { copper } = drapeCircuit(project(), 'dome', part, quiet);
    const core = netReports(project(), copper);
    const found = s().nets!.value!;
    expect(found.map((n) => [n.name, n.pieces])).toEqual([
      ['A', 1],
      ['B', 2],
      ['C', 1],
    ]);
    for (const [i, n] of core.entries()) {
      expect(found[i]!.area).toBe(n.area);
      expect(found[i]!.current).toBe(n.current_A);
      const values = n.resistance_mohm.map((r) => r.value);
      expect(found[i]!.most?.value ?? null).toBe(values.length > 0 ? Math.max(...values) : null);
    }
    expect(found[0]!.most).toMatchObject({ from: 'p1', to: 'p3' });
    expect(found[0]!.most!.value).toBeGreaterThan(1);
  });

  test('are listed with what the copper says at once, while the rest is worked out', async () => {
    heavy.hold = 'nets';
    store.act({ kind: 'delete', ids: ['p5'] });
    await store.settled();
    expect(netsNow(s())).toBe('working');
    const rows = netRows(s().copper!.value, null);
    expect(rows.map((r) => [r.name, r.elements, r.found])).toEqual([
      ['A', ['p1', 't1', 'p3'], null],
      ['B', ['p2', 't2'], null],
      ['C', ['t3'], null],
    ]);
    const t1 = s().copper!.value.elements.find((e) => e.id === 't1')!;
    expect(rows[0]!.length).toBe(t1.length);
    // Nothing waits for them.
    expect(s().plan?.revision).toBe(s().revision);
    expect(s().busy).toBeNull();
    heavy.release();
    await until(there);
    expect(netRows(s().copper!.value, s().nets!.value)[1]!.found!.pieces).toBe(1);
  });

  test('of an older document are dropped, and its work is stopped', async () => {
    await until(there);
    heavy.hold = 'nets';
    store.act({ kind: 'delete', ids: ['t3'] });
    await store.settled();
    const late = s().revision;
    store.act({ kind: 'delete', ids: ['t2'] });
    const asked = heavy.calls.filter((c) => c === 'nets').length;
    heavy.release();
    await until(there);
    expect(s().nets!.revision).toBe(late + 1);
    expect(s().nets!.value!.map((n) => n.name)).toEqual(['A', 'B']);
    expect(heavy.calls.filter((c) => c === 'nets').length).toBe(asked + 1);
    expect(s().notices).toEqual([]);
  });

  test('that cannot be worked out are said to be so, and everything else stays', async () => {
    await until(there);
    const { call } = heavy.client;
    heavy.client.call = ((name: never, argument: never) =>
      name === 'nets'
        ? Promise.reject(new WorkFailure({ kind: 'fault', message: 'broken', stack: '' }))
        : call(name, argument)) as typeof call;
    store.act({ kind: 'delete', ids: ['t3'] });
    await until(() => s().nets?.revision === s().revision);
    expect(netsNow(s())).toBeNull();
    expect(s().notices.map((n) => n.level)).toEqual(['fault']);
    expect(s().plan?.revision).toBe(s().revision);
  });
});
