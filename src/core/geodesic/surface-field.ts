/** Reading a finished propagation anywhere on the surface: who sees a place, from how far, and where. */
import type { Vec3 } from '../base/vec.ts';
import { faceOf } from '../mesh/surface-mesh.ts';
import { type Root, rootDistance } from './roots.ts';
import type { WindowSolver } from './windows.ts';

/** Windows that rounding left a hair apart are widened by this share of the edge before a place counts as unseen. */
const CRACK = 1e-5;

export interface Seen {
  /** Distance over the surface from the source, mm. */
  distance: number;
  /** Coordinates in the root's frame: polar for a point, (foot, signed distance) for a segment. */
  qx: number;
  qy: number;
  root: Root;
}

/** Answers for the run that the solver holds now; the solver must not run again while it is used. */
export class SurfaceField {
  /** Faces that any window or root looks into, ascending. */
  readonly faces: Int32Array;
  private readonly solver: WindowSolver;
  private readonly slot = new Map<number, number>();
  private readonly first: Int32Array;
  private readonly items: Int32Array;

  constructor(solver: WindowSolver) {
    this.solver = solver;
    const { windows, roots } = solver;
    const seen = new Set<number>();
    for (let w = 0; w < windows.count; w++) if (windows.alive[w]) seen.add(faceOf(windows.half[w]));
    for (const r of roots) seen.add(r.face);
    this.faces = Int32Array.from(seen).sort();
    this.faces.forEach((f, i) => {
      this.slot.set(f, i);
    });
    // Counting sort of windows (w) and roots (-1 - r) by face.
    const count = new Int32Array(this.faces.length + 1);
    const each = (use: (face: number, item: number) => void) => {
      roots.forEach((r, i) => {
        use(r.face, -1 - i);
      });
      for (let w = 0; w < windows.count; w++) if (windows.alive[w]) use(faceOf(windows.half[w]), w);
    };
    each((f) => count[this.slot.get(f)! + 1]++);
    for (let i = 1; i < count.length; i++) count[i] += count[i - 1];
    this.first = count.slice();
    this.items = new Int32Array(count[count.length - 1]);
    each((f, item) => {
      this.items[count[this.slot.get(f)!]++] = item;
    });
    // Nearest first, so that a look can stop at the first window that starts beyond what is found.
    for (let i = 0; i < this.faces.length; i++)
      this.items
        .subarray(this.first[i], this.first[i + 1])
        .sort((a, b) => this.least(a) - this.least(b) || a - b);
  }

  /** Least distance that a window can see; roots are looked at first. */
  private least(item: number): number {
    return item < 0 ? -1 : this.solver.windows.num[8 * item + 6];
  }

  /**
   * Nearest view of `p`, which must lie in `face` or on its rim.
   * @returns null where nothing sees it within its radius
   */
  nearest(face: number, p: Vec3): Seen | null {
    const i = this.slot.get(face);
    if (i === undefined) return null;
    return this.look(i, p) ?? this.look(i, p, CRACK);
  }

  private look(i: number, p: Vec3, tolerance?: number): Seen | null {
    const { solver } = this;
    let best: Seen | null = null;
    for (let k = this.first[i]; k < this.first[i + 1]; k++) {
      const item = this.items[k];
      if (best && this.least(item) >= best.distance) break;
      const root = solver.roots[item < 0 ? -1 - item : solver.windows.root[item]];
      const q = item < 0 ? solver.inRoot(root, p) : solver.look(item, p, tolerance);
      if (!q) continue;
      const distance = rootDistance(root, q[0], q[1]);
      if (distance < (best ? best.distance : Infinity)) best = { distance, qx: q[0], qy: q[1], root };
    }
    return best;
  }
}

/** Polar angle, radians in (-π, π], at which a point source sees the place. Radii are `distance`. */
export function polarAngle(seen: Seen): number {
  const { root } = seen;
  const a = root.vertex >= 0 ? root.bearing : (root.offset + Math.atan2(seen.qy, seen.qx)) * root.scale;
  return a - 2 * Math.PI * Math.ceil((a - Math.PI) / (2 * Math.PI));
}
