import { describe, expect, it } from 'vitest';
import { quiet } from '../../../src/core/base/run-context.ts';
import { drapeCircuit } from '../../../src/core/drape/drape.ts';
import { checkPlan } from '../../../src/core/layers/check-plan.ts';
import { planLayers } from '../../../src/core/layers/plan-layers.ts';
import { projectSchema, type Setup } from '../../../src/core/project/schema.ts';
import { checkReach } from '../../../src/core/reach/reach.ts';
import { exampleHead } from '../helpers/proof-scene.ts';
import { partFrom, plate } from '../helpers/surfaces.ts';

const TILT = (40 * Math.PI) / 180;
const at = (u: number, v: number) => ({ at: [u * Math.cos(TILT), v, -u * Math.sin(TILT)] });

/** A plate tilted by 40°, 60 mm long: 38.6 mm of height. */
function planOf(elements: object[], change: object = {}) {
  const project = projectSchema.parse({
    format: 'beamdrape',
    version: 1,
    name: 'ramp',
    part: { file: 'x.stl' },
    head: { ...exampleHead, pivot: null },
    material: { activationFluence: 0.4, damageFluence: 6 },
    setups: [{ name: 'top', pose: { rotate: [0, 0, 0, 1], move: [0, 0, 0] } }],
    circuit: { elements },
    ...change,
  });
  const setups = project.setups as Setup[];
  const part = partFrom(plate(60, 30, 7, 4, TILT));
  const { copper } = drapeCircuit(project, 'x', part, quiet);
  const reach = checkReach(project, setups, part, copper, quiet);
  const [plan] = planLayers(project, setups, copper, reach, quiet);
  return { project, copper, reach, plan };
}
const ramp = { id: 'ramp', kind: 'trace', net: 'A', width: 0.5, route: [at(-12, 3), at(12, 3)] };

describe('a trace up a ramp', () => {
  const { project, copper, reach, plan } = planOf([ramp]);
  const runs = plan.layers
    .flatMap((l) => l.runs.map((r) => ({ ...r, h: l.focusHeight })))
    .sort((a, b) => a.cutFrom - b.cutFrom);

  it('takes as many layers as its height asks for, no more', () => {
    // 24 mm of centre line and two round ends of 0.25 rise by 24.5 sin 40°; each layer serves 2 × 1.7 mm of it.
    expect(plan.layers).toHaveLength(Math.ceil((24.5 * Math.sin(TILT)) / 3.4));
    expect(checkPlan(project, copper, reach[0], plan)).toEqual([]);
  });

  it('is cut once between two layers, and the two sides overlap by one stitch there', () => {
    expect(runs).toHaveLength(plan.layers.length);
    for (let i = 1; i < runs.length; i++) {
      expect(runs[i].cutFrom).toBeCloseTo(runs[i - 1].cutTo, 9);
      expect(runs[i - 1].to - runs[i].from).toBeCloseTo(project.scan.stitch, 9);
    }
  });

  it('with the stitch on, no end lies beyond its depth', () => {
    for (const r of runs)
      for (const s of [r.from, r.to]) {
        // Height of the centre line at arc length s, and half the width adds nothing across the slope.
        const z = (12 - s) * Math.sin(TILT);
        expect(Math.abs(z - r.h)).toBeLessThanOrEqual(1.7 + 1e-6);
      }
  });
});

describe('a pad', () => {
  it('that one height can write whole is one sample, even where two layers meet', () => {
    const { plan, copper } = planOf([
      ramp,
      { id: 'pad', kind: 'pad', net: 'A', ...at(1, -3), shape: { circle: 4 }, turn: 0 },
    ]);
    const pad = copper.elements.findIndex((e) => e.id === 'pad');
    expect(plan.layers.filter((l) => l.runs.some((r) => r.element === pad))).toHaveLength(1);
  });

  it('too tall for one height is cut at equal heights, overlapping by a stitch measured up the slope', () => {
    const { project, plan } = planOf([
      { id: 'pad', kind: 'pad', net: 'A', ...at(0, 0), shape: { rect: [9, 3] }, turn: 0 },
    ]);
    const runs = plan.layers.map((l) => l.runs[0]);
    expect(runs.length).toBe(2);
    expect(runs.every((r) => r.by === 'height')).toBe(true);
    expect((runs[0].to - runs[1].from) / Math.sin(TILT)).toBeCloseTo(project.scan.stitch, 6);
  });
});

describe('what the stage cannot do', () => {
  it('copper above its range is told as out of focus, and the rest is planned', () => {
    const { plan } = planOf([ramp], { stage: { step: 0.01, range: [-4, 30], zMoves: 'stage' } });
    expect(plan.unreached.map((u) => u.reason)).toEqual(['focus']);
    // Heights above 4 + 1.7 are out of reach: arc lengths from the upper end down to there.
    expect(plan.unreached[0].to).toBeCloseTo(12 - 5.7 / Math.sin(TILT), 0);
    expect(Math.max(...plan.layers.map((l) => l.focusHeight))).toBeLessThanOrEqual(4);
  });
});
