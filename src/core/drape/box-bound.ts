import type { Vec3 } from '../base/vec.ts';

/** A path is covered by boxes around stretches of about this length, mm. */
const STRETCH = 2;

/**
 * Lower bound of the distance over the surface to a path: no way is shorter than the straight one to the boxes that
 * hold it.
 * @param points  of the path or of a single place, 3 a point
 */
export function boxBound(points: Float64Array): (p: Vec3) => number {
  const boxes: number[] = [];
  let box: number[] | null = null;
  let run = 0;
  const take = (x: number, y: number, z: number) => {
    if (!box) {
      box = [x, y, z, x, y, z];
      return;
    }
    box = [
      Math.min(box[0], x),
      Math.min(box[1], y),
      Math.min(box[2], z),
      Math.max(box[3], x),
      Math.max(box[4], y),
      Math.max(box[5], z),
    ];
  };
  take(points[0], points[1], points[2]);
  for (let i = 3; i < points.length; i += 3) {
    const [dx, dy, dz] = [
      points[i] - points[i - 3],
      points[i + 1] - points[i - 2],
      points[i + 2] - points[i - 1],
    ];
    const pieces = Math.max(1, Math.ceil(Math.hypot(dx, dy, dz) / STRETCH));
    for (let k = 1; k <= pieces; k++) {
      const t = k / pieces;
      const [x, y, z] = [points[i - 3] + t * dx, points[i - 2] + t * dy, points[i - 1] + t * dz];
      take(x, y, z);
      run += Math.hypot(dx, dy, dz) / pieces;
      if (run >= STRETCH) {
        boxes.push(...box!);
        box = null;
        run = 0;
        take(x, y, z);
      }
    }
  }
  boxes.push(...box!);
  const flat = Float64Array.from(boxes);
  return ([x, y, z]) => {
    let best = Infinity;
    for (let i = 0; i < flat.length; i += 6) {
      const a = Math.max(flat[i] - x, 0, x - flat[i + 3]);
      const b = Math.max(flat[i + 1] - y, 0, y - flat[i + 4]);
      const c = Math.max(flat[i + 2] - z, 0, z - flat[i + 5]);
      best = Math.min(best, a * a + b * b + c * c);
    }
    return Math.sqrt(best);
  };
}

/**
 * Distance from a source, known only within `reach`: the field itself where it is known, and elsewhere a lower
 * bound that still grows by no more than the way walked, which refining relies on.
 * @param seen  distance found, or null where the source does not see the place
 * @param far   gives a lower bound of the true distance; asked only where it is needed
 */
export const heldDistance = (seen: number | null, reach: number, far: () => number): number =>
  seen !== null && seen <= reach ? seen : Math.max(reach, far());
