import { describe, expect, test } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import { quiet } from '../../../src/core/base/run-context.ts';
import { distance, normalize, type Vec3 } from '../../../src/core/base/vec.ts';
import { buildMesh } from '../../../src/core/mesh/build.ts';
import { buildQueries, restoreQueries, serializeQueries } from '../../../src/core/mesh/queries.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import { faceNormal } from '../../../src/core/mesh/surface-point.ts';
import { box, lumpyRing, moved, soupOf } from './parts.ts';

const ring = buildMesh(soupOf(moved(lumpyRing(36, 22), [7, -3, 11])), 1, quiet);
const queries = buildQueries(ring);

const corner = (mesh: SurfaceMesh, f: number, i: number): Vec3 => {
  const v = 3 * mesh.triangles[3 * f + i];
  return [mesh.positions[v], mesh.positions[v + 1], mesh.positions[v + 2]];
};

/** Ray against every face: Cramer's rule, nothing clever. */
function slowHits(mesh: SurfaceMesh, o: Vec3, d: Vec3): { face: number; t: number }[] {
  const det = (a: Vec3, b: Vec3, c: Vec3): number =>
    a[0] * (b[1] * c[2] - b[2] * c[1]) -
    a[1] * (b[0] * c[2] - b[2] * c[0]) +
    a[2] * (b[0] * c[1] - b[1] * c[0]);
  const minus = (a: Vec3, b: Vec3): Vec3 => [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
  const out: { face: number; t: number }[] = [];
  for (let f = 0; f < mesh.triangles.length / 3; f++) {
    const a = corner(mesh, f, 0);
    const u = minus(corner(mesh, f, 1), a);
    const v = minus(corner(mesh, f, 2), a);
    const s: Vec3 = [-d[0], -d[1], -d[2]];
    const q = minus(o, a);
    const all = det(u, v, s);
    const [bu, bv, t] = [det(q, v, s) / all, det(u, q, s) / all, det(u, v, q) / all];
    if (bu >= 0 && bv >= 0 && bu + bv <= 1 && t >= 0) out.push({ face: f, t });
  }
  return out.sort((a, b) => a.t - b.t);
}

/** Nearest place of every face by halving the barycentric triangle: slow, and shares no line with the clever one. */
function slowNearest(mesh: SurfaceMesh, p: Vec3): number {
  let best = Infinity;
  for (let f = 0; f < mesh.triangles.length / 3; f++) {
    const [a, b, c] = [corner(mesh, f, 0), corner(mesh, f, 1), corner(mesh, f, 2)];
    best = Math.min(
      best,
      planeDistance(a, b, c, p),
      edgeDistance(a, b, p),
      edgeDistance(b, c, p),
      edgeDistance(c, a, p),
    );
  }
  return best;
}
function edgeDistance(a: Vec3, b: Vec3, p: Vec3): number {
  const l = distance(a, b);
  const t = [0, 1, 2].reduce((s, k) => s + ((b[k] - a[k]) * (p[k] - a[k])) / (l * l), 0);
  const k = Math.max(0, Math.min(1, t));
  return distance(p, [a[0] + k * (b[0] - a[0]), a[1] + k * (b[1] - a[1]), a[2] + k * (b[2] - a[2])]);
}
function planeDistance(a: Vec3, b: Vec3, c: Vec3, p: Vec3): number {
  const cross = (u: Vec3, v: Vec3): Vec3 => [
    u[1] * v[2] - u[2] * v[1],
    u[2] * v[0] - u[0] * v[2],
    u[0] * v[1] - u[1] * v[0],
  ];
  const minus = (u: Vec3, v: Vec3): Vec3 => [u[0] - v[0], u[1] - v[1], u[2] - v[2]];
  const dot = (u: Vec3, v: Vec3): number => u[0] * v[0] + u[1] * v[1] + u[2] * v[2];
  const n = normalize(cross(minus(b, a), minus(c, a)));
  const h = dot(n, minus(p, a));
  const q: Vec3 = [p[0] - h * n[0], p[1] - h * n[1], p[2] - h * n[2]];
  const inside = [
    [a, b],
    [b, c],
    [c, a],
  ].every(([u, v]) => dot(n, cross(minus(v, u), minus(q, u))) >= 0);
  return inside ? Math.abs(h) : Infinity;
}

const cosine = (mesh: SurfaceMesh, f: number, d: Vec3): number => {
  const n = faceNormal(mesh, f);
  return n[0] * d[0] + n[1] * d[1] + n[2] * d[2];
};

const point = (random: () => number): Vec3 => [
  (random() - 0.5) * 90 + 7,
  (random() - 0.5) * 80 - 3,
  (random() - 0.5) * 40 + 11,
];
const direction = (random: () => number): Vec3 => normalize([random() - 0.5, random() - 0.5, random() - 0.5]);

test('firstHit and blocked agree with every face tried in turn (seed 1)', () => {
  const random = randomFrom(1);
  let hits = 0;
  for (let i = 0; i < 400; i++) {
    const [o, d] = [point(random), direction(random)];
    const slow = slowHits(ring, o, d);
    const fast = queries.firstHit(o, d);
    if (slow.length === 0) {
      expect(fast).toBeNull();
      expect(queries.blocked(o, d)).toBe(false);
      continue;
    }
    hits++;
    expect(fast?.distance).toBeCloseTo(slow[0].t, 10);
    expect(fast?.face).toBe(slow[0].face);
    expect(distance(fast!.point, o)).toBeCloseTo(slow[0].t, 10);
    const { t } = slow[0];
    expect(queries.blocked(o, d, t + 1e-9)).toBe(true);
    expect(queries.blocked(o, d, t - 1e-9)).toBe(false);
    expect(queries.firstHit(o, d, t - 1e-9)).toBeNull();
  }
  expect(hits).toBeGreaterThan(100);
});

test('nearest agrees with every face tried in turn, to 1e-12 mm (seed 2)', () => {
  const random = randomFrom(2);
  for (let i = 0; i < 150; i++) {
    const p = point(random);
    const hit = queries.nearest(p)!;
    expect(hit.distance).toBeCloseTo(slowNearest(ring, p), 12);
    expect(distance(hit.point, p)).toBeCloseTo(hit.distance, 12);
    expect(queries.nearest(p, hit.distance * (1 + 1e-12) + 1e-12)?.face).toBe(hit.face);
    expect(queries.nearest(p, hit.distance * (1 - 1e-9))).toBeNull();
  }
});

test('equal distances go to the lowest face: a vertex belongs to its first face', () => {
  const first = new Map<number, number>();
  for (const [c, v] of ring.triangles.entries()) if (!first.has(v)) first.set(v, Math.floor(c / 3));
  for (const [v, face] of [...first].slice(0, 200)) {
    const p: Vec3 = [ring.positions[3 * v], ring.positions[3 * v + 1], ring.positions[3 * v + 2]];
    expect(queries.nearest(p)).toEqual({ point: p, face, distance: 0 });
  }
});

test('rays from inside a closed surface at its edges and vertices never slip out (seed 3)', () => {
  const random = randomFrom(3);
  const facesAt = new Map<number, number[]>();
  for (const [c, v] of ring.triangles.entries())
    facesAt.set(v, [...(facesAt.get(v) ?? []), Math.floor(c / 3)]);
  let slipped = 0;
  let sure = 0;
  for (let i = 0; i < 6000; i++) {
    // On the middle line of the tube, which is inside however the lumps are.
    const u = 2 * Math.PI * random();
    const o: Vec3 = [25 * Math.cos(u) + 7, 22 * Math.sin(u) - 3, Math.sin(2 * u) + 11];
    const f = Math.floor(random() * (ring.triangles.length / 3));
    const k = Math.floor(random() * 3);
    const [a, b] = [corner(ring, f, k), corner(ring, f, (k + 1) % 3)];
    const s = i % 2 === 0 ? 0 : random();
    const target: Vec3 = [a[0] + s * (b[0] - a[0]), a[1] + s * (b[1] - a[1]), a[2] + s * (b[2] - a[2])];
    const away: Vec3 = [target[0] - o[0], target[1] - o[1], target[2] - o[2]];
    const d = normalize(away);
    const hit = queries.firstHit(o, d);
    if (hit === null) slipped++;
    // Where every face around the target is left behind it cannot be passed; elsewhere the ray may only touch it.
    const around =
      i % 2 === 0
        ? (facesAt.get(ring.triangles[3 * f + k]) ?? [])
        : [f, Math.floor(ring.twin[3 * f + k] / 3)];
    if (!around.every((g) => cosine(ring, g, d) > 1e-3)) continue;
    sure++;
    if (hit !== null && hit.distance > distance(target, o) + 1e-9) slipped++;
    if (!queries.blocked(o, d, distance(target, o) + 1e-9)) slipped++;
  }
  expect(slipped).toBe(0);
  expect(sure).toBeGreaterThan(1000);
});

test('rays along the axes through edges and corners of a box are met', () => {
  const mesh = buildMesh(soupOf(box(2, 4, 6)), 1, quiet);
  const q = buildQueries(mesh);
  for (const [x, y] of [
    [1, 2],
    [0.5, 1],
    [2, 4],
    [0, 0],
    [2, 2],
    [1, 0],
  ]) {
    const hit = q.firstHit([x, y, 50], [0, 0, -1]);
    expect(hit?.distance).toBe(44);
    expect(hit?.point).toEqual([x, y, 6]);
  }
  expect(q.firstHit([2.0000001, 2, 50], [0, 0, -1])).toBeNull();
});

test('places keep double precision where float32 would lose it', () => {
  const mesh = buildMesh(soupOf(box(3, 4, 5)), 25.4, quiet);
  const q = buildQueries(mesh);
  const hit = q.firstHit([10.123456789, 20.987654321, 1000], [0, 0, -1]);
  expect(hit?.point).toEqual([10.123456789, 20.987654321, 127]);
  const p: Vec3 = [10.123456789, 20.987654321, 127.000000001];
  expect(distance(q.nearest(p)!.point, [10.123456789, 20.987654321, 127])).toBeLessThan(1e-13);
  expect(q.nearest(p)?.distance).toBeCloseTo(1e-9, 12);
});

describe('the tree sent to another thread', () => {
  test('gives the same answers from shared memory (seed 4)', () => {
    const tree = serializeQueries(queries);
    const share = <T extends Float32Array | Uint32Array>(a: T): T => {
      const Kind = a.constructor as new (b: SharedArrayBuffer) => T;
      const shared = new Kind(new SharedArrayBuffer(a.byteLength));
      shared.set(a);
      return shared;
    };
    const other = restoreQueries(ring, {
      boxes: share(tree.boxes),
      links: share(tree.links),
      order: share(tree.order),
    });
    const random = randomFrom(4);
    for (let i = 0; i < 200; i++) {
      const [o, d] = [point(random), direction(random)];
      expect(other.firstHit(o, d)).toEqual(queries.firstHit(o, d));
      expect(other.nearest(o)).toEqual(queries.nearest(o));
    }
  });
  test('every face is in it exactly once, inside the boxes above it', () => {
    const { boxes, links, order } = serializeQueries(queries);
    expect([...order].sort((a, b) => a - b)).toEqual([...order.keys()]);
    let outside = 0;
    const visit = (node: number, above: number[]): number => {
      const path = [...above, node];
      const [start, count] = [links[2 * node], links[2 * node + 1]];
      if (count === 0) return visit(node + 1, path) + visit(start, path);
      for (const f of order.subarray(start, start + count))
        for (let i = 0; i < 3; i++)
          for (const n of path)
            for (let k = 0; k < 3; k++) {
              const v = corner(ring, f, i)[k];
              if (!(v > boxes[6 * n + k] && v < boxes[6 * n + 3 + k])) outside++;
            }
      return count;
    };
    expect(visit(0, [])).toBe(order.length);
    expect(outside).toBe(0);
  });
});
