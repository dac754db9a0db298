/**
 * `npm run bench -- geodesic`: paths over lumpy icospheres beside the C++ figures of `cpp-times.ts`. Medians of processor time
 * on one thread; growth is the exponent p of t ∝ nᵖ between neighbouring sizes. Times are printed, never judged.
 *
 *   --levels 5,6,7,8        20 · 4^level triangles each
 */
import { quiet } from '../../src/core/base/run-context.ts';
import type { Vec3 } from '../../src/core/base/vec.ts';
import { wayBeside } from '../../src/core/geodesic/beside-path.ts';
import { EdgeWays } from '../../src/core/geodesic/edge-ways.ts';
import { FlipPaths } from '../../src/core/geodesic/flip-path.ts';
import { logMap } from '../../src/core/geodesic/log-map.ts';
import { shortestWith } from '../../src/core/geodesic/shortest.ts';
import { WindowSolver } from '../../src/core/geodesic/windows.ts';
import { buildMesh } from '../../src/core/mesh/build.ts';
import { buildQueries, type SurfaceQueries } from '../../src/core/mesh/queries.ts';
import type { SurfaceMesh } from '../../src/core/mesh/surface-mesh.ts';
import { barycentric, type SurfacePoint } from '../../src/core/mesh/surface-point.ts';
import { COLUMNS, cppTimes } from './cpp-times.ts';
import { lumpy, lumpySoup, RADIUS } from './lumpy.ts';
import { median, timed } from './timed.ts';

/** Directions of the sources, lopsided, and of the targets `share` of half a turn away. */
function pair(k: number, share: number): [Vec3, Vec3] {
  const d: Vec3 = [Math.cos(k), Math.sin(k), 0.3 * (k % 7) - 0.5];
  const l = Math.hypot(d[0], d[1], d[2]);
  const u: Vec3 = [d[0] / l, d[1] / l, d[2] / l];
  // Away along a direction that turns with k.
  const a = Math.hypot(u[0], u[1]);
  const e: Vec3 = [-u[1] / a, u[0] / a, 0];
  const f: Vec3 = [-u[2] * e[1], u[2] * e[0], u[0] * e[1] - u[1] * e[0]];
  const turn = 2.4 * k;
  const far = Math.PI * share;
  const at = (i: number): number =>
    u[i] * Math.cos(far) + (e[i] * Math.cos(turn) + f[i] * Math.sin(turn)) * Math.sin(far);
  return [u, [at(0), at(1), at(2)]];
}

const PAIRS = { near: 21, far: 7 };
/** The patch of the log map, mm: 20 mm across, on a part that grows while its triangles keep their size. */
const PATCH = 10;

export interface GeodesicRow {
  triangles: number;
  /** ms */
  times: Record<string, number>;
}

export function measureGeodesics(level: number): GeodesicRow {
  const soup = lumpySoup(level);
  const times: Record<string, number> = {};
  const [mesh, build] = timed(() => buildMesh(soup, 1, quiet));
  times['surface from facets'] = build;
  const [queries, tree] = timed(() => buildQueries(mesh));
  times['tree for picks'] = tree;
  const solver = new WindowSolver(mesh);
  const ways = new EdgeWays(mesh);
  const flips = new FlipPaths(mesh);
  for (const [name, share, count] of [
    ['5 %', 0.05, PAIRS.near],
    ['50 %', 0.5, PAIRS.far],
  ] as const) {
    const runs: Record<string, number[]> = { start: [], flips: [], exact: [], follow: [] };
    for (let k = 0; k < count; k++) {
      const [from, to] = pair(k, share).map((d) => place(mesh, queries, lumpy(d)));
      const [way, start] = timed(() => ways.find(from, to, 1.25)!);
      const [taut, flip] = timed(() => flips.tauten(from, to, way)!);
      const [, exact] = timed(() => shortestWith(solver, from, to));
      // As a hand moves: a third of a millimetre on.
      const [, dragged] = pair(k, share + 0.3 / (Math.PI * RADIUS));
      const next = place(mesh, queries, lumpy(dragged));
      const [, follow] = timed(() => {
        const beside = wayBeside(ways, mesh, taut, from, next)!;
        return flips.tauten(from, next, beside);
      });
      for (const [key, t] of Object.entries({ start, flips: flip, exact, follow })) runs[key].push(t);
    }
    times[`start path, ${name}`] = median(runs.start);
    times[`flips, ${name}`] = median(runs.flips);
    times[`certified exact, ${name}`] = median(runs.exact);
    times[`follows the mouse, ${name}`] = median(runs.follow);
  }
  return { triangles: mesh.triangles.length / 3, times };
}

/** Log map of the same patch of the same fineness on parts of growing size: the cost is the patch's. */
export function measurePatch(level: number): GeodesicRow {
  // Edges as at level 6 on the plain radius.
  const scale = 2 ** (level - 6);
  const mesh = buildMesh({ ...lumpySoup(level), trailingBytes: 0 }, scale, quiet);
  const queries = buildQueries(mesh);
  const solver = new WindowSolver(mesh);
  const runs: number[] = [];
  for (let k = 0; k < 7; k++) {
    const [d] = pair(k, 0);
    const p = lumpy(d);
    const at = place(mesh, queries, [scale * p[0], scale * p[1], scale * p[2]]);
    runs.push(timed(() => logMap(solver, at, PATCH))[1]);
  }
  return { triangles: mesh.triangles.length / 3, times: { 'log map, patch of 20 mm': median(runs) } };
}

/** All distances from one point over the whole mesh. */
export function measureWhole(level: number): number {
  const mesh = buildMesh(lumpySoup(level), 1, quiet);
  const solver = new WindowSolver(mesh);
  const at: SurfacePoint = { face: 0, bary: [1, 0, 0] };
  return timed(() => solver.propagate([{ at, source: 0, radius: Infinity }]))[1];
}

export function printGeodesics(
  rows: readonly GeodesicRow[],
  patches: readonly GeodesicRow[],
  whole: readonly number[],
): void {
  const out = (s: string): void => void process.stdout.write(`${s}\n`);
  const cell = (t: number | undefined): string =>
    (t === undefined ? '–' : t >= 100 ? t.toFixed(0) : t.toPrecision(2)).padStart(11);
  const growth = (all: readonly GeodesicRow[], stage: string): string => {
    const a = all[0];
    const b = all[all.length - 1];
    if (a === b) return '';
    const p = Math.log(b.times[stage] / a.times[stage]) / Math.log(b.triangles / a.triangles);
    return p.toFixed(2).padStart(8);
  };
  out(
    'Milliseconds by number of triangles, medians, one thread; growth is p in t ~ n^p from the first size to the last.',
  );
  out('In the rows below a dash: the C++ figure for the same, where there is one.\n');
  out(`${''.padEnd(34)}${rows.map((r) => String(r.triangles).padStart(11)).join('')}  growth`);
  for (const stage of Object.keys(rows[0].times)) {
    out(`${stage.padEnd(34)}${rows.map((r) => cell(r.times[stage])).join('')}${growth(rows, stage)}`);
    const theirs = cppTimes[stage];
    if (theirs)
      out(
        `${`  - ${theirs.what}`.padEnd(34)}${rows.map((r) => cell(theirs.ms[COLUMNS.indexOf(r.triangles)])).join('')}`,
      );
  }
  out(`${'whole mesh from one point'.padEnd(34)}${whole.map((t) => cell(t)).join('')}`);
  out(`${'  - windows, whole mesh'.padEnd(34)}${whole.map((_, i) => cell(cppTimes.whole.ms[i])).join('')}`);
  out('\nThe same patch on growing parts whose triangles keep their size:');
  for (const stage of Object.keys(patches[0].times))
    out(`${stage.padEnd(34)}${patches.map((r) => cell(r.times[stage])).join('')}${growth(patches, stage)}`);
}

function place(mesh: SurfaceMesh, queries: SurfaceQueries, p: Vec3): SurfacePoint {
  const hit = queries.nearest(p)!;
  return { face: hit.face, bary: barycentric(mesh, hit.face, hit.point) };
}
