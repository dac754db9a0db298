/**
 * Circuit of the touch dial: five sense electrodes with their leads and a guard ring from a drawing on the dome, the
 * connector tail from a drawing on the skirt, and traces drawn on the part that join the two.
 */
import type { Vec3 } from '../../src/core/base/vec.ts';
import type { CopperElement } from '../../src/core/drape/copper.ts';
import type { Drape, Element } from '../../src/core/project/schema.ts';
import { SVG_MIDDLE } from './dial-drawings.ts';
import { ELECTRODES, FOOT, GUARD, TAIL } from './dial-layout.ts';
import { dialPoint } from './dial-shape.ts';

const rounded = (p: ArrayLike<number>): [number, number, number] =>
  [0, 1, 2].map((k) => Math.round(p[k] * 1e4) / 1e4) as [number, number, number];

export function dialDrapes(): Drape[] {
  const nets: Record<string, string> = { guard: 'GUARD' };
  ELECTRODES.forEach((e, i) => {
    nets[`electrode${i + 1}`] = e.net;
    nets[`lead${i + 1}`] = e.net;
  });
  const at = (TAIL.angle * Math.PI) / 180;
  return [
    {
      id: 'dome',
      drawing: 'electrodes.svg',
      anchor: rounded(dialPoint(0, 0)),
      origin: [SVG_MIDDLE, -SVG_MIDDLE],
      turn: 0,
      mirror: false,
      evenLengths: true,
      drawingLayers: {},
      nets,
    },
    {
      id: 'tail',
      drawing: 'tail.gbr',
      anchor: rounded(dialPoint(TAIL.radius, at)),
      origin: [0, 0],
      turn: tailTurn(at),
      mirror: false,
      evenLengths: true,
      drawingLayers: {},
      nets: {},
    },
  ];
}

/** The drawing's v runs up the slope; at no turn its u is the part's +X laid on the skirt. Degrees, to a hundredth. */
function tailTurn(at: number): number {
  const d = 1e-4;
  const diff = (p: Vec3, q: Vec3): Vec3 => [q[0] - p[0], q[1] - p[1], q[2] - p[2]];
  const cross = (a: Vec3, b: Vec3): Vec3 => [
    a[1] * b[2] - a[2] * b[1],
    a[2] * b[0] - a[0] * b[2],
    a[0] * b[1] - a[1] * b[0],
  ];
  const dot = (a: Vec3, b: Vec3): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
  const around = diff(dialPoint(TAIL.radius, at - d), dialPoint(TAIL.radius, at + d));
  const up = diff(dialPoint(TAIL.radius + d, at), dialPoint(TAIL.radius - d, at));
  const n = cross(around, up);
  const right = cross(up, n);
  const u: Vec3 = [dot(n, n) - n[0] * n[0], -n[0] * n[1], -n[0] * n[2]];
  const turn = Math.atan2(dot(cross(u, right), n) / Math.sqrt(dot(n, n)), dot(u, right));
  return Math.round((turn * 18000) / Math.PI) / 100;
}

/** Traces from where leads and guard end on the dome to where the tail's lines begin. @param laid  copper of the two drawings */
export function dialLinks(laid: readonly CopperElement[]): Element[] {
  const end = (id: string, last: boolean): [number, number, number] => {
    const points = laid.find((e) => e.id === id)?.path?.points;
    if (!points) throw new Error(`${id} has no centre line`);
    return rounded(last ? points.subarray(points.length - 3) : points);
  };
  const lines = laid.filter((e) => e.id.startsWith('tail/') && e.kind === 'trace');
  return FOOT.map(({ net, angle, guard, pin }, i) => {
    const lead = guard ? 'dome/guard' : `dome/lead${ELECTRODES.findIndex((e) => e.net === net) + 1}`;
    return {
      id: `link${pin}`,
      kind: 'trace',
      net,
      width: guard ? GUARD.width : 0.6,
      route: [{ at: end(lead, !guard || angle !== GUARD.from) }, { at: end(lines[i].id, false) }],
    } as Element;
  });
}
