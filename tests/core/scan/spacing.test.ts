import { describe, expect, it } from 'vitest';
import { quiet } from '../../../src/core/base/run-context.ts';
import { drapeCircuit } from '../../../src/core/drape/drape.ts';
import { planLayers } from '../../../src/core/layers/plan-layers.ts';
import { type Project, projectSchema, type Setup } from '../../../src/core/project/schema.ts';
import { checkReach } from '../../../src/core/reach/reach.ts';
import { prepareGround, pulseSpacing, scanLayer } from '../../../src/core/scan/scan-layer.ts';
import { exampleHead } from '../helpers/proof-scene.ts';
import { partFrom, plate } from '../helpers/surfaces.ts';

/** A plate tilted about Y, with a trace up its slope and one across it, so that each shows its own spacing. */
const jobOn = (tilt: number, scan: object = {}): Project =>
  projectSchema.parse({
    format: 'beamdrape',
    version: 1,
    name: 'tilted',
    part: { file: 'x.stl' },
    head: { ...exampleHead, pivot: null },
    material: { activationFluence: 0.4, damageFluence: 6 },
    limits: { maxIncidence: 75 },
    scan,
    setups: [{ name: 'top', pose: { rotate: [0, 0, 0, 1], move: [3, -2, 0] } }],
    circuit: {
      elements: [
        {
          id: 'up',
          kind: 'trace',
          net: 'A',
          width: 0.6,
          route: [
            [-4, 3],
            [4, 3],
          ].map(([u, v]) => at(tilt, u, v)),
        },
        {
          id: 'across',
          kind: 'trace',
          net: 'B',
          width: 0.6,
          route: [
            [-3, -6],
            [-3, 1],
          ].map(([u, v]) => at(tilt, u, v)),
        },
        { id: 'pad', kind: 'pad', net: 'C', ...at(tilt, 3, -3), shape: { rect: [2.4, 1.3] }, turn: 20 },
      ],
    },
  });
const at = (tilt: number, u: number, v: number) => ({ at: [u * Math.cos(tilt), v, -u * Math.sin(tilt)] });

function strokesOn(tilt: number, scan: object = {}) {
  const project = jobOn(tilt, scan);
  const setups = project.setups as Setup[];
  const part = partFrom(plate(30, 30, 5, 4, tilt));
  const { copper } = drapeCircuit(project, 'x', part, quiet);
  const reach = checkReach(project, setups, part, copper, quiet);
  const [plan] = planLayers(project, setups, copper, reach, quiet);
  const ground = prepareGround(part, setups[0], copper, reach[0], plan);
  return { project, copper, plan, layers: plan.layers.map((l) => scanLayer(project, setups[0], l, ground)) };
}

/** Command (x, y) → place (u, v) on the tilted plate. */
const onPlate = (tilt: number, x: number, y: number): [number, number] => [(x - 3) / Math.cos(tilt), y + 2];

describe.each([0, 30, 55])('on a plate tilted by %d°', (degrees) => {
  const tilt = (degrees * Math.PI) / 180;
  const { project, copper, plan, layers } = strokesOn(tilt);
  const strokes = layers.flatMap((l) => l.strokes.map((s) => ({ ...s, classes: l.classes })));

  it('pulses along every stroke are as far apart on the surface as asked, within 10 %', () => {
    const asked = pulseSpacing(project);
    for (const s of strokes) {
      const speed = s.classes[s.processClass].speed;
      for (let i = 2; i < s.points.length; i += 2) {
        const a = onPlate(tilt, s.points[i - 2], s.points[i - 1]);
        const b = onPlate(tilt, s.points[i], s.points[i + 1]);
        const command = Math.hypot(s.points[i] - s.points[i - 2], s.points[i + 1] - s.points[i - 1]);
        // Commands hold 0.1 µm: shorter pieces say nothing of a ratio.
        if (command < 0.005) continue;
        const spacing = (speed / 30e3) * (Math.hypot(a[0] - b[0], a[1] - b[1]) / command);
        expect(Math.abs(spacing / asked - 1)).toBeLessThan(0.1);
      }
    }
  });

  it.each([
    ['up', 1, 3],
    ['across', 0, -3],
  ] as const)(
    'lines of the trace %s are as far apart on the surface as asked, within 10 %%',
    (id, axis, centre) => {
      // Offsets of long straight pieces from the centre line, in the layer that writes most of the trace.
      const own = layers
        .map((l) => l.strokes.filter((q) => q.element === id))
        .sort((a, b) => b.length - a.length)[0];
      const offsets: number[] = [];
      for (const s of own)
        for (let i = 2; i < s.points.length; i += 2) {
          const a = onPlate(tilt, s.points[i - 2], s.points[i - 1]);
          const b = onPlate(tilt, s.points[i], s.points[i + 1]);
          if (Math.hypot(a[0] - b[0], a[1] - b[1]) > 0.3) offsets.push((a[axis] + b[axis]) / 2 - centre);
        }
      // Pieces of one line may lie apart by what thinning allows, 1 µm to either side, and by the inset's own changes.
      const groups: number[][] = [];
      for (const x of offsets.sort((a, b) => a - b)) {
        const last = groups[groups.length - 1];
        if (last && x - last[last.length - 1] < 0.004) last.push(x);
        else groups.push([x]);
      }
      const sorted = groups.map((g) => g.reduce((sum, x) => sum + x, 0) / g.length);
      const gaps = sorted.slice(1).map((x, i) => x - sorted[i]);
      expect(gaps.length).toBeGreaterThan(15);
      for (const g of gaps) expect(Math.abs(g / 0.03 - 1)).toBeLessThan(0.1);
      // Symmetric about the centre line, and never nearer to the edge than the beam's own half-width allows.
      expect(sorted[0]).toBeCloseTo(-sorted[sorted.length - 1], 2);
      expect(Math.max(...sorted)).toBeLessThan(0.3 - 0.01);
    },
  );

  it('no layer writes beyond its depth, and together they write all of it', () => {
    expect(plan.unreached).toEqual([]);
    const span = degrees === 0 ? 0 : 8 * Math.sin(tilt);
    expect(layers.length).toBeGreaterThanOrEqual(Math.ceil(span / 3.4));
    for (const l of plan.layers) expect(l.worstDefocus).toBeLessThanOrEqual(1.7 + 1e-9);
    expect(copper.elements).toHaveLength(3);
  });
});

describe('passes', () => {
  it('stand in the file one after the other', () => {
    const one = strokesOn(0).layers[0];
    const three = strokesOn(0, { passes: 3 }).layers[0];
    expect(three.strokes).toHaveLength(3 * one.strokes.length);
    expect(three.strokes[0].points).toEqual(three.strokes[2].points);
    expect(three.markLength).toBeCloseTo(3 * one.markLength, 6);
  });
});
