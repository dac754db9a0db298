/** How many closed pieces surround each closed piece: a cavity's wall is a piece inside another one. */

/** Places of a piece that are looked at. All must lie inside: a shell that only pokes into another is not within it. */
const PROBES = 24;

/**
 * @param open  pieces that are not closed: they surround nothing and are asked nothing
 * @returns number of surrounding closed pieces, one a piece; 0 for open ones
 */
export function nestingDepth(
  x: Float64Array,
  t: Uint32Array,
  pieceOf: Int32Array,
  open: readonly boolean[],
): Uint32Array {
  const count = open.length;
  const depth = new Uint32Array(count);
  if (count - open.filter((o) => o).length < 2) return depth;
  const box = boxes(x, t, pieceOf, count);
  const facesOf = faceLists(pieceOf, count);
  for (let outer = 0; outer < count; outer++) {
    if (open[outer]) continue;
    const inner: number[] = [];
    for (let p = 0; p < count; p++) if (p !== outer && !open[p] && boxInside(box, p, outer)) inner.push(p);
    if (inner.length === 0) continue;
    const above = columns(x, t, facesOf(outer), box, outer);
    for (const p of inner) {
      const faces = facesOf(p);
      const step = Math.max(1, Math.floor(faces.length / PROBES));
      let inside = true;
      for (let i = 0; i < faces.length && inside; i += step) {
        const [a, b, c] = [3 * t[3 * faces[i]], 3 * t[3 * faces[i] + 1], 3 * t[3 * faces[i] + 2]];
        inside =
          above(
            (x[a] + x[b] + x[c]) / 3,
            (x[a + 1] + x[b + 1] + x[c + 1]) / 3,
            (x[a + 2] + x[b + 2] + x[c + 2]) / 3,
          ) %
            2 ===
          1;
      }
      if (inside) depth[p]++;
    }
  }
  return depth;
}

/**
 * Counts the facets above a place. Facets are kept in a grid over x and y. Edges count on one side only (half open, taken
 * from the lower vertex number), so that a place right under an edge or a vertex is counted once.
 */
function columns(x: Float64Array, t: Uint32Array, faces: Uint32Array, box: Float64Array, piece: number) {
  const [x0, y0, x1, y1] = [box[6 * piece], box[6 * piece + 1], box[6 * piece + 3], box[6 * piece + 4]];
  const n = Math.max(1, Math.min(512, Math.floor(Math.sqrt(faces.length))));
  const cellX = (v: number): number =>
    Math.max(0, Math.min(n - 1, Math.floor(((v - x0) / (x1 - x0 || 1)) * n)));
  const cellY = (v: number): number =>
    Math.max(0, Math.min(n - 1, Math.floor(((v - y0) / (y1 - y0 || 1)) * n)));
  const lists: number[][] = Array.from({ length: n * n }, () => []);
  for (const f of faces) {
    const [a, b, c] = [3 * t[3 * f], 3 * t[3 * f + 1], 3 * t[3 * f + 2]];
    const i1 = cellX(Math.max(x[a], x[b], x[c]));
    const j0 = cellY(Math.min(x[a + 1], x[b + 1], x[c + 1]));
    const j1 = cellY(Math.max(x[a + 1], x[b + 1], x[c + 1]));
    for (let i = cellX(Math.min(x[a], x[b], x[c])); i <= i1; i++)
      for (let j = j0; j <= j1; j++) lists[i * n + j].push(f);
  }
  /** Whether the ray from (px, py) along +x crosses the edge; the same answer for both facets of the edge. */
  const crosses = (u: number, v: number, px: number, py: number): boolean => {
    const [a, b] = u < v ? [3 * u, 3 * v] : [3 * v, 3 * u];
    if (x[a + 1] <= py === x[b + 1] <= py) return false;
    return px < x[a] + ((py - x[a + 1]) / (x[b + 1] - x[a + 1])) * (x[b] - x[a]);
  };
  return (px: number, py: number, pz: number): number => {
    let above = 0;
    for (const f of lists[cellX(px) * n + cellY(py)]) {
      const [a, b, c] = [t[3 * f], t[3 * f + 1], t[3 * f + 2]];
      const odd =
        (crosses(a, b, px, py) ? 1 : 0) ^ (crosses(b, c, px, py) ? 1 : 0) ^ (crosses(c, a, px, py) ? 1 : 0);
      if (odd && heightAt(x, 3 * a, 3 * b, 3 * c, px, py) > pz) above++;
    }
    return above;
  };
}

function heightAt(x: Float64Array, a: number, b: number, c: number, px: number, py: number): number {
  const ux = x[b] - x[a],
    uy = x[b + 1] - x[a + 1],
    uz = x[b + 2] - x[a + 2];
  const vx = x[c] - x[a],
    vy = x[c + 1] - x[a + 1],
    vz = x[c + 2] - x[a + 2];
  const d = ux * vy - uy * vx;
  // A facet seen edge on covers no area in x and y, so it is never asked; d = 0 can only be rounding.
  if (d === 0) return x[a + 2];
  const s = ((px - x[a]) * vy - (py - x[a + 1]) * vx) / d;
  const r = (ux * (py - x[a + 1]) - uy * (px - x[a])) / d;
  return x[a + 2] + s * uz + r * vz;
}

function boxes(x: Float64Array, t: Uint32Array, pieceOf: Int32Array, count: number): Float64Array {
  const box = new Float64Array(6 * count);
  for (let p = 0; p < count; p++) {
    box.fill(Infinity, 6 * p, 6 * p + 3);
    box.fill(-Infinity, 6 * p + 3, 6 * p + 6);
  }
  for (let c = 0; c < t.length; c++) {
    const p = 6 * pieceOf[(c / 3) | 0];
    for (let i = 0; i < 3; i++) {
      const v = x[3 * t[c] + i];
      if (v < box[p + i]) box[p + i] = v;
      if (v > box[p + 3 + i]) box[p + 3 + i] = v;
    }
  }
  return box;
}

function boxInside(box: Float64Array, p: number, outer: number): boolean {
  for (let i = 0; i < 3; i++)
    if (box[6 * p + i] < box[6 * outer + i] || box[6 * p + 3 + i] > box[6 * outer + 3 + i]) return false;
  return true;
}

function faceLists(pieceOf: Int32Array, count: number): (p: number) => Uint32Array {
  const start = new Uint32Array(count + 1);
  for (const p of pieceOf) start[p + 1]++;
  for (let p = 0; p < count; p++) start[p + 1] += start[p];
  const fill = start.slice(0, count);
  const list = new Uint32Array(pieceOf.length);
  for (let f = 0; f < pieceOf.length; f++) list[fill[pieceOf[f]]++] = f;
  return (p) => list.subarray(start[p], start[p + 1]);
}
