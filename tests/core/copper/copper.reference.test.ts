import { describe, expect, it } from 'vitest';
import { quiet } from '../../../src/core/base/run-context.ts';
import { guideCurrent, stripResistance } from '../../../src/core/copper/conduct.ts';
import { netReports } from '../../../src/core/copper/nets.ts';
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

  it('between two pads of a net: the trace outside of them; a pad that nothing joins has no resistance to them', () => {
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
    const [{ value, within }] = net.resistance_mohm;
    // The ends are arcs that bulge into the trace by 0.04 mm: longer than to their tops, shorter than to their feet.
    expect(value + within).toBeGreaterThan(stripResistance(20 - 1.6, 0.5, project.copper));
    expect(value - within).toBeLessThan(
      stripResistance(20 - 2 * Math.sqrt(0.8 ** 2 - 0.25 ** 2), 0.5, project.copper),
    );
    expect(within / value).toBeLessThan(0.002);
    expect(net.length).toBeCloseTo(20, 6);
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
