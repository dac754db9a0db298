import { createParser } from '@tracespace/parser';
import fc from 'fast-check';
import gerberParser from 'gerber-parser';
import { beforeAll, describe, expect, test } from 'vitest';
import { randomFrom } from '../../../src/core/base/random.ts';
import type { Shape } from '../../../src/core/drawing/drawing.ts';
import { type Flat, ringArea } from '../../../src/core/drawing/flat.ts';
import { evaluate } from '../../../src/core/drawing/gerber-macro.ts';
import { flatForTests } from '../helpers/flat.ts';
import { areaOf, box, covered, MM, read } from './gerber-helpers.ts';

let flat: Flat;
beforeAll(async () => {
  flat = await flatForTests();
});

const um = (mm: number): number => Math.round(mm * 1e6);
const xy = (x: number, y: number): string => `X${um(x)}Y${um(y)}`;

describe('what a random file says is what is read', () => {
  /** One coordinate written in a format, mm to digits. */
  const digits = (mm: number, unit: number, whole: number, after: number, kept: 'L' | 'T' | 'D'): string => {
    const n = Math.round((mm / unit) * 10 ** after);
    const full = String(Math.abs(n)).padStart(whole + after, '0');
    const cut =
      kept === 'L' ? full.replace(/^0+(?=\d)/, '') : kept === 'T' ? full.replace(/(?<=\d)0+$/, '') : full;
    return (n < 0 ? '-' : '') + cut;
  };

  test('apertures, places and areas in any format, unit, placing and layout of lines, seed 5201', async () => {
    await fc.assert(
      fc.asyncProperty(
        fc.record({
          whole: fc.integer({ min: 3, max: 5 }),
          after: fc.integer({ min: 4, max: 6 }),
          kept: fc.constantFrom('L' as const, 'T' as const, 'D' as const),
          incremental: fc.boolean(),
          unit: fc.constantFrom(1, 25.4),
          layout: fc.constantFrom('\n', '\r\n', ''),
          things: fc.array(
            fc.record({
              template: fc.constantFrom('C', 'R', 'O', 'P'),
              a: fc.integer({ min: 1, max: 400 }),
              b: fc.integer({ min: 1, max: 400 }),
              hole: fc.integer({ min: 0, max: 9 }),
              corners: fc.integer({ min: 3, max: 12 }),
              x: fc.integer({ min: -4000, max: 4000 }),
              y: fc.integer({ min: -4000, max: 4000 }),
              mirror: fc.constantFrom('N', 'X', 'Y', 'XY'),
              turn: fc.integer({ min: -180, max: 360 }),
              scale: fc.integer({ min: 3, max: 25 }),
              net: fc.constantFrom('A', 'N/C', '', 'plus\\u002Cone'),
            }),
            { minLength: 1, maxLength: 12 },
          ),
        }),
        async ({ whole, after, kept, incremental, unit, layout, things }) => {
          const q = unit * 10 ** -after;
          const lines = [
            `%FS${kept}${incremental ? 'I' : 'A'}X${whole}${after}Y${whole}${after}*%`,
            unit === 1 ? '%MOMM*%' : '%MOIN*%',
          ];
          let [px, py] = [0, 0];
          const want = things.map((t, k) => {
            // Whole steps of the format, so that the places are exactly what is written.
            const [x, y] = [t.x * 100 * q, t.y * 100 * q];
            const [a, b] = [t.a / 40, t.b / 40];
            const inner = {
              C: a,
              R: Math.min(a, b),
              O: Math.min(a, b),
              P: a * Math.cos(Math.PI / t.corners),
            }[t.template]!;
            const hole = (inner * t.hole) / 10;
            const u = (v: number): string => (v / unit).toFixed(12);
            const sizes = {
              C: u(a),
              R: `${u(a)}X${u(b)}`,
              O: `${u(a)}X${u(b)}`,
              P: `${u(a)}X${t.corners}X15`,
            }[t.template];
            lines.push(`%ADD${10 + k}${t.template},${sizes}${t.hole ? `X${u(hole)}` : ''}*%`);
            lines.push(`%LM${t.mirror}*%`, `%LR${t.turn}*%`, `%LS${t.scale / 10}*%`, `%TO.N,${t.net}*%`);
            const [dx, dy] = incremental ? [x - px, y - py] : [x, y];
            [px, py] = [x, y];
            const word = (v: number): string => digits(v, unit, whole, after, kept);
            lines.push(`D${10 + k}*`, `X${word(dx)}Y${word(dy)}D03*`);
            const s = t.scale / 10;
            const short = Math.min(a, b);
            const solid = {
              C: (Math.PI * a * a) / 4,
              R: a * b,
              O: (Math.max(a, b) - short) * short + (Math.PI * short * short) / 4,
              P: (t.corners / 8) * a * a * Math.sin((2 * Math.PI) / t.corners),
            }[t.template]!;
            return {
              x,
              y,
              area: s * s * (solid - (Math.PI * hole * hole) / 4),
              net: t.net === 'A' ? 'A' : t.net === 'plus\\u002Cone' ? 'plus,one' : null,
              template: t.template,
            };
          });
          lines.push('M02*');
          const d = await read([lines.join(layout)]);
          expect(d.notes).toEqual([]);
          expect(d.shapes.length).toBe(want.length);
          d.shapes.forEach((s, k) => {
            expect(Math.abs(areaOf(s) - want[k].area)).toBeLessThan(1e-6);
            expect(s.net).toBe(want[k].net);
            expect(s.role).toBe('pad');
            if (s.figure.kind !== 'area') throw new Error('a flash is an area');
            expect(s.figure.rings.map((r) => Math.sign(ringArea(r)))).toEqual(
              s.figure.rings.length === 1 ? [1] : [1, -1],
            );
            if (want[k].template === 'P') return;
            const [x0, y0, x1, y1] = box([s]);
            expect(Math.abs((x0 + x1) / 2 - want[k].x)).toBeLessThan(0.02);
            expect(Math.abs((y0 + y1) / 2 - want[k].y)).toBeLessThan(0.02);
          });
        },
      ),
      { seed: 5201, numRuns: 60 },
    );
  });
});

/** A figure of the plain painter: above 0 outside, mm from its edge. */
type Distance = (x: number, y: number) => number;
interface Painted {
  dark: boolean;
  distance: Distance;
}

const segment =
  (ax: number, ay: number, bx: number, by: number, r: number): Distance =>
  (x, y) => {
    const [dx, dy] = [bx - ax, by - ay];
    const l2 = dx * dx + dy * dy;
    const t = l2 === 0 ? 0 : Math.max(0, Math.min(1, ((x - ax) * dx + (y - ay) * dy) / l2));
    return Math.hypot(x - ax - t * dx, y - ay - t * dy) - r;
  };
const rectangle =
  (cx: number, cy: number, w: number, h: number): Distance =>
  (x, y) =>
    Math.max(Math.abs(x - cx) - w / 2, Math.abs(y - cy) - h / 2);
const ring =
  (cx: number, cy: number, outer: number, inner: number): Distance =>
  (x, y) => {
    const d = Math.hypot(x - cx, y - cy);
    return Math.max(d - outer / 2, inner / 2 - d);
  };

/** The figure as a flash of a block would lay it: mirrored, turned, scaled, then moved. */
const placed =
  (d: Distance, mirror: string, turn: number, s: number, tx: number, ty: number): Distance =>
  (x, y) => {
    const a = (-turn * Math.PI) / 180;
    const [u, v] = [x - tx, y - ty];
    const [p, q] = [(Math.cos(a) * u - Math.sin(a) * v) / s, (Math.sin(a) * u + Math.cos(a) * v) / s];
    return s * d(mirror.includes('X') ? -p : p, mirror.includes('Y') ? -q : q);
  };

function inside(rings: readonly Float64Array[], x: number, y: number): boolean {
  let winding = 0;
  for (const r of rings)
    for (let i = 0; i < r.length; i += 2) {
      const j = (i + 2) % r.length;
      const [ax, ay, bx, by] = [r[i], r[i + 1], r[j], r[j + 1]];
      if (ay <= y !== by <= y) {
        const left = (bx - ax) * (y - ay) - (by - ay) * (x - ax) > 0;
        if (by > ay && left) winding++;
        if (by < ay && !left) winding--;
      }
    }
  return winding !== 0;
}

describe('a plain painter, point by point, sees the same copper', () => {
  test('draws, flashes, macros, regions, clear polarity, repeats and blocks in any order, seed 5202', async () => {
    const random = randomFrom(5202);
    const r3 = (from: number, to: number): number =>
      Math.round(1000 * (from + (to - from) * random())) / 1000;
    const pick = <T>(...of: T[]): T => of[Math.floor(random() * of.length)];
    let compared = 0;
    for (let round = 0; round < 40; round++) {
      const lines = [
        ...MM,
        ...[
          '%ADD10C,0.8*%',
          '%ADD11R,1.7X0.9*%',
          '%AMRING*1,1,$1,$3,0*1,0,$2,$3,0*%',
          '%ADD12RING,2.4X1.1X0.7*%',
        ],
        ...['%ADD13C,1.5X0.6*%', '%ADD14R,0.7X0.7*%', 'G75*', 'G01*'],
      ];
      /** One thing at random, within 6 mm of the origin: its lines, and what a painter does. */
      const thing = (): Painted => {
        const dark = random() < 0.65;
        lines.push(dark ? '%LPD*%' : '%LPC*%');
        const [x, y] = [r3(-6, 6), r3(-6, 6)];
        switch (pick('draw', 'box', 'ring', 'hole', 'region', 'square')) {
          case 'draw': {
            const [u, v] = [r3(-6, 6), r3(-6, 6)];
            lines.push('D10*', `${xy(x, y)}D02*`, `${xy(u, v)}D01*`);
            return { dark, distance: segment(x, y, u, v, 0.4) };
          }
          case 'square': {
            const u = r3(-6, 6);
            lines.push('D14*', `${xy(x, y)}D02*`, `X${um(u)}D01*`);
            return { dark, distance: rectangle((x + u) / 2, y, Math.abs(u - x) + 0.7, 0.7) };
          }
          case 'box':
            lines.push('D11*', `${xy(x, y)}D03*`);
            return { dark, distance: rectangle(x, y, 1.7, 0.9) };
          case 'ring':
            lines.push('D12*', `${xy(x, y)}D03*`);
            return { dark, distance: ring(x + 0.7, y, 2.4, 1.1) };
          case 'hole':
            lines.push('D13*', `${xy(x, y)}D03*`);
            return { dark, distance: ring(x, y, 1.5, 0.6) };
          default: {
            const [w, h] = [r3(0.5, 5), r3(0.5, 5)];
            // Clockwise: the way round says nothing in Gerber.
            lines.push(
              'G36*',
              `${xy(x, y)}D02*`,
              `Y${um(y + h)}D01*`,
              `X${um(x + w)}D01*`,
              `Y${um(y)}D01*`,
              `X${um(x)}D01*`,
              'G37*',
            );
            return { dark, distance: rectangle(x + w / 2, y + h / 2, w, h) };
          }
        }
      };
      const painted: Painted[] = [];
      for (let k = 0; k < 8; k++) {
        const kind = pick('one', 'one', 'one', 'repeat', 'block');
        if (kind === 'one') painted.push(thing());
        else if (kind === 'repeat') {
          const [dx, dy] = [r3(0, 4), r3(0, 4)];
          lines.push(`%SRX2Y3I${dx}J${dy}*%`);
          const unit = [thing(), thing()];
          lines.push('%SR*%');
          for (let i = 0; i < 2; i++)
            for (let j = 0; j < 3; j++)
              for (const p of unit)
                painted.push({ dark: p.dark, distance: (x, y) => p.distance(x - i * dx, y - j * dy) });
        } else {
          lines.push(`%ABD${30 + k}*%`);
          const unit = [thing(), thing()];
          lines.push('%AB*%');
          const [mirror, turn, s] = [pick('N', 'X', 'Y', 'XY'), pick(0, 90, 33, -120), pick(1, 0.6, 1.4)];
          const dark = random() < 0.7;
          const [tx, ty] = [r3(-3, 3), r3(-3, 3)];
          lines.push(`%LM${mirror}*%`, `%LR${turn}*%`, `%LS${s}*%`, dark ? '%LPD*%' : '%LPC*%');
          lines.push(`D${30 + k}*`, `${xy(tx, ty)}D03*`, '%LMN*%', '%LR0*%', '%LS1*%');
          for (const p of unit)
            painted.push({ dark: p.dark === dark, distance: placed(p.distance, mirror, turn, s, tx, ty) });
        }
      }
      const d = await read([...lines, 'M02*']);
      expect(d.notes).toEqual([]);
      const whole = await covered(flat, d.shapes, 0.005);
      for (let k = 0; k < 400; k++) {
        const [x, y] = [16 * random() - 8, 16 * random() - 8];
        // Within three tolerances of any edge flattening decides.
        if (painted.some((p) => Math.abs(p.distance(x, y)) < 0.015)) continue;
        let copper = false;
        for (const p of painted) if (p.distance(x, y) < 0) copper = p.dark;
        compared++;
        if (inside(whole, x, y) !== copper)
          expect.fail(`round ${round}, at ${x}, ${y}: copper should be ${copper}\n${lines.join('\n')}`);
      }
    }
    expect(compared).toBeGreaterThan(10_000);
  });
});

/** What gerber-parser has and its types leave out. */
interface SecondReader {
  on(event: 'warning', hear: () => void): void;
  parseSync(
    text: string,
  ): { type: string; prop?: string; value?: string; op?: string; coord?: { x?: number; y?: number } }[];
}

describe('second readers', () => {
  const write = (seed: number): { lines: string[]; text: string } => {
    const random = randomFrom(seed);
    const pick = <T>(...of: T[]): T => of[Math.floor(random() * of.length)];
    const [whole, after] = [pick(2, 3, 4), pick(3, 4, 5)];
    const number = (): string => {
      const digits = 1 + Math.floor(random() * (whole + after));
      const text = Array.from({ length: digits }, () => Math.floor(random() * 10)).join('');
      return pick('', '', '-', '+') + text;
    };
    const lines = [
      `%FS${pick('L', 'T')}AX${whole}${after}Y${whole}${after}*%`,
      pick('%MOMM*%', '%MOIN*%'),
      '%ADD10C,0.25*%',
      '%ADD11R,1X0.5*%',
      'D10*',
      `X${number()}Y${number()}D02*`,
    ];
    for (let k = 0; k < 30; k++) {
      const at = pick(`X${number()}Y${number()}`, `X${number()}`, `Y${number()}`);
      lines.push(pick('', '', 'G01') + at + pick('D01', 'D1', 'D02', 'D03') + '*');
      if (random() < 0.2) lines.push(pick('D10*', 'D11*', 'G04 word*', 'G54D11*'));
    }
    lines.push('M02*');
    return { lines, text: lines.join('\n') };
  };
  /** Nothing is nothing, whatever its sign. */
  const act = (name: string, ...mm: number[]): string =>
    [name, ...mm.map((v) => v.toFixed(6).replace(/^-(0\.0+)$/, '$1'))].join(' ');
  /** Flashes and straight draws with the round aperture, in order. */
  const acts = (shapes: readonly Shape[]): string[] =>
    shapes.flatMap((s): string[] => {
      const f = s.figure;
      if (s.role === 'pad') {
        const [x0, y0, x1, y1] = box([s]);
        return [act('flash', (x0 + x1) / 2, (y0 + y1) / 2)];
      }
      if (f.kind !== 'stroke' || f.ends !== 'round') return [];
      const p = f.closed ? [...f.points, f.points[0], f.points[1]] : [...f.points];
      return Array.from({ length: p.length / 2 - 1 }, (_, k) => act('draw', ...p.slice(2 * k, 2 * k + 4)));
    });
  interface Step {
    act: string;
    tool?: string | undefined;
    x?: number | undefined;
    y?: number | undefined;
  }
  /** What a second reader's commands do, from D10 on. */
  const follow = (steps: readonly Step[]): string[] => {
    const want: string[] = [];
    let [x, y, tool] = [0, 0, '10'];
    for (const c of steps) {
      if (c.act === 'tool') tool = c.tool!;
      const [u, v] = [c.x ?? x, c.y ?? y];
      if (c.act === 'flash') want.push(act('flash', u, v));
      if (c.act === 'draw' && tool === '10' && (u !== x || v !== y)) want.push(act('draw', x, y, u, v));
      [x, y] = [u, v];
    }
    return want;
  };

  test('200 random files do what gerber-parser says, seeds from 5300', async () => {
    let seen = 0;
    for (let seed = 5300; seed < 5500; seed++) {
      const { lines, text } = write(seed);
      const unit = text.includes('MOIN') ? 25.4 : 1;
      const mm = (v: number | undefined): number | undefined => (v === undefined ? undefined : v * unit);
      const parser = gerberParser({}) as unknown as SecondReader;
      parser.on('warning', () => {});
      const want = follow(
        parser.parseSync(text).flatMap((c): Step[] => {
          if (c.type === 'set' && c.prop === 'tool') return [{ act: 'tool', tool: c.value }];
          if (c.type !== 'op') return [];
          return [{ act: c.op === 'int' ? 'draw' : c.op!, x: mm(c.coord?.x), y: mm(c.coord?.y) }];
        }),
      );
      expect(acts((await read(lines)).shapes)).toEqual(want);
      seen += want.length;
    }
    expect(seen).toBeGreaterThan(1500);
  });

  test('200 random files do what @tracespace/parser says, seeds from 5500', async () => {
    let seen = 0;
    for (let seed = 5500; seed < 5700; seed++) {
      const { lines, text } = write(seed);
      const parser = createParser();
      parser.feed(text);
      let [leftOut, whole, after, unit] = ['leading', 0, 0, 1];
      const value = (word: string | undefined): number | undefined => {
        if (word === undefined) return undefined;
        const digits = word.replace(/^[-+]/, '');
        const full = leftOut === 'trailing' ? digits.padEnd(whole + after, '0') : digits;
        return ((word.startsWith('-') ? -unit : unit) * Number(full)) / 10 ** after;
      };
      const want = follow(
        parser.results().children.flatMap((c): Step[] => {
          if (c.type === 'coordinateFormat') {
            leftOut = c.zeroSuppression ?? 'leading';
            [whole, after] = c.format ?? [0, 0];
          } else if (c.type === 'units') unit = c.units === 'in' ? 25.4 : 1;
          else if (c.type === 'toolChange') return [{ act: 'tool', tool: c.code }];
          else if (c.type === 'graphic') {
            const name = c.graphic === 'shape' ? 'flash' : c.graphic === 'segment' ? 'draw' : 'move';
            return [{ act: name, x: value(c.coordinates.x), y: value(c.coordinates.y) }];
          }
          return [];
        }),
      );
      expect(acts((await read(lines)).shapes)).toEqual(want);
      seen += want.length;
    }
    expect(seen).toBeGreaterThan(1500);
  });

  test('sums of macros are worked out as from the tree of @tracespace/parser, seed 5701', () => {
    const random = randomFrom(5701);
    const pick = <T>(...of: T[]): T => of[Math.floor(random() * of.length)];
    const sum = (deep: number): string =>
      deep === 0 || random() < 0.3
        ? pick('$1', '$2', '1.5', '2', '.25', '7')
        : random() < 0.3
          ? `(${sum(deep - 1)})`
          : sum(deep - 1) + pick('+', '-', 'x', '/') + sum(deep - 1);
    type Tree = number | string | { left: Tree; right: Tree; operator: string };
    const worked = (t: Tree): number => {
      if (typeof t === 'number') return t;
      if (typeof t === 'string') return t === '$1' ? 3 : 0.7;
      const [a, b] = [worked(t.left), worked(t.right)];
      return t.operator === '+' ? a + b : t.operator === '-' ? a - b : t.operator === 'x' ? a * b : a / b;
    };
    let seen = 0;
    for (let k = 0; k < 300; k++) {
      const text = sum(4);
      const parser = createParser();
      parser.feed(`%FSLAX46Y46*%\n%MOMM*%\n%AMA*$3=${text}*%\n`);
      const macro = parser.results().children.find((c) => c.type === 'toolMacro');
      const tree = macro?.type === 'toolMacro' ? macro.children[0] : undefined;
      if (tree?.type !== 'macroVariable') throw new Error(`not parsed: ${text}`);
      const want = worked(tree.value as Tree);
      const values = new Map([
        [1, 3],
        [2, 0.7],
      ]);
      if (!Number.isFinite(want)) continue;
      seen++;
      expect(Math.abs(evaluate(text, values, 1) - want), text).toBeLessThanOrEqual(
        1e-12 * Math.max(1, Math.abs(want)),
      );
    }
    expect(seen).toBeGreaterThan(250);
  });
});
