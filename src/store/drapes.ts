/** What the window tells about a drawing on the part: sums over its copper, and where it is stretched most. */
import type { Vec3 } from '../core/base/vec.ts';
import type { Drape, Limits, Project } from '../core/project/schema.ts';
import type { CopperPicture, ElementPicture } from '../worker/pictures.ts';

/** Width of lines that have none in their file, mm, where the drape says no other: as the readers take it. */
export const LINE_WIDTH = 0.5;

export interface DrapeSums {
  elements: ElementPicture[];
  /** Lines on the surface, mm. */
  length: number;
  /** mm² */
  area: number;
  /** The element that is stretched most; null while nothing is laid. */
  worst: ElementPicture | null;
}

export function drapeSums(copper: CopperPicture | null, id: string): DrapeSums {
  const elements = (copper?.elements ?? []).filter((e) => e.drape === id);
  return {
    elements,
    length: elements.reduce((n, e) => n + (e.kind === 'trace' ? e.length : 0), 0),
    area: elements.reduce((n, e) => n + e.area, 0),
    worst: elements.reduce<ElementPicture | null>((w, e) => (w && w.stretch >= e.stretch ? w : e), null),
  };
}

/** Normal of the copper nearest to a place, part frame: where to look at it from. */
export function normalNear(copper: CopperPicture, e: ElementPicture, at: Vec3): Vec3 {
  const { positions: x, normals: n, corners } = copper;
  let [best, far] = [-1, Infinity];
  for (let i = 3 * e.first; i < 3 * (e.first + e.count); i++) {
    const o = 3 * corners[i]!;
    const d = Math.hypot(x[o]! - at[0], x[o + 1]! - at[1], x[o + 2]! - at[2]);
    if (d < far) [best, far] = [o, d];
  }
  return best < 0 ? [0, 0, 1] : [n[best]!, n[best + 1]!, n[best + 2]!];
}

/** The drape that alone is selected. */
export const selectedDrape = (project: Project | null, selection: readonly string[]): Drape | null =>
  selection.length === 1 ? (project?.circuit.drapes.find((d) => d.id === selection[0]) ?? null) : null;

/** How much a stretch is, in the words of the legend. */
export const STRETCHES = ['little', 'some', 'much', 'too-much'] as const;
export type StretchLook = (typeof STRETCHES)[number];

export interface StretchRow {
  look: StretchLook | 'drawn-here';
  words: string;
  elements: ElementPicture[];
  /** mm² */
  area: number;
}

/** Rows of the legend: every look of a stretch, and the copper that no drawing has. */
export function stretchRows(copper: CopperPicture, limits: Limits): StretchRow[] {
  const percent = (x: number) => `${Number((100 * x).toFixed(2))}`;
  const [half, safe, most] = [limits.safeStretch / 2, limits.safeStretch, limits.maxStretch].map(percent);
  const words: Record<StretchRow['look'], string> = {
    little: `up to ${half} %`,
    some: `${half} to ${safe} %, safe`,
    much: `${safe} to ${most} %`,
    'too-much': `more than ${most} %`,
    'drawn-here': 'Not from a drawing',
  };
  return ([...STRETCHES, 'drawn-here'] as const).map((look) => {
    const elements = copper.elements.filter(
      (e) => (e.drape === null ? 'drawn-here' : stretchLook(e.stretch, limits)) === look,
    );
    return { look, words: words[look], elements, area: elements.reduce((n, e) => n + e.area, 0) };
  });
}

/** Half the safe stretch, the safe one and the most allowed part the looks. */
export function stretchLook(stretch: number, limits: Limits): StretchLook {
  if (stretch > limits.maxStretch) return 'too-much';
  if (stretch > limits.safeStretch) return 'much';
  return stretch > limits.safeStretch / 2 ? 'some' : 'little';
}
