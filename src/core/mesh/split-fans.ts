import { previous } from './surface-mesh.ts';

/**
 * Gives each fan of faces a vertex of its own, in place in `triangles`: where fans meet that share no edge (two cones tip
 * to tip, a sheet pinched in one point), a vertex in common would let distances leak from one to the other, though no way
 * over the surface leads through a point.
 *
 * @param positions  3 a vertex
 * @param twin       half-edges as in `SurfaceMesh`
 * @returns positions with those of the new vertices after the old ones; the same array where there are none
 */
export function splitFans(positions: Float64Array, triangles: Uint32Array, twin: Int32Array): Float64Array {
  const count = positions.length / 3;
  const claimed = new Uint8Array(count);
  const seen = new Uint8Array(triangles.length);
  const copies: number[] = [];
  for (let h = 0; h < triangles.length; h++) {
    if (seen[h]) continue;
    const v = triangles[h];
    const number = claimed[v] ? count + copies.push(v) - 1 : v;
    claimed[v] = 1;
    // Round the vertex to the left, and to the right where a border stops the walk.
    let k = h;
    do {
      seen[k] = 1;
      triangles[k] = number;
      k = twin[previous(k)];
    } while (k >= 0 && k !== h);
    if (k >= 0) continue;
    for (let t = twin[h]; t >= 0; ) {
      k = t % 3 === 2 ? t - 2 : t + 1;
      if (seen[k]) break;
      seen[k] = 1;
      triangles[k] = number;
      t = twin[k];
    }
  }
  if (copies.length === 0) return positions;
  const all = new Float64Array(positions.length + 3 * copies.length);
  all.set(positions);
  copies.forEach((v, i) => {
    all.set(positions.subarray(3 * v, 3 * v + 3), positions.length + 3 * i);
  });
  return all;
}
