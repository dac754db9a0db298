/**
 * DXF drawings as text. Polylines with a width are traces, hatches and closed outlines without a width are regions, open lines
 * without a width are traces of the width that was asked for.
 */
import { InputError } from '../base/news.ts';
import type { RunContext } from '../base/run-context.ts';
import { areasOf, strokesOf } from './chains.ts';
import type { Bends, Drawing, DrawingOptions, Ends, Shape } from './drawing.ts';
import { leftSweep, onArc, radians } from './dxf-curves.ts';
import { type Block, type DxfFile, type Entity, type Fields, fieldsOf, readGroups } from './dxf-groups.ts';
import { drawHatch } from './dxf-hatch.ts';
import { heavyPolyline, lightPolyline, type Polyline, runsOf } from './dxf-polyline.ts';
import { unitOf } from './dxf-units.ts';
import { BadShape, type Findings, findings, tooLarge } from './findings.ts';
import { type Flat, type Rule, ringArea } from './flat.ts';
import { type Arc, type Chain, flatten, type Pen } from './flatten.ts';
import { determinant, type Matrix, rotation, scaling, stretches, times, translation } from './matrix.ts';
import { flattenSpline } from './spline.ts';
import { type Tangle, tangle } from './tangle.ts';

/** Entities drawn, those of a block counted for each INSERT: ten lines of INSERT can ask for 10¹⁰. */
const MOST_DRAWN = 200_000;
/** Blocks in one another. */
const MOST_DEPTH = 256;
const STRIDE = 1024;

/**
 * Shapes come in the order of the file and have no ids. What lies on layer 0 of a block is on the layer of its INSERT. Heights
 * are left out: the drawing is seen from above.
 *
 * @param options  `unit` counts for a drawing whose header says none; `lineWidth` for open lines without a width
 * @param flat     outlines that cross themselves are worked out by it
 * @throws InputError `not-dxf`, `binary-dxf`, `bad-group`, `truncated`, `no-units`, `too-large`, `too-deep`, `insert-cycle`,
 *   `bad-number`, `bad-spline`, `bad-hatch`, `out-of-range`, `too-tangled`, with the line
 */
export function readDxf(
  text: string,
  file: string,
  options: DrawingOptions,
  flat: Flat,
  ctx: RunContext,
): Drawing {
  const dxf = readGroups(text, file);
  const unit = unitOf(dxf, options, file);
  const found = findings(file, 'mend this entity or export the drawing again');
  const walk: Walk = {
    ...{ file, options, flat, ctx, dxf, found },
    tangle: tangle(),
    shapes: [],
    layers: new Set(dxf.layers.keys()),
    drawn: 0,
  };
  const around: Around = { matrix: scaling(unit, unit), layer: '0', block: '', blocks: [] };
  for (const entity of dxf.entities) visit(entity, around, walk);
  found.settle();
  return { file, shapes: walk.shapes, holes: [], layers: [...walk.layers], notes: found.notes() };
}

interface Walk {
  file: string;
  options: DrawingOptions;
  flat: Flat;
  ctx: RunContext;
  dxf: DxfFile;
  found: Findings;
  tangle: Tangle;
  shapes: Shape[];
  layers: Set<string>;
  drawn: number;
}

interface Around {
  /** Units of the entity's world → mm. */
  matrix: Matrix;
  /** What layer 0 stands for. */
  layer: string;
  /** Name of the innermost block, '' outside. */
  block: string;
  blocks: readonly Block[];
}

const placeOf = (entity: Entity): string => `line ${entity.line}, ${entity.type.slice(0, 40)}`;

function visit(entity: Entity, around: Around, walk: Walk): void {
  const { found } = walk;
  const place = placeOf(entity);
  if (++walk.drawn > MOST_DRAWN) throw tooLarge(walk.file, place, `more than ${MOST_DRAWN} entities`);
  if (walk.drawn % STRIDE === 0) walk.ctx.step('load', walk.drawn, 2 * walk.drawn);
  found.at(place, () => {
    const field = fieldsOf(entity);
    const own = field.text(8) ?? '0';
    const layer = own === '0' ? around.layer : own;
    walk.layers.add(layer);
    if (field.whole(60, 0) === 1 || walk.dxf.layers.get(layer)?.hidden)
      return found.note(
        'hidden',
        place,
        'what is invisible, or on a layer that is off or frozen, is left out',
      );
    if (field.whole(67, 0) === 1) return found.note('paper', place, 'what lies on paper sheets is left out');
    const sheet = sheetOf(field);
    if (!sheet) return found.note('tilted', place, 'what is drawn on tilted planes is left out');
    if ([30, 31, 38].some((code) => field.number(code, 0) !== 0))
      found.note('height', place, 'heights are left out: the drawing is seen from above');
    const line = field.text(6)?.toUpperCase() ?? 'BYLAYER';
    if (!['BYLAYER', 'BYBLOCK', 'CONTINUOUS'].includes(line))
      found.note('linetype', place, 'dashed lines are taken as whole ones');
    const inWorld =
      IN_WORLD.has(entity.type) || (entity.type === 'POLYLINE' && (field.whole(70, 0) & 8) !== 0);
    const here: Around = { ...around, layer, matrix: inWorld ? around.matrix : times(around.matrix, sheet) };
    if (entity.type === 'INSERT') insert(entity, field, here, walk);
    else draw(entity, field, here, sheet, walk);
    for (const part of entity.parts)
      if (part.type === 'ATTRIB') found.note('attrib', placeOf(part), 'ATTRIB is left out');
  });
}

/** Entities whose points do not lie in their own plane's axes. */
const IN_WORLD: ReadonlySet<string> = new Set(['LINE', 'POINT', 'ELLIPSE', 'SPLINE']);

/** Share by which a direction may lean and still point straight up or down: digits that an export rounds. */
const UPRIGHT = 1e-6;

/** Axes of a plane that is seen from above or below (groups 210 to 230, "arbitrary axis algorithm"); null for others. */
function sheetOf(field: Fields): Matrix | null {
  const [x, y, z] = [field.number(210, 0), field.number(220, 0), field.number(230, 1)];
  if (Math.hypot(x, y) > UPRIGHT * Math.abs(z)) return null;
  return scaling(z < 0 ? -1 : 1, 1);
}

function insert(entity: Entity, field: Fields, here: Around, walk: Walk): void {
  const place = placeOf(entity);
  const name = (field.text(2) ?? '').toUpperCase();
  const block = walk.dxf.blocks.get(name);
  if (!block) {
    walk.found.note('insert', place, `block "${name.slice(0, 40)}" is not in the file and left out`);
    return;
  }
  if (here.blocks.includes(block))
    throw new InputError({
      code: 'insert-cycle',
      file: walk.file,
      place,
      problem: `block "${name.slice(0, 40)}" holds itself`,
      mend: 'take one of the insertions out',
    });
  if (here.blocks.length >= MOST_DEPTH)
    throw new InputError({
      code: 'too-deep',
      file: walk.file,
      place,
      problem: `more than ${MOST_DEPTH} blocks stand within one another`,
      mend: 'take the blocks apart and export the drawing again',
    });
  const [columns, rows] = [Math.max(1, field.whole(70, 1)), Math.max(1, field.whole(71, 1))];
  if (columns * rows > MOST_DRAWN)
    throw tooLarge(walk.file, place, `${columns} by ${rows} copies of a block`);
  const at = times(translation(field.number(10), field.number(20)), rotation(field.number(50, 0)));
  const scale = scaling(field.number(41, 1), field.number(42, 1));
  const toBlock = times(scale, translation(-block.base[0], -block.base[1]));
  for (let row = 0; row < rows; row++)
    for (let column = 0; column < columns; column++) {
      const step = translation(column * field.number(44, 0), row * field.number(45, 0));
      const matrix = times(here.matrix, times(times(at, step), toBlock));
      if (++walk.drawn > MOST_DRAWN) throw tooLarge(walk.file, place, `more than ${MOST_DRAWN} entities`);
      for (const inner of block.entities)
        visit(inner, { ...here, matrix, block: name, blocks: [...here.blocks, block] }, walk);
    }
}

function draw(entity: Entity, field: Fields, here: Around, sheet: Matrix, walk: Walk): void {
  const { found, options } = walk;
  const place = placeOf(entity);
  if (determinant(here.matrix) === 0) {
    found.note('flat-transform', place, 'what a scale of 0 presses flat is left out');
    return;
  }
  const pen = (): Pen & { chains(): Chain[] } => flatten(here.matrix, options.tolerance, found.spend);
  const scale = Math.sqrt(Math.abs(determinant(here.matrix)));
  const chainsOf = (by: (p: Pen) => void): Chain[] => {
    const p = pen();
    by(p);
    return p.chains();
  };
  const { type } = entity;
  if (type === 'LINE')
    lines(
      chainsOf((p) => {
        p.move(field.number(10), field.number(20));
        p.line(field.number(11), field.number(21));
      }),
      0,
    );
  else if (type === 'CIRCLE' || type === 'ARC') {
    const r = field.number(40);
    if (!(r > 0)) throw new BadShape('bad-number', `the radius ${r} is not above 0`);
    const from = type === 'ARC' ? radians(field.number(50)) : 0;
    const sweep = type === 'ARC' ? leftSweep(from, radians(field.number(51))) : 2 * Math.PI;
    const centre = [field.number(10), field.number(20)] as const;
    lines(chainsOf(arcWith({ centre, p: [r, 0], q: [0, r], start: from, sweep })), 0);
  } else if (type === 'ELLIPSE') {
    const p = [field.number(11), field.number(21)] as const;
    // The minor axis stands left of the major one, seen from the side that the plane faces.
    const ratio = field.number(40) * sheet[0];
    const [from, to] = [field.number(41, 0), field.number(42, 2 * Math.PI)];
    const sweep = leftSweep(from, to);
    const centre = [field.number(10), field.number(20)] as const;
    lines(chainsOf(arcWith({ centre, p, q: [-p[1] * ratio, p[0] * ratio], start: from, sweep })), 0);
  } else if (type === 'LWPOLYLINE') polyline(lightPolyline(entity));
  else if (type === 'POLYLINE') {
    const read = heavyPolyline(entity);
    if (read) polyline(read);
    else found.note('mesh', place, 'meshes are left out');
  } else if (type === 'SPLINE') spline();
  else if (type === 'SOLID' || type === 'TRACE') {
    // Its third and fourth corners stand crosswise; without a fourth it is a triangle.
    const corners = [10, 11, 13, 12].map((c) =>
      c === 13 && field.text(13) === null ? null : ([field.number(c), field.number(c + 10)] as const),
    );
    region(
      chainsOf((p) => {
        p.move(...corners[0]!);
        for (const c of corners.slice(1)) if (c) p.line(...c);
        p.close();
      }),
      'nonzero',
    );
  } else if (type === 'HATCH') {
    let style = 0;
    const chains = chainsOf((p) => {
      style = drawHatch(entity, stretches(here.matrix)[0], options.tolerance, p);
    });
    if (field.whole(70, 1) === 0)
      found.note('pattern', place, 'patterns of hatches are left out: they are copper all over');
    if (style === 2) for (const c of chains) if (ringArea(c.points) < 0) turn(c.points);
    region(chains, style === 2 ? 'nonzero' : 'evenodd');
  } else found.note(type.toLowerCase().slice(0, 40), place, `${type.slice(0, 40)} is left out`);

  function spline(): void {
    const all = (code: number): number[] =>
      entity.codes.flatMap((c, i) => (c === code ? [Number(entity.values[i])] : []));
    const [xs, ys, knots, weights] = [all(10), all(20), all(40), all(41)];
    if ([...xs, ...ys, ...knots, ...weights].some((v) => !Number.isFinite(v)) || xs.length !== ys.length)
      throw new BadShape('bad-number', 'its points or knots are no numbers');
    if (xs.length === 0) {
      found.note('fit-spline', place, 'a spline that only says what it runs through is left out');
      return;
    }
    // Where the curve lies is known before it is flattened: straight lines alone go through the pen.
    const points = xs.map((x, i) => [x, ys[i]] as const);
    const [most] = stretches(here.matrix);
    const flatPoints: number[] = [];
    const first = flattenSpline(
      {
        degree: field.whole(71, 3),
        knots,
        points: points.map(([x, y]) => [x * most, y * most] as const),
        weights: weights.length > 0 ? weights : null,
      },
      options.tolerance,
      (x, y) => {
        found.spend(1);
        flatPoints.push(x / most, y / most);
      },
    );
    const n = flatPoints.length;
    const size = points.reduce((most, [x, y]) => Math.max(most, Math.abs(x), Math.abs(y)), 0);
    const gap = Math.hypot(first[0] / most - flatPoints[n - 2], first[1] / most - flatPoints[n - 1]);
    const closed = (field.whole(70, 0) & 1) !== 0 || gap <= size * WHOLE;
    lines(
      chainsOf((p) => {
        p.move(first[0] / most, first[1] / most);
        for (let i = 0; i < n - (gap <= size * WHOLE ? 2 : 0); i += 2)
          p.line(flatPoints[i], flatPoints[i + 1]);
        if (closed) p.close();
      }),
      0,
    );
  }

  function polyline(read: Polyline): void {
    for (const run of runsOf(read)) {
      if (run.width < 0) throw new BadShape('bad-number', `the width ${run.width} is below 0`);
      if (run.tapers) found.note('taper', place, 'a line that grows wider or narrower has its mean width');
      lines(chainsOf(run.draw), run.width);
    }
  }

  /** @param width  the drawing's unit; 0 for none */
  function lines(chains: Chain[], width: number): void {
    if (width > 0) {
      const [most, least] = stretches(here.matrix);
      if (most - least > ALIKE * most)
        found.note('uneven-stroke', place, 'a line stretched unevenly has the mean of its widths');
      stroke(chains, width * scale, 'butt', 'miter');
      return;
    }
    const closed = chains.filter((c) => c.closed);
    if (closed.length > 0) {
      found.note(
        'outline',
        place,
        'closed outlines without a width are taken as filled, one within another too: hatches can have holes',
      );
      region(closed, 'nonzero');
    }
    const open = chains.filter((c) => !c.closed);
    if (open.length === 0) return;
    found.note(
      'line-width',
      place,
      `lines without a width are taken to be ${options.lineWidth} mm wide, with round ends`,
    );
    stroke(open, options.lineWidth, 'round', 'round');
  }

  function stroke(chains: Chain[], width: number, ends: Ends, bends: Bends): void {
    for (const figure of strokesOf(chains, width, ends, bends, options.tolerance))
      put(figure, figure.kind === 'stroke' ? 'trace' : 'region');
  }

  function region(chains: Chain[], rule: Rule): void {
    const role = isPad(here.layer) || isPad(here.block) ? 'pad' : 'region';
    for (const figure of areasOf(chains, rule, walk.flat, walk.tangle)) put(figure, role);
  }

  function put(figure: Shape['figure'], role: Shape['role']): void {
    walk.shapes.push({ id: null, layer: here.layer, net: null, role, pin: null, figure, place });
  }
}

/** Radians, and shares of a size: what is open by less is closed, its ends rounded in the file. */
const WHOLE = 1e-9;
/** Stretches that differ by a smaller share are alike. */
const ALIKE = 1e-6;

const isPad = (name: string): boolean => /^pads?(?![a-z])/i.test(name);

/** A full turn is closed. */
function arcWith(arc: Arc): (pen: Pen) => void {
  return (pen) => {
    const begin = onArc(arc, arc.start);
    pen.move(...begin);
    if (2 * Math.PI - arc.sweep < WHOLE) {
      pen.arc(arc, ...begin);
      pen.close();
    } else pen.arc(arc, ...onArc(arc, arc.start + arc.sweep));
  };
}

function turn(ring: Float64Array): void {
  for (let i = 0, j = ring.length - 2; i < j; i += 2, j -= 2) {
    [ring[i], ring[j]] = [ring[j], ring[i]];
    [ring[i + 1], ring[j + 1]] = [ring[j + 1], ring[i + 1]];
  }
}
