/** A drawing as it was drawn, thinned to what a panel of the window can show: made once for each reading of a file. */
import { elementIds } from '../core/drape/drape-drawing.ts';
import type { Drawing } from '../core/drawing/drawing.ts';
import type { Drape } from '../core/project/schema.ts';
import { boxOf } from './held-drawings.ts';
import type { FlatPicture } from './pictures.ts';
import { thinnedIn } from './thin.ts';

/** Lines may stray by this share of the drawing's size: half a pixel at four times the whole in a panel of 500. */
const SEEN_SHARE = 1 / 4000;
/** Points that a panel redraws at once; a drawing with more of them is thinned further. */
const MOST_POINTS = 120_000;

/** Points that are thinned together. */
const STRETCH = 64;

type Thin = Omit<FlatPicture, 'key' | 'ids'>;
const known = new WeakMap<Drawing, Thin>();

/** @param key  tells this reading of the file from others */
export function flatPicture(drawing: Drawing, drape: Drape, key: string): FlatPicture {
  let thin = known.get(drawing);
  if (!thin) {
    thin = thinDrawing(drawing);
    known.set(drawing, thin);
  }
  return {
    key: `${key} ${JSON.stringify([drape.id, drape.drawingLayers])}`,
    ids: elementIds(drape, drawing),
    box: thin.box,
    shapes: thin.shapes,
    // Handed over with the message: the copy kept here stays.
    points: thin.points.slice(),
    ends: thin.ends.slice(),
    holes: thin.holes.slice(),
  };
}

function thinDrawing(drawing: Drawing): Thin {
  const box = boxOf(drawing);
  const size = box ? Math.max(box[1][0] - box[0][0], box[1][1] - box[0][1]) : 0;
  const figures = drawing.shapes.map(({ figure }) => ({
    rings: figure.kind === 'stroke' ? [figure.points] : figure.rings,
    round: figure.kind === 'area' || figure.closed,
  }));
  const counts = figures.map((f) => f.rings.length);
  let rings: (Float32Array | Float64Array)[] = figures.flatMap((f) => f.rings);
  const round = figures.flatMap((f) => f.rings.map(() => f.round));
  for (let stray = size * SEEN_SHARE; stray > 0 && stray <= size; stray *= 3) {
    rings = rings.map((ring, i) => thinRing(ring, round[i], stray));
    if (rings.reduce((n, r) => n + r.length / 2, 0) <= MOST_POINTS) break;
  }
  const points = new Float32Array(rings.reduce((n, r) => n + r.length, 0));
  const ends = new Uint32Array(rings.length);
  let at = 0;
  rings.forEach((ring, i) => {
    points.set(ring, at);
    at += ring.length;
    ends[i] = at / 2;
  });
  let first = 0;
  const shapes = drawing.shapes.map(({ id, layer, net, figure }, i) => {
    const shape = {
      name: id,
      layer,
      net,
      first,
      count: counts[i],
      ...(figure.kind === 'stroke'
        ? { width: figure.width, closed: figure.closed, ends: figure.ends, bends: figure.bends }
        : { width: 0, closed: true, ends: 'butt' as const, bends: 'miter' as const }),
    };
    first += counts[i];
    return shape;
  });
  const holes = new Float32Array(5 * drawing.holes.length);
  drawing.holes.forEach((h, i) => {
    holes.set([...h.at, ...h.to, h.diameter], 5 * i);
  });
  return { box, shapes, points, ends, holes };
}

/** A ring keeps its first point twice while it is thinned, so that its ends stay where they are. */
function thinRing(
  points: Float32Array | Float64Array,
  round: boolean,
  stray: number,
): Float32Array | Float64Array {
  const line = round ? [...points, points[0], points[1]] : points;
  const kept: number[] = [];
  const near = apart(line, stray / 2);
  // In stretches, so that a line on which each point stands out takes no more than its length.
  for (let i = 0; i < near.length - 2; i += 2 * STRETCH) {
    const thin = thinnedIn(2, near.slice(i, i + 2 * STRETCH + 2), stray / 2);
    for (let k = i === 0 ? 0 : 2; k < thin.length; k++) kept.push(thin[k]);
  }
  if (!round) return Float32Array.from(kept);
  // What is smaller than can be seen keeps its first corners, and so a place.
  return kept.length < 8 ? points.slice(0, 6) : Float32Array.from(kept.slice(0, -2));
}

/** Points of a line that stand apart from the one before, and its last. */
function apart(line: ArrayLike<number>, by: number): number[] {
  const out = [line[0], line[1]];
  for (let i = 2; i < line.length; i += 2) {
    const o = out.length;
    const last = i === line.length - 2;
    if (last || Math.hypot(line[i] - out[o - 2], line[i + 1] - out[o - 1]) > by)
      out.push(line[i], line[i + 1]);
  }
  return out;
}
