/**
 * B-spline curves, rational ones too, as Bézier pieces halved until they are flat.
 *
 * The Bézier points of a piece are blossoms of its two knots (L. Ramshaw, Blossoming: a connect-the-dots approach to splines,
 * 1987). With weights above 0 a piece lies in the hull of its points, so that it is flat when they are near its chord; halving
 * by de Casteljau keeps this true (J. Lane, R. Riesenfeld, IEEE PAMI 2 (1980) 35).
 */
import { BadShape, inReach } from './findings.ts';

export interface Spline {
  degree: number;
  /** Points + degree + 1 of them, never falling. */
  knots: readonly number[];
  /** mm: pieces are measured where they will lie. */
  points: readonly (readonly [number, number])[];
  /** One a point, above 0; null for all alike. */
  weights: readonly number[] | null;
}

/** Beyond it there are mistakes only. */
const MOST_DEGREE = 25;
/** Halvings of one piece; each takes the height over the chord to a quarter. */
const MOST_HALVINGS = 24;

/**
 * @param line   called with each point after the first
 * @returns the first point, mm
 * @throws BadShape `bad-spline`
 */
export function flattenSpline(
  { degree, knots, points, weights }: Spline,
  tolerance: number,
  line: (x: number, y: number) => void,
): [number, number] {
  const n = points.length;
  if (!(Number.isInteger(degree) && degree >= 1 && degree <= MOST_DEGREE && n > degree))
    throw new BadShape('bad-spline', `a spline of degree ${degree} has ${n} points`);
  if (knots.length !== n + degree + 1)
    throw new BadShape(
      'bad-spline',
      `a spline of degree ${degree} with ${n} points has ${knots.length} knots`,
    );
  if (knots.some((u, i) => i > 0 && u < knots[i - 1])) throw new BadShape('bad-spline', 'knots fall');
  if (weights && (weights.length !== n || weights.some((w) => !(w > 0))))
    throw new BadShape('bad-spline', 'weights are missing or not above 0');
  // Inside, degree + 1 knots in one place leave the curve in two parts.
  for (let i = 1; i < n; i++)
    if (knots[i] === knots[i + degree] && knots[i] > knots[degree] && knots[i] < knots[n])
      throw new BadShape('bad-spline', `the spline tears at the knot ${knots[i]}`);
  const control = points.map(([x, y], i): Weighted => {
    const w = weights?.[i] ?? 1;
    return [inReach(x) * w, inReach(y) * w, w];
  });
  let first: Weighted | null = null;
  for (let k = degree; k < n; k++) {
    const [a, b] = [knots[k], knots[k + 1]];
    if (!(a < b)) continue;
    const piece = Array.from({ length: degree + 1 }, (_, i) =>
      blossom(control, knots, k, degree, (r) => (r < degree - i ? a : b)),
    );
    first ??= piece[0];
    halve(Float64Array.from(piece.flat()), tolerance, line, MOST_HALVINGS);
  }
  if (!first) throw new BadShape('bad-spline', 'all knots are the same');
  return [first[0] / first[2], first[1] / first[2]];
}

/** Homogeneous: x w, y w, w. */
type Weighted = readonly [number, number, number];

const mix = (a: Weighted, b: Weighted, t: number): Weighted => [
  a[0] + t * (b[0] - a[0]),
  a[1] + t * (b[1] - a[1]),
  a[2] + t * (b[2] - a[2]),
];

/** De Boor's triangle over the knot span k, with an argument of its own on each of its levels. */
function blossom(
  control: readonly Weighted[],
  knots: readonly number[],
  k: number,
  degree: number,
  argument: (level: number) => number,
): Weighted {
  const d = control.slice(k - degree, k + 1);
  for (let r = 1; r <= degree; r++) {
    const u = argument(r - 1);
    for (let j = degree; j >= r; j--) {
      const low = knots[k - degree + j];
      const high = knots[k + 1 + j - r];
      d[j] = mix(d[j - 1], d[j], (u - low) / (high - low));
    }
  }
  return d[degree];
}

/** @param piece  x w, y w, w a point; it is not kept */
function halve(
  piece: Float64Array,
  tolerance: number,
  line: (x: number, y: number) => void,
  left: number,
): void {
  const n = piece.length;
  if (left === 0 || isFlat(piece, tolerance)) {
    line(piece[n - 3] / piece[n - 1], piece[n - 2] / piece[n - 1]);
    return;
  }
  // What is left of each row of the triangle is the first half; its last row, grown in place, the second.
  const low = new Float64Array(n);
  for (let k = 0; k < n; k += 3) {
    low[k] = piece[0];
    low[k + 1] = piece[1];
    low[k + 2] = piece[2];
    for (let i = 0; i + 3 < n - k; i++) piece[i] = (piece[i] + piece[i + 3]) / 2;
  }
  halve(low, tolerance, line, left - 1);
  halve(piece, tolerance, line, left - 1);
}

function isFlat(piece: Float64Array, tolerance: number): boolean {
  const n = piece.length;
  const ax = piece[0] / piece[2];
  const ay = piece[1] / piece[2];
  const dx = piece[n - 3] / piece[n - 1] - ax;
  const dy = piece[n - 2] / piece[n - 1] - ay;
  const square = dx * dx + dy * dy;
  for (let i = 3; i < n - 3; i += 3) {
    const x = piece[i] / piece[i + 2] - ax;
    const y = piece[i + 1] / piece[i + 2] - ay;
    const t = square > 0 ? Math.max(0, Math.min(1, (x * dx + y * dy) / square)) : 0;
    const [u, v] = [x - t * dx, y - t * dy];
    if (u * u + v * v > tolerance * tolerance) return false;
  }
  return true;
}
