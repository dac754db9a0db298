/** The flat drawing beside the draped one: what each of its shapes looks like, and which one lies at a place of it. */
import type { Vec2 } from '../core/base/vec.ts';
import type { Drape, Limits } from '../core/project/schema.ts';
import type { CopperPicture, DrawingPicture, ElementPicture, FlatPicture } from '../worker/pictures.ts';
import { type StretchLook, stretchLook } from './drapes.ts';
import type { State } from './state.ts';

/** `not-laid`: nothing or not all of it lies on the part. `left-out`: the drape leaves its layer out. */
export type FlatLook = 'copper' | StretchLook | 'not-laid' | 'left-out' | 'pending';

export interface FlatRow {
  look: FlatLook;
  /** Element as laid; null where none is. */
  laid: ElementPicture | null;
}

/** A row for each shape of the drawing. */
export function flatRows(
  read: DrawingPicture,
  copper: CopperPicture,
  limits: Limits,
  stretchShown: boolean,
): FlatRow[] {
  const laid = new Map(copper.elements.filter((e) => e.drape === read.drape).map((e) => [e.id, e]));
  const broken = new Set(copper.findings.map((f) => f.element));
  return read.flat.ids.map((id): FlatRow => {
    if (id === null) return { look: 'left-out', laid: null };
    const e = laid.get(id) ?? null;
    if (!e) return { look: copper.pending > 0 ? 'pending' : 'not-laid', laid: null };
    if (broken.has(id)) return { look: 'not-laid', laid: e };
    const stretch = stretchLook(e.stretch, limits);
    // Without the stretch picture only what is beyond the limit stands out.
    return { look: stretchShown || stretch === 'too-much' ? stretch : 'copper', laid: e };
  });
}

/** Boxes of the shapes, lines with their width: 4 a shape, lower left and upper right. */
export function shapeBoxes({ shapes, points, ends }: FlatPicture): Float32Array {
  const out = new Float32Array(4 * shapes.length);
  shapes.forEach((s, i) => {
    const box = [Infinity, Infinity, -Infinity, -Infinity];
    for (let p = startOf(ends, s.first); p < startOf(ends, s.first + s.count); p++)
      for (const k of [0, 1] as const) {
        box[k] = Math.min(box[k]!, points[2 * p + k]! - s.width / 2);
        box[2 + k] = Math.max(box[2 + k]!, points[2 * p + k]! + s.width / 2);
      }
    out.set(box, 4 * i);
  });
  return out;
}

/** First point of a ring or line. */
export const startOf = (ends: Uint32Array, ring: number): number => (ring === 0 ? 0 : ends[ring - 1]!);

/** Box around some of the shapes; null for none. */
export function boxAround(boxes: Float32Array, shapes: Iterable<number>): [Vec2, Vec2] | null {
  let [lu, lv, hu, hv] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const i of shapes) {
    lu = Math.min(lu, boxes[4 * i]!);
    lv = Math.min(lv, boxes[4 * i + 1]!);
    hu = Math.max(hu, boxes[4 * i + 2]!);
    hv = Math.max(hv, boxes[4 * i + 3]!);
  }
  return lu > hu
    ? null
    : [
        [lu, lv],
        [hu, hv],
      ];
}

/**
 * @param within  mm that count as on it
 * @returns the shape at a place: the last drawn that holds it, else the nearest; -1 for none
 */
export function shapeAt(
  flat: FlatPicture,
  boxes: Float32Array,
  [u, v]: Vec2,
  within: number,
  may: (shape: number) => boolean,
): number {
  let [best, far] = [-1, within];
  for (let i = flat.shapes.length - 1; i >= 0; i--) {
    if (
      u < boxes[4 * i]! - within ||
      v < boxes[4 * i + 1]! - within ||
      u > boxes[4 * i + 2]! + within ||
      v > boxes[4 * i + 3]! + within ||
      !may(i)
    )
      continue;
    const d = distanceTo(flat, i, u, v);
    if (d <= 0) return i;
    if (d < far) [best, far] = [i, d];
  }
  return best;
}

/** Distance to a shape, mm; not above 0 inside. */
function distanceTo({ shapes, points, ends }: FlatPicture, shape: number, u: number, v: number): number {
  const { first, count, width, closed } = shapes[shape]!;
  let best = Infinity;
  let inside = false;
  for (let ring = first; ring < first + count; ring++) {
    const [from, to] = [startOf(ends, ring), ends[ring]!];
    for (let p = from; p < to; p++) {
      if (p === to - 1 && !closed) break;
      const q = p === to - 1 ? from : p + 1;
      const [au, av, bu, bv] = [points[2 * p]!, points[2 * p + 1]!, points[2 * q]!, points[2 * q + 1]!];
      const [eu, ev] = [bu - au, bv - av];
      const ee = eu * eu + ev * ev;
      const t = ee > 0 ? Math.max(0, Math.min(1, ((u - au) * eu + (v - av) * ev) / ee)) : 0;
      best = Math.min(best, Math.hypot(u - au - t * eu, v - av - t * ev));
      if (width === 0 && av > v !== bv > v && u < au + ((v - av) / ev) * eu) inside = !inside;
    }
  }
  return width > 0 ? best - width / 2 : inside ? -best : best;
}

/** The drape that something selected belongs to, in the order of the selection. */
export function drapeInHand(s: State): Drape | null {
  const drapes = s.project?.circuit.drapes ?? [];
  for (const id of s.selection) {
    const found = drapes.find((d) => id === d.id || id.startsWith(`${d.id}/`));
    if (found) return found;
  }
  return null;
}

/** Element under the pointer, on the part or in the flat drawing. */
export function pointedAt(s: State): string | null {
  if (s.pointed !== null) return s.pointed;
  return s.hover && s.hover.element >= 0 ? (s.copper?.value.elements[s.hover.element]?.id ?? null) : null;
}

/** A selection with one more, or with one less. */
export const toggled = (list: readonly string[], id: string): string[] =>
  list.includes(id) ? list.filter((x) => x !== id) : [...list, id];
