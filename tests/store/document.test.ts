import { describe, expect, test } from 'vitest';
import type { Project } from '../../src/core/project/schema.ts';
import { type Act, apply, freeId, nameOf } from '../../src/store/document.ts';
import { noHistory, record, redo, seal, undo } from '../../src/store/history.ts';
import { domeProject } from '../flows/dome.ts';

const frozen = (): Project => deepFreeze(domeProject());

function deepFreeze<T>(x: T): T {
  if (typeof x === 'object' && x !== null) {
    Object.values(x).forEach(deepFreeze);
    Object.freeze(x);
  }
  return x;
}

const ids = (p: Project) => p.circuit.elements.map((e) => e.id);
const routeOf = (p: Project, id: string) => {
  const e = p.circuit.elements.find((x) => x.id === id);
  if (e?.kind !== 'trace') throw new Error('no trace');
  return e.route.map((r) => r.at);
};

describe('acts', () => {
  const acts: [Act, string][] = [
    [
      {
        kind: 'add-element',
        element: { id: 'p9', kind: 'pad', net: '', at: [1, 2, 3], shape: { circle: 1 }, turn: 0 },
      },
      'place pad p9',
    ],
    [{ kind: 'delete', ids: ['t1', 'p2'] }, 'delete 2 elements'],
    [{ kind: 'move-point', id: 't2', index: 1, at: [9, 8, 7] }, 'move point 2 of t2'],
    [{ kind: 'add-point', id: 't1', index: 1, at: [1, 1, 1] }, 'add point to t1'],
    [{ kind: 'remove-point', id: 't3', index: 1 }, 'remove point 2 of t3'],
    [{ kind: 'move-pad', id: 'p1', at: [0, 0, 5] }, 'move pad p1'],
    [{ kind: 'edit-element', id: 't1', what: 'width', change: { width: 2 } }, 'change width of t1'],
    [
      {
        kind: 'add-drape',
        drape: {
          id: 'd1',
          drawing: 'art/ring.svg',
          anchor: [1, 2, 3],
          origin: [0, 0],
          turn: 0,
          mirror: false,
          evenLengths: true,
          drawingLayers: {},
          nets: {},
        },
      },
      'lay drawing ring.svg',
    ],
    [{ kind: 'set', path: ['head', 'pivot', 1], what: 'pivot along Y', value: null }, 'change pivot along Y'],
  ];

  test.each(acts)('%j has a name, changes the project and leaves its argument alone', (act, name) => {
    const before = frozen();
    const after = apply(before, act);
    expect(nameOf(act)).toBe(name);
    expect(after).not.toBe(before);
    expect(after).not.toEqual(before);
    expect(before).toEqual(domeProject());
  });

  test('acts that do not fit change nothing, and give back the same object', () => {
    const p = frozen();
    const two = apply(p, { kind: 'remove-point', id: 't1', index: 0 });
    expect(routeOf(two, 't1')).toHaveLength(2);
    expect(apply(two, { kind: 'remove-point', id: 't1', index: 0 })).toBe(two);
    expect(apply(p, { kind: 'delete', ids: ['nobody'] })).toBe(p);
    expect(apply(p, { kind: 'move-pad', id: 't1', at: [0, 0, 0] })).toBe(p);
    expect(
      apply(p, { kind: 'set', path: ['head', 'focalLength'], what: 'x', value: p.head.focalLength }),
    ).toBe(p);
  });

  test('a point is put in at its place and only there', () => {
    const p = frozen();
    const [a, b, c] = routeOf(p, 't2');
    expect(routeOf(apply(p, { kind: 'add-point', id: 't2', index: 2, at: [1, 2, 3] }), 't2')).toEqual([
      a,
      b,
      [1, 2, 3],
      c,
    ]);
  });

  test('what an act does not touch stays the same object, so that undo costs little', () => {
    const p = frozen();
    const after = apply(p, { kind: 'set', path: ['scan', 'stitch'], what: 'stitch', value: 0.3 });
    expect(after.circuit).toBe(p.circuit);
    expect(after.head).toBe(p.head);
  });

  test('setting undefined takes a field away', () => {
    const p = apply(frozen(), { kind: 'set', path: ['setups', 0, 'focusHeights'], what: 'x', value: [1] });
    const back = apply(p, { kind: 'set', path: ['setups', 0, 'focusHeights'], what: 'x', value: undefined });
    expect(back).toEqual(domeProject());
    expect('focusHeights' in (back.setups as object[])[0]!).toBe(false);
  });

  test('a free id is the first gap of its letter', () => {
    const p = apply(frozen(), { kind: 'delete', ids: ['t2'] });
    expect([freeId(p, 't'), freeId(p, 'p'), freeId(p, 'r')]).toEqual(['t2', 'p3', 'r1']);
  });
});

describe('undo and redo', () => {
  test('a drag is one step, and two drags are two', () => {
    let p = frozen();
    let h = noHistory;
    const drag = (gesture: string, xs: number[]) => {
      for (const x of xs) {
        const act: Act = { kind: 'move-pad', id: 'p1', at: [x, 0, 0] };
        const after = apply(p, act);
        h = record(h, nameOf(act), p, after, gesture);
        p = after;
      }
      h = seal(h);
    };
    drag('a', [1, 2, 3]);
    drag('a', [4, 5]);
    expect(h.past.map((s) => s.name)).toEqual(['move pad p1', 'move pad p1']);
    const back = undo(h)!;
    expect(back.project.circuit.elements[0]).toMatchObject({ at: [3, 0, 0] });
    const further = undo(back.history)!;
    expect(further.project).toEqual(domeProject());
    expect(undo(further.history)).toBeNull();
    expect(redo(redo(further.history)!.history)!.project).toBe(p);
  });

  test('a new act forgets what was undone', () => {
    const p = frozen();
    const q = apply(p, { kind: 'delete', ids: ['t1'] });
    const h = undo(record(noHistory, 'delete t1', p, q, null))!.history;
    const other = apply(p, { kind: 'delete', ids: ['t2'] });
    expect(redo(record(h, 'delete t2', p, other, null))).toBeNull();
  });

  test('an act without effect leaves no step', () => {
    const p = frozen();
    expect(record(noHistory, 'nothing', p, p, null)).toBe(noHistory);
  });

  test('seed 11: any walk of acts, undone to its start and redone to its end, passes the same projects', () => {
    let s = 11;
    const dice = (n: number) => {
      s = (s * 1103515245 + 12345) % 2147483648;
      return Math.floor((s / 2147483648) * n);
    };
    let p = frozen();
    let h = noHistory;
    const seen = [p];
    for (let i = 0; i < 60; i++) {
      const e = p.circuit.elements[dice(p.circuit.elements.length)];
      const act: Act =
        !e || dice(4) === 0
          ? {
              kind: 'add-element',
              element: {
                id: freeId(p, 'p'),
                kind: 'pad',
                net: '',
                at: [i, 0, 0],
                shape: { circle: 1 },
                turn: 0,
              },
            }
          : dice(3) === 0
            ? { kind: 'delete', ids: [e.id] }
            : { kind: 'edit-element', id: e.id, what: 'net', change: { net: `N${i}` } };
      const after = apply(p, act);
      h = record(h, nameOf(act), p, after, null);
      p = after;
      seen.push(p);
    }
    for (let i = seen.length - 2; i >= 0; i--) {
      const back = undo(h)!;
      expect(back.project).toBe(seen[i]);
      h = back.history;
    }
    for (let i = 1; i < seen.length; i++) {
      const forth = redo(h)!;
      expect(forth.project).toBe(seen[i]);
      h = forth.history;
    }
    expect(ids(p).length).toBeGreaterThan(0);
  });
});
