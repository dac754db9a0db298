/**
 * Arcs that bound copper, as polygons of the same area: corners inside an arc lie as far out as makes up for what the
 * chords cut off, so that neither copper nor its resistance depends on the tolerance.
 */
import { cosine, sine } from '../base/trig.ts';
import { inReach } from './findings.ts';
import { arcPieces } from './flatten.ts';

/**
 * Inscribed chords stay within a tolerance; these corners stand out by 4/3 of an inscribed chord's sagitta at most (an arc of
 * two chords; 2/3 on a circle), so that chords are made for three quarters of it.
 */
const SHARE = 0.75;

/** Fewest corners of a circle: a multiple of four, so that it is as wide as high. */
const FEWEST = 8;

export type Spend = (points: number) => void;

/** Counter-clockwise ring about (x, y), the first corner at angle 0; its area is π r². */
export function circleRing(x: number, y: number, r: number, tolerance: number, spend: Spend): Float64Array {
  const n = Math.max(FEWEST, 4 * Math.ceil(arcPieces(r, 2 * Math.PI, SHARE * tolerance) / 4));
  spend(n);
  const step = (2 * Math.PI) / n;
  const out = r * Math.sqrt(step / sine(step));
  const ring = new Float64Array(2 * n);
  for (let i = 0; i < n; i++) {
    ring[2 * i] = x + out * cosine(i * step);
    ring[2 * i + 1] = y + out * sine(i * step);
  }
  return ring;
}

/**
 * Corners between the two ends of an arc, without the ends, appended to `into`. With the ends they enclose, towards the
 * centre, ½ r² sweep: ½ sin δ (2 r ρ + (k − 2) ρ²) for k chords over δ each and corners at ρ.
 * @param r      radius at the start; `rEnd` at the end, a little apart where a file is rounded
 * @param start  angle at the start; `sweep` from there, above 0 counter-clockwise; radians
 */
export function arcCorners(
  into: number[],
  [x, y]: readonly [number, number],
  r: number,
  rEnd: number,
  start: number,
  sweep: number,
  tolerance: number,
  spend: Spend,
): void {
  const k = Math.max(2, arcPieces(inReach(Math.max(r, rEnd)), sweep, SHARE * tolerance));
  spend(k);
  const d = Math.abs(sweep) / k;
  const want = (k * d) / sine(d);
  // (k − 2) q² + 2 q − want = 0 for q = ρ / r
  const q = k === 2 ? want / 2 : (Math.sqrt(1 + (k - 2) * want) - 1) / (k - 2);
  for (let i = 1; i < k; i++) {
    const rho = q * (r + ((rEnd - r) * i) / k);
    const angle = start + (sweep * i) / k;
    into.push(x + rho * cosine(angle), y + rho * sine(angle));
  }
}

/** A rectangle with round ends, width w along x and height h, about the origin; its area is that of the true one. */
export function obroundRing(w: number, h: number, tolerance: number, spend: Spend): Float64Array {
  const r = Math.min(w, h) / 2;
  if (w === h) return circleRing(0, 0, r, tolerance, spend);
  const long = Math.max(w, h) / 2 - r;
  const ring: number[] = [];
  const turn = w > h ? 0 : Math.PI / 2;
  for (const half of [0, 1]) {
    const angle = turn + half * Math.PI;
    const [cx, cy] = w > h ? [half === 0 ? long : -long, 0] : [0, half === 0 ? long : -long];
    const from = angle - Math.PI / 2;
    const [ax, ay] = w > h ? [0, half === 0 ? -r : r] : [half === 0 ? r : -r, 0];
    ring.push(cx + ax, cy + ay);
    arcCorners(ring, [cx, cy], r, r, from, Math.PI, tolerance, spend);
    ring.push(cx - ax, cy - ay);
  }
  return Float64Array.from(ring);
}

/** Counter-clockwise rectangle about (x, y). */
export const boxRing = (x: number, y: number, w: number, h: number): Float64Array =>
  Float64Array.of(x - w / 2, y - h / 2, x + w / 2, y - h / 2, x + w / 2, y + h / 2, x - w / 2, y + h / 2);

/** Counter-clockwise regular polygon about (x, y), the first corner at `turn` degrees. */
export function polygonRing(n: number, x: number, y: number, diameter: number, turn: number): Float64Array {
  const ring = new Float64Array(2 * n);
  for (let i = 0; i < n; i++) {
    const angle = (turn * Math.PI) / 180 + (2 * Math.PI * i) / n;
    ring[2 * i] = x + (diameter / 2) * cosine(angle);
    ring[2 * i + 1] = y + (diameter / 2) * sine(angle);
  }
  return ring;
}

/** The same ring the other way round. */
export function reversed(ring: Float64Array): Float64Array {
  const out = new Float64Array(ring.length);
  for (let i = 0; i < ring.length; i += 2) {
    out[i] = ring[ring.length - 2 - i];
    out[i + 1] = ring[ring.length - 1 - i];
  }
  return out;
}

/** The corners of the smallest convex ring about the points, counter-clockwise (A. Andrew, Inf. Proc. Letters 9 (1979) 216). */
export function convexHull(points: readonly (readonly [number, number])[]): Float64Array {
  const p = [...points].sort((a, b) => a[0] - b[0] || a[1] - b[1]);
  const half = (list: readonly (readonly [number, number])[]): (readonly [number, number])[] => {
    const hull: (readonly [number, number])[] = [];
    for (const c of list) {
      while (hull.length > 1) {
        const [a, b] = [hull[hull.length - 2], hull[hull.length - 1]];
        if ((b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0]) > 0) break;
        hull.pop();
      }
      hull.push(c);
    }
    return hull.slice(0, -1);
  };
  return Float64Array.from([...half(p), ...half(p.reverse())].flat());
}
