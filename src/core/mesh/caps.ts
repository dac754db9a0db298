/**
 * Caps: facets of three corners on one line. Left out, they would leave a crack, since the neighbour across the long side
 * knows nothing of the corner in its middle. So the neighbour is split there, which is the flip of the long side.
 */

export interface Caps {
  /** 1 where the facet is a cap that had no neighbour to split: to be left out. */
  drop: Uint8Array;
  /** Facet whose area each facet now carries: itself, or the neighbour that was split. */
  from: Uint32Array;
  /** Caps found in the file. */
  found: number;
}

/**
 * Flips the long sides of caps, in place in `triangles` and `partner`.
 *
 * @param partner   from `pairEdges`
 * @param distance  a facet is a cap when it is no higher than this over its longest side
 */
export function flipCaps(
  x: Float64Array,
  triangles: Uint32Array,
  partner: Int32Array,
  distance: number,
): Caps {
  const faces = triangles.length / 3;
  const drop = new Uint8Array(faces);
  const from = new Uint32Array(faces);
  const queue: number[] = [];
  for (let f = 0; f < faces; f++) {
    from[f] = f;
    if (isFlatFacet(x, triangles, f, distance)) queue.push(f);
  }
  const found = queue.length;
  // Flips make long sides shorter, so they end; the bound only guards against rounding going round in circles.
  for (let left = 20 * found; queue.length > 0; left--) {
    const f = queue.pop() as number;
    if (drop[f] || !isFlatFacet(x, triangles, f, distance)) continue;
    const long = longestSide(x, triangles, f);
    const across = partner[long];
    if (across < 0 || left <= 0 || sharesMore(partner, long, across)) {
      for (let h = 3 * f; h < 3 * f + 3; h++) unpair(partner, h);
      drop[f] = 1;
      continue;
    }
    const g = (across / 3) | 0;
    flip(triangles, partner, long, across);
    from[f] = from[g];
    queue.push(f, g);
  }
  return { drop, from, found };
}

export function hasFlat(x: Float64Array, triangles: Uint32Array, distance: number): boolean {
  for (let f = 0; f < triangles.length / 3; f++) if (isFlatFacet(x, triangles, f, distance)) return true;
  return false;
}

/** Two facets folded onto each other over two sides: a flip would give a facet with two equal sides. */
function sharesMore(partner: Int32Array, long: number, across: number): boolean {
  const g = (across / 3) | 0;
  return [nextOf(long), previousOf(long)].some((h) => partner[h] >= 0 && ((partner[h] / 3) | 0) === g);
}

const isFlatFacet = (x: Float64Array, t: Uint32Array, f: number, distance: number): boolean =>
  isFlat(x, t[3 * f], t[3 * f + 1], t[3 * f + 2], distance);

/** Whether the triangle on three vertices is no higher than `distance` over its longest side. */
export function isFlat(x: Float64Array, p: number, q: number, r: number, distance: number): boolean {
  const [a, b, c] = [3 * p, 3 * q, 3 * r];
  const ux = x[b] - x[a];
  const uy = x[b + 1] - x[a + 1];
  const uz = x[b + 2] - x[a + 2];
  const vx = x[c] - x[a];
  const vy = x[c + 1] - x[a + 1];
  const vz = x[c + 2] - x[a + 2];
  const nx = uy * vz - uz * vy;
  const ny = uz * vx - ux * vz;
  const nz = ux * vy - uy * vx;
  const wx = vx - ux;
  const wy = vy - uy;
  const wz = vz - uz;
  const u2 = ux * ux + uy * uy + uz * uz;
  const v2 = vx * vx + vy * vy + vz * vz;
  // (2 area)² = longest² · height²
  return nx * nx + ny * ny + nz * nz <= Math.max(u2, v2, wx * wx + wy * wy + wz * wz) * distance * distance;
}

function longestSide(x: Float64Array, t: Uint32Array, f: number): number {
  let best = 3 * f;
  let length = -1;
  for (let h = 3 * f; h < 3 * f + 3; h++) {
    const a = 3 * t[h];
    const b = 3 * t[h % 3 === 2 ? h - 2 : h + 1];
    const l = (x[a] - x[b]) ** 2 + (x[a + 1] - x[b + 1]) ** 2 + (x[a + 2] - x[b + 2]) ** 2;
    if (l > length) {
      length = l;
      best = h;
    }
  }
  return best;
}

const nextOf = (h: number): number => (h % 3 === 2 ? h - 2 : h + 1);
const previousOf = (h: number): number => (h % 3 === 0 ? h + 2 : h - 1);

/**
 * Cap f with long side A C and middle B, neighbour g with the same side and corner D: f becomes half of g at A, g half of
 * g at C, both wound as g was. The facets may be wound against each other.
 */
function flip(t: Uint32Array, partner: Int32Array, long: number, across: number): void {
  const f = 3 * ((long / 3) | 0);
  const g = 3 * ((across / 3) | 0);
  const p = t[across];
  const q = t[nextOf(across)];
  const d = t[previousOf(across)];
  const b = t[previousOf(long)];
  // Sides of the cap at p and at q, whichever way it is wound.
  const alike = t[long] === p;
  const atP = partner[alike ? previousOf(long) : nextOf(long)];
  const atQ = partner[alike ? nextOf(long) : previousOf(long)];
  const qd = partner[nextOf(across)];
  const dp = partner[previousOf(across)];
  t[f] = p;
  t[f + 1] = b;
  t[f + 2] = d;
  t[g] = b;
  t[g + 1] = q;
  t[g + 2] = d;
  pair(partner, f, atP);
  pair(partner, f + 1, g + 2);
  pair(partner, f + 2, dp);
  pair(partner, g, atQ);
  pair(partner, g + 1, qd);
}

function pair(partner: Int32Array, h: number, o: number): void {
  partner[h] = o;
  if (o >= 0) partner[o] = h;
}

function unpair(partner: Int32Array, h: number): void {
  if (partner[h] >= 0) partner[partner[h]] = -1;
  partner[h] = -1;
}
