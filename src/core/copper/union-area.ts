/**
 * Area that several patches cover together, each place counted once.
 *
 * Patches are triangles, each inside one face of the part, and those of one patch do not overlap: the union is found face
 * by face, in the plane. Of each triangle what earlier patches cover is cut off by half-planes (the clipping of
 * I. Sutherland and G. Hodgman, Comm. ACM 17 (1974) 32, keeping the outer part at each line), which leaves disjoint convex
 * pieces. Shares of a triangle's area are the same in any projection, so a coordinate is dropped instead of turned away.
 */
import type { Patch } from '../drape/copper.ts';
import { patchArea, triangleArea } from '../drape/level-lines.ts';

/** A piece with less than this share of its triangle's area is what rounding leaves along a shared edge. */
const EMPTY = 1e-12;
/** Cells of the grid are this many times as wide as the mean triangle's box. */
const CELL = 2;

/** @returns mm²; the plain sum, to the last digit, where nothing overlaps */
export function unionArea(patches: readonly Patch[]): number {
  let sum = patches.reduce((s, p) => s + patchArea(p), 0);
  for (const inFace of sharedFaces(patches)) sum -= coveredTwice(patches, inFace);
  return sum;
}

/** Triangles that one patch has in one face. */
interface Share {
  patch: number;
  triangles: number[];
  /** Part frame: least x, y, z, most x, y, z. */
  box: Float64Array;
}

/** Faces where the boxes of two patches meet, with the patches that do. */
function sharedFaces(patches: readonly Patch[]): Share[][] {
  const byFace = new Map<number, Share[]>();
  patches.forEach(({ positions: x, triangles, face }, patch) => {
    for (let t = 0; t < face.length; t++) {
      let shares = byFace.get(face[t]);
      if (!shares) {
        shares = [];
        byFace.set(face[t], shares);
      }
      let share = shares[shares.length - 1];
      if (share?.patch !== patch) {
        share = {
          patch,
          triangles: [],
          box: Float64Array.of(Infinity, Infinity, Infinity, -Infinity, -Infinity, -Infinity),
        };
        shares.push(share);
      }
      share.triangles.push(t);
      for (let i = 0; i < 3; i++)
        for (let k = 0; k < 3; k++) {
          const c = x[3 * triangles[3 * t + i] + k];
          if (c < share.box[k]) share.box[k] = c;
          if (c > share.box[3 + k]) share.box[3 + k] = c;
        }
    }
  });
  const meet = (a: Share, b: Share): boolean =>
    a !== b && [0, 1, 2].every((k) => a.box[k] <= b.box[3 + k] && b.box[k] <= a.box[3 + k]);
  return [...byFace.values()]
    .map((shares) => shares.filter((a) => shares.some((b) => meet(a, b))))
    .filter((shares) => shares.length > 1);
}

/** A convex polygon, counter-clockwise, x and y in turn. */
type Polygon = number[];

interface Piece {
  patch: number;
  polygon: Polygon;
  /** mm² on the part. */
  area: number;
}

/** What the sum of areas counts too much in one face, mm². */
function coveredTwice(patches: readonly Patch[], shares: readonly Share[]): number {
  const pieces = flatten(patches, shares);
  let width = 0;
  for (const { polygon: p } of pieces)
    width += Math.max(
      Math.max(p[0], p[2], p[4]) - Math.min(p[0], p[2], p[4]),
      Math.max(p[1], p[3], p[5]) - Math.min(p[1], p[3], p[5]),
    );
  if (width === 0) return 0;
  const cell = (CELL * width) / pieces.length;
  const grid = new Map<number, Map<number, number[]>>();
  const asked = new Int32Array(pieces.length).fill(-1);
  let lost = 0;
  pieces.forEach(({ patch, polygon, area }, n) => {
    const range = [0, 1].map((k) => [
      Math.floor(Math.min(polygon[k], polygon[2 + k], polygon[4 + k]) / cell),
      Math.floor(Math.max(polygon[k], polygon[2 + k], polygon[4 + k]) / cell),
    ]);
    let rest: Polygon[] = [polygon];
    const whole = signedArea(polygon);
    for (let i = range[0][0]; i <= range[0][1]; i++) {
      let column = grid.get(i);
      if (!column) {
        column = new Map();
        grid.set(i, column);
      }
      for (let j = range[1][0]; j <= range[1][1]; j++) {
        const list = column.get(j);
        if (!list) {
          column.set(j, [n]);
          continue;
        }
        for (const m of list) {
          if (asked[m] === n || pieces[m].patch === patch) continue;
          asked[m] = n;
          rest = rest.flatMap((r) => subtract(r, pieces[m].polygon, EMPTY * whole));
        }
        list.push(n);
      }
    }
    if (rest.length === 1 && rest[0] === polygon) return;
    lost += area * (1 - rest.reduce((s, r) => s + signedArea(r), 0) / whole);
  });
  return lost;
}

/** Triangles of a face as flat ones, counter-clockwise; what has no area is left out. */
function flatten(patches: readonly Patch[], shares: readonly Share[]): Piece[] {
  const found = shares.flatMap(({ patch, triangles: list }) =>
    list.map((t) => {
      const { positions, triangles } = patches[patch];
      const corners = [0, 1, 2].map((i) => 3 * triangles[3 * t + i]);
      return { patch, x: positions, corners, area: triangleArea(patches[patch], t) };
    }),
  );
  const largest = found.reduce((a, b) => (b.area > a.area ? b : a));
  const [u, v] = flattest(largest.x, largest.corners);
  return found.flatMap(({ patch, x, corners: [a, b, c], area }) => {
    const polygon = [x[a + u], x[a + v], x[b + u], x[b + v], x[c + u], x[c + v]];
    if (signedArea(polygon) < 0) polygon.push(...polygon.splice(2, 2));
    return signedArea(polygon) > 0 ? [{ patch, polygon, area }] : [];
  });
}

/** The two coordinates that show a triangle largest. */
function flattest(x: Float64Array, [a, b, c]: readonly number[]): readonly [number, number] {
  const seen = ([u, v]: readonly [number, number]): number =>
    Math.abs((x[b + u] - x[a + u]) * (x[c + v] - x[a + v]) - (x[b + v] - x[a + v]) * (x[c + u] - x[a + u]));
  const pairs = [
    [1, 2],
    [2, 0],
    [0, 1],
  ] as const;
  return pairs.reduce((best, p) => (seen(p) > seen(best) ? p : best), pairs[0] as readonly [number, number]);
}

/** Convex pieces of `from` outside the triangle `off`; `from` itself where they do not overlap. */
function subtract(from: Polygon, off: Polygon, empty: number): Polygon[] {
  const out: Polygon[] = [];
  let inside = from;
  for (let i = 0; i < 6; i += 2) {
    const j = (i + 2) % 6;
    const [left, right] = split(inside, off[i], off[i + 1], off[j], off[j + 1]);
    if (left.length < 6 || signedArea(left) <= empty) return [from];
    if (right.length >= 6 && signedArea(right) > empty) out.push(right);
    inside = left;
  }
  return out;
}

/** Parts of a convex polygon left and right of the line from (ax, ay) to (bx, by). */
function split(p: Polygon, ax: number, ay: number, bx: number, by: number): [Polygon, Polygon] {
  const left: Polygon = [];
  const right: Polygon = [];
  const n = p.length;
  let [px, py] = [p[n - 2], p[n - 1]];
  let before = (bx - ax) * (py - ay) - (by - ay) * (px - ax);
  for (let i = 0; i < n; i += 2) {
    const [qx, qy] = [p[i], p[i + 1]];
    const here = (bx - ax) * (qy - ay) - (by - ay) * (qx - ax);
    if ((before < 0 && here > 0) || (before > 0 && here < 0)) {
      const t = before / (before - here);
      const [x, y] = [px + t * (qx - px), py + t * (qy - py)];
      left.push(x, y);
      right.push(x, y);
    }
    if (here >= 0) left.push(qx, qy);
    if (here <= 0) right.push(qx, qy);
    px = qx;
    py = qy;
    before = here;
  }
  return [left, right];
}

function signedArea(p: Polygon): number {
  let sum = 0;
  // From the first corner: the differences are small where coordinates are not.
  for (let i = 2; i + 3 < p.length; i += 2)
    sum += (p[i] - p[0]) * (p[i + 3] - p[1]) - (p[i + 1] - p[1]) * (p[i + 2] - p[0]);
  return sum / 2;
}
