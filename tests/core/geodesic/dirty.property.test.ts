import { describe, expect, it } from 'vitest';
import { at3, distance, type Vec3 } from '../../../src/core/base/vec.ts';
import { logMap } from '../../../src/core/geodesic/log-map.ts';
import {
  followWith,
  type GeodesicPath,
  shortestPath,
  shortestWith,
} from '../../../src/core/geodesic/shortest.ts';
import { straightest } from '../../../src/core/geodesic/straightest.ts';
import { SurfaceField } from '../../../src/core/geodesic/surface-field.ts';
import { WindowSolver } from '../../../src/core/geodesic/windows.ts';
import { checkMesh } from '../../../src/core/mesh/check-mesh.ts';
import { positionOf, type SurfacePoint } from '../../../src/core/mesh/surface-point.ts';
import { anyPlace, type Dirty, dirtyMesh, offFace } from '../helpers/dirty.ts';
import { edgeBound } from '../helpers/edge-bound.ts';

const SEEDS = 520;
/** Share of a length, or of the part's size, that rounding may cost. */
const TRUE = 1e-9;

type Say = (what: string) => void;
interface Query {
  name: string;
  check: (dirty: Dirty, solver: WindowSolver, say: Say) => void;
}

/** What must hold on any mesh. A new method is one line here. */
const queries: Query[] = [
  { name: 'shortest paths', check: shortest },
  { name: 'straightest lines', check: straight },
  { name: 'distances from one place', check: field },
  { name: 'paths that follow an old one', check: followed },
  { name: 'log maps', check: mapped },
];

describe('on dirty meshes', () => {
  it(`the meshes are as dirty as they should be, and keep every rule (seeds 1 to ${SEEDS})`, () => {
    const seen = {
      pieces: 0,
      open: 0,
      crowded: 0,
      split: 0,
      degenerate: 0,
      duplicate: 0,
      flipped: 0,
      slivers: 0,
    };
    for (let seed = 1; seed <= SEEDS; seed++) {
      const { mesh } = dirtyMesh(seed);
      expect(checkMesh(mesh)).toEqual([]);
      if (mesh.pieces.length > 1) seen.pieces++;
      if (!mesh.closed) seen.open++;
      if (mesh.mended.nonManifoldEdges > 0) seen.crowded++;
      if (mesh.mended.split > 0) seen.split++;
      if (mesh.mended.degenerate > 0) seen.degenerate++;
      if (mesh.mended.duplicate > 0) seen.duplicate++;
      if (mesh.mended.flipped > 0) seen.flipped++;
      if (sharpest(mesh.positions, mesh.triangles) > 5e3) seen.slivers++;
    }
    for (const [, count] of Object.entries(seen)) expect(count).toBeGreaterThan(60);
  });

  it.each(queries.map((q) => [q.name, q] as const))(
    `%s end, and tell the truth (seeds 1 to ${SEEDS})`,
    (_, { check }) => {
      const wrong: string[] = [];
      for (let seed = 1; seed <= SEEDS; seed++) {
        const dirty = dirtyMesh(seed);
        check(dirty, new WindowSolver(dirty.mesh), (what) => {
          wrong.push(`seed ${seed} (${dirty.made}): ${what}`);
        });
      }
      expect(wrong).toEqual([]);
    },
  );
});

/** Longest side over height, of the worst face. */
function sharpest(x: Float64Array, t: Uint32Array): number {
  let worst = 0;
  for (let f = 0; f < t.length; f += 3) {
    const [a, b, c] = [at3(x, t[f]), at3(x, t[f + 1]), at3(x, t[f + 2])];
    const sides = [distance(a, b), distance(b, c), distance(c, a)];
    const long = Math.max(...sides);
    const [u, v] = [b.map((n, k) => n - a[k]), c.map((n, k) => n - a[k])];
    const area = Math.hypot(u[1] * v[2] - u[2] * v[1], u[2] * v[0] - u[0] * v[2], u[0] * v[1] - u[1] * v[0]);
    worst = Math.max(worst, (long * long) / area);
  }
  return worst;
}

function shortest({ mesh, size, random }: Dirty, solver: WindowSolver, say: Say): void {
  for (let k = 0; k < 4; k++) {
    const [a, b] = [anyPlace(mesh, random), anyPlace(mesh, random)];
    const there = shortestWith(solver, a, b);
    const home = shortestWith(solver, b, a);
    const pair = `pair ${k} ${JSON.stringify([a, b])}`;
    const joined = mesh.pieceOf[a.face] === mesh.pieceOf[b.face];
    if (joined !== (there !== null) || joined !== (home !== null))
      say(`${pair}: ${joined ? 'no way' : 'a way'} ${there?.length} ${home?.length}`);
    if (!there || !home) continue;
    checkPath({ mesh, size }, there, a, b, (what) => say(`${pair}: ${what}`));
    if (there.length > edgeBound(mesh, a, b) * (1 + TRUE)) say(`${pair}: longer than along edges`);
    if (Math.abs(there.length - home.length) > TRUE * there.length)
      say(`${pair}: there ${there.length}, back ${home.length}`);
    if (k === 0 && shortestPath(mesh, a, b)!.length !== there.length)
      say(`${pair}: another answer from a fresh solver`);
  }
}

/** Numbers, ends, length and faces of a path. */
function checkPath(
  { mesh, size }: Pick<Dirty, 'mesh' | 'size'>,
  path: GeodesicPath,
  a: SurfacePoint,
  b: SurfacePoint,
  say: Say,
): void {
  const { points, faces, length } = path;
  if (!points.every(Number.isFinite) || !Number.isFinite(length)) say('no number');
  if (points.length !== 3 * faces.length + 3) say('points and faces do not match');
  const [p, q] = [positionOf(mesh, a), positionOf(mesh, b)];
  if (distance(at3(points, 0), p) > TRUE * size || distance(at3(points, faces.length), q) > TRUE * size)
    say('wrong ends');
  if (length < distance(p, q) - TRUE * size) say('shorter than straight');
  let sum = 0;
  let off = 0;
  faces.forEach((face, i) => {
    const [s, e] = [at3(points, i), at3(points, i + 1)];
    sum += distance(s, e);
    off = Math.max(off, offFace(mesh, face, s), offFace(mesh, face, e));
  });
  if (off > TRUE * size) say(`a piece ${off / size} of the size off its face`);
  if (Math.abs(sum - length) > TRUE * sum) say('pieces do not add up');
}

function straight({ mesh, size, random }: Dirty, _: WindowSolver, say: Say): void {
  for (let k = 0; k < 6; k++) {
    const from = anyPlace(mesh, random);
    const [a, b] = [anyPlace(mesh, random), anyPlace(mesh, random)].map((p) => positionOf(mesh, p));
    // At random, at a corner of its own face, and along its side.
    const corner = (i: number): Vec3 => at3(mesh.positions, mesh.triangles[3 * from.face + i]);
    const [u, v] = k < 4 ? [a, b] : k === 4 ? [positionOf(mesh, from), corner(1)] : [corner(0), corner(2)];
    const direction: Vec3 = [v[0] - u[0] + 1e-9 * size, v[1] - u[1], v[2] - u[2]];
    const asked = size * random();
    const line = straightest(mesh, from, direction, asked);
    const told = `line ${k} ${JSON.stringify([from, direction, asked])}`;
    checkPath({ mesh, size }, line.path, from, line.end, (what) => say(`${told}: ${what}`));
    if (!line.direction.every(Number.isFinite) || Math.abs(Math.hypot(...line.direction) - 1) > TRUE)
      say(`${told}: direction`);
    if (line.stopped === null && Math.abs(line.path.length - asked) > TRUE * size)
      say(`${told}: ${line.path.length} long`);
    if (line.stopped && line.path.length > asked + TRUE * size) say(`${told}: too long`);
    const back = straightest(
      mesh,
      line.end,
      line.direction.map((x) => -x) as unknown as Vec3,
      line.path.length,
    );
    const miss = distance(positionOf(mesh, back.end), positionOf(mesh, from)) / size;
    if (miss > 1e-6) say(`${told}: back home by ${miss}`);
  }
}

function field({ mesh, random }: Dirty, solver: WindowSolver, say: Say): void {
  const a = anyPlace(mesh, random);
  const places = Array.from({ length: 4 }, () => anyPlace(mesh, random));
  solver.propagate([{ at: a, source: 0, radius: Infinity }]);
  const seen = new SurfaceField(solver);
  const far = places.map((b) => seen.nearest(b.face, positionOf(mesh, b))?.distance ?? null);
  const other = new WindowSolver(mesh);
  places.forEach((b, i) => {
    const path = shortestWith(other, a, b);
    const [d, exact] = [far[i], path?.length ?? null];
    const pair = JSON.stringify([a, b]);
    if ((d === null) !== (exact === null)) say(`${pair}: field ${d}, path ${exact}`);
    else if (d !== null && !(Math.abs(d - exact!) <= TRUE * exact!))
      say(`${pair}: field ${d}, path ${exact}`);
  });
}

function followed({ mesh, size, random }: Dirty, solver: WindowSolver, say: Say): void {
  for (let k = 0; k < 2; k++) {
    const [a, b, c] = [anyPlace(mesh, random), anyPlace(mesh, random), anyPlace(mesh, random)];
    const old = shortestWith(solver, a, b);
    if (!old) continue;
    const moved = k === 0 ? { face: b.face, bary: c.bary } : c;
    const path = followWith(solver, old, a, moved);
    const told = `pair ${k} ${JSON.stringify([a, b, moved])}`;
    if (!path) continue;
    checkPath({ mesh, size }, path, a, moved, (what) => say(`${told}: ${what}`));
    const best = shortestWith(solver, a, moved);
    if (!best || path.length < best.length * (1 - TRUE))
      say(`${told}: ${path.length}, shorter than the shortest ${best?.length}`);
  }
}

function mapped({ mesh, seed, size, random }: Dirty, solver: WindowSolver, say: Say): void {
  const at = anyPlace(mesh, random);
  const radius = size * (0.05 + 0.2 * random());
  const map = logMap(solver, at, radius);
  if (seed % 3 === 0 && !map.limits().every((l) => l.at.every(Number.isFinite))) say('a limit at no place');
  const other = new WindowSolver(mesh);
  for (let k = 0; k < 3; k++) {
    const b = anyPlace(mesh, random);
    const place = map.at(b.face, positionOf(mesh, b));
    const exact = shortestWith(other, at, b)?.length ?? Infinity;
    const told = JSON.stringify([at, b, radius]);
    if (place === null) {
      if (exact < radius * (1 - TRUE)) say(`${told}: not on the map though ${exact} away`);
      continue;
    }
    if (![place.radius, place.angle, place.u, place.v].every(Number.isFinite)) say(`${told}: no number`);
    if (Math.abs(place.radius - exact) > TRUE * exact)
      say(`${told}: ${place.radius} on the map, ${exact} away`);
  }
}
