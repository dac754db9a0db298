import { describe, expect, test } from 'vitest';
import { quiet } from '../../src/core/base/run-context.ts';
import { REASONS } from '../../src/core/reach/result.ts';
import { countLooks, heightAt, plainDepth, reasonAt } from '../../src/store/looks.ts';
import { copperAt, marginsOf, placeOf } from '../../src/store/margins.ts';
import { heightProfile, niceStep } from '../../src/store/profile.ts';
import { createSession } from '../../src/worker/session.ts';
import { domeHeight, domeProject, domeStl } from '../flows/dome.ts';

const project = domeProject();
const session = createSession();
session.openPart({ bytes: domeStl(), file: 'dome.stl', units: 'mm' }, quiet);
const copper = session.drape({ project }, quiet);
const reach = session.reach(null, quiet)[0]!;
const plan = session.plan(null, quiet)[0]!;
const heights = copper.heights[0]!;
const depth = plainDepth(project.limits, reach);
const total = copper.area.reduce((a, b) => a + b, 0);

describe('half a band', () => {
  test('is the depth that was set less the uncertainty, before and after the beam is known', () => {
    expect(plainDepth(project.limits, null)).toBeCloseTo(1.7, 9);
    expect(plainDepth(project.limits, reach)).toBeCloseTo(1.7, 9);
  });

  test('by spot growth it is the beam that says: zR √(g² - 1) less the uncertainty', () => {
    const other = structuredClone(project);
    other.limits.depth = { mode: 'spot', growth: 1.5 };
    session.drape({ project: other }, quiet);
    const [bySpot] = session.reach(null, quiet);
    // 1.887907 mm: check value of the example head.
    expect(plainDepth(other.limits, bySpot!)).toBeCloseTo(1.887907 - 0.3, 5);
    session.drape({ project }, quiet);
    session.reach(null, quiet);
  });
});

describe('what the copper looks like', () => {
  test('areas of all looks add up to the copper, at any offset', () => {
    for (const offset of [-9, -4, -0.3, 0, 2.5, 30]) {
      const counts = countLooks(copper, 0, reach, plan, { show: 'offset', offset, depth });
      expect(Object.values(counts).reduce((n, c) => n + c.area, 0)).toBeCloseTo(total, 3);
    }
  });

  test('at an offset, copper is in focus exactly where its height is within the usable depth of the plane', () => {
    // The plane stands at bench height -offset (model.md §1): the sign is what this checks.
    for (const offset of [-6, -2, 1]) {
      let inFocus = 0;
      for (let t = 0; t < copper.area.length; t++)
        if (Math.abs(heightAt(copper, heights, t) - -offset) <= 1.7 + 1e-6) inFocus += copper.area[t]!;
      const counts = countLooks(copper, 0, reach, plan, { show: 'offset', offset, depth });
      expect(counts.reached.area).toBeCloseTo(inFocus, 3);
      expect(inFocus).toBeGreaterThan(0.2);
    }
  });

  test('as planned, all of the dome is reached', () => {
    const counts = countLooks(copper, 0, reach, plan, { show: 'layers', offset: 0, depth });
    expect(counts.reached.area).toBeCloseTo(total, 3);
    expect(counts.reached.elements).toEqual([0, 1, 2, 3, 4]);
  });

  test('a reason that no offset mends is told before focus', () => {
    const worse = {
      ...reach,
      fails: reach.fails.map((f, t) =>
        t === 5 ? f | (1 << REASONS.indexOf('shade')) | (1 << REASONS.indexOf('incidence')) : f,
      ),
    };
    expect(reasonAt(copper, 5, heights, worse, plan, { show: 'offset', offset: 99, depth })).toBe('shade');
    expect(reasonAt(copper, 6, heights, worse, plan, { show: 'offset', offset: 99, depth })).toBe('focus');
  });
});

describe('the profile', () => {
  test('holds all of the copper, each bin what lies at its heights', () => {
    const p = heightProfile(copper, 0)!;
    expect(p.area.reduce((a, b) => a + b, 0)).toBeCloseTo(total, 3);
    // Oracle: sort triangles by their middle; half of the copper lies below the same height.
    const byHeight = [...copper.area.keys()].sort(
      (a, b) => heightAt(copper, heights, a) - heightAt(copper, heights, b),
    );
    let sum = 0;
    const middle = byHeight.find((t) => (sum += copper.area[t]!) > total / 2)!;
    let below = 0;
    const k = p.area.findIndex((a) => (below += a) > total / 2);
    expect(Math.abs(p.from + (k + 0.5) * p.bin - heightAt(copper, heights, middle))).toBeLessThan(2 * p.bin);
  });

  test('bins have widths that a person reads easily', () => {
    expect([0.013, 0.02, 0.3, 7, 10].map(niceStep).map((x) => Number(x.toPrecision(6)))).toEqual([
      0.02, 0.02, 0.5, 10, 10,
    ]);
  });
});

describe('facts about one element', () => {
  test('every margin is the worst of its triangles, at that triangle', () => {
    const t3 = copper.elements.findIndex((e) => e.id === 't3');
    const margins = marginsOf(t3, copper, 0, reach, plan, project.limits, project.material);
    expect(margins.map((m) => m.check)).toEqual(['focus', 'incidence', 'shade', 'field', 'dose']);
    const { first, count } = copper.elements[t3]!;
    const incidence = margins[1]!;
    let worst = 0;
    for (let t = first; t < first + count; t++) worst = Math.max(worst, reach.incidence[t]!);
    expect(incidence.value).toBe(worst);
    expect(reach.incidence[incidence.at]).toBe(worst);
    expect(margins.every((m) => m.ok)).toBe(true);
    const { point, normal } = placeOf(copper, incidence.at);
    expect(Math.abs(point[2] - domeHeight(point[0], point[1]))).toBeLessThan(0.06);
    expect(Math.hypot(...normal)).toBeCloseTo(1, 3);
  });

  test('the copper under a place is found by its face, and none beside it', () => {
    const t1 = copper.elements.find((e) => e.id === 't1')!;
    const t = t1.first + Math.floor(t1.count / 2);
    const found = copperAt(copper, copper.face[t]!, placeOf(copper, t).point);
    expect(copper.elements[copper.element[found]!]!.id).toBe('t1');
    expect(copperAt(copper, copper.face[t]!, [0, -19, 3])).toBe(-1);
  });
});
