import { next, previous, type SurfaceMesh } from '../mesh/surface-mesh.ts';

/**
 * The half-edges that start at the vertex where `half` starts, one a face, as far as faces join edge to edge.
 * @param ring  filled from its start; may be longer than the answer
 * @returns how many there are
 */
export function fillRing({ twin }: SurfaceMesh, half: number, ring: number[]): number {
  let count = 0;
  let h = half;
  do {
    ring[count++] = h;
    h = twin[previous(h)];
  } while (h >= 0 && h !== half);
  if (h < 0) for (let t = twin[half]; t >= 0; t = twin[h]) ring[count++] = h = next(t);
  return count;
}
