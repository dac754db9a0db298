/** What a drawing costs on parts of growing size: following the hand that moves and turns it, and laying its copper. */
import type { Vec3 } from '../../src/core/base/vec.ts';
import { drapeDrawing } from '../../src/core/drape/drape-drawing.ts';
import type { Place } from '../../src/core/drape/route.ts';
import { sketchLines } from '../../src/core/drape/sketch.ts';
import type { Drawing, Stroke } from '../../src/core/drawing/drawing.ts';
import { WindowSolver } from '../../src/core/geodesic/windows.ts';
import { buildQueries, type SurfaceQueries } from '../../src/core/mesh/queries.ts';
import type { SurfaceMesh } from '../../src/core/mesh/surface-mesh.ts';
import { barycentric } from '../../src/core/mesh/surface-point.ts';
import type { Drape } from '../../src/core/project/schema.ts';
import type { GeodesicRow } from './geodesic.ts';
import { lumpy, lumpyMesh } from './lumpy.ts';
import { median, timed } from './timed.ts';

/** Moves and turns that are timed. */
const MOVES = 40;

/** Two combs that reach into each other, 0.3 mm wide, and a bar: 16 × 15 mm, half a metre of line. */
export function combDrawing(): Drawing {
  const stroke = (points: number[]): Stroke => ({
    kind: 'stroke',
    points: Float64Array.from(points),
    closed: false,
    width: 0.3,
    ends: 'round',
    bends: 'round',
  });
  const [one, other]: [number[], number[]] = [[], []];
  for (let i = 0; i < 8; i++) {
    one.push(-8, 1.6 * i - 6, 6, 1.6 * i - 6, -8, 1.6 * i - 6);
    other.push(8, 1.6 * i - 5.2, -6, 1.6 * i - 5.2, 8, 1.6 * i - 5.2);
  }
  const figures = [
    stroke(one),
    stroke(other),
    { kind: 'area' as const, rings: [Float64Array.of(-8, 7, 8, 7, 8, 9, -8, 9)] },
  ];
  return {
    file: 'combs.svg',
    layers: [],
    holes: [],
    notes: [],
    shapes: figures.map((figure, i) => ({
      id: `s${i}`,
      layer: '',
      net: null,
      pin: null,
      role: figure.kind === 'stroke' ? 'trace' : 'region',
      figure,
      place: '',
    })),
  };
}

/** Milliseconds, medians. @param level  20 · 4^level facets */
export function measureDrawing(level: number): GeodesicRow {
  const mesh = lumpyMesh(level);
  const queries = buildQueries(mesh);
  const solver = new WindowSolver(mesh);
  const drawing = combDrawing();
  const lines = drawing.shapes.flatMap(({ figure }) =>
    figure.kind === 'stroke' ? [figure.points] : figure.rings,
  );
  const moves: number[] = [];
  const turns: number[] = [];
  for (let i = 0; i < MOVES; i++) {
    const where = lumpy([0.3 + 0.01 * i, 0.2 - 0.007 * i, 1]);
    moves.push(timed(() => sketchLines(mesh, placeOf(mesh, queries, where), 0.3, false, lines))[1]);
    const still = placeOf(mesh, queries, lumpy([0.3, 0.2, 1]));
    turns.push(timed(() => sketchLines(mesh, still, 0.05 * i, false, lines))[1]);
  }
  const lay = (evenLengths: boolean, i: number): number => {
    const drape: Drape = {
      id: 'd1',
      drawing: drawing.file,
      anchor: [0, 0, 0],
      origin: [0, 0],
      turn: 11 * i,
      mirror: false,
      evenLengths,
      drawingLayers: {},
      nets: {},
    };
    const at = placeOf(mesh, queries, lumpy([0.3, 0.2 + 0.05 * i, 1]));
    return timed(() => drapeDrawing(solver, drape, drawing, at))[1];
  };
  return {
    triangles: mesh.triangles.length / 3,
    times: {
      'lines follow the hand, moved': median(moves),
      'lines follow the hand, turned': median(turns),
      'copper laid': median([0, 1, 2].map((i) => lay(false, i))),
      'copper laid, lengths evened': median([0, 1, 2].map((i) => lay(true, i))),
    },
  };
}

export function printDrawings(rows: readonly GeodesicRow[]): void {
  const out = (s: string): void => void process.stdout.write(`${s}\n`);
  const cell = (t: number): string => (t >= 100 ? t.toFixed(0) : t.toPrecision(2)).padStart(11);
  out('Milliseconds for two combs of 0.23 m each and a bar, by number of triangles: medians, one thread;');
  out('growth is p in t ~ n^p from the first size to the last.\n');
  out(`${''.padEnd(34)}${rows.map((r) => String(r.triangles).padStart(11)).join('')}  growth`);
  const [a, b] = [rows[0], rows[rows.length - 1]];
  for (const stage of Object.keys(a.times)) {
    const p = Math.log(b.times[stage] / a.times[stage]) / Math.log(b.triangles / a.triangles);
    out(
      `${stage.padEnd(34)}${rows.map((r) => cell(r.times[stage])).join('')}${a === b ? '' : p.toFixed(2).padStart(8)}`,
    );
  }
}

function placeOf(mesh: SurfaceMesh, queries: SurfaceQueries, at: Vec3): Place {
  const near = queries.nearest(at)!;
  return {
    point: near.point,
    surface: { face: near.face, bary: barycentric(mesh, near.face, near.point) },
  };
}
