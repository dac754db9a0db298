/** How narrow a sheet gets for the current through it: the shortest line across which the current must pass. */
import type { IntrinsicMesh } from './intrinsic.ts';

/** Share of the whole drop of potential that a triangle must have for its lines to count: less is rounding where no current flows. */
const STILL = 1e-9;

/**
 * Least length, mm, over all levels of a potential that is linear in each triangle. In a triangle the length of a level line
 * grows linearly from the least corner to the middle one and falls to the greatest, so that the sum over all triangles bends
 * at corners' potentials only, and is least at one of them. No line is shorter than the narrowest place between the electrodes,
 * as each parts them.
 * @param u  of each vertex; electrode 0 has the least or the greatest
 */
export function narrowestLine(mesh: IntrinsicMesh, u: Float64Array): number {
  const [low, high] = [
    u.reduce((a, b) => Math.min(a, b), Infinity),
    u.reduce((a, b) => Math.max(a, b), -Infinity),
  ];
  const still = STILL * (high - low);
  // At each place the sum changes its slope, and jumps where a whole side lies on one level.
  const events: { at: number; slope: number; jump: number }[] = [];
  for (let t = 0; t < mesh.triangles; t++) {
    const corner = [0, 1, 2].sort((i, j) => u[mesh.tail[3 * t + i]] - u[mesh.tail[3 * t + j]]);
    const [a, b, c] = corner.map((k) => u[mesh.tail[3 * t + k]]);
    if (!(c - a > still)) continue;
    // From the middle corner to the place on the longest rise that has its level; sides k run from corner k to k + 1.
    const side = (i: number, j: number): number =>
      mesh.length[mesh.edge[3 * t + ((i + 1) % 3 === j ? i : j)]];
    const [ab, ac, bc] = [side(corner[0], corner[1]), side(corner[0], corner[2]), side(corner[1], corner[2])];
    const share = (b - a) / (c - a);
    // Stewart's theorem: the line from a corner to a place on the opposite side.
    const across = Math.sqrt(
      Math.max(0, (1 - share) * ab * ab + share * bc * bc - share * (1 - share) * ac * ac),
    );
    const [rise, fall] = [b - a > still, c - b > still];
    events.push({ at: a, slope: rise ? across / (b - a) : 0, jump: rise ? 0 : across });
    events.push({
      at: b,
      slope: (fall ? -across / (c - b) : 0) - (rise ? across / (b - a) : 0),
      jump: 0,
    });
    events.push({ at: c, slope: fall ? across / (c - b) : 0, jump: fall ? 0 : -across });
  }
  events.sort((p, q) => p.at - q.at);
  let least = Infinity;
  let [sum, slope, at] = [0, 0, low];
  for (let i = 0; i < events.length; ) {
    const level = events[i].at;
    sum += slope * (level - at);
    // Just before the level, and just after it: nothing flows below the least or above the greatest.
    if (level > low + still) least = Math.min(least, sum);
    for (at = level; i < events.length && events[i].at === level; i++) {
      slope += events[i].slope;
      sum += events[i].jump;
    }
    if (level < high - still) least = Math.min(least, sum);
  }
  return least;
}
