import { describe, expect, it } from 'vitest';
import { quiet } from '../../../src/core/base/run-context.ts';
import { guideCurrent, stripResistance } from '../../../src/core/copper/conduct.ts';
import { netReports } from '../../../src/core/copper/nets.ts';
import { solveResistance } from '../../../src/core/copper/network.ts';
import { plating } from '../../../src/core/copper/plating.ts';
import { drapeCircuit } from '../../../src/core/drape/drape.ts';
import { type Project, projectSchema } from '../../../src/core/project/schema.ts';
import { source } from '../../reference/sources.ts';
import { exampleHead } from '../helpers/proof-scene.ts';
import { partFrom, plate } from '../helpers/surfaces.ts';

const copper = (change: object = {}): Project['copper'] =>
  projectSchema.shape.copper.parse({ depositFactor: 1, ...change });
const near = (x: number, y: number, tol = 1e-6) => expect(Math.abs(x / y - 1)).toBeLessThan(tol);

describe(source('iec-60028'), () => {
  it.each([
    [35, {}, 98.5221675],
    [35, { temperature_C: 60 }, 114.0098522],
    [35, { depositFactor: 1.2 }, 118.226601],
    [6, {}, 574.7126437],
    [6, { depositFactor: 1.2 }, 689.6551724],
  ])('a strip 100 × 0.5 mm, %d µm: mΩ', (thickness_um, change, value) => {
    near(stripResistance(100, 0.5, copper({ thickness_um, ...change })), value, 1e-8);
  });

  it('between two pads of a net: the trace between the places where they meet it, and twice in parallel for a ring', () => {
    const project = projectSchema.parse({
      format: 'beamdrape',
      version: 1,
      name: 'x',
      part: { file: 'x.stl' },
      head: exampleHead,
      material: { activationFluence: 0.4, damageFluence: 6 },
      copper: { thickness_um: 6, depositFactor: 1 },
      setups: [{ name: 'a', pose: { rotate: [0, 0, 0, 1], move: [0, 0, 0] } }],
      circuit: {
        elements: [
          { id: 'p1', kind: 'pad', net: 'N', at: [-10, 0, 0], shape: { circle: 1.6 } },
          { id: 'p2', kind: 'pad', net: 'N', at: [10, 0, 0], shape: { circle: 1.6 } },
          { id: 't', kind: 'trace', net: 'N', width: 0.5, route: [{ at: [-10, 0, 0] }, { at: [10, 0, 0] }] },
          { id: 'alone', kind: 'pad', net: 'N', at: [0, 8, 0], shape: { circle: 1.6 } },
        ],
      },
    });
    const laid = drapeCircuit(project, 'x', partFrom(plate(40, 30, 5, 4)), quiet).copper;
    const [net] = netReports(project, laid);
    expect(net.pieces).toBe(2);
    expect(net.resistance_mohm.map((r) => [r.from, r.to])).toEqual([['p1', 'p2']]);
    // Centre of touch to centre of touch: the pads overlap the last 0.8 mm of either end.
    const [value] = net.resistance_mohm.map((r) => r.value);
    expect(value).toBeGreaterThan(stripResistance(18.3, 0.5, project.copper));
    expect(value).toBeLessThan(stripResistance(20, 0.5, project.copper));
  });

  it('networks: series, parallel and a bridge', () => {
    const link = (a: number, b: number, ohm: number) => ({ a, b, ohm });
    near(solveResistance(3, [link(0, 1, 2), link(1, 2, 3)], [], 0, 2)!, 5);
    near(solveResistance(2, [link(0, 1, 2), link(0, 1, 3)], [], 0, 1)!, 1.2);
    // Wheatstone bridge of 1, 2, 3, 4 Ω with 5 Ω across: 127/51... by star-delta.
    const bridge = solveResistance(
      4,
      [link(0, 1, 1), link(1, 3, 2), link(0, 2, 3), link(2, 3, 4), link(1, 2, 5)],
      [],
      0,
      3,
    )!;
    const [ra, rb, rc] = [(1 * 3) / 9, (1 * 5) / 9, (3 * 5) / 9];
    near(bridge, ra + ((rb + 2) * (rc + 4)) / (rb + 2 + rc + 4));
    expect(solveResistance(3, [link(0, 1, 2)], [], 0, 2)).toBeNull();
    expect(solveResistance(2, [], [[0, 1]], 0, 1)).toBe(0);
  });
});

describe(source('ipc-2221'), () => {
  it.each([
    [0.25, 6, 10, 0.2437241],
    [0.5, 35, 20, 1.9628546],
    [2, 70, 30, 10.5951846],
  ])('%d mm × %d µm, %d K: A', (width, thickness_um, temperatureRise, value) => {
    near(guideCurrent(width, copper({ thickness_um, temperatureRise })), value);
  });
});

describe(source('mallory-hajdu'), () => {
  it('0.25 dm² at 6 µm: copper, formaldehyde, hydroxide, load and time', () => {
    const p = plating(2500, copper({ thickness_um: 6, density: 8.96, rate_um_per_h: 12 }));
    near(p.copper_g, 0.1344, 1e-9);
    near(p.formaldehyde_g, 0.1270102);
    near(p.naoh_g, 0.1344 * 2.5176722);
    near(p.load, 0.25, 1e-9);
    near(p.time_min, 30, 1e-9);
  });
});
