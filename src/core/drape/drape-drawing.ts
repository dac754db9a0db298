/**
 * A drawing laid on the part (model.md §10): its origin on the anchor, every place at the flat coordinates that the map of
 * the surface gives it. What the surface does to lengths is measured, not hidden.
 */
import { radiansFromDegrees } from '../base/brands.ts';
import { quiet, type RunContext } from '../base/run-context.ts';
import { cosine, sine } from '../base/trig.ts';
import { distance, type Vec2, type Vec3 } from '../base/vec.ts';
import type { Area, Drawing, Hole, Shape, Stroke } from '../drawing/drawing.ts';
import type { WindowSolver } from '../geodesic/windows.ts';
import { barycentric } from '../mesh/surface-point.ts';
import type { Drape } from '../project/schema.ts';
import type { CopperElement } from './copper.ts';
import { type Draped, type DrapeFinding, layOut, lineLength, MARGIN, TRUE_TO } from './element.ts';
import { evenLengths } from './even-lengths.ts';
import { type FlatFigure, flatFigure } from './flat-figure.ts';
import { flatReader, type MapPatch, mapPatch, withoutTorn } from './map-patch.ts';
import { areaStretch, chordLength, lineStretch, steepest } from './map-stretch.ts';
import { AREA_STEP } from './pad.ts';
import { PatchWalk } from './patch-walk.ts';
import type { Place } from './route.ts';
import { drapeTrace, traceStep } from './trace.ts';

export interface DrawingDraped {
  elements: CopperElement[];
  findings: DrapeFinding[];
  /** Rims of its holes on the surface, closed lines of 3 a point; of a hole that the map does not reach, none. */
  rims: Float64Array[];
}

/** One shape, moved so that the drawing's origin is at 0. */
interface Moved {
  id: string;
  net: string;
  shape: Shape;
  figure: Stroke | Area;
  flat: FlatFigure;
}

/**
 * @param drape   where the drawing lies; layers named `skip` are left out
 * @param anchor  surface place nearest to `drape.anchor`
 * @param beside  holes of other drawings, in this one's axes: copper keeps out of them as out of its own
 * @returns elements in the drawing's order, and what could not be laid: the rest is kept
 * @throws Cancelled by `ctx`, which is asked between shapes and while the map is made
 */
export function drapeDrawing(
  solver: WindowSolver,
  drape: Drape,
  drawing: Drawing,
  anchor: Place,
  ctx: RunContext = quiet,
  beside: readonly Hole[] = [],
): DrawingDraped {
  const shapes = movedShapes(drape, drawing);
  const holes = drawing.holes.map((h) => movedHole(h, drape.origin));
  const through = [...holes, ...beside.map((h) => movedHole(h, drape.origin))];
  // Without shapes there is no copper, and the map is for the holes alone.
  const laid = shapes.length > 0 ? shapes.map((s) => s.flat.box) : holes.map(holeBox);
  if (laid.length === 0) return { elements: [], findings: [], rims: [] };
  const farthest = laid.reduce((far, box) => Math.max(far, farthestCorner(box)), 0);
  const radius = farthest + MARGIN;
  let done = 0;
  const step = (): void => ctx.step('drape', done, shapes.length);
  step();
  let patch = mapPatch(solver, anchor, radius, radiansFromDegrees(drape.turn), drape.mirror);
  const limits = patch.limits((u, v) => nearestEdge(shapes, u, v));
  step();
  const evened = !drape.evenLengths || shapes.length === 0 || evenMap(patch, shapes, step);
  patch = withoutTorn(patch);
  const walk = new PatchWalk(patch);
  const read = flatReader(patch);
  const chord = chordLength(solver.mesh, patch, radius);
  const findings: DrapeFinding[] = limits
    .filter((limit) => limit.measure < -TRUE_TO)
    .map((limit) => ({ rule: 'beyond-map', element: drape.id, at: limit.at, text: BEYOND[limit.kind] }));
  if (!evened)
    findings.push({
      rule: 'not-evened',
      element: drape.id,
      at: anchor.point,
      text: 'lengths are as the map gives them: evening them out would have folded it',
    });
  // Flat lengths grow by at most this on the way over the part: fields far from copper must not grow by more than 1.
  const steep = Math.min(steepest(patch), TORN);
  const elements: CopperElement[] = [];
  for (const own of shapes) {
    step();
    done++;
    if (drape.lay === 'pulled straight' && own.figure.kind === 'stroke') {
      const pulled = pullStraight(solver, walk, own, own.figure);
      if (pulled.element) elements.push(pulled.element);
      findings.push(...pulled.findings);
      continue;
    }
    const near = through.filter((h) => boxesMeet(own.flat.box, holeBox(h)));
    const evaluate = (face: number, p: Vec3) => {
      const at = read(face, p);
      if (!at) return { edge: Math.max(MARGIN, distance(p, anchor.point) - farthest), hatch: 0, along: 0 };
      const field = own.flat.at(at[0], at[1]);
      const edge = near.reduce((e, h) => Math.max(e, holeEdge(h, at[0], at[1])), field.edge);
      return { ...field, edge: edge > 0 ? edge / steep : edge };
    };
    const triangles = walk.within(grown(own.flat.box, MARGIN));
    const faces = [...new Set([...triangles].map((t) => patch.face[t]))].sort((a, b) => a - b);
    const { figure } = own;
    const coarse = figure.kind === 'stroke' ? traceStep(figure.width) : AREA_STEP;
    const laid = layOut(solver.mesh, faces, evaluate, coarse);
    if (laid.copper.face.length === 0) {
      findings.push({
        rule: 'no-copper',
        element: own.id,
        at: anchor.point,
        text: 'nothing of it lies on the surface',
      });
      continue;
    }
    const line = figure.kind === 'stroke' ? walk.line(figure.points, figure.closed) : null;
    if (line?.left)
      findings.push({
        rule: 'left-map',
        element: own.id,
        at: endOf(line.path.points),
        text: 'its line leaves the surface that the drawing reaches: it stops there',
      });
    const worst =
      figure.kind === 'stroke' ? lineStretch(walk, figure, chord) : areaStretch(walk, own.flat, chord);
    const middle = laid.copper.positions.length / 6;
    const o = 3 * Math.floor(middle);
    elements.push({
      id: own.id,
      kind: own.shape.role,
      net: own.net,
      width: figure.kind === 'stroke' ? figure.width : 0,
      ...(line ? { path: line.path } : {}),
      anchor: line
        ? endOf(line.path.points.subarray(0, 3))
        : [laid.copper.positions[o], laid.copper.positions[o + 1], laid.copper.positions[o + 2]],
      ...laid,
      length: line ? line.path.length : laid.outline.reduce((sum, loop) => sum + lineLength(loop), 0),
      drawnLength: own.flat.length,
      stretch: worst.stretch,
      stretched: worst,
    });
  }
  const rims = holes.slice(0, MOST_RIMS).flatMap((h) => walk.line(holeRing(h), true)?.path.points ?? []);
  return { elements, findings, rims };
}

/** Ids of the elements that lie at places of the drawing, null where none does. @param places  in the drawing's own axes, mm */
export function elementsAt(
  drape: Drape,
  drawing: Drawing,
  places: readonly (readonly [number, number])[],
): (string | null)[] {
  const shapes = movedShapes(drape, drawing);
  const [ou, ov] = drape.origin;
  return places.map(([u, v]) => shapes.find((s) => s.flat.at(u - ou, v - ov).edge <= 0)?.id ?? null);
}

/**
 * A line whose corners lie where the drawing has them and whose runs are shortest ways of true width: the strip is laid as
 * a trace of the project is.
 */
function pullStraight(solver: WindowSolver, walk: PatchWalk, own: Moved, stroke: Stroke): Draped {
  const places: Place[] = [];
  const { points, closed } = stroke;
  for (let i = 0; i < points.length / 2 + (closed ? 1 : 0); i++) {
    const j = i % (points.length / 2);
    const [u, v] = [points[2 * j], points[2 * j + 1]];
    const t = walk.locate(u, v);
    if (t < 0) break;
    const point = walk.place(t, u, v);
    const face = walk.faceOf(t);
    places.push({ point, surface: { face, bary: barycentric(solver.mesh, face, point) } });
  }
  const left: DrapeFinding | null =
    places.length < points.length / 2
      ? {
          rule: 'left-map',
          element: own.id,
          at: places[places.length - 1]?.point ?? [0, 0, 0],
          text: 'its line leaves the surface that the drawing reaches: it stops there',
        }
      : null;
  if (places.length < 2) return { element: null, findings: left ? [left] : [] };
  const laid = drapeTrace(
    solver,
    {
      id: own.id,
      kind: 'trace',
      net: own.net,
      width: stroke.width,
      route: places.map((p) => ({ at: [...p.point] as [number, number, number] })),
      ends: stroke.ends,
      bends: stroke.bends === 'miter' ? 'miter' : 'round',
    },
    places,
  );
  const drawn = own.flat.length;
  const element = laid.element && {
    ...laid.element,
    drawnLength: drawn,
    stretch: left ? 0 : Math.abs(laid.element.length / drawn - 1),
  };
  return { element, findings: left ? [...laid.findings, left] : laid.findings } as Draped;
}

/**
 * Evens a map. Over a rim it brings torn triangles back to their size; where they lie across the cut locus nothing does, and
 * the map is evened without them.
 */
function evenMap(patch: MapPatch, shapes: readonly Moved[], step: () => void): boolean {
  const edge = (u: number, v: number): number => nearestEdge(shapes, u, v);
  const before = patch.flat.slice();
  if (evenLengths(patch, edge, step) && withoutTorn(patch).face.length === patch.face.length) return true;
  patch.flat.set(before);
  // The same corners, and so the same flat coordinates.
  return evenLengths(withoutTorn(patch), edge, step);
}

const BEYOND = {
  border: 'the surface ends inside the drawing: what lies beyond has no place',
  'cut locus': 'ways over the surface from either side meet inside the drawing: it is torn there',
  saddle: 'a sharp inner corner lies inside the drawing: what lies behind it is squeezed',
} as const;

function movedShapes(drape: Drape, drawing: Drawing): Moved[] {
  const [ou, ov] = drape.origin;
  const ids = elementIds(drape, drawing);
  return drawing.shapes.flatMap((shape, i) => {
    const id = ids[i];
    if (id === null) return [];
    const figure = moved(shape.figure, ou, ov);
    const net =
      (shape.id !== null ? drape.nets[shape.id] : undefined) ?? drape.nets[shape.layer] ?? shape.net ?? '';
    return [{ id, net, shape, figure, flat: flatFigure(figure) }];
  });
}

/** Ids that the shapes of a drawing get on the part, in the drawing's order; null where their layer is left out. */
export function elementIds(drape: Pick<Drape, 'id' | 'drawingLayers'>, drawing: Drawing): (string | null)[] {
  const taken = new Set<string>();
  let n = 0;
  return drawing.shapes.map((shape) => {
    if (drape.drawingLayers[shape.layer] === 'skip') return null;
    n++;
    let id = `${drape.id}/${shape.id ?? n}`;
    // Two shapes of one name: the later ones are told apart by their number.
    if (taken.has(id)) id = `${id}.${n}`;
    taken.add(id);
    return id;
  });
}

const shift = (points: Float64Array, ou: number, ov: number): Float64Array =>
  points.map((x, i) => x - (i % 2 === 0 ? ou : ov));

const moved = (figure: Stroke | Area, ou: number, ov: number): Stroke | Area =>
  figure.kind === 'stroke'
    ? { ...figure, points: shift(figure.points, ou, ov) }
    : { ...figure, rings: figure.rings.map((r) => shift(r, ou, ov)) };

const movedHole = (hole: Hole, [ou, ov]: Vec2): Hole => ({
  ...hole,
  at: [hole.at[0] - ou, hole.at[1] - ov],
  to: [hole.to[0] - ou, hole.to[1] - ov],
});

type Box = readonly [number, number, number, number];

const farthestCorner = ([lu, lv, hu, hv]: Box): number =>
  Math.hypot(Math.max(-lu, hu, 0), Math.max(-lv, hv, 0));

const grown = ([lu, lv, hu, hv]: Box, by: number): Box => [lu - by, lv - by, hu + by, hv + by];

const boxesMeet = (a: Box, b: Box): boolean => a[0] <= b[2] && b[0] <= a[2] && a[1] <= b[3] && b[1] <= a[3];

/** Rims are only shown: a panel of more holes than these shows none of the rest. */
const MOST_RIMS = 5000;
const RIM_CORNERS = 32;

/** The rim of a hole or slot as a polygon of 2 a point, half of it about each end. */
function holeRing({ at, to, diameter }: Hole): Float64Array {
  const r = diameter / 2;
  const far = Math.hypot(to[0] - at[0], to[1] - at[1]);
  const [eu, ev] = far > 0 ? [(to[0] - at[0]) / far, (to[1] - at[1]) / far] : [1, 0];
  const out = new Float64Array(2 * (RIM_CORNERS + 2));
  for (let i = 0; i < RIM_CORNERS + 2; i++) {
    const [end, k] = i <= RIM_CORNERS / 2 ? [to, i] : [at, i - 1];
    const angle = Math.PI * ((2 * k) / RIM_CORNERS - 0.5);
    const [c, s] = [r * cosine(angle), r * sine(angle)];
    out.set([end[0] + c * eu - s * ev, end[1] + c * ev + s * eu], 2 * i);
  }
  return out;
}

function holeBox({ at, to, diameter }: Hole): Box {
  const r = diameter / 2;
  return [
    Math.min(at[0], to[0]) - r,
    Math.min(at[1], to[1]) - r,
    Math.max(at[0], to[0]) + r,
    Math.max(at[1], to[1]) + r,
  ];
}

/** How far a place lies inside a hole, mm, negative outside: copper ends at its rim. */
function holeEdge({ at, to, diameter }: Hole, u: number, v: number): number {
  const [eu, ev] = [to[0] - at[0], to[1] - at[1]];
  const ee = eu * eu + ev * ev;
  const t = ee > 0 ? Math.max(0, Math.min(1, ((u - at[0]) * eu + (v - at[1]) * ev) / ee)) : 0;
  return diameter / 2 - Math.hypot(u - at[0] - t * eu, v - at[1] - t * ev);
}

/** Signed distance to the nearest shape; shapes whose boxes are farther than what is found are not asked. */
function nearestEdge(shapes: readonly Moved[], u: number, v: number): number {
  let best = Infinity;
  for (const { flat } of shapes) {
    const [lu, lv, hu, hv] = flat.box;
    const away = Math.hypot(Math.max(lu - u, 0, u - hu), Math.max(lv - v, 0, v - hv));
    if (away < best) best = Math.min(best, Math.max(away, flat.at(u, v).edge));
    if (away === 0) best = Math.min(best, flat.at(u, v).edge);
  }
  return best;
}

/** A map is nowhere steeper: what is torn is left out (`map-patch.ts`). */
const TORN = 3;

const endOf = (points: Float64Array): Vec3 => {
  const o = points.length - 3;
  return [points[o], points[o + 1], points[o + 2]];
};
