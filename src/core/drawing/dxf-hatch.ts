/** HATCH: boundaries of polylines or of edges, in the order in which their groups must stand. */
import { bulgeArc, leftSweep, onArc, radians } from './dxf-curves.ts';
import { type Entity, numberOf } from './dxf-groups.ts';
import { BadShape } from './findings.ts';
import type { Arc, Pen } from './flatten.ts';
import { flattenSpline } from './spline.ts';

/**
 * @param scale  mm in one unit, for splines, which are measured by the tolerance (mm)
 * @returns style: 0 by turns, 1 the outermost alone, 2 all that the outline holds
 * @throws BadShape `bad-hatch`, `bad-number`, `bad-spline`
 */
export function drawHatch(entity: Entity, scale: number, tolerance: number, pen: Pen): number {
  const { codes, values } = entity;
  let at = 0;
  const value = (code: number): number => {
    if (codes[at] !== code)
      throw new BadShape('bad-hatch', `group ${codes[at] ?? 'none'} stands in place of ${code}`);
    return numberOf(values[at++], code);
  };
  const given = (code: number, otherwise: number): number => (codes[at] === code ? value(code) : otherwise);
  const point = (code: number): [number, number] => [value(code), value(code + 10)];
  const count = (code: number): number => {
    const n = value(code);
    if (!Number.isInteger(n) || n < 0 || n > codes.length)
      throw new BadShape('bad-hatch', `a count of ${n} in group ${code}`);
    return n;
  };
  const skipTo = (code: number): boolean => {
    while (at < codes.length && codes[at] !== code) at++;
    return at < codes.length;
  };

  if (!skipTo(91)) throw new BadShape('bad-hatch', 'it has no boundary');
  const paths = count(91);
  for (let path = 0; path < paths; path++) {
    if ((value(92) & POLYLINE) !== 0) {
      const bulges = value(72) !== 0;
      value(73);
      const vertices = Array.from({ length: count(93) }, () => ({
        at: point(10),
        bulge: bulges ? given(42, 0) : 0,
      }));
      vertices.forEach((v, i) => {
        const next = vertices[(i + 1) % vertices.length].at;
        if (i === 0) pen.move(...v.at);
        if (v.bulge !== 0 && (v.at[0] !== next[0] || v.at[1] !== next[1]))
          pen.arc(bulgeArc(v.at, next, v.bulge), ...next);
        else pen.line(...next);
      });
    } else {
      const edges = count(93);
      for (let e = 0; e < edges; e++) edge(e === 0);
    }
    pen.close();
    if (codes[at] === 97) for (let n = count(97); n > 0; n--) value330();
  }
  return skipTo(75) ? value(75) : 0;

  function value330(): void {
    if (codes[at] === 330) at++;
  }

  function edge(isFirst: boolean): void {
    const begin = (x: number, y: number): void => {
      if (isFirst) pen.move(x, y);
      else pen.line(x, y);
    };
    const kind = value(72);
    if (kind === 1) {
      begin(...point(10));
      pen.line(...point(11));
    } else if (kind === 2) {
      const centre = point(10);
      const r = value(40);
      turn({ centre, p: [r, 0], q: [0, r] }, begin);
    } else if (kind === 3) {
      const [centre, p] = [point(10), point(11)];
      const ratio = value(40);
      turn({ centre, p, q: [-p[1] * ratio, p[0] * ratio] }, begin);
    } else if (kind === 4) spline(begin);
    else throw new BadShape('bad-hatch', `an edge of kind ${kind}`);
  }

  function turn(on: Pick<Arc, 'centre' | 'p' | 'q'>, begin: (x: number, y: number) => void): void {
    const [from, to] = [radians(value(50)), radians(value(51))];
    // Right round, both angles count to the right too.
    const sense = value(73) !== 0 ? 1 : -1;
    const arc: Arc = { ...on, start: sense * from, sweep: sense * leftSweep(from, to) };
    begin(...onArc(arc, arc.start));
    pen.arc(arc, ...onArc(arc, arc.start + arc.sweep));
  }

  function spline(begin: (x: number, y: number) => void): void {
    const degree = value(94);
    const rational = value(73) !== 0;
    value(74);
    const [knotCount, pointCount] = [count(95), count(96)];
    const knots = Array.from({ length: knotCount }, () => value(40));
    const weights: number[] = [];
    const points = Array.from({ length: pointCount }, (): [number, number] => {
      const [x, y] = point(10);
      if (rational) weights.push(given(42, 1));
      return [x * scale, y * scale];
    });
    if (codes[at] === 97) {
      // Points it was drawn through, and its ends' directions: the control points say it all.
      for (let n = count(97); n > 0 && codes[at] === 11; n--) point(11);
      if (codes[at] === 12) point(12);
      if (codes[at] === 13) point(13);
    }
    const line: number[] = [];
    const first = flattenSpline(
      { degree, knots, points, weights: rational ? weights : null },
      tolerance,
      (x, y) => line.push(x / scale, y / scale),
    );
    begin(first[0] / scale, first[1] / scale);
    for (let i = 0; i < line.length; i += 2) pen.line(line[i], line[i + 1]);
  }
}

const POLYLINE = 2;
