/** The functions behind the window, as plain calls on plain data: what web.ts serves and tests call directly. */
import { partPoint, radiansFromDegrees } from '../core/base/brands.ts';
import { Fault, InputError, type InputProblem } from '../core/base/news.ts';
import { poseFrame } from '../core/base/pose.ts';
import type { RunContext } from '../core/base/run-context.ts';
import { addScaled, at3, dot, normalize, type Vec2, type Vec3 } from '../core/base/vec.ts';
import { focusedBeam, usableDepth } from '../core/beam/beam.ts';
import { unionArea } from '../core/copper/union-area.ts';
import type { Copper, CopperElement } from '../core/drape/copper.ts';
import {
  type Draper,
  drapeDrawingOn,
  drapeElement,
  holesBeside,
  prepareDraper,
} from '../core/drape/drape.ts';
import type { DrawingDraped } from '../core/drape/drape-drawing.ts';
import type { Draped, DrapeFinding } from '../core/drape/element.ts';
import { triangleArea } from '../core/drape/level-lines.ts';
import { sketchLines } from '../core/drape/sketch.ts';
import { type GeodesicPath, shortestWith } from '../core/geodesic/shortest.ts';
import { layerOfSamples } from '../core/layers/assign.ts';
import type { SetupPlan } from '../core/layers/plan.ts';
import { canGo, planLayers } from '../core/layers/plan-layers.ts';
import type { NearestHit, SurfaceQueries } from '../core/mesh/queries.ts';
import { roundedPlace } from '../core/mesh/rounded.ts';
import type { SurfaceMesh } from '../core/mesh/surface-mesh.ts';
import { barycentric, faceNormal, type SurfacePoint } from '../core/mesh/surface-point.ts';
import { type CornerNormals, normalAt } from '../core/part/normals.ts';
import { loadPart, type Part, type Units } from '../core/part/part.ts';
import { runJob, setupsOf } from '../core/pipeline.ts';
import { readProject, writeProject } from '../core/project/read.ts';
import type { RuleFinding } from '../core/project/report.ts';
import type { Drape, Head, Project, Setup } from '../core/project/schema.ts';
import { checkReach } from '../core/reach/reach.ts';
import type { SetupReach } from '../core/reach/result.ts';
import { shopRules } from '../core/rules/shop-rules.ts';
import { connectionsPicture } from './connections-picture.ts';
import { creases } from './creases.ts';
import { flatPicture } from './flat-picture.ts';
import { boxOf, HeldDrawings, type LoadFlat, type Reading } from './held-drawings.ts';
import { HeldPaths, type Hold } from './held-paths.ts';
import { netPictures } from './net-pictures.ts';
import {
  type ConnectionsPicture,
  type CopperPicture,
  type DrawingPicture,
  ELSEWHERE,
  type ElementPicture,
  type ExportResult,
  type LiveRun,
  type NetPicture,
  type PartPicture,
  type PlanPicture,
  type Probe,
  type ReachPicture,
} from './pictures.ts';
import { createPool } from './pool.ts';
import { type NamedFile, standAlone } from './stand-alone.ts';
import { tasks } from './tasks.ts';
import { thinned } from './thin.ts';

/** Drawn lines may stray by this from the true ones, mm: a fifth of a pixel at the closest look. */
const SEEN = 0.006;
/** As the command line's own default. */
const DEFAULT_SEED = 1;

export interface Ray {
  /** Part frame. */
  origin: Vec3;
  /** Unit, part frame. */
  direction: Vec3;
}

/** A drawing in hand. */
export interface SketchAsked {
  /** Part frame, pulled to the surface. */
  at: Vec3;
  /** Degrees, as in the project. */
  turn: number;
  mirror: boolean;
  /** About the drawing's origin, 2 a point, mm. */
  lines: readonly Float32Array[];
}

export type Session = ReturnType<typeof createSession>;

const noFlat: LoadFlat = () => {
  throw new Fault('a session with drawings needs plane booleans');
};

/** @param flat  loads what reading drawings needs, when the first one comes */
export function createSession(flat: LoadFlat = noFlat) {
  let part: Part | null = null;
  let draper: Draper | null = null;
  let held: HeldPaths | null = null;
  let project: Project | null = null;
  let copper: Copper | null = null;
  let reached: { key: string; copper: Copper; value: SetupReach[] } | null = null;
  const needCopper = () => {
    if (!project || !copper) throw new Fault('no copper is laid in the worker');
    return { project, copper };
  };
  const laid = new Map<string, Draped | DrawingDraped>();
  const drawings = new HeldDrawings(flat);

  const needPart = (): Part => {
    if (!part) throw new Fault('no part is open in the worker');
    return part;
  };

  return {
    /** @throws InputError for a file that is no part */
    openPart(a: { bytes: Uint8Array; file: string; units: Units }, ctx: RunContext): PartPicture {
      part = loadPart(a.bytes, a.file, a.units, ctx);
      draper = prepareDraper(part);
      const { mesh: surface, queries } = part;
      held = new HeldPaths(draper.solver, (p) => surfacePoint(surface, queries, p));
      laid.clear();
      copper = null;
      const { mesh, normals } = part;
      const { positions: x, triangles: t } = mesh;
      const positions = new Float32Array(t.length * 3);
      for (let i = 0; i < t.length; i++) for (let k = 0; k < 3; k++) positions[3 * i + k] = x[3 * t[i] + k];
      return {
        positions,
        normals: Float32Array.from(normals),
        edges: creases(mesh),
        triangles: t.length / 3,
        vertices: x.length / 3,
        pieces: mesh.pieces.length,
        closed: mesh.closed,
        area: mesh.area,
        volume: mesh.volume,
        bounds: mesh.bounds,
        mended: mesh.mended,
      };
    },

    /** Hands over every drawing that the document may name, in place of those before. */
    holdDrawings: (a: { files: readonly NamedFile[] }) => drawings.hold(a.files),

    /**
     * A drawing that no drape names yet, read as a drape would have it read.
     * @throws InputError of the reader
     */
    async lookAtDrawing(
      a: { bytes: Uint8Array; how: Reading },
      ctx: RunContext,
    ): Promise<{ box: [Vec2, Vec2] | null; shapes: number }> {
      const alone = new HeldDrawings(flat);
      await alone.hold([{ file: a.how.drawing, bytes: a.bytes }]);
      const { drawing } = alone.read(a.how, '', '', ctx);
      return { box: boxOf(drawing), shapes: drawing.shapes.length };
    },

    /**
     * Reads the project as a file would be read and lays its copper. Elements that did not change are not laid again;
     * one that cannot be laid is named in `problems`, and the others stay. After `patience` ms it gives what there is:
     * the next call goes on from there, so that copper appears as it is laid.
     */
    drape(a: { project: Project; patience?: number }, ctx: RunContext): CopperPicture {
      const here = needPart();
      project = readProject(writeProject(a.project), a.project.name).project;
      const problems: InputProblem[] = [];
      const elements: CopperElement[] = [];
      const findings: DrapeFinding[] = [];
      const keep = new Set<string>();
      const until = performance.now() + (a.patience ?? Infinity);
      const file = a.project.name;
      const drapeOf = new Map<string, string>();
      const read: DrawingPicture[] = [];
      let pending = 0;
      const { elements: drawn, drapes } = project.circuit;
      /** What lies there already, or `lay` if there is time left; undefined when not. */
      const known = <T extends Draped | DrawingDraped>(key: string, lay: () => T): T | undefined => {
        keep.add(key);
        if (!laid.has(key)) {
          if (performance.now() > until) {
            pending++;
            return undefined;
          }
          laid.set(key, lay());
        }
        return laid.get(key) as T;
      };
      const each = (i: number, f: () => void): void => {
        ctx.step('drape', i, drawn.length + drapes.length);
        try {
          f();
        } catch (error) {
          if (!(error instanceof InputError)) throw error;
          problems.push(...error.problems);
        }
      };
      drawn.forEach((element, i) => {
        each(i, () => {
          const one = known(JSON.stringify(element), () =>
            drapeElement(draper!, element, `$.circuit.elements[${i}]`, file),
          );
          if (one?.element) elements.push(one.element);
          findings.push(...(one?.findings ?? []));
        });
      });
      /** One that cannot be read is named in its own turn. */
      const readOr = (drape: Drape, i: number) => {
        try {
          return drawings.read(drape, file, `$.circuit.drapes[${i}]`, ctx).drawing;
        } catch (error) {
          if (!(error instanceof InputError)) throw error;
          return null;
        }
      };
      drapes.forEach((drape, i) => {
        each(drawn.length + i, () => {
          const path = `$.circuit.drapes[${i}]`;
          const { key, drawing } = drawings.read(drape, file, path, ctx);
          const picture: DrawingPicture = {
            drape: drape.id,
            shapes: drawing.shapes.length,
            holes: drawing.holes.length,
            layers: drawing.layers,
            notes: drawing.notes,
            flat: flatPicture(drawing, drape, key),
            rims: [],
          };
          read.push(picture);
          const holes = holesBeside(
            drape,
            drapes.flatMap((d, j) => {
              const other = readOr(d, j);
              return other ? [{ drape: d, drawing: other }] : [];
            }),
          );
          const all = known(`${key} ${JSON.stringify([drape, holes])}`, () =>
            drapeDrawingOn(
              draper!,
              { drape, drawing, holes, path, file },
              { step: () => ctx.step('drape', drawn.length + i, drawn.length + drapes.length) },
            ),
          );
          picture.rims = (all?.rims ?? []).map((rim) => Float32Array.from(rim));
          for (const e of all?.elements ?? []) drapeOf.set(e.id, drape.id);
          elements.push(...(all?.elements ?? []));
          findings.push(...(all?.findings ?? []));
        });
      });
      for (const key of laid.keys()) if (!keep.has(key)) laid.delete(key);
      copper = { elements };
      const covered = pending > 0 ? null : unionArea(elements.map((e) => e.copper));
      return {
        ...copperPicture(copper, here, posesOf(project), drapeOf),
        drawings: read,
        problems,
        findings,
        pending,
        covered,
      };
    },

    /** @throws InputError with every problem found in the text */
    readProject: (a: { text: string; file: string }) => readProject(a.text, a.file),

    /** Reach of the copper laid last. */
    reach(_: null, ctx: RunContext): ReachPicture[] {
      const { project: p, copper: c } = needCopper();
      const setups = setupsOf(p, p.name);
      // Heights chosen by hand change the plan, not the reach: while a layer is dragged nothing is looked at twice.
      const key = JSON.stringify([p.head, p.material, p.limits, setups.map((s) => s.pose)]);
      if (reached?.copper !== c || reached.key !== key)
        reached = { key, copper: c, value: checkReach(p, setups, needPart(), c, ctx) };
      return reached.value.map((r) => reachPicture(r, p));
    },

    /** The layers for the reach found last. */
    plan(_: null, ctx: RunContext): PlanPicture[] {
      const { project: p, copper: c } = needCopper();
      if (!reached) throw new Fault('layers are planned after reach');
      const reach = reached.value;
      return planLayers(p, setupsOf(p, p.name), c, reach, ctx).map((plan) =>
        planPicture(plan, c, reach[plan.setup]),
      );
    },

    /** Shop rules that the copper laid last breaks. */
    rules(_: null, ctx: RunContext): RuleFinding[] {
      const { project: p, copper: c } = needCopper();
      return shopRules(needPart(), c.elements, p.limits, ctx);
    },

    /** Opens and shorts of the copper laid last, by its nets and by the project's netlist. */
    connections(_: null, ctx: RunContext): ConnectionsPicture {
      const { project: p, copper: c } = needCopper();
      return connectionsPicture(p, c, drawings, ctx);
    },

    /** Nets of the copper laid last, as they hang together. */
    nets(_: null, ctx: RunContext): NetPicture[] {
      const { project: p, copper: c } = needCopper();
      return netPictures(p, c, ctx);
    },

    /** The files that the command line would write with --no-timing, as bytes. */
    async exportFiles(
      a: { projectFile: string; projectText: string; part: { file: string; bytes: Uint8Array } },
      ctx: RunContext,
    ): Promise<ExportResult> {
      const { project: p, unknown } = readProject(a.projectText, a.projectFile);
      const others = drawings.of(p, a.projectFile);
      const pool = createPool(1, tasks, () => {
        throw new Fault('one thread needs no other');
      });
      const { report, files } = await runJob(
        {
          project: p,
          projectFile: a.projectFile,
          projectText: a.projectText,
          unknown,
          part: a.part,
          drawings: others,
          flat,
        },
        { seed: DEFAULT_SEED },
        ctx,
        pool,
      );
      return {
        report,
        files: standAlone(files, report, { projectText: a.projectText, part: a.part, others }),
      };
    },

    /** What the ray meets first, in the setup's bench. */
    pick(a: { ray: Ray; setup: Setup; head: Head }): Probe | null {
      const { mesh, queries, normals } = needPart();
      const hit = queries.firstHit(a.ray.origin, a.ray.direction);
      return hit === null ? null : probeAt(mesh, queries, normals, hit.point, hit.face, a.setup, a.head);
    },

    /** Lines of a drawing as they would run on the part with this anchor: while it is moved and turned by hand. */
    sketch({ at, turn, mirror, lines }: SketchAsked): Float32Array[] {
      const { mesh, queries } = needPart();
      const { point, face } = queries.nearest(at) as NearestHit;
      const anchor = { point, surface: { face, bary: barycentric(mesh, face, point) } };
      const flat = lines.map((l) => Float64Array.from(l));
      return sketchLines(mesh, anchor, radiansFromDegrees(turn), mirror, flat).map((l) =>
        Float32Array.from(l),
      );
    },

    /** The shortest way from one place to another. */
    run(a: { from: Vec3; to: Vec3 }): LiveRun {
      const { mesh, queries } = needPart();
      return liveRun(
        shortestWith(draper!.solver, surfacePoint(mesh, queries, a.from), surfacePoint(mesh, queries, a.to)),
        true,
      );
    },

    /** The way to where the pointer is now: the shortest if it can be had at once. */
    glance(a: { from: Vec3; to: Vec3; hold: Hold }): LiveRun {
      const { mesh, queries } = needPart();
      const [from, to] = [surfacePoint(mesh, queries, a.from), surfacePoint(mesh, queries, a.to)];
      const { path, sure } = held!.glance(a.hold, from, to);
      return liveRun(path, sure);
    },

    /** The way held there pulled after a point, on its side of holes and humps. */
    pull(a: { from: Vec3; to: Vec3; hold: Hold }): LiveRun {
      const { mesh, queries } = needPart();
      const [from, to] = [surfacePoint(mesh, queries, a.from), surfacePoint(mesh, queries, a.to)];
      return liveRun(held!.follow(a.hold, from, to), false);
    },

    /** Places that a held way needs as route points to stay on its side, from its first end to the dragged one. */
    pins(a: Hold): Vec3[] {
      const { mesh, queries } = needPart();
      return held!.pins(a).map((p) => roundedPlace(queries, p.point, faceNormal(mesh, p.face)));
    },
  };
}

const liveRun = (path: GeodesicPath | null, sure: boolean): LiveRun =>
  path === null
    ? { points: null, length: 0, sure }
    : { points: Float32Array.from(path.points), length: path.length, sure };

export const posesOf = (project: Project): Setup[] =>
  project.setups === 'auto'
    ? [{ name: 'auto', pose: { rotate: [0, 0, 0, 1], move: [0, 0, 0] } }]
    : project.setups;

function surfacePoint(mesh: SurfaceMesh, queries: SurfaceQueries, p: Vec3): SurfacePoint {
  const hit = queries.nearest(p);
  if (!hit) throw new Fault('a surface has a nearest point');
  return { face: hit.face, bary: barycentric(mesh, hit.face, hit.point) };
}

/** µm-sized step off the surface, so that a ray does not meet the face it starts on (model.md §4). */
const LIFT = 1e-3;

function probeAt(
  mesh: SurfaceMesh,
  queries: SurfaceQueries,
  normals: CornerNormals,
  point: Vec3,
  face: number,
  setup: Setup,
  head: Head,
): Probe {
  const frame = poseFrame(setup.pose);
  const bench = frame.point(partPoint(point));
  const normal = normalAt(mesh, normals, face, point);
  const u = normalize([
    head.pivot[0] ? -bench[0] / head.pivot[0] : 0,
    head.pivot[1] ? -bench[1] / head.pivot[1] : 0,
    1,
  ]);
  const toward = frame.directionToPart(u);
  const blocked = queries.firstHit(addScaled(point, normal, LIFT), toward);
  return {
    point,
    at: roundedPlace(queries, point, faceNormal(mesh, face)),
    normal,
    face,
    height: bench[2],
    incidence: (Math.acos(Math.max(-1, Math.min(1, dot(normal, toward)))) * 180) / Math.PI,
    blockedAfter: blocked ? blocked.distance : null,
  };
}

function copperPicture(
  copper: Copper,
  part: Part,
  setups: Setup[],
  drapeOf: ReadonlyMap<string, string>,
): Omit<CopperPicture, 'drawings' | 'problems' | 'findings' | 'pending' | 'covered'> {
  const triangles = copper.elements.reduce((n, e) => n + e.copper.triangles.length / 3, 0);
  const vertices = copper.elements.reduce((n, e) => n + e.copper.positions.length / 3, 0);
  const positions = new Float32Array(3 * vertices);
  const normals = new Float32Array(3 * vertices);
  const corners = new Uint32Array(3 * triangles);
  const face = new Int32Array(triangles);
  const element = new Int32Array(triangles);
  const area = new Float32Array(triangles);
  const heights = setups.map(() => new Float32Array(vertices));
  const frames = setups.map((s) => poseFrame(s.pose));
  const elements: ElementPicture[] = [];
  let t = 0;
  let v = 0;
  copper.elements.forEach((e, index) => {
    const first = t;
    const { positions: x, triangles: own, face: f } = e.copper;
    for (let i = 0; i < own.length / 3; i++, t++) {
      face[t] = f[i];
      element[t] = index;
      area[t] = triangleArea(e.copper, i);
      for (let c = 0; c < 3; c++) {
        const vertex = own[3 * i + c];
        corners[3 * t + c] = v + vertex;
        normals.set(normalAt(part.mesh, part.normals, f[i], at3(x, vertex)), 3 * (v + vertex));
      }
    }
    for (let i = 0; i < x.length / 3; i++) {
      const p = at3(x, i);
      positions.set(p, 3 * (v + i));
      frames.forEach((frame, s) => {
        heights[s][v + i] = frame.point(partPoint(p))[2];
      });
    }
    v += x.length / 3;
    elements.push({
      id: e.id,
      drape: drapeOf.get(e.id) ?? null,
      kind: e.kind,
      net: e.net,
      length: e.length,
      drawnLength: e.drawnLength,
      area: e.area,
      stretch: e.stretch,
      stretched: e.stretched ? { ...e.stretched } : null,
      anchor: e.anchor,
      first,
      count: t - first,
      outline: e.outline.map((o) => thinned(o, SEEN)),
      path: e.path ? Float32Array.from(e.path.points) : null,
    });
  });
  return { elements, positions, normals, corners, face, element, area, heights };
}

function reachPicture(r: SetupReach, project: Project): ReachPicture {
  const total = r.elements.reduce((n, e) => n + e.height.length, 0);
  const out: ReachPicture = {
    setup: r.setup,
    depth: usableDepth(focusedBeam(project.head), project.limits, project.material),
    incidence: new Float32Array(total),
    blocked: new Float32Array(total),
    field: new Float32Array(total),
    fluence: new Float32Array(total),
    usable: new Float32Array(total),
    fails: new Uint8Array(total),
  };
  const [fx, fy] = project.head.field;
  let t = 0;
  for (const e of r.elements)
    for (let i = 0; i < e.height.length; i++, t++) {
      out.incidence[t] = (e.incidence[i] * 180) / Math.PI;
      out.blocked[t] = e.blocked[i];
      out.field[t] = Math.max(
        Math.abs(e.command[2 * i]) / (fx / 2),
        Math.abs(e.command[2 * i + 1]) / (fy / 2),
      );
      out.fluence[t] = e.fluence[i];
      out.usable[t] = e.usable[i];
      out.fails[t] = e.fails[i];
    }
  return out;
}

function planPicture(plan: SetupPlan, copper: Copper, reach: SetupReach): PlanPicture {
  const total = copper.elements.reduce((n, e) => n + e.copper.triangles.length / 3, 0);
  const layerOf = new Int16Array(total).fill(ELSEWHERE);
  const mine = new Set(plan.elements);
  let t = 0;
  copper.elements.forEach((e, i) => {
    const r = reach.elements[i];
    if (mine.has(i))
      layerOf.set(
        layerOfSamples(plan, e, i, r, (k) => canGo(r, k)),
        t,
      );
    t += r.height.length;
  });
  return {
    setup: plan.setup,
    layers: plan.layers.map((l) => ({
      index: l.index,
      focusHeight: l.focusHeight,
      worstDefocus: l.worstDefocus,
      elements: new Set(l.runs.map((x) => x.element)).size,
    })),
    layerOf,
    unreached: plan.unreached.map((u) => ({ element: u.element, length: u.length, reason: u.reason })),
  };
}
