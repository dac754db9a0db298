/**
 * Rays of the converging cone: a chief ray and rings of equal power in the Gaussian beam (model.md §4).
 * The power inside radius r of a Gaussian of 1/e² radius w is 1 - exp(-2 r²/w²) (Siegman, *Lasers*), so ring k of n
 * stands where half of its own share lies inside it.
 */
import { cosine, sine } from '../base/trig.ts';
import type { Vec3 } from '../base/vec.ts';
import type { Head } from '../project/schema.ts';

export interface ConeRay {
  /** Offset from the chief ray at the lens, bench X and Y, mm. */
  offset: readonly [number, number];
  /** Share of the beam's power that it stands for. */
  power: number;
}

const RINGS = 4;
const RAYS = 8;

export function coneRays(head: Head): ConeRay[] {
  const w = head.beamDiameter / 2;
  const edge = 1 - Math.exp(-2 * (head.aperture / 2 / w) ** 2);
  const rays: ConeRay[] = [];
  for (let k = 0; k < RINGS; k++) {
    const r = w * Math.sqrt(-0.5 * Math.log(1 - (edge * (k + 0.5)) / RINGS));
    for (let i = 0; i < RAYS; i++) {
      // Every other ring is turned by half a step, so that the rays stand apart.
      const a = (2 * Math.PI * (i + (k % 2) / 2)) / RAYS;
      rays.push({ offset: [r * cosine(a), r * sine(a)], power: 1 / (RINGS * RAYS) });
    }
  }
  return rays;
}

/** Unit direction from a place to where a ray of its cone leaves the lens, `height` mm above the place; u is the chief ray's. */
export function towardLens(u: Vec3, height: number, offset: readonly [number, number]): Vec3 {
  const k = height / u[2];
  const v: Vec3 = [u[0] * k + offset[0], u[1] * k + offset[1], height];
  const l = Math.hypot(v[0], v[1], v[2]);
  return [v[0] / l, v[1] / l, v[2] / l];
}
