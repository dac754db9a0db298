/** Flat segments in a tree of boxes: which one is nearest to a point, in about log n steps. */

export interface NearestSegment {
  /** Number of the segment, in the order given. */
  index: number;
  /** Where on it: 0 at its start, 1 at its end. */
  share: number;
  /** mm */
  distance: number;
}

/** Segments in a row lie near each other: the tree halves their order, so that building it needs no sorting. */
export class SegmentTree {
  /** 4 a segment: from u, v, to u, v. */
  private readonly ends: Float64Array;
  /** 4 a node, in the order of a complete binary tree over leaves of `LEAF` segments. */
  private readonly boxes: Float64Array;
  private readonly leaves: number;

  /** @param ends  4 a segment: from u, v, to u, v; at least one */
  constructor(ends: Float64Array) {
    this.ends = ends;
    const count = Math.ceil(ends.length / 4 / LEAF);
    this.leaves = 2 ** Math.ceil(Math.log2(Math.max(1, count)));
    this.boxes = new Float64Array(8 * this.leaves);
    for (let node = 2 * this.leaves - 1; node >= 1; node--) {
      const b = 4 * node;
      let [lu, lv, hu, hv] = [Infinity, Infinity, -Infinity, -Infinity];
      if (node >= this.leaves) {
        const from = 4 * LEAF * (node - this.leaves);
        for (let i = from; i < Math.min(from + 4 * LEAF, ends.length); i += 2) {
          lu = Math.min(lu, ends[i]);
          hu = Math.max(hu, ends[i]);
          lv = Math.min(lv, ends[i + 1]);
          hv = Math.max(hv, ends[i + 1]);
        }
      } else {
        lu = Math.min(this.boxes[2 * b], this.boxes[2 * b + 4]);
        lv = Math.min(this.boxes[2 * b + 1], this.boxes[2 * b + 5]);
        hu = Math.max(this.boxes[2 * b + 2], this.boxes[2 * b + 6]);
        hv = Math.max(this.boxes[2 * b + 3], this.boxes[2 * b + 7]);
      }
      this.boxes[b] = lu;
      this.boxes[b + 1] = lv;
      this.boxes[b + 2] = hu;
      this.boxes[b + 3] = hv;
    }
  }

  /** Of equally near ones the first. */
  nearest(u: number, v: number): NearestSegment {
    const { ends } = this;
    let best = Infinity;
    let index = 0;
    let share = 0;
    const stack = [1];
    while (stack.length > 0) {
      const node = stack.pop()!;
      if (this.boxDistance(node, u, v) > best) continue;
      if (node >= this.leaves) {
        const from = LEAF * (node - this.leaves);
        for (let i = from; i < Math.min(from + LEAF, ends.length / 4); i++) {
          const a = 4 * i;
          const eu = ends[a + 2] - ends[a];
          const ev = ends[a + 3] - ends[a + 1];
          const pu = u - ends[a];
          const pv = v - ends[a + 1];
          const ee = eu * eu + ev * ev;
          const t = ee > 0 ? Math.max(0, Math.min(1, (pu * eu + pv * ev) / ee)) : 0;
          const d = (pu - t * eu) ** 2 + (pv - t * ev) ** 2;
          if (d < best || (d === best && i < index)) {
            best = d;
            index = i;
            share = t;
          }
        }
        continue;
      }
      // The nearer child last, so that it is looked at first.
      const [near, far] =
        this.boxDistance(2 * node, u, v) <= this.boxDistance(2 * node + 1, u, v)
          ? [2 * node, 2 * node + 1]
          : [2 * node + 1, 2 * node];
      stack.push(far, near);
    }
    return { index, share, distance: Math.sqrt(best) };
  }

  /** Least u, v, most u, v of all segments. */
  get bounds(): readonly [number, number, number, number] {
    return [this.boxes[4], this.boxes[5], this.boxes[6], this.boxes[7]];
  }

  /** Square of the distance to a node's box. */
  private boxDistance(node: number, u: number, v: number): number {
    const b = 4 * node;
    const du = Math.max(this.boxes[b] - u, 0, u - this.boxes[b + 2]);
    const dv = Math.max(this.boxes[b + 1] - v, 0, v - this.boxes[b + 3]);
    return du * du + dv * dv;
  }
}

const LEAF = 4;
