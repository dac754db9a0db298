/** Halving a flat convex polygon across its long way. */

/** Axes of a face's plane, for coordinates of places in it. */
export interface FaceFrame {
  origin: readonly [number, number, number];
  x: readonly [number, number, number];
  y: readonly [number, number, number];
}

/** Frame of the plane through three vertices: x along a → b. */
export function faceFrame(positions: readonly number[], a: number, b: number, c: number): FaceFrame {
  const [ux, uy, uz] = [0, 1, 2].map((k) => positions[3 * b + k] - positions[3 * a + k]);
  const [vx, vy, vz] = [0, 1, 2].map((k) => positions[3 * c + k] - positions[3 * a + k]);
  const l = Math.hypot(ux, uy, uz);
  const x = [ux / l, uy / l, uz / l] as const;
  const along = vx * x[0] + vy * x[1] + vz * x[2];
  const w = [vx - along * x[0], vy - along * x[1], vz - along * x[2]];
  const wl = Math.hypot(w[0], w[1], w[2]);
  return {
    origin: [positions[3 * a], positions[3 * a + 1], positions[3 * a + 2]],
    x,
    y: [w[0] / wl, w[1] / wl, w[2] / wl],
  };
}

/** A polygon is as good as a line when its area is below this share of the square of its length: collinear points, and rounding. */
const EMPTY = 1e-9;

/** A chord should leave at least this share of the area on either side: it keeps pieces from turning thin, and the cutting from going on for ever. */
const FAIR = 0.1;

/**
 * Chord that halves a polygon.
 * @param polygon vertices, four or more, convex; points may lie on straight sides
 * @returns       places i < j in the polygon, not neighbours: the chord joins them near the middle of the polygon's long way,
 *                and is as short as it can be there; null when the polygon is as good as a line
 */
export function halve(
  polygon: readonly number[],
  positions: readonly number[],
  frame: FaceFrame,
): [number, number] | null {
  const n = polygon.length;
  const px = new Float64Array(n);
  const py = new Float64Array(n);
  let mx = 0;
  let my = 0;
  for (let i = 0; i < n; i++) {
    const o = 3 * polygon[i];
    const [dx, dy, dz] = [
      positions[o] - frame.origin[0],
      positions[o + 1] - frame.origin[1],
      positions[o + 2] - frame.origin[2],
    ];
    px[i] = dx * frame.x[0] + dy * frame.x[1] + dz * frame.x[2];
    py[i] = dx * frame.y[0] + dy * frame.y[1] + dz * frame.y[2];
    mx += px[i] / n;
    my += py[i] / n;
  }
  // The long way: from the vertex farthest from the middle to the vertex farthest from that one.
  const far = (x: number, y: number): number => {
    let best = 0;
    let most = -1;
    for (let i = 0; i < n; i++) {
      const d = (px[i] - x) ** 2 + (py[i] - y) ** 2;
      if (d > most) {
        most = d;
        best = i;
      }
    }
    return best;
  };
  const s = far(mx, my);
  const e = far(px[s], py[s]);
  const [ax, ay] = [px[e] - px[s], py[e] - py[s]];
  const length2 = ax * ax + ay * ay;
  // The two ways round from s to e; on each the two places on either side of the middle.
  const share = (i: number) => ((px[i] - px[s]) * ax + (py[i] - py[s]) * ay) / length2;
  const one = middles(n, s, e, share);
  const other = middles(n, e, s, (i) => 1 - share(i));
  const whole = area(px, py, 0, n - 1);
  let best: [number, number] | null = null;
  let least = 0;
  let shortest = Infinity;
  const consider = (i: number, j: number) => {
    const [a, b] = i < j ? [i, j] : [j, i];
    if (b - a < 2 || (a === 0 && b === n - 1)) return;
    const part = area(px, py, a, b);
    const smaller = Math.min(part, whole - part);
    const d = (px[a] - px[b]) ** 2 + (py[a] - py[b]) ** 2;
    // Shortest among those that leave both sides a fair share; while there is none, the fairest.
    if (smaller <= EMPTY * length2) return;
    const fair = smaller >= FAIR * whole;
    if (fair ? d >= shortest : shortest < Infinity || smaller <= least) return;
    if (fair) shortest = d;
    least = smaller;
    best = [a, b];
  };
  for (const i of one) for (const j of other) consider(i, j);
  if (shortest === Infinity) for (let i = 0; i < n; i++) for (let j = i + 2; j < n; j++) consider(i, j);
  return best;
}

/** Places on the way round from s to e (both left out unless nothing lies between) next to the middle of the long way. */
function middles(n: number, s: number, e: number, share: (i: number) => number): number[] {
  const way: number[] = [];
  for (let i = s; i !== e; i = (i + 1) % n) way.push(i);
  way.push(e);
  let k = 1;
  while (k < way.length - 1 && share(way[k]) < 0.5) k++;
  return [way[k - 1], way[k]];
}

/** Area of the polygon from place a to place b and straight back. */
function area(px: Float64Array, py: Float64Array, a: number, b: number): number {
  let sum = 0;
  for (let i = a; i < b; i++) sum += px[i] * py[i + 1] - px[i + 1] * py[i];
  sum += px[b] * py[a] - px[a] * py[b];
  return sum / 2;
}
