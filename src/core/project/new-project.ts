/** A project for a part that has none yet. */
import type { Vec3 } from '../base/vec.ts';
import type { Project } from './schema.ts';

/** The head and material of job.md's example: a common small head, to be replaced by the person's own numbers. */
export function newProject(partFile: string, bounds: readonly [Vec3, Vec3] | null): Project {
  const middle = (k: 0 | 1 | 2) => (bounds ? (bounds[0][k] + bounds[1][k]) / 2 : 0);
  const round = (x: number) => Math.round(-x * 1000) / 1000 + 0;
  return {
    format: 'beamdrape',
    version: 1,
    name: partFile.replace(/^.*[\\/]/, '').replace(/\.stl$/i, '') || 'part',
    part: { file: partFile, units: 'mm' },
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
    material: { activationFluence: 0.4, damageFluence: 6, doseMargin: 1.3 },
    limits: {
      depth: { mode: 'distance', halfDepth: 2 },
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
      bathVolume_L: 1,
      bathLoad: [0.5, 2.5],
      temperature_C: 20,
      temperatureRise: 10,
      density: 8.89,
    },
    setups: [
      {
        name: 'top',
        pose: { rotate: [0, 0, 0, 1], move: [round(middle(0)), round(middle(1)), round(middle(2))] },
      },
    ],
    circuit: { elements: [], drapes: [] },
  };
}
