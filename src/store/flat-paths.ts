/** Shapes of a flat drawing as few paths of a page: those that look the same are one. Numbers mm, v up. */
import type { FlatPicture } from '../worker/pictures.ts';
import { type FlatLook, type FlatRow, startOf } from './flat.ts';

export interface Figures {
  key: string;
  look: FlatLook;
  /** Line width, mm; 0 for areas. */
  width: number;
  cap: 'round' | 'square' | 'butt';
  join: 'round' | 'miter' | 'bevel';
  d: string;
}

/** Kinds of lines that are told apart; a drawing with more widths has them rounded. */
const MOST_KINDS = 400;

/** @param shapes  which of them, in the order in which they are drawn */
export function figuresOf(flat: FlatPicture, rows: readonly FlatRow[], shapes: readonly number[]): Figures[] {
  for (let grain = 0.0005; ; grain *= 2) {
    const kinds = new Map<string, { first: Figures; parts: string[] }>();
    for (const i of shapes) {
      const { look } = rows[i]!;
      const s = flat.shapes[i]!;
      const width = s.width > 0 ? Math.max(grain, Math.round(s.width / grain) * grain) : 0;
      const key = `${look} ${width.toFixed(4)} ${s.ends} ${s.bends}`;
      let kind = kinds.get(key);
      if (!kind) {
        if (kinds.size === MOST_KINDS) break;
        kind = { first: { key, look, width, cap: s.ends, join: s.bends, d: '' }, parts: [] };
        kinds.set(key, kind);
      }
      for (let ring = s.first; ring < s.first + s.count; ring++)
        kind.parts.push(ringPath(flat, ring, s.closed));
    }
    if (kinds.size < MOST_KINDS || grain > 1e3)
      return [...kinds.values()].map(({ first, parts }) => ({ ...first, d: parts.join('') }));
  }
}

function ringPath({ points, ends }: FlatPicture, ring: number, closed: boolean): string {
  const out: string[] = [];
  for (let p = startOf(ends, ring); p < ends[ring]!; p++)
    out.push(`${out.length === 0 ? 'M' : 'L'}${short(points[2 * p]!)} ${short(points[2 * p + 1]!)}`);
  return out.join('') + (closed ? 'Z' : '');
}

const short = (x: number): number => Math.round(x * 1e4) / 1e4;

/** Drilled holes as rings, slots with round ends. */
export function holesPath(holes: Float32Array): string {
  let d = '';
  for (let i = 0; i < holes.length; i += 5) {
    const [au, av, bu, bv, diameter] = holes.subarray(i, i + 5) as unknown as [
      number,
      number,
      number,
      number,
      number,
    ];
    const r = diameter / 2;
    const far = Math.hypot(bu - au, bv - av);
    const [nu, nv] = far > 0 ? [(-(bv - av) / far) * r, ((bu - au) / far) * r] : [0, r];
    const arc = `A${short(r)} ${short(r)} 0 0 1 `;
    d += `M${short(au + nu)} ${short(av + nv)}${arc}${short(au - nu)} ${short(av - nv)}`;
    d += `L${short(bu - nu)} ${short(bv - nv)}${arc}${short(bu + nu)} ${short(bv + nv)}Z`;
  }
  return d;
}
