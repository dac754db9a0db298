/**
 * Shape of the touch dial: a domed control knob on a conical skirt, lopsided on purpose, so that nothing about it looks
 * the same mirrored or turned. Part frame: z up, the dial stands on z = 0. mm.
 */
import type { Vec3 } from '../../src/core/base/vec.ts';

/** Outer radius of the rim that it stands on, and that rim's height. */
const RIM = { radius: 31, height: 2 };
/** Skirt: straight up to where the dome begins. */
const SKIRT = { slope: (41 * Math.PI) / 180, top: 19 };
/** Dome: a cap of this height over the skirt's top. */
const DOME = 6;
/** Round between skirt and dome, as a share of the way over which their heights blend, mm. */
const BLEND = 1.5;

const skirtHeight = (r: number): number => RIM.height + (RIM.radius - r) * Math.tan(SKIRT.slope);
const domeRadius = (SKIRT.top ** 2 + DOME ** 2) / (2 * DOME);
const capHeight = (r: number): number =>
  skirtHeight(SKIRT.top) + DOME - domeRadius + Math.sqrt(domeRadius ** 2 - r ** 2);
/** Past its rim the cap goes straight on, so that skirt and dome cross once. */
const domeHeight = (r: number): number => {
  const inside = Math.min(r, SKIRT.top);
  return capHeight(inside) - ((r - inside) * inside) / Math.sqrt(domeRadius ** 2 - inside ** 2);
};

/** Height of the profile at radius r: the lower of skirt and dome, rounded where they meet. */
export function profileHeight(r: number): number {
  const a = skirtHeight(r);
  const b = domeHeight(r);
  // Smooth minimum of two heights (polynomial blend).
  const h = Math.max(0, Math.min(1, 0.5 + (a - b) / (2 * BLEND)));
  return a * (1 - h) + b * h - BLEND * h * (1 - h);
}

/** How far the outline leans out at an angle: two lobes of different size and turn. */
const lobes = (phi: number): number => 1 + 0.028 * Math.cos(phi - 0.5) + 0.016 * Math.cos(3 * phi + 1.1);

/** Place on the dial above profile radius r at angle phi (radians); the top leans to one side. */
export function dialPoint(r: number, phi: number, z = profileHeight(r)): Vec3 {
  const lean = z / 20;
  const k = r * lobes(phi);
  return [k * Math.cos(phi) + 1.1 * lean, k * Math.sin(phi) - 0.8 * lean, z];
}

/** Triangles of the closed dial, 9 numbers a facet, counter-clockwise from outside. */
export function dialFacets(around: number, rings: number): number[] {
  const facets: number[] = [];
  const push = (...p: Vec3[]) => {
    for (const v of p) facets.push(...v);
  };
  const angle = (j: number) => (2 * Math.PI * (j % around)) / around;
  const radius = (i: number) => (RIM.radius * i) / rings;
  for (let j = 0; j < around; j++) {
    const [a, b] = [angle(j), angle(j + 1)];
    push(dialPoint(0, 0), dialPoint(radius(1), a), dialPoint(radius(1), b));
    for (let i = 1; i < rings; i++) {
      const [p, q] = [dialPoint(radius(i), a), dialPoint(radius(i), b)];
      const [s, t] = [dialPoint(radius(i + 1), a), dialPoint(radius(i + 1), b)];
      // Diagonals alternate, so that the mesh favours no turn.
      if ((i + j) % 2 === 0) push(p, s, t, p, t, q);
      else push(p, s, q, q, s, t);
    }
    const [top, topNext] = [dialPoint(RIM.radius, a), dialPoint(RIM.radius, b)];
    const [foot, footNext] = [dialPoint(RIM.radius, a, 0), dialPoint(RIM.radius, b, 0)];
    push(top, foot, footNext, top, footNext, topNext);
    push(dialPoint(0, 0, 0), footNext, foot);
  }
  return facets;
}
