/** How narrow a sheet gets for the current through it: the shortest line across which the current must pass. */
import type { IntrinsicMesh } from './intrinsic.ts';

/** Levels of the potential that are told apart: what differs by less is rounding, as where no current flows. */
const LEVELS = 2 ** 30;

/**
 * Least length, mm, over all levels of a potential that is linear in each triangle. In a triangle the length of a level line
 * grows linearly from the least corner to the middle one and falls to the greatest, so that the sum over all triangles bends
 * at corners' potentials only, and is least at one of them. No line is shorter than the narrowest place between the electrodes,
 * as each parts them.
 * @param u     of each vertex, from 0 at the one electrode to `high` at the other; beyond them only as far as a solution by
 *              finite elements shoots over at obtuse corners on the outline
 */
export function narrowestLine(mesh: IntrinsicMesh, u: Float64Array, high: number): number {
  const level = u.map((x) => Math.round(Math.min(1, Math.max(0, x / high)) * LEVELS) / LEVELS);
  // At each vertex the sum changes its slope, and jumps where a whole side lies on one level.
  const slope = new Float64Array(u.length);
  const jump = new Float64Array(u.length);
  for (let t = 0; t < mesh.triangles; t++) addLines(mesh, t, level, slope, jump);
  const order = Array.from(u, (_, v) => v).sort((a, b) => level[a] - level[b]);
  let least = Infinity;
  let [sum, rise, at] = [0, 0, 0];
  for (let i = 0; i < order.length; ) {
    const here = level[order[i]];
    sum += rise * (here - at);
    // Just before the level, and just after it: there are no lines below the least or above the greatest.
    if (here > 0) least = Math.min(least, sum);
    for (at = here; i < order.length && level[order[i]] === here; i++) {
      rise += slope[order[i]];
      sum += jump[order[i]];
    }
    if (here < 1) least = Math.min(least, sum);
  }
  return least;
}

/** The lines of one triangle: slopes and jumps of their length at its corners. */
function addLines(
  { tail, edge, length }: IntrinsicMesh,
  t: number,
  level: Float64Array,
  slope: Float64Array,
  jump: Float64Array,
): void {
  let [i, j, k] = [0, 1, 2];
  const at = (c: number): number => level[tail[3 * t + c]];
  if (at(i) > at(j)) [i, j] = [j, i];
  if (at(j) > at(k)) [j, k] = [k, j];
  if (at(i) > at(j)) [i, j] = [j, i];
  const [a, b, c] = [at(i), at(j), at(k)];
  if (a === c) return;
  // Side s runs from corner s to the next.
  const side = (p: number, q: number): number => length[edge[3 * t + ((p + 1) % 3 === q ? p : q)]];
  const [ij, ik, jk] = [side(i, j), side(i, k), side(j, k)];
  // From the middle corner to the place of its level on the longest rise: Stewart's theorem.
  const share = (b - a) / (c - a);
  const square = (1 - share) * ij * ij + share * jk * jk - share * (1 - share) * ik * ik;
  const longest = Math.sqrt(Math.max(0, square));
  const [vi, vj, vk] = [tail[3 * t + i], tail[3 * t + j], tail[3 * t + k]];
  if (b > a) {
    slope[vi] += longest / (b - a);
    slope[vj] -= longest / (b - a);
  } else jump[vi] += longest;
  if (c > b) {
    slope[vj] -= longest / (c - b);
    slope[vk] += longest / (c - b);
  } else jump[vk] -= longest;
}
