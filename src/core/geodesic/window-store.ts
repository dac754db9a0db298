/** Flat, growing store of windows and the heap that orders them. No method here, only memory. */

/**
 * A window: the part of a half-edge that one root sees through one chain of faces.
 *
 * Local frame of half-edge a → b: a at (0, 0), b at (L, 0), the face about to be entered at y > 0.
 * `sx, sy` is the root's image in that frame (sy ≤ 0), and (cos, sin) the turn from the local frame to
 * the root's own frame: q = R (p - s). All windows of one root share that frame, so q is where the root
 * sees p: its polar coordinates for a point root, (foot, distance) for a segment root.
 */
export class WindowStore {
  count = 0;
  half = new Int32Array(256);
  root = new Int32Array(256);
  /** Window this one was cut from, -1 for the first of its root. */
  parent = new Int32Array(256);
  alive = new Uint8Array(256);
  /** Eight numbers a window: b0, b1, sx, sy, cos, sin, least distance, length of the edge. */
  num = new Float64Array(8 * 256);

  push(half: number, root: number, parent: number): number {
    const w = this.count++;
    if (w === this.half.length) this.grow();
    this.half[w] = half;
    this.root[w] = root;
    this.parent[w] = parent;
    this.alive[w] = 1;
    return w;
  }

  private grow(): void {
    const size = this.half.length * 2;
    const int = (old: Int32Array) => {
      const a = new Int32Array(size);
      a.set(old);
      return a;
    };
    this.half = int(this.half);
    this.root = int(this.root);
    this.parent = int(this.parent);
    const alive = new Uint8Array(size);
    alive.set(this.alive);
    this.alive = alive;
    const num = new Float64Array(8 * size);
    num.set(this.num);
    this.num = num;
  }
}

/** Binary heap of whole numbers by a key; equal keys leave in the order of their numbers, so runs repeat exactly. */
export class KeyHeap {
  size = 0;
  private items = new Int32Array(256);
  private keys = new Float64Array(256);

  /** Least key, Infinity when empty. */
  get least(): number {
    return this.size > 0 ? this.keys[0] : Infinity;
  }

  push(item: number, key: number): void {
    if (this.size === this.items.length) {
      const items = new Int32Array(this.size * 2);
      items.set(this.items);
      this.items = items;
      const keys = new Float64Array(this.size * 2);
      keys.set(this.keys);
      this.keys = keys;
    }
    const { items, keys } = this;
    let i = this.size++;
    while (i > 0) {
      const up = (i - 1) >> 1;
      if (keys[up] < key || (keys[up] === key && items[up] <= item)) break;
      keys[i] = keys[up];
      items[i] = items[up];
      i = up;
    }
    keys[i] = key;
    items[i] = item;
  }

  pop(): number {
    const { items, keys } = this;
    const top = items[0];
    const n = --this.size;
    const key = keys[n];
    const item = items[n];
    let i = 0;
    for (;;) {
      let child = 2 * i + 1;
      if (child >= n) break;
      const right = child + 1;
      if (
        right < n &&
        (keys[right] < keys[child] || (keys[right] === keys[child] && items[right] < items[child]))
      )
        child = right;
      if (key < keys[child] || (key === keys[child] && item <= items[child])) break;
      keys[i] = keys[child];
      items[i] = items[child];
      i = child;
    }
    keys[i] = key;
    items[i] = item;
    return top;
  }
}
