import { describe, expect, it } from 'vitest';
import {
  activatedHalfWidth,
  focusedBeam,
  halfDepth,
  peakFluence,
  spotRadius,
  ureyFactor,
} from '../../../src/core/beam/beam.ts';
import type { Head, Limits, Material } from '../../../src/core/project/schema.ts';
import { source } from '../../reference/sources.ts';
import { exampleHead } from '../helpers/proof-scene.ts';

const head = exampleHead as unknown as Head;
const withBeam = (wavelength_nm: number, beamDiameter: number, beamQuality: number): Head => ({
  ...head,
  wavelength_nm,
  beamDiameter,
  beamQuality,
  aperture: 100,
});
const material: Material = { activationFluence: 0.4, damageFluence: 6, doseMargin: 1.3 };
const near = (x: number, y: number, tol = 1e-6) => expect(Math.abs(x / y - 1)).toBeLessThan(tol);

describe(`${source('iso-11146')}; ${source('siegman')}`, () => {
  it.each([
    [532, 1, 1, 110.41024, 17.996869, 55.290277, 55.544965],
    [532, 4.5, 1.9, 46.617657, 1.688595, 27.089538, 36.13126],
    [532, 8, 1.3, 17.941664, 0.365561, 26.128173, 49.892867],
    [1064, 4.5, 1.9, 93.235314, 3.37719, 48.618387, 54.179077],
    [355, 8, 1.3, 11.972351, 0.243937, 25.259451, 49.443469],
  ])('%d nm, D %d, M² %d: waist, Rayleigh range, w(1), w(2)', (nm, d, m2, diameter, rayleigh, w1, w2) => {
    const beam = focusedBeam(withBeam(nm, d, m2));
    expect(beam.truncated).toBe(false);
    near(2000 * beam.waist, diameter);
    near(beam.rayleigh, rayleigh, 3e-6);
    near(1000 * spotRadius(beam, 1), w1);
    near(1000 * spotRadius(beam, -2), w2);
  });

  it('pulse energy 33.33 µJ, peak power 3.133 kW, peak fluence 3.906 J/cm² of the example head', () => {
    const beam = focusedBeam(head);
    near(beam.pulseEnergy, 33.333333e-6);
    near(beam.peakPower, 3133.333);
    near(peakFluence(beam, beam.waist, 1), 3.905872);
  });

  it('half-depth by spot growth and by dose', () => {
    const beam = focusedBeam(head);
    near(halfDepth(beam, { mode: 'spot', growth: 1.5 } as Limits['depth'], material), 1.887907);
    near(halfDepth(beam, { mode: 'spot', growth: 2 } as Limits['depth'], material), 2.924733);
    const dose = { mode: 'dose' } as Limits['depth'];
    near(halfDepth(beam, dose, material), 4.308828);
    near(halfDepth(beam, dose, material, Math.SQRT1_2), 3.506137);
    near(halfDepth(beam, dose, material, 0.5), 2.803091);
    expect(halfDepth(beam, dose, { ...material, activationFluence: 5 })).toBe(0);
  });
});

describe(source('liu-1982'), () => {
  it.each([
    [0, 0, 3.905872, 24.880314],
    [1, 30, 2.5043, 25.943094],
    [2, 45, 1.149417, 26.248629],
    [3, 60, 0.469863, 13.481705],
  ])('d %d, θ %d°: fluence and activated half-width', (d, theta, fluence, half) => {
    const beam = focusedBeam(head);
    const w = spotRadius(beam, d);
    const f = peakFluence(beam, w, Math.cos((theta * Math.PI) / 180));
    near(f, fluence, 2e-6);
    near(1000 * activatedHalfWidth(w, f, 0.4), half, 2e-6);
  });
  it('nothing is activated below the threshold', () => {
    expect(activatedHalfWidth(0.03, 0.39, 0.4)).toBe(0);
  });
});

/** 1/e² full width of a clipped Gaussian's focus in units of λ f / aperture: Fraunhofer integral by Simpson's rule. */
function integralFactor(t: number): number {
  const n = 400;
  const bessel = (x: number): number => {
    let sum = 0;
    const m = 200;
    for (let i = 0; i <= m; i++)
      sum += (i === 0 || i === m ? 0.5 : 1) * Math.cos(x * Math.sin((Math.PI * i) / m));
    return sum / m;
  };
  const amplitude = (q: number): number => {
    let sum = 0;
    for (let i = 0; i <= n; i++) {
      const r = i / n;
      sum += (i === 0 || i === n ? 1 : i % 2 ? 4 : 2) * Math.exp(-(r * r) / (t * t)) * bessel(q * r) * r;
    }
    return sum / (3 * n);
  };
  const goal = amplitude(0) * Math.exp(-1);
  let [lo, hi] = [0.1, 3.8];
  for (let i = 0; i < 60; i++) {
    const mid = (lo + hi) / 2;
    if (amplitude(mid) > goal) lo = mid;
    else hi = mid;
  }
  // q = π · (aperture / λ f) · radius.
  return (2 * lo) / Math.PI;
}

describe(source('urey-2004'), () => {
  it.each([
    [0.6, 2.256778, 2.255457],
    [0.8, 1.96025, 1.952028],
    [1, 1.829, 1.829191],
    [2, 1.6715, 1.686768],
  ])('T %d: the fit, and the integral it stands for within 1 %%', (t, fit, integral) => {
    near(ureyFactor(t), fit);
    near(integralFactor(t), integral, 2e-5);
    near(ureyFactor(t), integralFactor(t), 0.01);
  });

  it.each([
    [8, 8, 19.825446],
    [10, 8, 16.998504],
    [10, 6, 19.569874],
  ])('aperture %d, beam %d: truncated spot', (aperture, beamDiameter, diameter) => {
    const beam = focusedBeam({ ...head, aperture, beamDiameter, beamQuality: 1 });
    expect(beam.truncated).toBe(true);
    near(2000 * beam.waist, diameter);
  });
});
