/** Fewer points for a line: D. Douglas and T. Peucker, The Canadian Cartographer 10 (1973) 112. */

/**
 * @param size       numbers a point
 * @param line       a closed one has its first point twice
 * @param tolerance  mm that the thinned line may stray
 * @returns 1 for each point that stays: the ends do
 */
export function pointsToKeep(size: 2 | 3, line: ArrayLike<number>, tolerance: number): Uint8Array {
  const n = line.length / size;
  const keep = new Uint8Array(n);
  if (n === 0) return keep;
  keep[0] = keep[n - 1] = 1;
  const stack: [number, number][] = [[0, n - 1]];
  while (stack.length > 0) {
    const [a, b] = stack.pop()!;
    let far = tolerance;
    let at = -1;
    for (let i = a + 1; i < b; i++) {
      const d = distanceToSegment(size, line, i, a, b);
      if (d > far) [far, at] = [d, i];
    }
    if (at < 0) continue;
    keep[at] = 1;
    stack.push([a, at], [at, b]);
  }
  return keep;
}

function distanceToSegment(size: number, x: ArrayLike<number>, p: number, a: number, b: number): number {
  const at = (i: number, k: number) => x[size * i + k];
  let dd = 0;
  let dp = 0;
  for (let k = 0; k < size; k++) {
    const d = at(b, k) - at(a, k);
    dd += d * d;
    dp += d * (at(p, k) - at(a, k));
  }
  const t = dd > 0 ? Math.max(0, Math.min(1, dp / dd)) : 0;
  let s = 0;
  for (let k = 0; k < size; k++) {
    const e = at(p, k) - at(a, k) - t * (at(b, k) - at(a, k));
    s += e * e;
  }
  return Math.sqrt(s);
}
