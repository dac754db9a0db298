/**
 * The proof's own beam: waist, spot, fluence, usable depth (model.md §3, §4). Written apart from the room that
 * plans; the two share the head's numbers, not a line of code.
 *
 * Sources: ISO 11146-1 (beam quality), Urey, Appl. Opt. 43 (2004) 620 (clipped beam),
 * Liu, Opt. Lett. 7 (1982) 196 (activated width).
 */
import type { Head, Limits, Material } from '../project/schema.ts';

/** Above this ratio of beam to aperture the aperture clips the beam (model.md §3). */
const CLIPPED_FROM = 0.5;

export interface Spot {
  /** 1/e² radius in the focus, mm. */
  waist: number;
  /** Rayleigh range, mm. */
  rayleigh: number;
  /** Energy of a pulse at full power, J. */
  energy: number;
  /** Fluence from which the surface is activated, J/cm². */
  threshold: number;
}

export function spotOf(head: Head, material: Material): Spot {
  const wavelength = head.wavelength_nm * 1e-6; // mm
  const ratio = head.beamDiameter / head.aperture;
  const clipped = 1.654 - 0.105 / ratio + 0.28 / (ratio * ratio); // Urey's K(T), 1/e² width, T > 0.5
  const waist =
    ratio > CLIPPED_FROM
      ? (clipped * head.beamQuality * wavelength * head.focalLength) / head.aperture / 2
      : (2 * head.beamQuality * wavelength * head.focalLength) / (Math.PI * head.beamDiameter);
  return {
    waist,
    rayleigh: (Math.PI * waist * waist) / (head.beamQuality * wavelength),
    energy: head.averagePower_W / (head.repetitionRate_kHz * 1000),
    threshold: material.activationFluence,
  };
}

/** 1/e² radius at `along` mm from the focus, counted along the beam; mm. */
export const radiusAt = (spot: Spot, along: number): number =>
  spot.waist * Math.sqrt(1 + (along / spot.rayleigh) ** 2);

/** Fluence on the beam's axis on a surface square to it, J/cm²; `radius` mm, `share` of the average power. */
export const axisFluence = (spot: Spot, radius: number, share: number): number =>
  (2 * spot.energy * share) / (Math.PI * radius * radius * 0.01); // mm² → cm²

/**
 * Half-width, across the tilt, of the area that one pulse activates, mm; 0 when it activates nothing.
 * a = w sqrt(½ ln(F / F_act)), Liu's D² = 2 w² ln(F / F_th) with D = 2 a.
 */
export function activatedHalfWidth(spot: Spot, radius: number, fluence: number): number {
  return fluence > spot.threshold ? radius * Math.sqrt(Math.log(fluence / spot.threshold) / 2) : 0;
}

/**
 * Half-depth less the height uncertainty, mm, never below 0 (model.md §4).
 *
 * @param cos    of the incidence, which only the mode "dose" looks at
 * @param share  of the average power, which only the mode "dose" looks at
 */
export function usableDepth(
  spot: Spot,
  limits: Limits,
  material: Material,
  cos: number,
  share: number,
): number {
  const depth = limits.depth;
  let half: number;
  if (depth.mode === 'distance') half = depth.halfDepth;
  else if (depth.mode === 'spot') half = spot.rayleigh * Math.sqrt(depth.growth * depth.growth - 1);
  else {
    const inFocus = axisFluence(spot, spot.waist, share) * Math.max(0, cos);
    // imaginary root: no depth at all, the dose is too small even in focus
    half =
      spot.rayleigh *
      Math.sqrt(Math.max(0, inFocus / (material.activationFluence * material.doseMargin) - 1));
  }
  return Math.max(0, half - limits.heightUncertainty);
}
