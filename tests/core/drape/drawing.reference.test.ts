import { describe, expect, it } from 'vitest';
import type { Vec3 } from '../../../src/core/base/vec.ts';
import { drapeDrawing } from '../../../src/core/drape/drape-drawing.ts';
import type { Area, Drawing, Stroke } from '../../../src/core/drawing/drawing.ts';
import { WindowSolver } from '../../../src/core/geodesic/windows.ts';
import type { SurfaceMesh } from '../../../src/core/mesh/surface-mesh.ts';
import type { Drape } from '../../../src/core/project/schema.ts';
import { source } from '../../reference/sources.ts';
import { gridMesh, placeAt, plate, sphere, tube } from '../helpers/surfaces.ts';

const rad = (deg: number): number => (deg * Math.PI) / 180;

const drape = (more: Partial<Drape> = {}): Drape => ({
  id: 'd',
  drawing: 'x.svg',
  anchor: [0, 0, 0],
  origin: [0, 0],
  turn: 0,
  mirror: false,
  evenLengths: false,
  drawingLayers: {},
  nets: {},
  ...more,
});
const drawing = (...figures: (Stroke | Area)[]): Drawing => ({
  file: 'x.svg',
  layers: [],
  holes: [],
  notes: [],
  shapes: figures.map((figure, i) => ({
    id: `s${i}`,
    layer: '',
    net: null,
    pin: null,
    role: figure.kind === 'stroke' ? 'trace' : 'region',
    figure,
    place: '',
  })),
});
const stroke = (width: number, ...points: number[]): Stroke => ({
  kind: 'stroke',
  points: Float64Array.from(points),
  closed: false,
  width,
  ends: 'round',
  bends: 'round',
});
const area = (...rings: number[][]): Area => ({
  kind: 'area',
  rings: rings.map((r) => Float64Array.from(r)),
});

const lay = (mesh: SurfaceMesh, at: Vec3, d: Drawing, more: Partial<Drape> = {}) =>
  drapeDrawing(new WindowSolver(mesh), drape(more), d, placeAt(mesh, at));

describe(source('do-carmo'), () => {
  it('on a flat plate a drawing keeps every length, area and angle', () => {
    const mesh = plate(60, 50, 3, 2);
    const square = area([-4, -3, 6, -3, 6, 5, -4, 5], [0, 0, 0, 2, 3, 2, 3, 0]);
    const { elements, findings } = lay(mesh, [3, 2, 0], drawing(square, stroke(0.8, -5, 6, 7, 6, 7, -5)), {
      turn: 30,
    });
    expect(findings).toEqual([]);
    expect(elements[0].area).toBeCloseTo(80 - 6, 4);
    // Outlines are cut off at corners by the finest patch edge, 12 µm.
    expect(Math.abs(elements[0].length - 46)).toBeLessThan(8 * 0.005);
    expect(elements[1].length).toBeCloseTo(12 + 11, 9);
    expect(elements[1].area).toBeCloseTo(23 * 0.8 + Math.PI * 0.16 - (0.16 - Math.PI * 0.04), 2);
    for (const e of elements) expect(e.stretch).toBeLessThan(1e-6);
  });

  it('seen from outside u points right and v up, turned counter-clockwise; mirrored, u runs the other way', () => {
    const mesh = plate(60, 50, 3, 2);
    const end = (more: Partial<Drape>) => {
      const path = lay(mesh, [1, 2, 0], drawing(stroke(0.5, 0, 0, 6, 1)), more).elements[0].path!;
      return [...path.points.subarray(path.points.length - 3)];
    };
    const close = (p: number[], q: number[]) => p.forEach((x, k) => void expect(x).toBeCloseTo(q[k], 9));
    close(end({}), [7, 3, 0]);
    close(end({ turn: 90 }), [0, 8, 0]);
    close(end({ mirror: true }), [-5, 3, 0]);
    close(end({ origin: [2, 1] }), [5, 2, 0]);
  });

  it('on a cylinder of long slivers lengths hold to 0.1 % and angles to 0.1°', () => {
    const [r, sides] = [15, 240];
    const mesh = tube(r, 60, sides, 1);
    const at: Vec3 = [r * Math.cos(0.37), r * Math.sin(0.37), 31];
    const { elements, findings } = lay(
      mesh,
      at,
      drawing(stroke(0.6, -12, -8, 14, 9), stroke(0.6, -12, 9, 14, -8)),
    );
    expect(findings).toEqual([]);
    const [a, b] = elements;
    expect(a.length / Math.hypot(26, 17)).toBeCloseTo(1, 4);
    for (const e of elements) expect(e.stretch).toBeLessThan(1e-3);
    // Unrolled: turn about the axis times the radius, and height.
    const flat = (p: readonly number[]): [number, number] => [r * Math.atan2(p[1], p[0]), p[2]];
    const slope = (e: typeof a): number => {
      const { points } = e.path!;
      const [p, q] = [flat([...points.subarray(0, 3)]), flat([...points.subarray(points.length - 3)])];
      return Math.atan2(q[1] - p[1], q[0] - p[0]);
    };
    const cross = Math.abs(slope(a) - slope(b));
    const drawn = 2 * Math.atan2(17, 26);
    const between = Math.min(cross, 2 * Math.PI - cross, Math.abs(Math.PI - cross));
    expect(Math.min(Math.abs(between - drawn), Math.abs(Math.PI - between - drawn))).toBeLessThan(rad(0.1));
  });

  it('an Archimedean spiral on a cone is as long as drawn, and wound as the unrolled sector says', () => {
    // Half-angle 30: the cone unrolls to half a disc. The spiral lies about a place 25 mm down the slant.
    const [s, c] = [Math.sin(rad(30)), Math.cos(rad(30))];
    const on = (l: number, phi: number): Vec3 => [l * s * Math.cos(phi), l * s * Math.sin(phi), -l * c];
    const sides = 360;
    const mesh = gridMesh(sides, 1, (i, j) => on(j === 0 ? 50 : 2, (2 * Math.PI * (i % sides)) / sides));
    const points: number[] = [];
    const [pitch, turns] = [1.2, 4];
    for (let k = 0; k <= 400; k++) {
      const a = (2 * Math.PI * turns * k) / 400;
      points.push((pitch * a * Math.cos(a)) / (2 * Math.PI), (pitch * a * Math.sin(a)) / (2 * Math.PI));
    }
    const { elements, findings } = lay(mesh, on(25, 0.2), drawing(stroke(0.4, ...points)));
    expect(findings).toEqual([]);
    // Archimedes: r = k a, length k / 2 (a √(1 + a²) + asinh a), less what chords of 3.6° cut off.
    const k = pitch / (2 * Math.PI);
    const a = 2 * Math.PI * turns;
    const exact = (k / 2) * (a * Math.sqrt(1 + a * a) + Math.asinh(a));
    expect(elements[0].length / exact).toBeCloseTo(1, 3);
    expect(elements[0].stretch).toBeLessThan(1e-3);
    // Unrolled about the apex every place of the path is at its flat distance from the anchor.
    const { path } = elements[0];
    const n = path!.points.length / 3;
    const end = path!.points.subarray(3 * n - 3);
    const l = Math.hypot(end[0], end[1], end[2]);
    const psi = (Math.atan2(end[1], end[0]) - 0.2) * s;
    expect(Math.hypot(l * Math.cos(psi) - 25, l * Math.sin(psi))).toBeCloseTo(pitch * turns, 2);
  });

  it('on a sphere circles about the anchor are short by sin α / α, and the stretch says so', () => {
    const mesh = sphere(30, 6);
    const alpha = rad(25);
    const r = 30 * alpha;
    const ring: number[] = [];
    for (let k = 0; k < 180; k++) ring.push(r * Math.cos(rad(2 * k)), r * Math.sin(rad(2 * k)));
    const circle: Stroke = { ...stroke(0.5, ...ring), closed: true };
    const { elements } = lay(mesh, [11, 17, 30], drawing(circle));
    expect(elements[0].length / elements[0].drawnLength).toBeCloseTo(Math.sin(alpha) / alpha, 3);
    expect(elements[0].stretch).toBeGreaterThan(0.9 * (1 - Math.sin(alpha) / alpha));
    expect(elements[0].stretch).toBeLessThan(1.2 * (1 - Math.sin(alpha) / alpha));
  });
});

describe('what a drawing cannot have', () => {
  it('the surface ends inside it: that is said, and the rest is kept', () => {
    const mesh = plate(20, 20, 2, 2);
    const { elements, findings } = lay(
      mesh,
      [7, 0, 0],
      drawing(stroke(1, -5, 0, 8, 0), stroke(1, -5, 3, 1, 3)),
    );
    expect(findings.map((f) => [f.rule, f.element])).toEqual([
      ['beyond-map', 'd'],
      ['left-map', 'd/s0'],
    ]);
    expect(findings[1].at[0]).toBeCloseTo(10, 1);
    expect(elements.map((e) => e.id)).toEqual(['d/s0', 'd/s1']);
    expect(elements[0].length).toBeCloseTo(8, 1);
  });

  it('copper keeps out of drilled holes', () => {
    const mesh = plate(40, 40, 3, 3);
    const d = drawing(area([-5, -4, 5, -4, 5, 4, -5, 4]));
    d.holes.push({ at: [1, 1], to: [1, 1], diameter: 2, plated: null, place: '' });
    const { elements } = lay(mesh, [0.5, 0.3, 0], d);
    expect(elements[0].area).toBeCloseTo(80 - Math.PI, 2);
  });

  it('layers to skip are skipped, nets go by name', () => {
    const mesh = plate(40, 40, 3, 3);
    const d = drawing(stroke(1, 0, 0, 5, 0), stroke(1, 0, 3, 5, 3));
    d.shapes[0].layer = 'NOTES';
    const { elements } = lay(mesh, [0, 0, 0], d, {
      drawingLayers: { NOTES: 'skip' },
      nets: { s1: 'SENSE2' },
    });
    expect(elements.map((e) => [e.id, e.net])).toEqual([['d/s1', 'SENSE2']]);
  });
});

describe(source('milnor-1969'), () => {
  // A disc that fills the cap: no map can have a stretch below the fifth column of the table, the log map has the sixth.
  const { PI } = Math;
  const disc = (r: number): Area =>
    area(
      Array.from({ length: 120 }, (_, k) => [
        r * Math.cos((PI * k) / 60),
        r * Math.sin((PI * k) / 60),
      ]).flat(),
    );

  it.each([
    [30, 0.023054713, 0.045070341],
    [45, 0.052456364, 0.099683684],
  ])(
    'evened, a disc of %d° on a sphere is stretched less than by the log map, and no less than is possible',
    (deg, best, log) => {
      const mesh = sphere(30, 6);
      const shape = drawing(disc(30 * rad(deg)));
      const at: Vec3 = [11, 17, 30];
      const plain = lay(mesh, at, shape).elements[0].stretch;
      const even = lay(mesh, at, shape, { evenLengths: true }).elements[0].stretch;
      expect(plain).toBeGreaterThan(0.85 * log);
      expect(even).toBeLessThan(0.85 * plain);
      expect(even).toBeGreaterThan(0.9 * best);
    },
  );

  it('on a flat and on a cylinder there is nothing to even out: the map stays', () => {
    const flat = lay(plate(60, 50, 9, 8), [1, 2, 0], drawing(stroke(0.5, -6, -3, 8, 5)), {
      evenLengths: true,
      turn: 20,
    });
    const plain = lay(plate(60, 50, 9, 8), [1, 2, 0], drawing(stroke(0.5, -6, -3, 8, 5)), { turn: 20 });
    const ends = [flat, plain].map((d) => [...d.elements[0].path!.points.subarray(-3)]);
    ends[0].forEach((x, k) => void expect(x).toBeCloseTo(ends[1][k], 6));
    const round = lay(tube(15, 60, 240, 1), [15, 0.2, 31], drawing(stroke(0.5, -9, -6, 10, 7)), {
      evenLengths: true,
    });
    expect(round.elements[0].length / Math.hypot(19, 13)).toBeCloseTo(1, 4);
  });

  it('the anchor and the direction of u stay where they are, mirrored or not', () => {
    const mesh = sphere(30, 5);
    for (const mirror of [false, true]) {
      const d = drawing(stroke(0.5, 0, 0, 1.5, 0), disc(14));
      const path = (evenLengths: boolean) => {
        const { points } = lay(mesh, [11, 17, 30], d, { evenLengths, mirror, turn: 25 }).elements[0].path!;
        return [[...points.subarray(0, 3)], [...points.subarray(-3)]];
      };
      const [even, plain] = [path(true), path(false)];
      even[0].forEach((x, k) => void expect(x).toBeCloseTo(plain[0][k], 2));
      // 1.5 mm on, less than a fiftieth sideways.
      expect(Math.hypot(...even[1].map((x, k) => x - plain[1][k]))).toBeLessThan(0.05);
    }
  });
});
