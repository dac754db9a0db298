/**
 * A small world for the proof's tests: a lopsided box under the head, rectangles of copper on its top, and a tiny
 * planner and writer of their own. Nothing here imports the code that plans, writes or proves.
 */

import type { Pose } from '../../../src/core/base/pose.ts';
import { encodeUtf8 } from '../../../src/core/base/utf8.ts';
import { normalize, type Vec2, type Vec3 } from '../../../src/core/base/vec.ts';
import type { Copper, CopperElement } from '../../../src/core/drape/copper.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import { type Project, projectSchema } from '../../../src/core/project/schema.ts';

export const exampleHead = {
  wavelength_nm: 532,
  beamQuality: 1.9,
  beamDiameter: 4.5,
  aperture: 10,
  focalLength: 163,
  field: [110, 110],
  workingDistance: 165,
  bodyDiameter: 90,
  pivot: [190, 178] as [number | null, number | null],
  averagePower_W: 1,
  repetitionRate_kHz: 30,
  pulseWidth_ns: 10,
};

export function projectWith(pose: Pose, change: Record<string, unknown> = {}): Project {
  return projectSchema.parse({
    format: 'beamdrape',
    version: 1,
    name: 'test',
    part: { file: 'box.stl' },
    head: exampleHead,
    material: { activationFluence: 0.4, damageFluence: 6 },
    setups: [{ name: 'top', pose }],
    ...change,
  });
}

/** Mesh from triangles that share vertex numbers; twins by trying every pair of edges. */
export function meshOf(positions: number[], triangles: number[]): SurfaceMesh {
  const faces = triangles.length / 3;
  const twin = new Int32Array(triangles.length).fill(-1);
  const end = (h: number) => triangles[h - (h % 3) + ((h + 1) % 3)];
  for (let h = 0; h < triangles.length; h++)
    for (let k = 0; k < triangles.length; k++)
      if (triangles[h] === end(k) && triangles[k] === end(h)) twin[h] = k;
  const number = Int32Array.from({ length: faces }, (_, f) => f);
  const closed = twin.every((t) => t >= 0);
  const axis = (c: number) => positions.filter((_, i) => i % 3 === c);
  return {
    positions: Float64Array.from(positions),
    triangles: Uint32Array.from(triangles),
    twin,
    pieceOf: new Int32Array(faces),
    pieces: [{ faces, closed, area: 0, volume: 0 }],
    faceOfFacet: number,
    facetOfFace: number,
    bounds: [
      [Math.min(...axis(0)), Math.min(...axis(1)), Math.min(...axis(2))],
      [Math.max(...axis(0)), Math.max(...axis(1)), Math.max(...axis(2))],
    ],
    closed,
    area: 0,
    volume: 0,
    mended: { welded: 0, degenerate: 0, duplicate: 0, flipped: 0, split: 0, nonManifoldEdges: 0 },
  };
}

/** Box whose top lies at z = 0; faces 0 and 1 are the top. */
export function box(x0: number, y0: number, x1: number, y1: number, thick: number): SurfaceMesh {
  const p = [
    x0,
    y0,
    0,
    x1,
    y0,
    0,
    x1,
    y1,
    0,
    x0,
    y1,
    0,
    x0,
    y0,
    -thick,
    x1,
    y0,
    -thick,
    x1,
    y1,
    -thick,
    x0,
    y1,
    -thick,
  ];
  const t = [
    0, 1, 2, 0, 2, 3, 4, 6, 5, 4, 7, 6, 0, 4, 5, 0, 5, 1, 1, 5, 6, 1, 6, 2, 2, 6, 7, 2, 7, 3, 3, 7, 4, 3, 4,
    0,
  ];
  return meshOf(p, t);
}

export interface Rect {
  id: string;
  net: string;
  from: Vec2;
  to: Vec2;
}

/** A flat rectangle of copper on the box's top. */
export function rectElement(r: Rect): CopperElement {
  const [x0, y0, x1, y1] = [...r.from, ...r.to];
  const patch = {
    positions: Float64Array.of(x0, y0, 0, x1, y0, 0, x1, y1, 0, x0, y1, 0),
    triangles: Uint32Array.of(0, 1, 2, 0, 2, 3),
    face: Int32Array.of(0, 0),
    source: Int32Array.of(0, 1),
  };
  const area = (x1 - x0) * (y1 - y0);
  return {
    id: r.id,
    kind: 'region',
    net: r.net,
    width: 0,
    anchor: [x0, y0, 0],
    copper: patch,
    field: { ...patch, edge: new Float64Array(4), hatch: new Float64Array(4), along: new Float64Array(4) },
    outline: [patch.positions],
    length: 2 * (x1 - x0 + y1 - y0),
    drawnLength: 2 * (x1 - x0 + y1 - y0),
    area,
    stretch: 0,
  };
}

export const copperOf = (rects: readonly Rect[]): Copper => ({ elements: rects.map(rectElement) });

/** Turn of `degrees` about a unit axis, then a move. */
export function turned(axis: Vec3, degrees: number, move: Vec3 = [0, 0, 0]): Pose {
  const half = (degrees * Math.PI) / 360;
  const [x, y, z] = normalize(axis);
  const s = Math.sin(half);
  return { rotate: [x * s, y * s, z * s, Math.cos(half)], move };
}

/** Part → bench, by the quaternion sandwich q p q*: another way than the core's matrix. */
export function toBench(pose: Pose, p: Vec3): Vec3 {
  const [x, y, z, w] = pose.rotate;
  const t: Vec3 = [2 * (y * p[2] - z * p[1]), 2 * (z * p[0] - x * p[2]), 2 * (x * p[1] - y * p[0])];
  return [
    p[0] + w * t[0] + y * t[2] - z * t[1] + pose.move[0],
    p[1] + w * t[1] + z * t[0] - x * t[2] + pose.move[1],
    p[2] + w * t[2] + x * t[1] - y * t[0] + pose.move[2],
  ];
}

/** X = x / (1 − d/px), Y = y / (1 − d/py): model.md §2. */
export function commandFor(project: Project, pose: Pose, offset: number, p: Vec3): Vec2 {
  const [x, y, z] = toBench(pose, p);
  const d = z + offset;
  const [px, py] = project.head.pivot;
  return [px === null ? x : x / (1 - d / px), py === null ? y : y / (1 - d / py)];
}

export interface TestStroke {
  element: string;
  kind: 'outline' | 'fill';
  points: Vec2[];
}

export interface TestLayer {
  index: number;
  /** Bench height in focus. */
  focusHeight: number;
  strokes: TestStroke[];
}

export interface Scene {
  project: Project;
  pose: Pose;
  mesh: SurfaceMesh;
  copper: Copper;
  layers: TestLayer[];
}

/** mm from the drawn edge to the outline, a little less than the activated half-width. */
const INSET = 0.021;
const FILL_PITCH = 0.03;
export const SPEED = 600;

/**
 * Strokes for rectangles on a box whose height under the head falls or rises along x only.
 *
 * @param bands  for each layer its focus height and the part's x range that it writes
 */
export function planRects(
  project: Project,
  pose: Pose,
  rects: readonly Rect[],
  bands: readonly { focusHeight: number; x: Vec2 }[],
): TestLayer[] {
  return bands.map(({ focusHeight, x }, i) => {
    const strokes: TestStroke[] = [];
    for (const r of rects) {
      const x0 = Math.max(r.from[0], x[0]) + INSET;
      const x1 = Math.min(r.to[0], x[1]) - INSET;
      const y0 = r.from[1] + INSET;
      const y1 = r.to[1] - INSET;
      if (x1 <= x0) continue;
      const run = (...at: Vec2[]): Vec2[] =>
        dense(at).map((p) => commandFor(project, pose, -focusHeight, [p[0], p[1], 0]));
      strokes.push({
        element: r.id,
        kind: 'outline',
        points: run([x0, y0], [x1, y0], [x1, y1], [x0, y1], [x0, y0]),
      });
      const rows = Math.ceil((y1 - y0) / FILL_PITCH);
      for (let k = 1; k < rows; k++) {
        const y = y0 + ((y1 - y0) * k) / rows;
        strokes.push({
          element: r.id,
          kind: 'fill',
          points: k % 2 ? run([x0, y], [x1, y]) : run([x1, y], [x0, y]),
        });
      }
    }
    return { index: i + 1, focusHeight, strokes };
  });
}

/** A straight line on a leaning plane is no straight line of commands: points every 2 mm keep it within 0.1 µm. */
function dense(points: Vec2[]): Vec2[] {
  const out: Vec2[] = [points[0]];
  for (let i = 1; i < points.length; i++) {
    const [a, b] = [points[i - 1], points[i]];
    const n = Math.ceil(Math.hypot(b[0] - a[0], b[1] - a[1]) / 2);
    for (let k = 1; k <= n; k++) out.push([a[0] + ((b[0] - a[0]) * k) / n, a[1] + ((b[1] - a[1]) * k) / n]);
  }
  return out;
}

const fixed = (v: number) => v.toFixed(4);

export function csvText(layer: TestLayer): string {
  const rows = ['x_mm,y_mm,mark,speed_mm_s,element,power'];
  for (const s of layer.strokes)
    s.points.forEach((p, i) => {
      rows.push(`${fixed(p[0])},${fixed(p[1])},${i ? 1 : 0},${i ? SPEED : 3000},${s.element},1`);
    });
  return rows.join('\n') + '\n';
}

export function svgText(layer: TestLayer): string {
  const group = (kind: string) =>
    `<g data-kind="${kind}">\n` +
    layer.strokes
      .filter((s) => s.kind === kind)
      .map((s) => `<polyline points="${s.points.map((p) => `${fixed(p[0])},${fixed(-p[1])}`).join(' ')}"/>\n`)
      .join('') +
    '</g>\n';
  return `<?xml version="1.0" encoding="UTF-8"?>\n<svg xmlns="http://www.w3.org/2000/svg" width="110mm" height="110mm" viewBox="-55 -55 110 110">\n<g data-speed-mm-s="${SPEED}" data-power="1" data-passes="1">\n${group('outline')}${group('fill')}</g>\n</svg>\n`;
}

const two = (n: number) => String(n).padStart(2, '0');

export interface TestFiles {
  report: {
    format: string;
    setups: {
      name: string;
      pose: Pose;
      layers: { index: number; focusHeight: number; zOffset: number; zMoves: string; files: string[] }[];
    }[];
  };
  /** Path → text. */
  scans: Map<string, string>;
}

/** Everything as a run would have written it; the test may tamper with it before `pack`. */
export function filesOf(scene: Scene): TestFiles {
  const moves = scene.project.stage.zMoves;
  const scans = new Map<string, string>();
  const layers = scene.layers.map((l) => {
    const files = [`top/layer-${two(l.index)}.svg`, `top/layer-${two(l.index)}.csv`];
    scans.set(files[0], svgText(l));
    scans.set(files[1], csvText(l));
    return {
      index: l.index,
      focusHeight: l.focusHeight,
      zOffset: moves === 'stage' ? -l.focusHeight : l.focusHeight,
      zMoves: moves as string,
      files,
    };
  });
  return {
    report: { format: 'beamdrape-report', setups: [{ name: 'top', pose: scene.pose, layers }] },
    scans,
  };
}

export const pack = (files: TestFiles): { path: string; bytes: Uint8Array }[] => [
  { path: 'report.json', bytes: encodeUtf8(JSON.stringify(files.report)) },
  ...[...files.scans].map(([path, text]) => ({ path, bytes: encodeUtf8(text) })),
];
