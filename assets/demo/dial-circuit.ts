/** Circuit of the touch dial: five sense electrodes, a guard ring that is open at the tail, and the tail with its pads. */
import type { Vec3 } from '../../src/core/base/vec.ts';
import { dialPoint } from './dial-shape.ts';

const rad = (deg: number): number => (deg * Math.PI) / 180;
const at = (r: number, deg: number): { at: Vec3 } => {
  const p = dialPoint(r, rad(deg));
  return { at: [round(p[0]), round(p[1]), round(p[2])] };
};
const round = (x: number): number => Math.round(x * 1e4) / 1e4;

/** Places along an arc about the dial's axis, ends included, no farther apart than 7°. */
function arc(r: number, from: number, to: number): { at: Vec3 }[] {
  const n = Math.max(1, Math.ceil(Math.abs(to - from) / 7));
  return Array.from({ length: n + 1 }, (_, i) => at(r, from + ((to - from) * i) / n));
}

/** Electrodes by their angles; no two are alike. `leave` is where the trace leaves, `lane` its radius, `tail` its angle in the tail. */
const ELECTRODES = [
  { name: 'SENSE1', from: -50, to: 10, inner: 6.2, outer: 10.6, leave: -42, lane: 12.6, tail: -69.8 },
  { name: 'SENSE2', from: 22, to: 76, inner: 5.6, outer: 10.4, leave: 30, lane: 13.9, tail: -64.6 },
  { name: 'SENSE3', from: 88, to: 150, inner: 6.4, outer: 10.8, leave: 143, lane: 15.2, tail: -85.4 },
  { name: 'SENSE4', from: 161, to: 208, inner: 5.8, outer: 10.2, leave: 200, lane: 13.9, tail: -80.2 },
  { name: 'SENSE5', from: 219, to: 262, inner: 6.8, outer: 10.6, leave: 255, lane: 12.6, tail: -75 },
];
const GUARD = { radius: 16.6, from: -59.2, to: 269.2, tailRight: -59.2, tailLeft: -90.8 };
const PAD = { radius: 28.3, width: 1.1, length: 2.2 };

export function dialElements(): object[] {
  const elements: object[] = [];
  for (const [i, e] of ELECTRODES.entries()) {
    const n = i + 1;
    // Counter-clockwise from outside: out along the first side, round, in along the second, back.
    const outline = [...arc(e.outer, e.from, e.to), ...arc(e.inner, e.to, e.from)];
    elements.push({ id: `electrode${n}`, kind: 'region', net: e.name, outline });
    const way = e.leave > 180 ? e.leave - 360 : e.leave;
    const goal = e.leave > 90 && e.leave <= 180 ? e.tail + 360 : e.tail;
    const lane = arc(e.lane, e.leave > 180 ? way : e.leave, goal);
    elements.push({
      id: `lead${n}`,
      kind: 'trace',
      net: e.name,
      width: 0.6,
      route: [
        at(e.outer - 0.5, e.leave),
        ...lane,
        at(18, e.tail),
        at(20.5, e.tail),
        at(24, e.tail),
        at(PAD.radius, e.tail),
      ],
    });
    elements.push(pad(`pad${n}`, e.name, e.tail));
  }
  elements.push({
    id: 'guard',
    kind: 'trace',
    net: 'GUARD',
    width: 0.8,
    route: [
      at(PAD.radius, GUARD.tailRight),
      at(24, GUARD.tailRight),
      at(20.5, GUARD.tailRight),
      at(18, GUARD.tailRight),
      ...arc(GUARD.radius, GUARD.from, GUARD.to),
      at(18, GUARD.tailLeft),
      at(20.5, GUARD.tailLeft),
      at(24, GUARD.tailLeft),
      at(PAD.radius, GUARD.tailLeft),
    ],
  });
  elements.push(
    pad('guard-pad-right', 'GUARD', GUARD.tailRight),
    pad('guard-pad-left', 'GUARD', GUARD.tailLeft),
  );
  return elements;
}

/** Pad across the skirt with its long side down the slope: u runs with the part's +X, so the turn is the tail's own angle. */
const pad = (id: string, net: string, deg: number): object => ({
  id,
  kind: 'pad',
  net,
  ...at(PAD.radius, deg),
  shape: { rect: [PAD.length, PAD.width] },
  turn: deg,
});
