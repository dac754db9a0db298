import { DOMParser } from '@xmldom/xmldom';
import svgpath from 'svgpath';
import { SVGLoader } from 'three/addons/loaders/SVGLoader.js';
import { beforeAll, describe, expect, it } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import { quiet } from '../../../src/core/base/run-context.ts';
import { type Area, DEFAULTS, type Drawing, type Stroke } from '../../../src/core/drawing/drawing.ts';
import type { Flat } from '../../../src/core/drawing/flat.ts';
import { flatten, type Pen } from '../../../src/core/drawing/flatten.ts';
import { apply, IDENTITY, times } from '../../../src/core/drawing/matrix.ts';
import { readSvg } from '../../../src/core/drawing/svg.ts';
import { drawPath } from '../../../src/core/drawing/svg-path.ts';
import { readTransform } from '../../../src/core/drawing/svg-transform.ts';
import { flatForTests } from '../helpers/flat.ts';

/** mm, on drawings some 100 mm large: sums of a few rounded products. */
const ROUNDING = 1e-10;

let flat: Flat;
beforeAll(async () => {
  flat = await flatForTests();
});

const page = (body: string): string =>
  `<svg xmlns="http://www.w3.org/2000/svg" width="100mm" height="80mm" viewBox="0 0 100 80">${body}</svg>`;
const read = (text: string): Drawing => readSvg(text, 'a.svg', DEFAULTS, flat, quiet);

describe('second readers', () => {
  it('three reads the same curves from 150 random drawings (seed 41)', () => {
    const random = dice(41);
    (globalThis as { DOMParser?: unknown }).DOMParser = PlainParser;
    for (let round = 0; round < 150; round++) {
      const text = page(randomBody(random, 0));
      const ours = read(text).shapes.map((s) => s.figure as Stroke);
      const theirs = new SVGLoader()
        .parse(text)
        .paths.flatMap((p) => p.subPaths)
        .map((s) => {
          const flatPoints = s.getPoints(64).flatMap((p) => [p.x, -p.y]);
          return Float64Array.from(flatPoints);
        })
        .filter((p) => p.length >= 4);
      expect(ours.length, text).toBe(theirs.length);
      ours.forEach((stroke, i) => {
        const mine = stroke.closed
          ? Float64Array.of(...stroke.points, ...stroke.points.slice(0, 2))
          : stroke.points;
        // Their points lie on the curves, ours on the curves and at their ends.
        expect(farthest(theirs[i], mine), text).toBeLessThan(DEFAULTS.tolerance * 1.0001 + ROUNDING);
        // 64 chords to a curve of 100 mm bow out less than this.
        expect(farthest(mine, theirs[i]), text).toBeLessThan(0.15);
      });
    }
    (globalThis as { DOMParser?: unknown }).DOMParser = undefined;
  });

  it('svgpath reads the same numbers from 400 random paths without separators (seed 42)', () => {
    const random = dice(42);
    for (let round = 0; round < 400; round++) {
      const text = randomPath(random, true, true);
      const log: (string | number)[] = [];
      drawPath(text, logger(log));
      const theirs: (string | number)[] = [];
      const parsed = svgpath(text);
      expect((parsed as unknown as { err: string }).err, text).toBe('');
      let first = [0, 0];
      parsed
        .abs()
        .unshort()
        .iterate((s, _i, x, y) => {
          const v = s.slice(1) as number[];
          if (s[0] === 'M') first = v;
          if (s[0] === 'H') theirs.push('L', v[0], y);
          else if (s[0] === 'V') theirs.push('L', x, v[0]);
          else if (s[0] === 'A') {
            if (v[5] !== x || v[6] !== y) theirs.push(v[0] === 0 || v[1] === 0 ? 'L' : 'A', v[5], v[6]);
          } else theirs.push((s[0] as string).toUpperCase(), ...v);
        });
      expect(first.length).toBe(2);
      expect(log.length, text).toBe(theirs.length);
      log.forEach((one, i) => {
        if (typeof one === 'string') expect(one, text).toBe(theirs[i]);
        else expect(Math.abs(one - (theirs[i] as number)), text).toBeLessThan(ROUNDING);
      });
    }
  });
});

it('groups in groups are the product of their matrices (seed 43)', () => {
  const random = dice(43);
  for (let round = 0; round < 200; round++) {
    let product = IDENTITY;
    let [before, after] = ['', ''];
    for (let depth = 0; depth < 5; depth++) {
      const text = randomTransform(random);
      product = times(product, readTransform(text));
      before += `<g transform="${text}">`;
      after += '</g>';
    }
    const [x, y] = [random.number(), random.number()];
    const d = read(page(`${before}<line x1="${x}" y1="${y}" x2="0" y2="0" stroke="#000"/>${after}`));
    const { points } = d.shapes[0].figure as Stroke;
    const want = [...apply(product, x, y), product[4], product[5]];
    const size = Math.max(100, ...want.map(Math.abs));
    want.forEach((c, i) => {
      expect(Math.abs(points[i] - (i % 2 === 0 ? c : -c))).toBeLessThan(size * 1e-12);
    });
  }
});

it('curves stay within the tolerance of their chords, under any map, and come close to it (seed 44)', () => {
  const random = dice(44);
  let nearest = 0;
  for (let round = 0; round < 400; round++) {
    const m = readTransform(randomTransform(random));
    const tolerance = 10 ** (-4 + 3 * random());
    const p = Array.from({ length: 8 }, () => random.number());
    const [a, b] = [random.number(), random.number()];
    const arc = {
      centre: [p[0], p[1]],
      p: [a, b],
      q: [-0.6 * b, 0.6 * a],
      start: 6 * random(),
      sweep: 6 * random(),
    } as const;
    const onArc = (t: number): [number, number] => {
      const [c, s] = [Math.cos(arc.start + t * arc.sweep), Math.sin(arc.start + t * arc.sweep)];
      return [p[0] + c * arc.p[0] + s * arc.q[0], p[1] + c * arc.p[1] + s * arc.q[1]];
    };
    const curves: [(pen: Pen) => void, (t: number) => [number, number]][] = [
      [
        (pen) => {
          pen.move(p[0], p[1]);
          pen.quadratic(p[2], p[3], p[4], p[5]);
        },
        (t) => bezier(p.slice(0, 6), t),
      ],
      [
        (pen) => {
          pen.move(p[0], p[1]);
          pen.cubic(p[2], p[3], p[4], p[5], p[6], p[7]);
        },
        (t) => bezier(p, t),
      ],
      [
        (pen) => {
          pen.move(...onArc(0));
          pen.arc(arc, ...onArc(1));
        },
        onArc,
      ],
    ];
    for (const [draw, at] of curves) {
      const pen = flatten(m, tolerance, () => {});
      draw(pen);
      const [{ points }] = pen.chains();
      // Pieces are even steps of the parameter, so the chord to look at is known.
      const n = points.length / 2 - 1;
      let far = 0;
      for (let k = 0; k < n; k += Math.max(1, Math.floor(n / 50))) {
        const chord = points.slice(2 * k, 2 * k + 4);
        for (const t of [0.1, 0.3, 0.5, 0.7, 0.9]) {
          const p = apply(m, ...at((k + t) / n));
          far = Math.max(far, farthest(Float64Array.from(p), chord));
        }
      }
      expect(far).toBeLessThan(tolerance * (1 + 1e-6) + 1e-9);
      nearest = Math.max(nearest, far / tolerance);
    }
  }
  expect(nearest).toBeGreaterThan(0.9);
});

it('what is filled is what the winding number says, by both rules, and pieces come apart (seed 45)', () => {
  const random = dice(45);
  for (let round = 0; round < 120; round++) {
    const rings = Array.from({ length: 1 + Math.floor(3 * random()) }, () =>
      Float64Array.from({ length: 2 * (3 + Math.floor(9 * random())) }, () => random.number()),
    );
    const d = rings.map((r) => `M${[...r].map((c, i) => (i % 2 === 0 ? c : -c)).join(' ')}Z`).join('');
    for (const rule of ['nonzero', 'evenodd']) {
      const areas = read(page(`<path fill-rule="${rule}" d="${d}"/>`)).shapes.map((s) => s.figure as Area);
      for (const { rings: one } of areas) {
        expect(one.filter((r) => flat.area([r]) > 0).length).toBe(1);
        expect(flat.area([one[0]])).toBeGreaterThan(0);
      }
      for (let k = 0; k < 40; k++) {
        const at: [number, number] = [random.number(), random.number()];
        // Rounding of the grid decides beside an outline.
        if (rings.some((r) => farthest(Float64Array.of(...at), Float64Array.of(...r, r[0], r[1])) < 1e-6))
          continue;
        const turns = rings.reduce((n, r) => n + winding(r, at), 0);
        const want = rule === 'evenodd' ? turns % 2 !== 0 : turns !== 0;
        const found = areas.filter(({ rings: one }) => one.reduce((n, r) => n + winding(r, at), 0) === 1);
        expect(found.length).toBe(want ? 1 : 0);
      }
    }
  }
});

it('islands in holes are pieces of their own, each hole with the outline around it (seed 46)', () => {
  const random = dice(46);
  for (let round = 0; round < 50; round++) {
    // Nested squares, each holding up to three smaller ones: outlines and holes by turns.
    const rings: Float64Array[] = [];
    const holesOf = new Map<Float64Array, Float64Array[]>();
    const nest = (x: number, y: number, size: number, depth: number, outline: Float64Array | null): void => {
      const square = [x, y, x + size, y, x + size, y + size, x, y + size];
      const ring = Float64Array.from(
        depth % 2 === 0 ? square : [0, 1, 6, 7, 4, 5, 2, 3].map((k) => square[k]),
      );
      rings.push(ring);
      if (outline) holesOf.get(outline)!.push(ring);
      else holesOf.set(ring, []);
      if (depth < 4)
        for (let i = 0; i < 3; i++)
          if (random() < 0.7)
            nest(
              x + size * (0.05 + 0.32 * i),
              y + size * 0.1,
              size * 0.26,
              depth + 1,
              depth % 2 === 0 ? ring : null,
            );
    };
    nest(random.number(), random.number(), 50, 0, null);
    nest(200 + random.number(), random.number(), 50, 0, null);
    const shuffled = [...rings].sort(() => random() - 0.5);
    const found = flat.split(shuffled);
    expect(found.length).toBe(holesOf.size);
    const corner = (r: Float64Array): string =>
      `${Math.min(...r.filter((_c, i) => i % 2 === 0))} ${r.length}`;
    const want = [...holesOf].map(([outline, holes]) => [corner(outline), ...holes.map(corner).sort()]);
    expect(found.map(([outline, ...holes]) => [corner(outline), ...holes.map(corner).sort()]).sort()).toEqual(
      want.sort(),
    );
  }
});

/** Node has no DOM: this one has all that the loader asks of it but selectors, which it needs for gradients alone. */
class PlainParser {
  parseFromString(text: string): unknown {
    return Object.assign(new DOMParser().parseFromString(text, 'image/svg+xml'), {
      querySelectorAll: () => [],
    });
  }
}

interface Dice {
  (): number;
  /** −50 to 50, two decimals */
  number(): number;
  pick<T>(from: readonly T[]): T;
}

function dice(seed: number): Dice {
  const random = randomFrom(seed);
  return Object.assign(() => random(), {
    number: () => Math.round((random() - 0.5) * 10_000) / 100,
    pick: <T>(from: readonly T[]): T => from[Math.floor(random() * from.length)],
  });
}

function randomTransform(random: Dice): string {
  const small = (): number => random.number() / 30;
  return Array.from({ length: 1 + Math.floor(2 * random()) }, () =>
    random.pick([
      () => `translate(${random.number()},${random.number()})`,
      () => `scale(${(0.3 + random()).toFixed(3)})`,
      () => `scale(${(0.3 + random()).toFixed(3)} ${(-0.3 - random()).toFixed(3)})`,
      () => `rotate(${random.number() * 4})`,
      () => `rotate(${random.number()} ${random.number()} ${random.number()})`,
      () => `skewX(${random.number()})`,
      () => `skewY(${small()})`,
      () => `matrix(1 ${small()} ${small()} -1 ${random.number()} ${random.number()})`,
    ])(),
  ).join(' ');
}

/** Groups, paths and shapes that are stroked alone. Arcs in groups are not compared: the loader turns some of them about. */
function randomBody(random: Dice, depth: number): string {
  const paint = 'fill="none" stroke="#123456"';
  const size = (): string => (1 + 20 * random()).toFixed(2);
  return Array.from({ length: 1 + Math.floor(4 * random()) }, () =>
    random.pick([
      () =>
        depth < 3 ? `<g transform="${randomTransform(random)}">${randomBody(random, depth + 1)}</g>` : '',
      () => `<path ${paint} d="${randomPath(random, false, depth === 0)}"/>`,
      () => `<path ${paint} d="${randomPath(random, false, depth === 0)}"/>`,
      () => `<circle ${paint} cx="${random.number()}" cy="${random.number()}" r="${size()}"/>`,
      () =>
        `<ellipse ${paint} cx="${random.number()}" cy="${random.number()}" rx="${size()}" ry="${size()}"/>`,
      () => `<line ${paint} x1="${random.number()}" y1="${random.number()}" x2="${random.number()}" y2="3"/>`,
      () =>
        `<polygon ${paint} points="${random.number()} ${random.number()},${random.number()},0 7 ${random.number()}"/>`,
      () =>
        `<polyline ${paint} points="${random.number()} ${random.number()},${random.number()},0 7 ${random.number()}"/>`,
      () =>
        `<rect ${paint} x="${random.number()}" y="${random.number()}" width="${size()}" height="${size()}"/>`,
    ])(),
  ).join('');
}

/** @param tight  as few separators as the grammar allows, exponents, points without digits before them */
function randomPath(random: Dice, tight: boolean, arcs: boolean): string {
  const write = (v: number[], flags: readonly number[] = []): string =>
    v
      .map((x, i) => {
        if (flags.includes(i))
          return `${tight && flags.includes(i - 1) ? '' : ' '}${Math.abs(x) % 1 < 0.5 ? 0 : 1}`;
        let text = tight && random() < 0.2 ? x.toExponential() : String(x);
        if (tight) text = text.replace(/^(-?)0\./, '$1.');
        const afterFlag = flags.includes(i - 1);
        return (i === 0 || (tight && (text.startsWith('-') || afterFlag)) ? '' : ' ') + text;
      })
      .join('');
  const many = (n: number): number[] => Array.from({ length: n }, () => random.number());
  let text = `M${write(many(2))}`;
  let last = '';
  for (let k = 0; k < 2 + 8 * random(); k++) {
    let letter = random.pick([...(arcs ? 'AaMmLlHhVvCcSsQqTtZz' : 'MmLlHhVvCcSsQqTtZz')]);
    // The loader mirrors a control point of the other kind of curve, which the specification does not.
    if (!tight && /[Ss]/.test(letter) && !/[CcSs]/.test(last)) letter = 'c';
    if (!tight && /[Tt]/.test(letter) && !/[QqTt]/.test(last)) letter = 'q';
    last = letter;
    const n = { m: 2, l: 2, h: 1, v: 1, c: 6, s: 4, q: 4, t: 2, a: 7, z: 0 }[letter.toLowerCase()] ?? 0;
    const v = many(n);
    if (n === 7) {
      // Radii have no sign in the grammar's own words; their sign does not count.
      [v[0], v[1]] = [Math.abs(v[0]) + 1, Math.abs(v[1]) + 1];
      text += letter + write(v, [3, 4]);
    } else if (letter === 'M' || letter === 'm')
      text += `${letter}${write(v)}${random() < 0.5 ? 'l' : 'L'}${write(many(2))}`;
    else if (n === 0) text += /[Zz]$/.test(text) ? 'L1 2' : letter;
    else text += letter + write(n > 1 && random() < 0.4 ? [...v, ...many(n)] : v);
  }
  return text;
}

function logger(log: (string | number)[]): Pen {
  return {
    move: (x, y) => log.push('M', x, y),
    line: (x, y) => log.push('L', x, y),
    quadratic: (...v) => log.push('Q', ...v),
    cubic: (...v) => log.push('C', ...v),
    arc: (_arc, x, y) => log.push('A', x, y),
    close: () => log.push('Z'),
  };
}

function bezier(p: number[], t: number): [number, number] {
  let v = p;
  while (v.length > 2) v = v.slice(2).map((x, i) => v[i] + t * (x - v[i]));
  return [v[0], v[1]];
}

/** How far the farthest of the points is from the chain. */
function farthest(points: Float64Array, chain: Float64Array): number {
  let most = 0;
  for (let i = 0; i < points.length; i += 2) {
    let least = Infinity;
    for (let k = 0; k + 3 < chain.length; k += 2) {
      const [dx, dy] = [chain[k + 2] - chain[k], chain[k + 3] - chain[k + 1]];
      const [px, py] = [points[i] - chain[k], points[i + 1] - chain[k + 1]];
      const length = dx * dx + dy * dy;
      const t = length > 0 ? Math.max(0, Math.min(1, (px * dx + py * dy) / length)) : 0;
      least = Math.min(least, Math.hypot(px - t * dx, py - t * dy));
    }
    most = Math.max(most, least);
  }
  return most;
}

/** Turns of the ring about a point, left round above 0. */
function winding(ring: Float64Array, [x, y]: [number, number]): number {
  let turns = 0;
  for (let i = 0, j = ring.length - 2; i < ring.length; j = i, i += 2) {
    const left = (ring[i] - ring[j]) * (y - ring[j + 1]) - (x - ring[j]) * (ring[i + 1] - ring[j + 1]);
    if (ring[j + 1] <= y && ring[i + 1] > y && left > 0) turns++;
    else if (ring[j + 1] > y && ring[i + 1] <= y && left < 0) turns--;
  }
  return turns;
}
