/** Outline and fill of one run of one element, as lines on the surface (model.md §6). */
import { benchPoint, partPoint } from '../base/brands.ts';
import type { PoseFrame } from '../base/pose.ts';
import { at3 } from '../base/vec.ts';
import type { Beam } from '../beam/beam.ts';
import { beamDirection, landing } from '../beam/landing.ts';
import type { CopperElement } from '../drape/copper.ts';
import { type LevelLine, levelLines } from '../drape/level-lines.ts';
import type { Run } from '../layers/plan.ts';
import { normalAt } from '../part/normals.ts';
import type { Part } from '../part/part.ts';
import type { Project } from '../project/schema.ts';
import { edgeGradients, lightAt, lineHalfWidth } from './inset.ts';
import { cutLine, lineValues, type SurfaceLine, surfaceLine } from './polyline.ts';
import type { StrokeKind } from './strokes.ts';

export interface RunLines {
  kind: StrokeKind;
  lines: SurfaceLine[];
}

/** What is the same for every run of one element in one setup. */
export interface ElementGround {
  element: CopperElement;
  /** Cut coordinate at each vertex of the field patch: arc length, or bench height at stage offset 0. */
  along: Float64Array;
  height: Float64Array;
  /** Field triangles that the beam may go to. */
  open: Uint8Array;
  gradient: Float64Array;
  /** Smooth normal and bench position at each vertex, 3 a vertex. */
  normal: Float64Array;
  bench: Float64Array;
}

export function prepareElement(
  part: Part,
  frame: PoseFrame,
  element: CopperElement,
  writable: (t: number) => boolean,
): ElementGround {
  const { field, copper } = element;
  const count = field.edge.length;
  const bench = new Float64Array(3 * count);
  const height = new Float64Array(count);
  for (let v = 0; v < count; v++) {
    const b = frame.point(partPoint(at3(field.positions, v)));
    bench.set(b, 3 * v);
    height[v] = b[2];
  }
  const open = new Uint8Array(field.face.length).fill(1);
  copper.source.forEach((s, t) => {
    if (!writable(t)) open[s] = 0;
  });
  const normal = new Float64Array(3 * count);
  const done = new Uint8Array(count);
  for (let i = 0; i < field.triangles.length; i++) {
    const v = field.triangles[i];
    if (done[v]) continue;
    done[v] = 1;
    normal.set(
      normalAt(part.mesh, part.normals, field.face[Math.floor(i / 3)], at3(field.positions, v)),
      3 * v,
    );
  }
  return { element, along: field.along, height, open, gradient: edgeGradients(field), normal, bench };
}

/**
 * Lines of one run at one stage offset.
 * @param spacing  pulse spacing asked on the surface, mm
 */
export function runLines(
  ground: ElementGround,
  run: Run,
  stageOffset: number,
  project: Project,
  frame: PoseFrame,
  beam: Beam,
  spacing: number,
): RunLines[] {
  const { element } = ground;
  const { field } = element;
  const pitch = project.scan.linePitch;
  const coordinate = run.by === 'along' ? ground.along : ground.height;
  const only: number[] = [];
  for (let t = 0; t < field.face.length; t++) {
    if (!ground.open[t]) continue;
    const [a, b, c] = [
      coordinate[field.triangles[3 * t]],
      coordinate[field.triangles[3 * t + 1]],
      coordinate[field.triangles[3 * t + 2]],
    ];
    if (Math.max(a, b, c) >= run.from && Math.min(a, b, c) <= run.to) only.push(t);
  }
  if (only.length === 0) return [];
  const inset = insets(ground, only, stageOffset, project, frame, beam, spacing);
  const rim = new Float64Array(field.edge.length);
  for (let v = 0; v < rim.length; v++) rim[v] = field.edge[v] + inset[v];
  const cut = (line: LevelLine, clearance: number | null): SurfaceLine[] => {
    const keep = [{ values: lineValues(line, coordinate), least: run.from, most: run.to }];
    if (clearance !== null) keep.push({ values: lineValues(line, rim), least: -Infinity, most: -clearance });
    return cutLine(surfaceLine(line, field.positions), keep);
  };
  const outlines = levelLines(field, rim, 0, only);
  if (outlines.length === 0) return thinTrace(ground, only, cut);
  const levels = fillLevels(ground, only, inset, outlines, pitch);
  // A fill line ends half a pitch before the outline's stroke, which its last pulse overlaps.
  const fill = levels.passes.flatMap((p) =>
    p.levels.flatMap((level) => levelLines(field, p.values, level, p.only).flatMap((l) => cut(l, pitch / 2))),
  );
  return [
    { kind: 'outline', lines: outlines.flatMap((l) => cut(l, null)) },
    { kind: 'fill', lines: fill },
  ];
}

/** Where the beam's own line is as wide as the trace, one stroke down the middle has to do. */
function thinTrace(
  ground: ElementGround,
  only: number[],
  cut: (line: LevelLine, clearance: number | null) => SurfaceLine[],
): RunLines[] {
  const { field } = ground.element;
  if (ground.element.kind !== 'trace') return [];
  return [{ kind: 'outline', lines: levelLines(field, field.hatch, 0, only).flatMap((l) => cut(l, null)) }];
}

function insets(
  ground: ElementGround,
  only: readonly number[],
  stageOffset: number,
  project: Project,
  frame: PoseFrame,
  beam: Beam,
  spacing: number,
): Float64Array {
  const { field } = ground.element;
  const out = new Float64Array(field.edge.length);
  const done = new Uint8Array(field.edge.length);
  for (const t of only)
    for (let i = 0; i < 3; i++) {
      const v = field.triangles[3 * t + i];
      if (done[v]) continue;
      done[v] = 1;
      const d = ground.bench[3 * v + 2] + stageOffset;
      const u = beamDirection(
        landing(benchPoint([ground.bench[3 * v], ground.bench[3 * v + 1], d]), project.head),
        project.head,
      );
      const light = lightAt(
        beam,
        project.material.activationFluence,
        d,
        at3(ground.normal, v),
        frame.directionToPart(u),
        u[2],
      );
      out[v] = lineHalfWidth(light, at3(ground.gradient, v), spacing);
    }
  return out;
}

interface Pass {
  values: Float64Array;
  levels: number[];
  only: readonly number[];
}

/** Fields and levels of the fill lines, spaced so that whole pitches fit between the outline's strokes. */
function fillLevels(
  ground: ElementGround,
  only: readonly number[],
  inset: Float64Array,
  outlines: readonly LevelLine[],
  pitch: number,
): { passes: Pass[] } {
  const { element } = ground;
  const { field } = element;
  if (element.kind !== 'trace') {
    let lo = Infinity;
    let hi = -Infinity;
    for (const line of outlines)
      for (const h of lineValues(line, field.hatch)) {
        lo = Math.min(lo, h);
        hi = Math.max(hi, h);
      }
    const n = Math.max(1, Math.round((hi - lo) / pitch));
    return { passes: [{ values: field.hatch, levels: between(lo, hi, n), only }] };
  }
  const half = element.width / 2;
  // Distance from the middle in units of the distance of the outline's strokes: follows an inset that changes along the trace.
  const share = new Float64Array(field.edge.length);
  const unsigned = new Float64Array(field.edge.length);
  let sum = 0;
  let count = 0;
  for (let v = 0; v < share.length; v++) {
    const room = Math.max(half - inset[v], half * LEAST_ROOM);
    share[v] = field.hatch[v] / room;
    unsigned[v] = (half + field.edge[v]) / room;
  }
  for (const t of only)
    for (let i = 0; i < 3; i++) {
      sum += half - inset[field.triangles[3 * t + i]];
      count++;
    }
  const n = Math.max(1, Math.round((2 * sum) / count / pitch));
  // Where two stretches of the trace meet, the side jumps but the distance does not.
  const [smooth, jumps] = splitJumps(field.hatch, field.positions, field.triangles, only);
  const levels = between(-1, 1, n);
  return {
    passes: [
      { values: share, levels, only: smooth },
      { values: unsigned, levels: levels.filter((l) => l > 0), only: jumps },
    ],
  };
}

/** Keeps a division meaningful where the inset eats the trace; such places are outside the outline's strokes. */
const LEAST_ROOM = 1e-3;

const between = (lo: number, hi: number, n: number): number[] =>
  Array.from({ length: n - 1 }, (_, k) => lo + ((k + 1) * (hi - lo)) / n);

/** A hatch coordinate grows by no more than the way walked; a triangle where it does is torn. */
const TORN = 2;

function splitJumps(
  hatch: Float64Array,
  x: Float64Array,
  triangles: Uint32Array,
  only: readonly number[],
): [number[], number[]] {
  const smooth: number[] = [];
  const jumps: number[] = [];
  for (const t of only) {
    let torn = false;
    for (let i = 0; i < 3; i++) {
      const a = triangles[3 * t + i];
      const b = triangles[3 * t + ((i + 1) % 3)];
      const d = Math.hypot(x[3 * a] - x[3 * b], x[3 * a + 1] - x[3 * b + 1], x[3 * a + 2] - x[3 * b + 2]);
      if (Math.abs(hatch[a] - hatch[b]) > TORN * d) torn = true;
    }
    (torn ? jumps : smooth).push(t);
  }
  return [smooth, jumps];
}
