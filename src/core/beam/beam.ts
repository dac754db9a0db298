/**
 * The focused Gaussian beam (model.md §3). Lengths mm, energy J, fluence J/cm².
 * ISO 11146-1 for M²; A. E. Siegman, *Lasers* (1986), ch. 17, for w(z) and the peak fluence 2E/(πw²);
 * H. Urey, "Spot size, depth-of-focus, and diffraction ring intensity formulas for truncated Gaussian
 * beams", Appl. Opt. 43 (2004) 620, for a beam that the aperture clips.
 */
import type { Head, Limits, Material } from '../project/schema.ts';

export interface Beam {
  /** 1/e² radius at the waist, mm. */
  waist: number;
  /** mm */
  rayleigh: number;
  /** J at full power. */
  pulseEnergy: number;
  /** W */
  peakPower: number;
  /** Whether the aperture clips the beam: then w(D) is an approximation. */
  truncated: boolean;
}

/** Above this share of the aperture the beam is clipped (model.md §3). */
const CLIPPED = 0.5;
/** Peak of a Gaussian pulse over E/τ, τ its full width at half maximum: 2 √(ln 2 / π), as model.md rounds it. */
const GAUSSIAN_PEAK = 0.94;
/** mm² in a cm². */
const CM2 = 100;

export function focusedBeam(head: Head): Beam {
  const wavelength = head.wavelength_nm * 1e-6;
  const t = head.beamDiameter / head.aperture;
  const truncated = t > CLIPPED;
  const waist = truncated
    ? (ureyFactor(t) * head.beamQuality * wavelength * head.focalLength) / head.aperture / 2
    : (head.beamQuality * wavelength * head.focalLength) / (Math.PI * (head.beamDiameter / 2));
  const pulseEnergy = head.averagePower_W / (head.repetitionRate_kHz * 1e3);
  return {
    waist,
    rayleigh: (Math.PI * waist * waist) / (head.beamQuality * wavelength),
    pulseEnergy,
    peakPower: (GAUSSIAN_PEAK * pulseEnergy) / (head.pulseWidth_ns * 1e-9),
    truncated,
  };
}

/** Urey's fit for the 1/e² full width in units of λ f / aperture, T > 0.5 (coefficients from memory, checked against the integral). */
export const ureyFactor = (t: number): number => 1.654 - 0.105 / t + 0.28 / (t * t);

/** 1/e² radius at defocus d for a beam that leans so that u_z = `uz`, mm: the way along the beam is d / u_z. */
export const spotRadius = (beam: Beam, d: number, uz = 1): number =>
  beam.waist * Math.sqrt(1 + (d / uz / beam.rayleigh) ** 2);

/** Peak fluence on a surface that the beam meets at incidence θ, J/cm². */
export const peakFluence = (beam: Beam, radius: number, cosTheta: number, power = 1): number =>
  ((2 * beam.pulseEnergy * power * cosTheta) / (Math.PI * radius * radius)) * CM2;

/**
 * Activated half-width across the tilt, mm: w √(½ ln(F / F_act)); 0 where F < F_act.
 * J. M. Liu, "Simple technique for measurements of pulsed Gaussian-beam spot sizes", Opt. Lett. 7 (1982) 196.
 */
export const activatedHalfWidth = (radius: number, fluence: number, activation: number): number =>
  fluence > activation ? radius * Math.sqrt(0.5 * Math.log(fluence / activation)) : 0;

/** Half-depth of focus by the way the project sets it, before the height uncertainty is taken off, mm. */
export function halfDepth(beam: Beam, depth: Limits['depth'], material: Material, cosTheta = 1): number {
  if (depth.mode === 'distance') return depth.halfDepth;
  if (depth.mode === 'spot') return beam.rayleigh * Math.sqrt(depth.growth * depth.growth - 1);
  const inHand =
    peakFluence(beam, beam.waist, cosTheta) / (material.activationFluence * material.doseMargin) - 1;
  return inHand > 0 ? beam.rayleigh * Math.sqrt(inHand) : 0;
}

/** What the plan may use of it, mm; never negative. */
export const usableDepth = (beam: Beam, limits: Limits, material: Material, cosTheta = 1): number =>
  Math.max(0, halfDepth(beam, limits.depth, material, cosTheta) - limits.heightUncertainty);
