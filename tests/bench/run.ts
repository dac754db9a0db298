/**
 * `npm run bench`: how long each stage takes on 50k, 200k and 1M triangles, and how the time grows.
 * The growth is the exponent p of t ∝ nᵖ between neighbouring sizes. Times are printed, never judged.
 *
 *   --sizes 50000,200000    other sizes
 *   --json FILE             the table as JSON, too
 *
 * `npm run bench -- geodesic` measures paths over the surface instead (`geodesic.ts`), `npm run bench -- drawing` what it
 * costs to move, turn and lay a drawing (`drawing.ts`).
 */
import { writeFileSync } from 'node:fs';
import { availableParallelism, cpus } from 'node:os';
import { parseArgs } from 'node:util';
import { quiet } from '../../src/core/base/run-context.ts';
import { focusedBeam } from '../../src/core/beam/beam.ts';
import { drapeCircuit } from '../../src/core/drape/drape.ts';
import { layerCsv } from '../../src/core/files/csv.ts';
import { layerSvg } from '../../src/core/files/svg.ts';
import { planLayers } from '../../src/core/layers/plan-layers.ts';
import { buildMesh } from '../../src/core/mesh/build.ts';
import { buildQueries } from '../../src/core/mesh/queries.ts';
import { readStl } from '../../src/core/mesh/stl.ts';
import { buildNormals } from '../../src/core/part/normals.ts';
import { checkReach } from '../../src/core/reach/reach.ts';
import { prepareGround, scanLayer } from '../../src/core/scan/scan-layer.ts';
import { measureDrawing, printDrawings } from './drawing.ts';
import { measureGeodesics, measurePatch, measureWhole, printGeodesics } from './geodesic.ts';
import { stoneProject, stoneStl } from './part.ts';

const { values, positionals } = parseArgs({
  options: { sizes: { type: 'string' }, json: { type: 'string' }, levels: { type: 'string' } },
  allowPositionals: true,
});
if (positionals[0] === 'geodesic') {
  const levels = (values.levels ?? '5,6,7,8').split(',').map(Number);
  measureGeodesics(4);
  const each = <T>(of: (level: number) => T, some = levels): T[] =>
    some.map((level) => {
      process.stderr.write(`${20 * 4 ** level} triangles …\n`);
      return of(level);
    });
  const patches = levels.filter((level) => level > 5);
  printGeodesics(
    each(measureGeodesics),
    each(measurePatch, patches.length > 0 ? patches : levels),
    each(
      measureWhole,
      levels.filter((level) => level < 7),
    ),
  );
  process.exit(0);
}
if (positionals[0] === 'drawing') {
  const levels = (values.levels ?? '5,6,7').split(',').map(Number);
  measureDrawing(4);
  printDrawings(
    levels.map((level) => {
      process.stderr.write(`${20 * 4 ** level} triangles …\n`);
      return measureDrawing(level);
    }),
  );
  process.exit(0);
}
const sizes = (values.sizes ?? '50000,200000,1000000').split(',').map(Number);

interface Row {
  triangles: number;
  /** s */
  times: Record<string, number>;
}

// Once over for the compiler: the first size would otherwise pay for it and the growth would look too good.
measure(5000);
const rows: Row[] = [];
for (const size of sizes) {
  process.stderr.write(`${size} triangles …\n`);
  rows.push(measure(size));
}
print(rows);
if (values.json !== undefined)
  writeFileSync(
    values.json,
    `${JSON.stringify({ cpu: cpus()[0]?.model, threads: availableParallelism(), rows, growth: growth(rows) }, null, 2)}\n`,
  );

function measure(size: number): Row {
  const times: Record<string, number> = {};
  const timed = <T>(stage: string, work: () => T): T => {
    const start = performance.now();
    const result = work();
    times[stage] = (performance.now() - start) / 1000;
    return result;
  };
  const bytes = stoneStl(size);
  const project = stoneProject();
  const setups = project.setups === 'auto' ? [] : project.setups;
  const mesh = timed('load', () => buildMesh(readStl(bytes, 'stone.stl', quiet), 1, quiet));
  const queries = timed('BVH', () => buildQueries(mesh));
  const normals = timed('normals', () => buildNormals(mesh));
  const part = { mesh, queries, normals };
  const { copper } = timed('trace', () => drapeCircuit(project, 'stone.drape.json', part, quiet));
  const reach = timed('reach', () => checkReach(project, setups, part, copper, quiet));
  const plans = timed('plan', () => planLayers(project, setups, copper, reach, quiet));
  const spot = 2 * focusedBeam(project.head).waist;
  timed('export', () =>
    plans.flatMap((plan) => {
      const ground = prepareGround(part, setups[plan.setup], copper, reach[plan.setup], plan);
      return plan.layers.map((layer) => {
        const scan = scanLayer(project, setups[plan.setup], layer, ground);
        return [layerSvg(scan, project.head, spot), layerCsv(scan)];
      });
    }),
  );
  times['all'] = Object.values(times).reduce((s, t) => s + t, 0);
  return { triangles: mesh.triangles.length / 3, times };
}

/** Exponents between neighbouring sizes, one list a stage. */
function growth(all: readonly Row[]): Record<string, number[]> {
  const stages = Object.keys(all[0].times);
  return Object.fromEntries(
    stages.map((s) => [
      s,
      all
        .slice(1)
        .map((r, i) => Math.log(r.times[s] / all[i].times[s]) / Math.log(r.triangles / all[i].triangles)),
    ]),
  );
}

function print(all: readonly Row[]): void {
  const grown = growth(all);
  const cell = (s: string): string => s.padStart(14);
  const line = (name: string, cells: string[]): string => `${name.padEnd(10)}${cells.map(cell).join('')}\n`;
  const heads = all.flatMap((r, i) => (i === 0 ? [`${r.triangles}`] : [`${r.triangles}`, 'growth']));
  process.stdout.write(
    `Seconds for each stage by number of triangles, one thread; growth is p in t ~ n^p.\n\n`,
  );
  process.stdout.write(line('', heads));
  for (const stage of Object.keys(all[0].times)) {
    const cells = all.flatMap((r, i) => {
      const t = r.times[stage].toFixed(3);
      return i === 0 ? [t] : [t, grown[stage][i - 1].toFixed(2)];
    });
    process.stdout.write(line(stage, cells));
  }
}
