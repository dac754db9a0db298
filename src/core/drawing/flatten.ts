/** Lines, arcs and Bézier curves to chains of points in mm that stay within a tolerance of them. */
import { cosine, sine } from '../base/trig.ts';
import { inReach } from './findings.ts';
import { apply, type Matrix, stretches } from './matrix.ts';

/** c + p cos θ + q sin θ: an arc of a circle or, with p and q conjugate half diameters, of an ellipse. */
export interface Arc {
  centre: readonly [number, number];
  p: readonly [number, number];
  q: readonly [number, number];
  /** θ at its start, and how far it runs from there; radians, from p towards q. */
  start: number;
  sweep: number;
}

/** Takes a figure piece by piece, in the figure's own units. A piece begins where the last one ended. */
export interface Pen {
  move(x: number, y: number): void;
  line(x: number, y: number): void;
  quadratic(x1: number, y1: number, x: number, y: number): void;
  cubic(x1: number, y1: number, x2: number, y2: number, x: number, y: number): void;
  /** @param x  where it ends, exactly */
  arc(arc: Arc, x: number, y: number): void;
  /** Back to where the last move went. */
  close(): void;
}

export interface Chain {
  /** mm, 2 a point, no point twice in a row; a closed chain does not repeat its first. One point alone is a dot. */
  points: Float64Array;
  closed: boolean;
}

/**
 * A pen that flattens.
 * @param toMm       the figure's units to mm
 * @param tolerance  no curve is farther from its chords, mm
 * @param spend      called with the number of points before they are made; throws when there are too many
 * Its methods throw `BadShape` `out-of-range`.
 */
export function flatten(
  toMm: Matrix,
  tolerance: number,
  spend: (points: number) => void,
): Pen & { chains(): Chain[] } {
  const linear: Matrix = [toMm[0], toMm[1], toMm[2], toMm[3], 0, 0];
  const done: Chain[] = [];
  let points: number[] = [];
  let drawn = false;
  let fresh = false;
  /** Where the pen is and where it began, mm. */
  let [x, y, x0, y0] = [0, 0, 0, 0];

  const to = (u: number, v: number): void => {
    if (points.length === 0) points.push(x, y);
    if (u !== x || v !== y) points.push(inReach(u), inReach(v));
    [x, y] = [u, v];
    drawn = true;
  };
  const end = (closed: boolean): void => {
    if (drawn) {
      const n = points.length;
      const repeats = closed && n > 2 && points[0] === points[n - 2] && points[1] === points[n - 1];
      done.push({ points: Float64Array.from(repeats ? points.slice(0, n - 2) : points), closed });
    }
    points = [];
    drawn = false;
  };
  return {
    move(u, v) {
      end(false);
      [x, y] = apply(toMm, u, v);
      inReach(x);
      inReach(y);
      [x0, y0] = [x, y];
      fresh = true;
    },
    line(u, v) {
      spend(1);
      to(...apply(toMm, u, v));
    },
    quadratic(u1, v1, u, v) {
      const [ax, ay] = [x, y];
      const [bx, by] = apply(toMm, u1, v1);
      const [cx, cy] = apply(toMm, u, v);
      const n = pieces((2 / 8) * Math.hypot(ax - 2 * bx + cx, ay - 2 * by + cy), tolerance);
      spend(n);
      for (let i = 1; i < n; i++) {
        const t = i / n;
        const s = 1 - t;
        to(s * s * ax + 2 * s * t * bx + t * t * cx, s * s * ay + 2 * s * t * by + t * t * cy);
      }
      to(cx, cy);
    },
    cubic(u1, v1, u2, v2, u, v) {
      const [ax, ay] = [x, y];
      const [bx, by] = apply(toMm, u1, v1);
      const [cx, cy] = apply(toMm, u2, v2);
      const [dx, dy] = apply(toMm, u, v);
      const bend = Math.max(
        Math.hypot(ax - 2 * bx + cx, ay - 2 * by + cy),
        Math.hypot(bx - 2 * cx + dx, by - 2 * cy + dy),
      );
      const n = pieces((6 / 8) * bend, tolerance);
      spend(n);
      for (let i = 1; i < n; i++) {
        const t = i / n;
        const s = 1 - t;
        const [a, b, c, d] = [s * s * s, 3 * s * s * t, 3 * s * t * t, t * t * t];
        to(a * ax + b * bx + c * cx + d * dx, a * ay + b * by + c * cy + d * dy);
      }
      to(dx, dy);
    },
    arc({ centre, p, q, start, sweep }, u, v) {
      const [cx, cy] = apply(toMm, centre[0], centre[1]);
      const [px, py] = apply(linear, p[0], p[1]);
      const [qx, qy] = apply(linear, q[0], q[1]);
      const n = arcPieces(stretches([px, py, qx, qy, 0, 0])[0], sweep, tolerance);
      spend(n);
      for (let i = 1; i < n; i++) {
        const angle = start + (sweep * i) / n;
        const [c, s] = [cosine(angle), sine(angle)];
        to(cx + c * px + s * qx, cy + c * py + s * qy);
      }
      to(...apply(toMm, u, v));
    },
    close() {
      // A move and a close alone make a dot; a second close makes nothing.
      if (fresh && !drawn) {
        points.push(x, y);
        drawn = true;
      }
      end(true);
      fresh = false;
      [x, y] = [x0, y0];
    },
    chains() {
      end(false);
      return done;
    },
  };
}

/**
 * Equal steps of the parameter that keep a Bézier curve of degree d within the tolerance of its chords:
 * √(d (d − 1)/8 · largest second difference / tolerance) (G. Wang 1984; R. Goldman, Pyramid Algorithms, 2003, ch. 5).
 */
function pieces(bend: number, tolerance: number): number {
  return Math.max(1, Math.ceil(Math.sqrt(inReach(bend) / tolerance)));
}

/**
 * Equal steps of θ. A chord of the unit circle over an angle h stays within 1 − cos(h/2) of its arc, and a map that
 * stretches by r at most takes that to r (1 − cos(h/2)) at most; on a circle this is the sagitta itself.
 */
export function arcPieces(radius: number, sweep: number, tolerance: number): number {
  const half = Math.acos(1 - Math.min(1, tolerance / inReach(radius)));
  return Math.max(1, Math.ceil(Math.abs(sweep) / Math.min(2 * half, MOST_STEP)));
}

/** A sixth of a turn: by the tolerance alone, a circle smaller than it would be a line. */
const MOST_STEP = Math.PI / 3;
