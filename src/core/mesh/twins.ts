/** Which facets share which edges. */

export interface Edges {
  /** Half-edge on the same edge in the other facet, whatever its direction; -1 where the edge has one facet or more than two. */
  partner: Int32Array;
  /** Edges with three facets or more. */
  crowded: number;
}

/** @param triangles  3 a facet, none with two equal vertices */
export function pairEdges(triangles: Uint32Array, vertices: number): Edges {
  const n = triangles.length;
  const partner = new Int32Array(n).fill(-1);
  // Half-edges in buckets by their lower vertex: a counting sort.
  const start = new Uint32Array(vertices + 1);
  const high = new Uint32Array(n);
  const low = new Uint32Array(n);
  for (let h = 0; h < n; h++) {
    const a = triangles[h];
    const b = triangles[h % 3 === 2 ? h - 2 : h + 1];
    low[h] = Math.min(a, b);
    high[h] = Math.max(a, b);
    start[low[h] + 1]++;
  }
  for (let v = 0; v < vertices; v++) start[v + 1] += start[v];
  const fill = start.slice(0, vertices);
  const bucket = new Uint32Array(n);
  for (let h = 0; h < n; h++) bucket[fill[low[h]]++] = h;
  let crowded = 0;
  for (let v = 0; v < vertices; v++) {
    const [from, to] = [start[v], start[v + 1]];
    if (to - from < 2) continue;
    sortByHigh(bucket, from, to, high);
    for (let i = from; i < to; ) {
      let j = i + 1;
      while (j < to && high[bucket[j]] === high[bucket[i]]) j++;
      if (j - i === 2) {
        partner[bucket[i]] = bucket[i + 1];
        partner[bucket[i + 1]] = bucket[i];
      } else if (j - i > 2) crowded++;
      i = j;
    }
  }
  return { partner, crowded };
}

/** By higher vertex, then by half-edge. Insertion for the usual few, the library's sort for the hub of a fan. */
function sortByHigh(bucket: Uint32Array, from: number, to: number, high: Uint32Array): void {
  if (to - from > 32) {
    bucket.subarray(from, to).sort((a, b) => high[a] - high[b] || a - b);
    return;
  }
  for (let i = from + 1; i < to; i++) {
    const h = bucket[i];
    let j = i - 1;
    while (j >= from && high[bucket[j]] > high[h]) {
      bucket[j + 1] = bucket[j];
      j--;
    }
    bucket[j + 1] = h;
  }
}
