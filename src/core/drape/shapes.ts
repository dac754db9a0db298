/**
 * Signed distances to flat outlines, mm, negative inside: exact in the plane (closed forms; the box and
 * the stadium are the classical distance of a point to a box and to a segment).
 */
import type { Vec2 } from '../base/vec.ts';

export type FlatShape =
  | { circle: number }
  | { rect: readonly [number, number] }
  | { slot: readonly [number, number] }
  | { outline: readonly Vec2[] };

/** Distance of (u, v) to the outline of a pad shape centred at the origin. */
export function flatDistance(shape: FlatShape, u: number, v: number): number {
  if ('circle' in shape) return Math.hypot(u, v) - shape.circle / 2;
  if ('rect' in shape) {
    const dx = Math.abs(u) - shape.rect[0] / 2;
    const dy = Math.abs(v) - shape.rect[1] / 2;
    return Math.hypot(Math.max(dx, 0), Math.max(dy, 0)) + Math.min(Math.max(dx, dy), 0);
  }
  if ('slot' in shape) {
    const [w, h] = shape.slot;
    const r = Math.min(w, h) / 2;
    const du = Math.max(Math.abs(u) - (w / 2 - r), 0);
    const dv = Math.max(Math.abs(v) - (h / 2 - r), 0);
    return Math.hypot(du, dv) - r;
  }
  return polygonDistance(shape.outline, u, v);
}

/** Distance to a closed polygon, inside by the even-odd rule whatever its winding. */
export function polygonDistance(corners: readonly Vec2[], u: number, v: number): number {
  let best = Infinity;
  let inside = false;
  for (let i = 0, j = corners.length - 1; i < corners.length; j = i++) {
    const [ax, ay] = corners[j];
    const [bx, by] = corners[i];
    const ex = bx - ax,
      ey = by - ay;
    const px = u - ax,
      py = v - ay;
    const ee = ex * ex + ey * ey;
    const t = ee > 0 ? Math.min(1, Math.max(0, (px * ex + py * ey) / ee)) : 0;
    best = Math.min(best, (px - t * ex) ** 2 + (py - t * ey) ** 2);
    if (ay > v !== by > v && u < ax + ((v - ay) / (by - ay)) * ex) inside = !inside;
  }
  return inside ? -Math.sqrt(best) : Math.sqrt(best);
}

/** Radius of the smallest circle about the origin that holds the shape, mm. */
export function circumradius(shape: FlatShape): number {
  if ('circle' in shape) return shape.circle / 2;
  if ('rect' in shape) return Math.hypot(shape.rect[0], shape.rect[1]) / 2;
  if ('slot' in shape) return Math.max(shape.slot[0], shape.slot[1]) / 2;
  return Math.max(...shape.outline.map(([u, v]) => Math.hypot(u, v)));
}

/** Length of the outline in the plane, mm. */
export function perimeter(shape: FlatShape): number {
  if ('circle' in shape) return Math.PI * shape.circle;
  if ('rect' in shape) return 2 * (shape.rect[0] + shape.rect[1]);
  if ('slot' in shape) {
    const [w, h] = shape.slot;
    return Math.PI * Math.min(w, h) + 2 * Math.abs(w - h);
  }
  return shape.outline.reduce((sum, p, i) => {
    const q = shape.outline[(i + 1) % shape.outline.length];
    return sum + Math.hypot(q[0] - p[0], q[1] - p[1]);
  }, 0);
}
