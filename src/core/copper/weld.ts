/** Vertices that places nearer than a tolerance share: a grid of cells, each place asking the eight around it. */

export class Weld {
  /** Part frame, mm, 3 a vertex: where the first place of each lies. */
  readonly positions: number[] = [];
  private readonly cells = new Map<number, number[]>();
  private readonly tolerance: number;
  private readonly cell: number;

  /** @param tolerance  mm */
  constructor(tolerance: number) {
    this.tolerance = tolerance;
    this.cell = 2 * tolerance;
  }

  /** @returns the nearest vertex within the tolerance, or a new one */
  vertex(x: number, y: number, z: number): number {
    const { cell, tolerance, positions } = this;
    const [i, j, k] = [x, y, z].map((c) => Math.floor(c / cell - 0.5));
    let best = -1;
    let least = tolerance;
    for (let n = 0; n < 8; n++)
      for (const v of this.cells.get(key(i + (n & 1), j + ((n >> 1) & 1), k + (n >> 2))) ?? []) {
        const d = Math.hypot(positions[3 * v] - x, positions[3 * v + 1] - y, positions[3 * v + 2] - z);
        if (d < least || (d === least && best < 0)) {
          least = d;
          best = v;
        }
      }
    if (best >= 0) return best;
    best = positions.length / 3;
    positions.push(x, y, z);
    const home = key(Math.floor(x / cell), Math.floor(y / cell), Math.floor(z / cell));
    const list = this.cells.get(home);
    if (list) list.push(best);
    else this.cells.set(home, [best]);
    return best;
  }
}

/** Cells that share a number do no harm: distances decide. */
const key = (i: number, j: number, k: number): number =>
  (Math.imul(i, 73856093) ^ Math.imul(j, 19349663) ^ Math.imul(k, 83492791)) >>> 0;
