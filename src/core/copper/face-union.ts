/**
 * What the patches together cover of one face, as triangles that meet at whole edges, each place once: the outlines are cut
 * where they meet (`arrange.ts`), put into a triangulation (`constrained.ts`), and each triangle counts the outlines around
 * it, from the outside in.
 */
import { PairMap } from '../base/pair-map.ts';
import { arrange, type Segment } from './arrange.ts';
import { constrained } from './constrained.ts';
import type { CopperFace } from './face-loops.ts';
import type { Weld } from './weld.ts';

export interface FaceUnion {
  /** Vertices of the weld, 3 a triangle, counter-clockwise seen from outside. */
  triangles: number[];
  /** Owners, but for -1, that cover each triangle. */
  owners: number[][];
}

/**
 * @param ownerOf    of a patch; -1 where it does not matter whose the copper is
 * @param tolerance  mm: outlines nearer to each other than this are one
 */
export function faceUnion(
  at: CopperFace,
  ownerOf: (patch: number) => number,
  weld: Weld,
  tolerance: number,
): FaceUnion {
  const plane = planeOf(at, weld);
  const alone = at.loops.length === 1 ? at.loops[0] : null;
  if (alone && isConvex(alone.vertices, plane)) {
    const owner = ownerOf(alone.patch);
    const v = alone.vertices;
    const triangles = v.slice(2).flatMap((c, i) => [v[0], v[i + 1], c]);
    return { triangles, owners: v.slice(2).map(() => (owner >= 0 ? [owner] : [])) };
  }
  const segments = arrange(
    at.loops.flatMap(({ patch, vertices }) =>
      vertices.map((a, i) => ({ a, b: vertices[(i + 1) % vertices.length], owner: ownerOf(patch) })),
    ),
    plane,
    tolerance,
  );
  // Points of the plane, those at one place together.
  const pointOf = new Map<number, number>();
  const vertexOf: number[] = [];
  const points: number[] = [];
  const known = new Map<string, number>();
  const point = (v: number): number => {
    let p = pointOf.get(v);
    if (p !== undefined) return p;
    const [x, y] = [plane.x(v), plane.y(v)];
    const place = `${Math.round(x / (tolerance / 4))} ${Math.round(y / (tolerance / 4))}`;
    p = known.get(place);
    if (p === undefined) {
      p = vertexOf.length;
      vertexOf.push(v);
      points.push(x, y);
      known.set(place, p);
    }
    pointOf.set(v, p);
    return p;
  };
  const edges = sumsOf(segments, point);
  if (edges.length === 0) return { triangles: [], owners: [] };
  const mesh = constrained(
    Float64Array.from(points),
    edges.map((e) => [e.a, e.b]),
  );
  return covered(mesh, edges, vertexOf);
}

function planeOf({ origin, u, v }: CopperFace, weld: Weld) {
  const flat = new Map<number, [number, number]>();
  const place = (vertex: number): [number, number] => {
    let p = flat.get(vertex);
    if (!p) {
      p = [0, 0];
      for (let k = 0; k < 3; k++) {
        const d = weld.positions[3 * vertex + k] - origin[k];
        p[0] += d * u[k];
        p[1] += d * v[k];
      }
      flat.set(vertex, p);
    }
    return p;
  };
  return {
    x: (vertex: number): number => place(vertex)[0],
    y: (vertex: number): number => place(vertex)[1],
    vertex: (x: number, y: number): number =>
      weld.vertex(
        origin[0] + x * u[0] + y * v[0],
        origin[1] + x * u[1] + y * v[1],
        origin[2] + x * u[2] + y * v[2],
      ),
  };
}

function isConvex(ring: readonly number[], plane: ReturnType<typeof planeOf>): boolean {
  const n = ring.length;
  // More corners than this could go around twice.
  if (n > 6) return false;
  return ring.every((b, i) => {
    const [a, c] = [ring[(i + n - 1) % n], ring[(i + 1) % n]];
    const [ux, uy] = [plane.x(b) - plane.x(a), plane.y(b) - plane.y(a)];
    const [vx, vy] = [plane.x(c) - plane.x(b), plane.y(c) - plane.y(b)];
    return ux * vy - uy * vx > 0;
  });
}

/** An edge between two points with the outlines that run along it: from a to b count up, back down. */
interface Edge {
  a: number;
  b: number;
  sum: number;
  byOwner: Map<number, number>;
}

function sumsOf(segments: readonly Segment[], point: (v: number) => number): Edge[] {
  const number = new PairMap(2 * segments.length);
  const edges: Edge[] = [];
  for (const s of segments) {
    const [p, q] = [point(s.a), point(s.b)];
    if (p === q) continue;
    const [a, b] = p < q ? [p, q] : [q, p];
    let n = number.get(a, b, -1);
    if (n < 0) {
      n = edges.length;
      number.set(a, b, n);
      edges.push({ a, b, sum: 0, byOwner: new Map() });
    }
    const step = p < q ? 1 : -1;
    edges[n].sum += step;
    if (s.owner >= 0) edges[n].byOwner.set(s.owner, (edges[n].byOwner.get(s.owner) ?? 0) + step);
  }
  return edges.filter((e) => e.sum !== 0 || [...e.byOwner.values()].some((k) => k !== 0));
}

/** Triangles around which outlines run, with what runs around each. */
function covered(
  { triangles, twin }: { triangles: Int32Array; twin: Int32Array },
  edges: readonly Edge[],
  vertexOf: readonly number[],
): FaceUnion {
  const count = triangles.length / 3;
  const number = new PairMap(2 * edges.length);
  edges.forEach((e, i) => {
    number.set(e.a, e.b, i);
  });
  const owners = [...new Set(edges.flatMap((e) => [...e.byOwner.keys()]))].sort((a, b) => a - b);
  const around = [-1, ...owners].map((owner) =>
    flood(triangles, twin, vertexOf.length, (a, b) => {
      const n = a < b ? number.get(a, b, -1) : number.get(b, a, -1);
      if (n < 0) return 0;
      const step = owner < 0 ? edges[n].sum : (edges[n].byOwner.get(owner) ?? 0);
      return a < b ? step : -step;
    }),
  );
  const out: FaceUnion = { triangles: [], owners: [] };
  for (let t = 0; t < count; t++) {
    if (around[0][t] <= 0) continue;
    out.triangles.push(...[0, 1, 2].map((k) => vertexOf[triangles[3 * t + k]]));
    out.owners.push(owners.filter((_, i) => around[i + 1][t] > 0));
  }
  return out;
}

/** How often outlines run around each triangle: none around the outermost. */
function flood(
  triangles: Int32Array,
  twin: Int32Array,
  points: number,
  stepOver: (a: number, b: number) => number,
): Int32Array {
  const around = new Int32Array(triangles.length / 3);
  const seen = new Uint8Array(around.length);
  const stack: number[] = [];
  for (let e = 0; e < triangles.length && stack.length === 0; e++)
    if (triangles[e] >= points) stack.push((e / 3) | 0);
  seen[stack[0]] = 1;
  while (stack.length > 0) {
    const t = stack.pop()!;
    for (let k = 0; k < 3; k++) {
      const e = 3 * t + k;
      if (twin[e] < 0) continue;
      const u = (twin[e] / 3) | 0;
      if (seen[u]) continue;
      seen[u] = 1;
      // Left of an outline is one deeper than right of it.
      around[u] = around[t] - stepOver(triangles[e], triangles[3 * t + ((k + 1) % 3)]);
      stack.push(u);
    }
  }
  return around;
}
