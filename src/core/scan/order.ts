/**
 * Order and direction of strokes that keep jumps short: nearest neighbour over both ends of open strokes
 * (D. Rosenkrantz, R. Stearns, P. Lewis, "An analysis of several heuristics for the traveling salesman problem",
 * SIAM J. Comput. 6 (1977) 563), on a grid so that it costs little more than linear time.
 */

export interface Ordered {
  index: number;
  reversed: boolean;
}

/**
 * @param ends    x, y of the first and last point of each stroke, 4 numbers each
 * @param closed  whether a stroke ends where it starts; it is not turned round
 * @param start   where the beam stands before
 */
export function orderStrokes(ends: Float64Array, start: readonly [number, number]): Ordered[] {
  const n = ends.length / 4;
  if (n === 0) return [];
  let x0 = Infinity,
    y0 = Infinity,
    x1 = -Infinity,
    y1 = -Infinity;
  for (let i = 0; i < 2 * n; i++) {
    x0 = Math.min(x0, ends[2 * i]);
    x1 = Math.max(x1, ends[2 * i]);
    y0 = Math.min(y0, ends[2 * i + 1]);
    y1 = Math.max(y1, ends[2 * i + 1]);
  }
  const cell = Math.max(Math.sqrt(((x1 - x0) * (y1 - y0)) / n), (x1 - x0 + y1 - y0) / (2 * n), 1e-6);
  const nx = Math.floor((x1 - x0) / cell) + 1;
  const ny = Math.floor((y1 - y0) / cell) + 1;
  const col = (x: number) => Math.min(nx - 1, Math.max(0, Math.floor((x - x0) / cell)));
  const row = (y: number) => Math.min(ny - 1, Math.max(0, Math.floor((y - y0) / cell)));
  // Ends as linked lists, one a cell; end 2 i is the first point of stroke i, 2 i + 1 its last.
  const head = new Int32Array(nx * ny).fill(-1);
  const following = new Int32Array(2 * n).fill(-1);
  const left = new Int32Array(nx * ny);
  for (let e = 2 * n - 1; e >= 0; e--) {
    const c = row(ends[2 * e + 1]) * nx + col(ends[2 * e]);
    following[e] = head[c];
    head[c] = e;
    left[c]++;
  }
  const done = new Uint8Array(n);
  const out: Ordered[] = [];
  let [px, py] = start;
  for (let k = 0; k < n; k++) {
    let best = -1;
    let nearest = Infinity;
    const look = (i: number, j: number) => {
      if (i < 0 || j < 0 || i >= nx || j >= ny) return;
      const c = j * nx + i;
      if (left[c] === 0) return;
      let before = -1;
      for (let e = head[c]; e >= 0; e = following[e]) {
        if (done[e >> 1]) {
          // Strokes already written leave the list.
          if (before < 0) head[c] = following[e];
          else following[before] = following[e];
          left[c]--;
          continue;
        }
        before = e;
        const d = (ends[2 * e] - px) ** 2 + (ends[2 * e + 1] - py) ** 2;
        if (d < nearest || (d === nearest && e < best)) {
          nearest = d;
          best = e;
        }
      }
    };
    const ci = col(px),
      cj = row(py);
    const most = Math.max(nx, ny);
    for (let r = 0; r <= most; r++) {
      // Nothing in ring r or beyond is nearer than (r - 1) cells.
      if (best >= 0 && nearest <= (Math.max(0, r - 1) * cell) ** 2) break;
      if (r === 0) look(ci, cj);
      else {
        for (let i = ci - r; i <= ci + r; i++) {
          look(i, cj - r);
          look(i, cj + r);
        }
        for (let j = cj - r + 1; j < cj + r; j++) {
          look(ci - r, j);
          look(ci + r, j);
        }
      }
    }
    const i = best >> 1;
    const reversed =
      (best & 1) === 1 && !(ends[4 * i] === ends[4 * i + 2] && ends[4 * i + 1] === ends[4 * i + 3]);
    done[i] = 1;
    out.push({ index: i, reversed });
    px = reversed ? ends[4 * i] : ends[4 * i + 2];
    py = reversed ? ends[4 * i + 1] : ends[4 * i + 3];
  }
  return out;
}
