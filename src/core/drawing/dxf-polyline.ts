/** LWPOLYLINE and POLYLINE: vertices with bulges and widths, cut into runs of one width. */
import { bulgeArc } from './dxf-curves.ts';
import { type Entity, fieldsOf, numberOf } from './dxf-groups.ts';
import type { Pen } from './flatten.ts';

export interface Vertex {
  x: number;
  y: number;
  bulge: number;
  /** Of the piece that begins here, in the drawing's unit; 0 for a line without width. */
  startWidth: number;
  endWidth: number;
}

export interface Polyline {
  vertices: Vertex[];
  closed: boolean;
}

/** @throws BadShape `bad-number` */
export function lightPolyline(entity: Entity): Polyline {
  const field = fieldsOf(entity);
  const constant = field.number(43, 0);
  const vertices: Vertex[] = [];
  entity.codes.forEach((code, i) => {
    if (code === 10) vertices.push({ x: 0, y: 0, bulge: 0, startWidth: constant, endWidth: constant });
    const last = vertices[vertices.length - 1];
    if (!last) return;
    const name = VERTEX_CODES[code];
    if (name) last[name] = numberOf(entity.values[i], code);
  });
  return { vertices, closed: (field.whole(70, 0) & 1) === 1 };
}

const VERTEX_CODES: Record<number, keyof Vertex> = {
  10: 'x',
  20: 'y',
  40: 'startWidth',
  41: 'endWidth',
  42: 'bulge',
};

/**
 * @returns null for meshes, which are no lines
 * @throws BadShape `bad-number`
 */
export function heavyPolyline(entity: Entity): Polyline | null {
  const field = fieldsOf(entity);
  const flags = field.whole(70, 0);
  if ((flags & (MESH | FACES)) !== 0) return null;
  const [start, end] = [field.number(40, 0), field.number(41, 0)];
  const vertices: Vertex[] = [];
  for (const part of entity.parts) {
    const of = fieldsOf(part);
    if (part.type !== 'VERTEX' || (of.whole(70, 0) & FRAME) !== 0) continue;
    vertices.push({
      x: of.number(10),
      y: of.number(20),
      bulge: of.number(42, 0),
      startWidth: of.number(40, start),
      endWidth: of.number(41, end),
    });
  }
  return { vertices, closed: (flags & 1) === 1 };
}

const MESH = 16;
const FACES = 64;
/** A vertex that only holds a curve's frame. */
const FRAME = 16;

export interface Run {
  /** The drawing's unit; 0 for a line without width. */
  width: number;
  /** A piece of it grows or shrinks. */
  tapers: boolean;
  draw(pen: Pen): void;
}

/** Runs of pieces of one width, a tapered one counted with its mean; a closed polyline of one width is one closed run. */
export function runsOf({ vertices, closed }: Polyline): Run[] {
  const n = vertices.length;
  const pieces = closed && n > 1 ? n : n - 1;
  const width = (i: number): number => (vertices[i].startWidth + vertices[i].endWidth) / 2;
  const runs: Run[] = [];
  let from = 0;
  while (from < pieces) {
    let to = from + 1;
    while (to < pieces && width(to) === width(from)) to++;
    const [a, b] = [from, to];
    const whole = closed && a === 0 && b === pieces;
    runs.push({
      width: width(a),
      tapers: vertices.slice(a, b).some((v) => v.startWidth !== v.endWidth),
      draw(pen) {
        pen.move(vertices[a].x, vertices[a].y);
        for (let i = a; i < b; i++) {
          const [p, q] = [vertices[i], vertices[(i + 1) % n]];
          if (p.bulge !== 0 && (p.x !== q.x || p.y !== q.y))
            pen.arc(bulgeArc([p.x, p.y], [q.x, q.y], p.bulge), q.x, q.y);
          else pen.line(q.x, q.y);
        }
        if (whole) pen.close();
      },
    });
    from = to;
  }
  return runs;
}
