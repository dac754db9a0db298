import { beforeAll, describe, expect, it } from 'vitest';
import { quiet } from '../../../src/core/base/run-context.ts';
import { type Area, DEFAULTS, type Drawing, type Stroke } from '../../../src/core/drawing/drawing.ts';
import type { Flat } from '../../../src/core/drawing/flat.ts';
import type { Arc } from '../../../src/core/drawing/flatten.ts';
import { apply, type Matrix } from '../../../src/core/drawing/matrix.ts';
import { readSvg } from '../../../src/core/drawing/svg.ts';
import { arcOfEnds } from '../../../src/core/drawing/svg-arc.ts';
import { readTransform } from '../../../src/core/drawing/svg-transform.ts';
import { source } from '../../reference/sources.ts';
import { flatForTests } from '../helpers/flat.ts';

/** Of the published numbers: nine decimals. */
const TOL = 1e-8;

let flat: Flat;
beforeAll(async () => {
  flat = await flatForTests();
});

const read = (text: string, tolerance = DEFAULTS.tolerance): Drawing =>
  readSvg(text, 'a.svg', { ...DEFAULTS, tolerance }, flat, quiet);
/** A page on which one unit is one mm. */
const page = (body: string, tolerance?: number): Drawing =>
  read(
    `<svg xmlns="http://www.w3.org/2000/svg" width="100mm" height="80mm" viewBox="0 0 100 80">${body}</svg>`,
    tolerance,
  );
const stroke = (d: Drawing, i = 0): Stroke => d.shapes[i].figure as Stroke;
const area = (d: Drawing): number =>
  d.shapes.reduce((sum, s) => sum + (s.figure.kind === 'area' ? flat.area(s.figure.rings) : 0), 0);
const near = (found: number, want: number, tol = TOL): void =>
  expect(Math.abs(found - want)).toBeLessThan(tol);

describe(source('svg-2-drawings'), () => {
  it.each([
    ['1in', 25.4],
    ['96px', 25.4],
    ['2.54cm', 25.4],
    ['72pt', 25.4],
    ['6pc', 25.4],
    ['1px', 0.264583333],
    ['1', 0.264583333],
    ['1pt', 0.352777778],
    ['1pc', 4.233333333],
    ['1mm', 1],
    ['1Q', 0.25],
    ['1e1mm', 10],
  ])('a length of %s is %f mm', (length, mm) => {
    const d = read(
      `<svg width="300mm" height="200mm"><path d="M0,0H7" fill="none" stroke="#000" stroke-width="${length}"/></svg>`,
    );
    near(stroke(d).width, mm, 1e-9);
  });

  it('3.779527559 px are 1 mm', () => {
    const d = read('<svg width="99mm" height="9mm"><line x2="3.779527559" stroke="#000"/></svg>');
    near(stroke(d).points[2], 1, 1e-9);
  });

  // start and sweep in degrees; the middle and the length of the arc in SVG's axes
  const ARCS: [string, EndArc, number[], number[], number[], number[], number[], number][] = [
    ['A1,1 0 0 1 10,0', [1, 1, 0, 0, 1, 10, 0], [5, 5], [5, 0], [180, 180], [5, -5], [10, 0], 15.707963268],
    [
      'A4,2 30 0 1 10,0',
      [4, 2, 30, 0, 1, 10, 0],
      [6.614378278, 3.307189139],
      [5, 0],
      [130.893395, 180],
      [1.752404735, -4.375],
      [10, 0],
      // Half of 38.753792882, an ellipse of the same shape, times the ratio of the radii, 6.614378278 / 8.
      16.020765364,
    ],
    [
      'A10,10 0 0 1 10,0',
      [10, 10, 0, 0, 1, 10, 0],
      [10, 10],
      [5, 8.660254038],
      [-120, 60],
      [5, -1.339745962],
      [10, 0],
      10.471975512,
    ],
    [
      'A10,10 0 1 1 10,0',
      [10, 10, 0, 1, 1, 10, 0],
      [10, 10],
      [5, -8.660254038],
      [120, 300],
      [5, -18.660254038],
      [10, 0],
      52.35987756,
    ],
    [
      'A10,10 0 0 0 10,0',
      [10, 10, 0, 0, 0, 10, 0],
      [10, 10],
      [5, -8.660254038],
      [120, -60],
      [5, 1.339745962],
      [10, 0],
      10.471975512,
    ],
    [
      'A8,4 30 1 0 5,3',
      [8, 4, 30, 1, 0, 5, 3],
      [8, 4],
      [0.421786511, 4.598593812],
      [-109.45533, -317.235403],
      [-1.810047455, 7.926234091],
      [5, 3],
      32.887830855,
    ],
  ];
  it.each(ARCS)(
    'the arc M0,0 %s about its centre',
    (text, ends, radii, centre, angles, middle, end, length) => {
      const arc = arcOf(ends);
      near(Math.hypot(...arc.p), radii[0]);
      near(Math.hypot(...arc.q), radii[1]);
      near(arc.centre[0], centre[0]);
      near(arc.centre[1], centre[1]);
      // Six decimals of a degree; a start at ±180° may be given either way.
      const turn = (arc.start * 180) / Math.PI - angles[0];
      near(turn - 360 * Math.round(turn / 360), 0, 1e-6);
      near((arc.sweep * 180) / Math.PI, angles[1], 1e-6);
      const half = on(arc, 0.5);
      near(half[0], middle[0]);
      near(half[1], middle[1]);
      near(lengthOf(arc), length);

      // And read from a file: every point on the arc, the ends exactly, v = -y, chords within the tolerance.
      const { points } = stroke(page(`<path fill="none" stroke="#000" d="M0,0 ${text}"/>`));
      expect([points[0], points[1] + 0]).toEqual([0, 0]);
      expect([points.at(-2), points.at(-1)]).toEqual([end[0], 0 - end[1]]);
      const n = points.length / 2 - 1;
      for (let i = 0; i <= n; i++) {
        const at = on(arc, i / n);
        near(Math.hypot(points[2 * i] - at[0], points[2 * i + 1] + at[1]), 0, 1e-12);
        const between = on(arc, (i + 0.5) / n);
        if (i < n) expect(distance(between, points, i)).toBeLessThan(DEFAULTS.tolerance * (1 + 1e-9));
      }
    },
  );

  it('equal ends make nothing, a radius of 0 a line, a radius below 0 counts without its sign', () => {
    const d = (text: string): Float64Array =>
      stroke(page(`<path fill="none" stroke="#000" d="${text}"/>`)).points;
    expect([...d('M1,2 A3,3 0 1 1 1,2 L5,2')]).toEqual([1, -2, 5, -2]);
    expect([...d('M1,2 A0,3 0 1 1 5,2')]).toEqual([1, -2, 5, -2]);
    expect([...d('M1,2 A3,0 0 1 1 5,2')]).toEqual([1, -2, 5, -2]);
    expect(d('M1,2 A-3,2 20 1 1 5,2')).toEqual(d('M1,2 A3,2 20 1 1 5,2'));
  });

  it('flags stand without separators, and any that is not 0 counts as 1', () => {
    const d = (text: string): Float64Array =>
      stroke(page(`<path fill="none" stroke="#000" d="M20,30${text}"/>`)).points;
    expect(d('a1,1 0 0110,0')).toEqual(d('a1,1 0 0 1 10,0'));
    expect(d('a9 8 7 00.5.5')).toEqual(d('a 9,8 7 0 0 0.5 0.5'));
    expect(d('a9,8 7 5 0 1,1')).toEqual(d('a9,8 7 1 0 1,1'));
  });

  it.each([
    ['translate(10,0) scale(2)', [1, 1], [12, 2]],
    ['scale(2) translate(10,0)', [1, 1], [22, 2]],
    ['rotate(90)', [1, 0], [0, 1]],
    ['rotate(90, 3, 5)', [4, 5], [3, 6]],
    ['rotate(-30 3 5)', [5, 5], [3 + Math.sqrt(3), 4]],
    ['matrix(1 2 3 4 5 6)', [7, 9], [39, 56]],
    ['skewX(45)', [1, 2], [3, 2]],
    ['skewY(45)', [1, 2], [1, 3]],
    ['translate(3)', [1, 2], [4, 2]],
    ['scale(2,-3)', [1, 2], [2, -6]],
    ['translate(1e1-2)scale(.5.25)', [2, 4], [11, -1]],
  ])('%s takes %j to %j', (text, from, to) => {
    const [x, y] = apply(readTransform(text), from[0], from[1]);
    near(x, to[0], 1e-12);
    near(y, to[1], 1e-12);
    const d = page(
      `<g transform="${text}"><line x1="${from[0]}" y1="${from[1]}" x2="50" y2="-7" stroke="#000"/></g>`,
    );
    near(stroke(d).points[0], to[0], 1e-12);
    near(stroke(d).points[1], -to[1], 1e-12);
  });

  it.each<[string, Matrix]>([
    ['', [0.25, 0, 0, 0.25, 25, 0]],
    ['xMidYMid meet', [0.25, 0, 0, 0.25, 25, 0]],
    ['xMidYMid slice', [0.5, 0, 0, 0.5, 0, -25]],
    ['none', [0.5, 0, 0, 0.25, 0, 0]],
    ['xMinYMax meet', [0.25, 0, 0, 0.25, 0, 0]],
    ['xMaxYMid', [0.25, 0, 0, 0.25, 50, 0]],
    ['xMidYMin slice', [0.5, 0, 0, 0.5, 0, 0]],
    ['xMidYMax slice', [0.5, 0, 0, 0.5, 0, -50]],
  ])('a viewBox 200 by 200 on 100 mm by 50 mm, preserveAspectRatio "%s"', (aspect, m) => {
    const said = aspect === '' ? '' : `preserveAspectRatio="${aspect}"`;
    const line = '<path d="M10,20 L150,70" fill="none" stroke="#000"/>';
    const want = [...apply(m, 10, 20), ...apply(m, 150, 70)].map((c, i) => (i % 2 === 0 ? c : -c));
    const outer = read(`<svg width="100mm" height="50mm" viewBox="0 0 200 200" ${said}>${line}</svg>`);
    const inner = page(
      `<svg x="3" y="4" width="100" height="50" viewBox="0 0 200 200" ${said}>${line}</svg>`,
    );
    stroke(outer).points.forEach((c, i) => {
      near(c, want[i], 1e-12);
    });
    stroke(inner).points.forEach((c, i) => {
      near(c, want[i] + (i % 2 === 0 ? 3 : -4), 1e-12);
    });
  });

  it('a viewBox that begins elsewhere is shifted to the corner; one side alone fixes the other', () => {
    const line = '<line x1="-30" y1="7" x2="20" y2="57" stroke="#000"/>';
    for (const size of [
      'width="25mm" height="25mm"',
      'width="25mm"',
      'height="25mm"',
      'width="100%" height="25mm"',
    ]) {
      const d = read(`<svg ${size} viewBox="-30 7 50 50">${line}</svg>`);
      [0, 0, 25, -25].forEach((c, i) => {
        near(stroke(d).points[i], c, 1e-12);
      });
    }
  });

  it('areas of the basic shapes in closed form', () => {
    const tolerance = 1e-6;
    /** A chord within s of its arc of radius r takes off at most s on each mm of outline. */
    const within = (body: string, want: number, outline: number): void =>
      near(area(page(body, tolerance)), want, outline * tolerance + 1e-9);
    within('<rect x="1" y="2" width="7" height="3"/>', 21, 20);
    within('<rect x="1" y="2" width="7" height="3" rx="1"/>', 21 - (4 - Math.PI), 20);
    within('<rect x="1" y="2" width="7" height="3" rx="1" ry="0.5"/>', 21 - 0.5 * (4 - Math.PI), 20);
    // Radii are cut to half the side: a stadium's ends become half circles.
    within('<rect x="1" y="2" width="7" height="3" rx="9" ry="1.5"/>', (Math.PI * 3.5 * 3) / 2, 20);
    within('<circle cx="20" cy="11" r="4"/>', 16 * Math.PI, 26);
    within('<ellipse cx="20" cy="11" rx="8" ry="4"/>', 32 * Math.PI, 40);
    within('<polygon points="0,0 10,0 3,7"/>', 35, 30);
    within('<polyline points="0,0 10,0 3,7"/>', 35, 30);
    within('<path d="M0,0 C0,4 6,4 6,0Z"/>', (3 / 20) * (2 * 6 * 4 * 2 - 0), 20);
    within('<path d="M0,0 Q3,6 6,0"/>', (2 / 3) * (0.5 * 6 * 6), 20);
  });

  it('fill rules: a star fills its middle by nonzero, not by evenodd', () => {
    const star = Array.from({ length: 5 }, (_, i) => {
      const a = (4 * Math.PI * i) / 5;
      return `${20 + 10 * Math.sin(a)},${20 - 10 * Math.cos(a)}`;
    }).join(' ');
    const [r, t] = [10, Math.PI / 5];
    // A pentagram of circumradius r: its inner pentagon has the circumradius r cos 2t / cos t.
    const inner = (r * Math.cos(2 * t)) / Math.cos(t);
    const whole = 5 * r * inner * Math.sin(t);
    const pentagon = 2.5 * inner * inner * Math.sin(2 * t);
    near(area(page(`<polygon points="${star}"/>`)), whole, 1e-6);
    near(area(page(`<polygon points="${star}" fill-rule="evenodd"/>`)), whole - pentagon, 1e-6);
    const two = (inner: string): string => `<path d="M0,0H10V10H0Z ${inner}"/>`;
    near(area(page(two('M2,2H5V5H2Z'))), 100, 1e-6);
    near(area(page(two('M2,2V5H5V2Z'))), 91, 1e-6);
    const ring = page(two('M2,2V5H5V2Z')).shapes[0].figure as Area;
    expect(ring.rings.map((one) => Math.sign(flat.area([one])))).toEqual([1, -1]);
  });

  it('smooth commands take the last control point over, and only from a curve of their kind', () => {
    const d = (text: string): Float64Array =>
      stroke(page(`<path fill="none" stroke="#000" d="M1,1${text}"/>`)).points;
    expect(d('C2,5 6,7 9,3 S12,0 20,2')).toEqual(d('C2,5 6,7 9,3 C12,-1 12,0 20,2'));
    expect(d('Q2,5 9,3 T20,2 t3,3')).toEqual(d('Q2,5 9,3 Q16,1 20,2 Q24,3 23,5'));
    expect(d('Q2,5 9,3 S12,0 20,2')).toEqual(d('Q2,5 9,3 C9,3 12,0 20,2'));
    expect(d('h3 t5,2')).toEqual(d('h3 q0,0 5,2'));
    expect(d('m2,3 4,5 6,7')).toEqual(d('M3,4 L7,9 13,16'));
    expect(d('l9,0 0,5zl3,3')).toEqual(d('L10,1 10,6 Z M1,1 L4,4'));
  });
});

type EndArc = [rx: number, ry: number, turn: number, large: number, sweep: number, x: number, y: number];

function arcOf([rx, ry, turn, large, sweep, x, y]: EndArc): Arc {
  const arc = arcOfEnds({ from: [0, 0], to: [x, y], rx, ry, turn, large: large === 1, sweep: sweep === 1 });
  if (typeof arc === 'string') throw new Error(arc);
  return arc;
}

function on({ centre, p, q, start, sweep }: Arc, share: number): [number, number] {
  const [c, s] = [Math.cos(start + share * sweep), Math.sin(start + share * sweep)];
  return [centre[0] + c * p[0] + s * q[0], centre[1] + c * p[1] + s * q[1]];
}

/** Simpson's rule over the speed. */
function lengthOf({ p, q, start, sweep }: Arc): number {
  const n = 2000;
  let sum = 0;
  for (let i = 0; i <= n; i++) {
    const a = start + (sweep * i) / n;
    const speed = Math.hypot(
      q[0] * Math.cos(a) - p[0] * Math.sin(a),
      q[1] * Math.cos(a) - p[1] * Math.sin(a),
    );
    sum += speed * (i === 0 || i === n ? 1 : i % 2 === 1 ? 4 : 2);
  }
  return (sum * Math.abs(sweep)) / (3 * n);
}

/** From a point in SVG's axes to chord i of the drawing. */
function distance([x, y]: [number, number], points: Float64Array, i: number): number {
  const [ax, ay, bx, by] = points.slice(2 * i, 2 * i + 4);
  const [dx, dy] = [bx - ax, by - ay];
  return Math.abs(dx * (-y - ay) - dy * (x - ax)) / Math.hypot(dx, dy);
}
