/** Makes the demonstration: `node --import tsx assets/demo/make-dial.ts`. Same code, same bytes. */
import { createHash } from 'node:crypto';
import { writeFileSync } from 'node:fs';
import { dialElements } from './dial-circuit.ts';
import { dialFacets } from './dial-shape.ts';

const facets = dialFacets(156, 56);
const count = facets.length / 9;
const stl = Buffer.alloc(84 + 50 * count);
stl.write('touch dial, mm');
stl.writeUInt32LE(count, 80);
for (let f = 0; f < count; f++) {
  const o = 84 + 50 * f;
  const v = facets.slice(9 * f, 9 * f + 9);
  const u = [v[3] - v[0], v[4] - v[1], v[5] - v[2]];
  const w = [v[6] - v[0], v[7] - v[1], v[8] - v[2]];
  const n = [u[1] * w[2] - u[2] * w[1], u[2] * w[0] - u[0] * w[2], u[0] * w[1] - u[1] * w[0]];
  const l = Math.hypot(n[0], n[1], n[2]);
  n.forEach((x, i) => {
    stl.writeFloatLE(x / l, o + 4 * i);
  });
  v.forEach((x, i) => {
    stl.writeFloatLE(x, o + 12 + 4 * i);
  });
}
const here = new URL('.', import.meta.url);
writeFileSync(new URL('dial.stl', here), stl);

// The dial stands turned by 20° about the optical axis and a little off the field's middle, the focal plane through its skirt.
const half = (10 * Math.PI) / 180;
const round = (x: number): number => Math.round(x * 1e9) / 1e9;
const project = {
  format: 'beamdrape',
  version: 1,
  name: 'touch dial',
  part: { file: 'dial.stl', units: 'mm', sha256: createHash('sha256').update(stl).digest('hex') },
  head: {
    wavelength_nm: 532,
    beamQuality: 1.9,
    beamDiameter: 4.5,
    aperture: 10,
    focalLength: 163,
    field: [110, 110],
    workingDistance: 165,
    bodyDiameter: 90,
    pivot: [190, 178],
    averagePower_W: 1,
    repetitionRate_kHz: 30,
    pulseWidth_ns: 10,
  },
  material: { activationFluence: 0.4, damageFluence: 6.0, doseMargin: 1.3 },
  limits: {
    depth: { mode: 'distance', halfDepth: 2.0 },
    maxIncidence: 60,
    cone: false,
    maxBlocked: 0.1,
    clearance: 10,
    minWidth: 0.25,
    safeWidth: 0.5,
    minGap: 0.25,
    safeGap: 0.5,
    safeStretch: 0.05,
    maxStretch: 0.15,
    heightUncertainty: 0.3,
    maxResidual: 0.15,
    proof: { covered: 0.995, strayTolerance: 0.05, stray: 0.001 },
  },
  stage: { step: 0.01, range: [-30, 30], zMoves: 'stage' },
  scan: {
    linePitch: 0.03,
    markSpeed: 800,
    jumpSpeed: 3000,
    jumpDelay_us: 300,
    markDelay_us: 150,
    stitch: 0.2,
    passes: 1,
  },
  copper: {
    thickness_um: 3,
    depositFactor: 1.2,
    rate_um_per_h: 6,
    bathVolume_L: 1.0,
    bathLoad: [0.5, 2.5],
    temperature_C: 20,
    temperatureRise: 10,
    density: 8.89,
  },
  setups: [
    {
      name: 'top',
      pose: { rotate: [0, 0, round(Math.sin(half)), round(Math.cos(half))], move: [2.5, -1.5, -8] },
    },
  ],
  circuit: { elements: dialElements(), drapes: [] },
};
writeFileSync(new URL('touch-dial.drape.json', here), JSON.stringify(project, null, 2) + '\n');
