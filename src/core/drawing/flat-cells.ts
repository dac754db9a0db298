/**
 * Edges of rings sorted into square cells: those that come near a point, without looking at all. Cells are kept by a hash of
 * their column and row (M. Teschner et al., Vision, Modeling, Visualization 2003): outlines fill few of the cells of a plane.
 */

/** Calls for each edge that comes near (x, y), for others and for some twice: its ring, and where in the ring it begins. */
export type NearPoint = (x: number, y: number, visit: (ring: number, corner: number) => void) => void;

/**
 * @param rings  2 a point; cells are about as wide as an edge is long, so that an edge lies in a few
 * @param reach  edges this near to a cell are in it too
 */
export function cells(rings: readonly Float64Array[], reach: number): NearPoint {
  let [run, edges] = [0, 0];
  for (const r of rings)
    for (let i = 0; i < r.length; i += 2) {
      const j = (i + 2) % r.length;
      run += Math.hypot(r[j] - r[i], r[j + 1] - r[i + 1]);
      edges++;
    }
  const side = Math.max(run / edges, 4 * reach);
  const mask = 2 ** Math.ceil(Math.log2(2 * edges + 1)) - 1;
  const column = (x: number): number => Math.floor(x / side);
  const bucket = (c: number, r: number): number =>
    (Math.imul(c | 0, 73856093) ^ Math.imul(r | 0, 19349663)) & mask;
  const each = (visit: (cell: number, ring: number, corner: number) => void): void => {
    rings.forEach((r, k) => {
      for (let i = 0; i < r.length; i += 2) {
        const j = (i + 2) % r.length;
        const swap = r[j] < r[i];
        const [ax, ay] = swap ? [r[j], r[j + 1]] : [r[i], r[i + 1]];
        const [bx, by] = swap ? [r[i], r[i + 1]] : [r[j], r[j + 1]];
        const [low, high] = [Math.min(ay, by), Math.max(ay, by)];
        const first = column(ax - reach);
        const last = column(bx + reach);
        for (let c = first; c <= last; c++) {
          // The edge's heights between the column's sides, and a little beyond.
          const at = (x: number): number =>
            bx > ax ? Math.max(low, Math.min(high, ay + ((x - ax) * (by - ay)) / (bx - ax))) : ay;
          const [u, v] =
            first === last || bx === ax ? [low, high] : [at(c * side - reach), at((c + 1) * side + reach)];
          const to = column(Math.max(u, v) + 2 * reach);
          for (let w = column(Math.min(u, v) - 2 * reach); w <= to; w++) visit(bucket(c, w), k, i);
        }
      }
    });
  };
  const first = new Int32Array(mask + 2);
  each((cell) => first[cell + 1]++);
  for (let c = 0; c <= mask; c++) first[c + 1] += first[c];
  const fill = first.slice();
  const ringAt = new Int32Array(first[mask + 1]);
  const cornerAt = new Int32Array(first[mask + 1]);
  each((cell, ring, corner) => {
    ringAt[fill[cell]] = ring;
    cornerAt[fill[cell]++] = corner;
  });
  return (x, y, visit) => {
    const cell = bucket(column(x), column(y));
    for (let e = first[cell]; e < first[cell + 1]; e++) visit(ringAt[e], cornerAt[e]);
  };
}
