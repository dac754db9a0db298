/**
 * How far inside the drawn outline a stroke must run for the copper to come out at its drawn width.
 *
 * Pulses along a line activate a chain of ellipses; half the width they leave is, on average between two pulses,
 * the ellipse's reach across the line times ½ (√(1-k²) + asin(k)/k), with k half the pulse spacing over its
 * reach along the line (the mean height of a circle's arc). Ellipse: model.md §3, Liu 1982.
 */
import type { Vec3 } from '../base/vec.ts';
import { activatedHalfWidth, type Beam, peakFluence, spotRadius } from '../beam/beam.ts';
import type { FieldPatch } from '../drape/copper.ts';

/** The light at a place in the layer that writes it. */
export interface Light {
  /** Activated half-width across the tilt, mm; 0 where nothing is activated. */
  across: number;
  cosTheta: number;
  /** Unit direction of the tilt in the tangent plane, part frame; any where the beam stands upright. */
  tilt: Vec3;
}

/** @param normal, u  unit, part frame; @param uz  u's share along the optical axis */
export function lightAt(beam: Beam, activation: number, d: number, normal: Vec3, u: Vec3, uz: number): Light {
  const cosTheta = normal[0] * u[0] + normal[1] * u[1] + normal[2] * u[2];
  if (cosTheta <= 0) return { across: 0, cosTheta, tilt: [0, 0, 0] };
  const radius = spotRadius(beam, d, uz);
  const m: Vec3 = [u[0] - cosTheta * normal[0], u[1] - cosTheta * normal[1], u[2] - cosTheta * normal[2]];
  const l = Math.hypot(m[0], m[1], m[2]);
  return {
    across: activatedHalfWidth(radius, peakFluence(beam, radius, cosTheta), activation),
    cosTheta,
    tilt: l > 0 ? [m[0] / l, m[1] / l, m[2] / l] : [0, 0, 0],
  };
}

/**
 * Mean half-width of the copper that a line leaves, measured on the surface in direction `g` across the line.
 * @param g        unit direction across the line, in the tangent plane
 * @param spacing  of pulses along the line, on the surface, mm
 */
export function lineHalfWidth(light: Light, g: Vec3, spacing: number): number {
  if (light.across === 0) return 0;
  const cos = Math.abs(g[0] * light.tilt[0] + g[1] * light.tilt[1] + g[2] * light.tilt[2]);
  const sin = Math.sqrt(Math.max(0, 1 - cos * cos));
  const { across, cosTheta } = light;
  // Reach across the line: the ellipse's support; along it: its chord through the middle.
  const reach = across * Math.hypot(sin, cos / cosTheta);
  const chord = across / Math.hypot(cos, sin * cosTheta);
  const k = Math.min(1, spacing / 2 / chord);
  const mean = k > 0 ? (Math.sqrt(1 - k * k) + Math.asin(k) / k) / 2 : 1;
  return reach * mean;
}

/** Unit gradient of `edge` at each vertex, in the surface: the way out of the copper. 3 numbers a vertex; 0 where it has none. */
export function edgeGradients(patch: FieldPatch): Float64Array {
  const { positions: x, triangles: t, edge } = patch;
  const out = new Float64Array(x.length);
  for (let i = 0; i < t.length; i += 3) {
    const a = t[i],
      b = t[i + 1],
      c = t[i + 2];
    const ux = x[3 * b] - x[3 * a],
      uy = x[3 * b + 1] - x[3 * a + 1],
      uz = x[3 * b + 2] - x[3 * a + 2];
    const vx = x[3 * c] - x[3 * a],
      vy = x[3 * c + 1] - x[3 * a + 1],
      vz = x[3 * c + 2] - x[3 * a + 2];
    const uu = ux * ux + uy * uy + uz * uz;
    const vv = vx * vx + vy * vy + vz * vz;
    const uv = ux * vx + uy * vy + uz * vz;
    const det = uu * vv - uv * uv;
    if (det <= 0) continue;
    const fu = edge[b] - edge[a];
    const fv = edge[c] - edge[a];
    // Gradient in the basis u, v, weighted with the area √det / 2.
    const w = 1 / Math.sqrt(det);
    const p = (fu * vv - fv * uv) * w;
    const q = (fv * uu - fu * uv) * w;
    for (const k of [a, b, c]) {
      out[3 * k] += p * ux + q * vx;
      out[3 * k + 1] += p * uy + q * vy;
      out[3 * k + 2] += p * uz + q * vz;
    }
  }
  for (let v = 0; v < out.length; v += 3) {
    const l = Math.hypot(out[v], out[v + 1], out[v + 2]);
    if (l > 0) {
      out[v] /= l;
      out[v + 1] /= l;
      out[v + 2] /= l;
    }
  }
  return out;
}
