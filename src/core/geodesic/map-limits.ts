/**
 * Where a log map stops being one to one: the surface's border, the cut locus, and sharp saddle vertices.
 *
 * Within one face of a polyhedron the map is rigid but where two shortest ways of different directions meet, and there
 * it jumps (the cut locus: do Carmo, *Riemannian Geometry*, ch. 13). Jumps are looked for along a net: the edges of
 * the patch, and chords across faces that are larger than the net's step, so that long slivers are seen too. A pair
 * of neighbours on the net that is farther apart in the map than on the face is halved until the jump is pinned down,
 * or turns out to be a stretch.
 */
import { sine } from '../base/trig.ts';
import { distance, type Vec3 } from '../base/vec.ts';
import { faceOf, next, previous, type SurfaceMesh } from '../mesh/surface-mesh.ts';
import { FaceGeometry } from './face-geometry.ts';
import type { LogPlace } from './log-map.ts';

export interface MapLimit {
  /**
   * `border`: the surface ends, at its rim or at a hole. `cut locus`: two shortest ways of clearly different directions
   * meet. `saddle`: behind a sharp saddle vertex whole sectors share one direction.
   */
  kind: 'border' | 'cut locus' | 'saddle';
  /** Distance from the centre over the surface, mm. */
  radius: number;
  at: Vec3;
  /** The asked measure there, mm. */
  measure: number;
}

/**
 * Ways that leave the centre closer together than this are no cut locus, radians: each convex vertex of a fine mesh
 * draws a seam of a degree or two behind it, while ways round a hole or a cylinder differ by a right angle and more.
 */
const CLEAR = (10 * Math.PI) / 180;
/** A vertex whose angles miss 2π, or exceed it, by this much is a corner of the part, not of its mesh, radians: a cube's misses 90°. */
const SHARP = (20 * Math.PI) / 180;
/** Step of the net, as a share of the radius. */
const NET = 1 / 8;
/** A jump is pinned down to this share of its distance from the centre, the nearest place of a border to this share of the patch's radius. */
const PINNED = 1e-4;
/** Rounding, and cracks between windows, as a share of the radius. */
const ROUNDING = 1e-7;

export interface MapSearch {
  mesh: SurfaceMesh;
  faces: Int32Array;
  centre: Vec3;
  radius: number;
  look(face: number, p: Vec3): LogPlace | null;
  measure(place: LogPlace): number;
}

interface Sample {
  p: Vec3;
  place: LogPlace | null;
}

export function findLimits(search: MapSearch): MapLimit[] {
  const { mesh, faces, radius, look, measure } = search;
  const found = new Map<MapLimit['kind'], MapLimit>();
  const least = (kind: MapLimit['kind']): number => found.get(kind)?.measure ?? Infinity;
  const report = (kind: MapLimit['kind'], { p, place }: Sample): void => {
    if (!place) return;
    const m = measure(place);
    if (m < least(kind)) found.set(kind, { kind, radius: place.radius, at: p, measure: m });
  };
  const geometry = new FaceGeometry(mesh);
  const corners = new Map<number, Sample>();
  const cornerOf = (h: number): Sample => {
    const v = mesh.triangles[h];
    let s = corners.get(v);
    if (!s) {
      const p = geometry.position(v);
      s = { p, place: look(faceOf(h), p) };
      corners.set(v, s);
      if (s.place && s.place.radius > ROUNDING * radius) {
        const { total, border } = geometry.fan(h);
        if (!border && 2 * Math.PI - total >= SHARP) report('cut locus', s);
        if (!border && total - 2 * Math.PI >= SHARP) report('saddle', s);
      }
    }
    return s;
  };
  const listed = new Set(faces);

  const across = (face: number, a: Sample, b: Sample): void => {
    const stack: [Sample, Sample][] = [[a, b]];
    while (stack.length > 0) {
      const [p, q] = stack.pop()!;
      if (!p.place || !q.place) continue;
      const apart = distance(p.p, q.p);
      const gap = Math.hypot(p.place.u - q.place.u, p.place.v - q.place.v);
      const nearer = p.place.radius < q.place.radius ? p : q;
      if (gap <= apart * (1 + ROUNDING) + ROUNDING * radius) continue;
      // The ways on either side of a clear jump lie at least this far apart in the map.
      if (gap + apart < 2 * (nearer.place!.radius - apart) * sine(CLEAR / 2)) continue;
      if (measure(nearer.place!) - apart >= least('cut locus')) continue;
      // At the centre itself a scaled angle stretches the map, but tears nothing.
      if (nearer.place!.radius + apart <= PINNED * radius) continue;
      if (apart <= PINNED * nearer.place!.radius) {
        report('cut locus', nearer);
        continue;
      }
      const m = onWay(p.p, q.p, 0.5);
      const middle = { p: m, place: look(face, m) };
      stack.push([p, middle], [middle, q]);
    }
  };

  for (const face of faces) {
    for (let h = 3 * face; h < 3 * face + 3; h++) {
      const t = mesh.twin[h];
      if (t < 0) borderEdge(search, h, cornerOf(h).p, cornerOf(next(h)).p, () => least('border'), report);
      else if (t < h && listed.has(faceOf(t))) continue;
      walk(search, face, cornerOf(h), cornerOf(next(h)), across);
    }
    chords(search, face, geometry, across);
  }
  return [...found.values()].sort((a, b) => a.measure - b.measure);
}

/**
 * Place of a border edge that counts least: halved where a value that changes by no more than the way walked may
 * still come below the least known.
 */
function borderEdge(
  { radius, centre, look, measure }: MapSearch,
  h: number,
  from: Vec3,
  to: Vec3,
  least: () => number,
  report: (kind: 'border', s: Sample) => void,
): void {
  const face = faceOf(h);
  const span = withinBall(from, to, centre, radius);
  if (!span) return;
  const sample = (p: Vec3): Sample => {
    const s = { p, place: look(face, p) };
    report('border', s);
    return s;
  };
  const first = sample(onWay(from, to, span[0]));
  const last = sample(onWay(from, to, span[1]));
  const stack: [Sample, Sample][] = [[first, last]];
  while (stack.length > 0) {
    const [a, b] = stack.pop()!;
    const len = distance(a.p, b.p);
    if (len <= PINNED * radius) continue;
    const known = [a, b].filter((s) => s.place).map((s) => measure(s.place!));
    // Unseen ends say nothing but that they lie beyond the radius.
    const bound =
      known.length === 2 ? (known[0] + known[1] - len) / 2 : known.length === 1 ? known[0] - len : -Infinity;
    if (bound >= least() - PINNED * radius) continue;
    if (known.length === 0 && len <= NET * radius) continue;
    const m = sample(onWay(a.p, b.p, 0.5));
    stack.push([a, m], [m, b]);
  }
}

/** Neighbouring samples along a straight piece of a face, no farther apart than the net's step. */
function walk(
  { centre, radius, look }: MapSearch,
  face: number,
  a: Sample,
  b: Sample,
  visit: (face: number, a: Sample, b: Sample) => void,
): void {
  const span = withinBall(a.p, b.p, centre, radius);
  if (!span) return;
  const len = distance(a.p, b.p) * (span[1] - span[0]);
  const n = Math.max(1, Math.ceil(len / (NET * radius)));
  const at = (i: number): Sample => {
    const t = span[0] + ((span[1] - span[0]) * i) / n;
    if (t <= 0) return a;
    if (t >= 1) return b;
    const p = onWay(a.p, b.p, t);
    return { p, place: look(face, p) };
  };
  let before = at(0);
  for (let i = 1; i <= n; i++) {
    const here = at(i);
    visit(face, before, here);
    before = here;
  }
}

/** Chords across a face that is larger than the net's step: square to its longest edge, and along it. */
function chords(
  search: MapSearch,
  face: number,
  geometry: FaceGeometry,
  visit: (face: number, a: Sample, b: Sample) => void,
): void {
  const { mesh, centre, radius, look } = search;
  const step = NET * radius;
  const length = (h: number): number => {
    const [x, y, z] = geometry.edgeDirection(h);
    return Math.hypot(x, y, z);
  };
  let h = 3 * face;
  for (const k of [h + 1, h + 2]) if (length(k) > length(h)) h = k;
  const len = length(h);
  if (len <= step) return;
  const a = geometry.position(mesh.triangles[h]);
  const b = geometry.position(mesh.triangles[next(h)]);
  const c = geometry.position(mesh.triangles[previous(h)]);
  const [foot, height] = geometry.apex(h, len);
  const chord = (p: Vec3, q: Vec3): void =>
    walk(search, face, { p, place: look(face, p) }, { p: q, place: look(face, q) }, visit);
  // The foot of the sphere's centre, and how far along the edge the sphere reaches from it.
  const middle =
    ((centre[0] - a[0]) * (b[0] - a[0]) +
      (centre[1] - a[1]) * (b[1] - a[1]) +
      (centre[2] - a[2]) * (b[2] - a[2])) /
    len;
  const from = Math.max(0, middle - radius);
  const to = Math.min(len, middle + radius);
  for (let x = from + step / 2; x < to; x += step) {
    const end = x < foot ? onWay(a, c, x / foot) : onWay(b, c, (len - x) / (len - foot));
    chord(onWay(a, b, x / len), end);
  }
  for (let y = step; y < height; y += step) chord(onWay(a, c, y / height), onWay(b, c, y / height));
}

/** Shares of the way a → b between which it lies inside the sphere about the centre; no way over the surface is shorter than straight. */
function withinBall(a: Vec3, b: Vec3, centre: Vec3, radius: number): [number, number] | null {
  const d = [b[0] - a[0], b[1] - a[1], b[2] - a[2]];
  const w = [a[0] - centre[0], a[1] - centre[1], a[2] - centre[2]];
  const dd = d[0] * d[0] + d[1] * d[1] + d[2] * d[2];
  const dw = d[0] * w[0] + d[1] * w[1] + d[2] * w[2];
  const ww = w[0] * w[0] + w[1] * w[1] + w[2] * w[2];
  const root = dw * dw - dd * (ww - radius * radius);
  if (root <= 0 || dd === 0) return null;
  const t0 = Math.max(0, (-dw - Math.sqrt(root)) / dd);
  const t1 = Math.min(1, (-dw + Math.sqrt(root)) / dd);
  return t0 < t1 ? [t0, t1] : null;
}

const onWay = (a: Vec3, b: Vec3, t: number): Vec3 => [
  a[0] + t * (b[0] - a[0]),
  a[1] + t * (b[1] - a[1]),
  a[2] + t * (b[2] - a[2]),
];
