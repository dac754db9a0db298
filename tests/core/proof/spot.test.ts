import { describe, expect, it } from 'vitest';
import {
  activatedHalfWidth,
  axisFluence,
  radiusAt,
  spotOf,
  usableDepth,
} from '../../../src/core/proof/spot.ts';
import { projectWith, turned } from '../helpers/proof-scene.ts';

const project = projectWith(turned([0, 0, 1], 0));
const { head, material, limits } = project;
const spot = spotOf(head, material);
const close = (value: number, wanted: number, tolerance = 1e-6) =>
  expect(Math.abs(value / wanted - 1)).toBeLessThan(tolerance);
const cosine = (degrees: number) => Math.cos((degrees * Math.PI) / 180);

describe('beam of the proof', () => {
  // ISO 11146-1 (beam quality) and Siegman, Lasers (w(z)); computed from the formulas, f = 163
  it.each([
    [532, 1, 1, 110.41024, 17.996869, 55.290277, 55.544965],
    [532, 4.5, 1.9, 46.617657, 1.688595, 27.089538, 36.13126],
    [1064, 4.5, 1.9, 93.235314, 3.37719, 48.618387, 54.179077],
    [355, 1, 1, 73.676006, 12.009189, 36.965497, 37.345365],
    [355, 4.5, 1.9, 31.107647, 1.126788, 20.795746, 31.687345],
  ])(
    '%d nm, beam %d mm, M² %d: waist, Rayleigh range and spot beside the focus (ISO 11146-1; Siegman)',
    (wavelength_nm, beamDiameter, beamQuality, waist2, zR, w1, w2) => {
      const s = spotOf({ ...head, wavelength_nm, beamDiameter, beamQuality, aperture: 20 }, material);
      close(2000 * s.waist, waist2);
      close(s.rayleigh, zR);
      close(1000 * radiusAt(s, 1), w1);
      close(1000 * radiusAt(s, -2), w2);
    },
  );

  // Urey, Appl. Opt. 43 (2004) 620: 2 w0 = K(T) λ f / aperture
  it.each([
    [8, 8, 19.825446],
    [10, 10, 15.860356],
    [10, 8, 16.998504],
    [10, 6, 19.569874],
    [10, 4.5, 24.535609],
  ])(
    'aperture %d mm, beam %d mm: the clipped waist (Urey 2004; not clipped below half)',
    (aperture, beamDiameter, waist2) => {
      close(2000 * spotOf({ ...head, beamQuality: 1, aperture, beamDiameter }, material).waist, waist2);
    },
  );

  it('a pulse has 33.333 µJ and 3.905872 J/cm² on the axis in focus (2E/πw0², Siegman)', () => {
    close(spot.energy, 33.333333e-6);
    close(axisFluence(spot, spot.waist, 1), 3.905872);
    close(axisFluence(spot, spot.waist, 0.5), 3.905872 / 2);
  });

  // d, θ, F, a in µm: Liu, Opt. Lett. 7 (1982) 196, a = w √(½ ln(F/F_act))
  it.each([
    [0, 0, 3.905872, 24.880314],
    [0, 60, 1.952936, 20.754182],
    [1, 30, 2.5043, 25.943094],
    [2, 45, 1.149417, 26.248629],
    [3, 0, 0.939726, 31.054476],
    [3, 60, 0.469863, 13.481705],
  ])('at d %d mm and %d°: fluence and activated half-width (Liu 1982)', (d, theta, F, a) => {
    const w = radiusAt(spot, d);
    const fluence = axisFluence(spot, w, 1) * cosine(theta);
    close(fluence, F);
    close(1000 * activatedHalfWidth(spot, w, fluence), a);
  });

  it('below the activation fluence nothing is activated', () => {
    expect(activatedHalfWidth(spot, 0.05, 0.399)).toBe(0);
  });

  it('usable depth is the half-depth of each mode less the height uncertainty', () => {
    const with_ = (depth: typeof limits.depth, theta = 0, share = 1) =>
      usableDepth(spot, { ...limits, depth }, material, cosine(theta), share);
    expect(with_({ mode: 'distance', halfDepth: 2 })).toBe(1.7);
    close(with_({ mode: 'spot', growth: 1.5 }) + 0.3, 1.887907);
    close(with_({ mode: 'spot', growth: 2 }) + 0.3, 2.924733);
    close(with_({ mode: 'dose' }) + 0.3, 4.308828);
    close(with_({ mode: 'dose' }, 45) + 0.3, 3.506137);
    close(with_({ mode: 'dose' }, 60) + 0.3, 2.803091);
    expect(with_({ mode: 'dose' }, 60, 0.2)).toBe(0);
  });
});
