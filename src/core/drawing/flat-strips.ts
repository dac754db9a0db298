/** Edges of rings sorted into upright strips: those near an upright line, without looking at all. */

/** Enough for a drawing of millions of edges. */
const MOST_STRIPS = 1 << 16;

/** Calls for each edge of the strip at x: its ring, and where in the ring it begins. */
export type Near = (x: number, visit: (ring: number, corner: number) => void) => void;

/** @param rings  2 a point; strips are as wide as an edge is on average, so that an edge lies in two or three */
export function strips(rings: readonly Float64Array[]): Near {
  let [least, most, run, edges] = [Infinity, -Infinity, 0, 0];
  for (const r of rings)
    for (let i = 0; i < r.length; i += 2) {
      least = Math.min(least, r[i]);
      most = Math.max(most, r[i]);
      run += Math.abs(r[(i + 2) % r.length] - r[i]);
      edges++;
    }
  const n = Math.max(1, Math.min(edges, MOST_STRIPS, Math.floor(((most - least) * edges) / (run || 1))));
  const strip = (x: number): number =>
    Math.max(0, Math.min(n - 1, Math.floor((n * (x - least)) / (most - least || 1))));
  const first = new Int32Array(n + 1);
  const each = (visit: (s: number, ring: number, corner: number) => void): void => {
    rings.forEach((r, k) => {
      for (let i = 0; i < r.length; i += 2) {
        const a = strip(r[i]);
        const b = strip(r[(i + 2) % r.length]);
        for (let s = Math.min(a, b); s <= Math.max(a, b); s++) visit(s, k, i);
      }
    });
  };
  each((s) => first[s + 1]++);
  for (let s = 0; s < n; s++) first[s + 1] += first[s];
  const fill = first.slice();
  const ringAt = new Int32Array(first[n]);
  const cornerAt = new Int32Array(first[n]);
  each((s, ring, corner) => {
    ringAt[fill[s]] = ring;
    cornerAt[fill[s]++] = corner;
  });
  return (x, visit) => {
    const s = strip(x);
    for (let e = first[s]; e < first[s + 1]; e++) visit(ringAt[e], cornerAt[e]);
  };
}
