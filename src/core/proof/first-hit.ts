/**
 * First faces met by many beams of one layer, by rasterising the part once in command space: under the map of a
 * two-pivot head the planes X = const and Y = const are planes of the bench, so a triangle covers an exact set of
 * raster cells, and a beam has only the triangles of its own cell to look at. Exact, and cheaper than a tree
 * of boxes because all beams of a layer share it.
 *
 * The edge test shears the beam onto one axis, as in Woop, Benthin & Wald, "Watertight ray/triangle intersection",
 * JCGT 2 (2013): the two faces of an edge see the same number with the other sign, so no beam slips between.
 */
import type { Lean } from './forward.ts';

/** Fewest and most raster cells. */
const LEAST_CELLS = 1024;
const MOST_CELLS = 1 << 22;
/** Cells a triangle, about: more cells, fewer triangles in each. */
const CELLS_PER_FACE = 2;
/** Part of a cell by which covers are widened, so that rounding at a cell's border loses nothing. */
const CELL_SLACK = 1e-6;

export interface Raster {
  x0: number;
  y0: number;
  cell: number;
  nx: number;
  ny: number;
  /** Faces of cell i: `faces[start[i]] … faces[start[i + 1] − 1]`. */
  start: Uint32Array;
  faces: Uint32Array;
}

/**
 * @param standing   vertices as they stand under the head: bench frame, lifted by the stage, all below the pivots; mm
 * @param triangles  vertex numbers, 3 a face
 * @param box        least and greatest command X, Y that will be asked for
 */
export function rasterFaces(
  standing: Float64Array,
  triangles: Uint32Array,
  lean: Lean,
  box: readonly [number, number, number, number],
): Raster {
  const vertices = standing.length / 3;
  const cx = new Float64Array(vertices);
  const cy = new Float64Array(vertices);
  for (let v = 0; v < vertices; v++) {
    cx[v] = standing[3 * v] / (1 - standing[3 * v + 2] * lean.kx);
    cy[v] = standing[3 * v + 1] / (1 - standing[3 * v + 2] * lean.ky);
  }
  const wide = Math.max(box[2] - box[0], 1e-6);
  const high = Math.max(box[3] - box[1], 1e-6);
  const wanted = Math.min(MOST_CELLS, Math.max(LEAST_CELLS, (CELLS_PER_FACE * triangles.length) / 3));
  const cell = Math.max(Math.sqrt((wide * high) / wanted), Math.max(wide, high) / 4096);
  const raster: Raster = {
    x0: box[0] - cell / 2,
    y0: box[1] - cell / 2,
    cell,
    nx: Math.ceil(wide / cell) + 1,
    ny: Math.ceil(high / cell) + 1,
    start: new Uint32Array(0),
    faces: new Uint32Array(0),
  };
  const start = new Uint32Array(raster.nx * raster.ny + 1);
  eachCover(raster, standing, triangles, lean, cx, cy, (cellNumber) => start[cellNumber + 1]++);
  for (let i = 1; i < start.length; i++) start[i] += start[i - 1];
  const faces = new Uint32Array(start[start.length - 1]);
  const fill = start.slice();
  eachCover(raster, standing, triangles, lean, cx, cy, (cellNumber, face) => {
    faces[fill[cellNumber]++] = face;
  });
  return { ...raster, start, faces };
}

function eachCover(
  r: Raster,
  p: Float64Array,
  triangles: Uint32Array,
  lean: Lean,
  cx: Float64Array,
  cy: Float64Array,
  emit: (cell: number, face: number) => void,
): void {
  const range: [number, number] = [0, 0];
  for (let f = 0; f < triangles.length / 3; f++) {
    const [a, b, c] = [triangles[3 * f], triangles[3 * f + 1], triangles[3 * f + 2]];
    const x0 = (Math.min(cx[a], cx[b], cx[c]) - r.x0) / r.cell - CELL_SLACK;
    const x1 = (Math.max(cx[a], cx[b], cx[c]) - r.x0) / r.cell + CELL_SLACK;
    const y0 = (Math.min(cy[a], cy[b], cy[c]) - r.y0) / r.cell - CELL_SLACK;
    const y1 = (Math.max(cy[a], cy[b], cy[c]) - r.y0) / r.cell + CELL_SLACK;
    if (!(x1 >= 0 && y1 >= 0 && x0 < r.nx && y0 < r.ny)) continue;
    const i0 = Math.max(0, Math.floor(x0));
    const i1 = Math.min(r.nx - 1, Math.floor(x1));
    const j0 = Math.max(0, Math.floor(y0));
    const j1 = Math.min(r.ny - 1, Math.floor(y1));
    const small = i1 - i0 < 2 || j1 === j0; // nothing to gain by looking at each row
    for (let j = j0; j <= j1; j++) {
      let [from, to] = [i0, i1];
      if (!small) {
        range[0] = Infinity;
        range[1] = -Infinity;
        const bottom = r.y0 + (j - CELL_SLACK) * r.cell;
        const top = r.y0 + (j + 1 + CELL_SLACK) * r.cell;
        edgeInBand(p, 3 * a, 3 * b, cx[a], cy[a], bottom, top, lean, range);
        edgeInBand(p, 3 * b, 3 * c, cx[b], cy[b], bottom, top, lean, range);
        edgeInBand(p, 3 * c, 3 * a, cx[c], cy[c], bottom, top, lean, range);
        from = Math.max(i0, Math.floor((range[0] - r.x0) / r.cell - CELL_SLACK));
        to = Math.min(i1, Math.floor((range[1] - r.x0) / r.cell + CELL_SLACK));
      }
      for (let i = from; i <= to; i++) emit(j * r.nx + i, f);
    }
  }
}

/** Widens `range` by the command X of the edge's first end and of its crossings with the planes Y = bottom and Y = top. */
function edgeInBand(
  p: Float64Array,
  a: number,
  b: number,
  cxa: number,
  cya: number,
  bottom: number,
  top: number,
  lean: Lean,
  range: [number, number],
): void {
  if (cya >= bottom && cya <= top) widen(range, cxa);
  for (let side = 0; side < 2; side++) {
    const Y = side ? top : bottom;
    const ga = p[a + 1] - Y * (1 - p[a + 2] * lean.ky);
    const gb = p[b + 1] - Y * (1 - p[b + 2] * lean.ky);
    if (ga < 0 === gb < 0) continue;
    const t = ga / (ga - gb);
    const x = p[a] + t * (p[b] - p[a]);
    const z = p[a + 2] + t * (p[b + 2] - p[a + 2]);
    widen(range, x / (1 - z * lean.kx));
  }
}

function widen(range: [number, number], x: number): void {
  if (x < range[0]) range[0] = x;
  if (x > range[1]) range[1] = x;
}

export interface FirstHit {
  /** Face, -1 when the beam meets nothing. */
  face: number;
  /** Defocus there, mm. */
  d: number;
}

/**
 * Highest face on the beam of command (X, Y): the first one met when coming from the head.
 * Equal heights go to the lowest face number. `out` is filled and returned: no object a pulse.
 */
export function firstFace(
  r: Raster,
  p: Float64Array,
  triangles: Uint32Array,
  lean: Lean,
  X: number,
  Y: number,
  out: FirstHit,
): FirstHit {
  out.face = -1;
  out.d = -Infinity;
  const i = Math.floor((X - r.x0) / r.cell);
  const j = Math.floor((Y - r.y0) / r.cell);
  if (i < 0 || j < 0 || i >= r.nx || j >= r.ny) return out;
  const wx = -X * lean.kx;
  const wy = -Y * lean.ky; // the way of the beam for each mm of height: (wx, wy, 1)
  const to = r.start[j * r.nx + i + 1];
  for (let k = r.start[j * r.nx + i]; k < to; k++) {
    const f = r.faces[k];
    const a = 3 * triangles[3 * f];
    const b = 3 * triangles[3 * f + 1];
    const c = 3 * triangles[3 * f + 2];
    // where each corner lies, seen along the beam from (X, Y, 0): the beam itself shrinks to the origin
    const ax = p[a] - X - p[a + 2] * wx;
    const ay = p[a + 1] - Y - p[a + 2] * wy;
    const bx = p[b] - X - p[b + 2] * wx;
    const by = p[b + 1] - Y - p[b + 2] * wy;
    const sc = ax * by - bx * ay;
    const cx = p[c] - X - p[c + 2] * wx;
    const cy = p[c + 1] - Y - p[c + 2] * wy;
    const sa = bx * cy - cx * by;
    if (sa < 0 !== sc < 0 && sa !== 0 && sc !== 0) continue;
    const sb = cx * ay - ax * cy;
    if (!((sa >= 0 && sb >= 0 && sc >= 0) || (sa <= 0 && sb <= 0 && sc <= 0))) continue;
    const sum = sa + sb + sc;
    if (sum === 0) continue; // seen edge on
    const d = (sa * p[a + 2] + sb * p[b + 2] + sc * p[c + 2]) / sum;
    if (d > out.d) {
      out.d = d;
      out.face = f;
    }
  }
  return out;
}
