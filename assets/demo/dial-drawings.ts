/**
 * The touch dial's flat drawings: electrodes with their leads and the guard ring as SVG, about the dial's middle, and the
 * connector tail as Gerber, rolled off the skirt as off a cone. mm.
 */
import { AT_PAD, AT_TAIL, ELECTRODES, FOOT, GUARD, LANES_END, PAD, TAIL } from './dial-layout.ts';

const rad = (deg: number): number => (deg * Math.PI) / 180;
const short = (x: number, digits = 4): string => String(Number(x.toFixed(digits)));

/** The SVG's own middle, where its origin lies on the dial. */
export const SVG_MIDDLE = 20;

export function electrodesSvg(): string {
  const at = (r: number, deg: number): string =>
    `${short(r * Math.cos(rad(deg)))} ${short(-r * Math.sin(rad(deg)))}`;
  /** Arc from one angle to another; SVG's y runs down, so counter-clockwise is sweep 0. */
  const arc = (r: number, from: number, to: number): string =>
    `A${short(r)} ${short(r)} 0 ${Math.abs(to - from) > 180 ? 1 : 0} ${to > from ? 0 : 1} ${at(r, to)}`;
  const electrodes = ELECTRODES.map(
    (e, i) =>
      `    <path id="electrode${i + 1}" d="M${at(e.outer, e.from)} ${arc(e.outer, e.from, e.to)} L${at(e.inner, e.to)} ${arc(e.inner, e.to, e.from)} Z"/>`,
  );
  const leads = ELECTRODES.map((e, i) => {
    const from = e.leave > 180 ? e.leave - 360 : e.leave;
    const to = e.leave > 90 && e.leave <= 180 ? e.tail + 360 : e.tail;
    return `    <path id="lead${i + 1}" d="M${at(e.outer - 0.5, from)} L${at(e.lane, from)} ${arc(e.lane, from, to)} L${at(LANES_END, to)}"/>`;
  });
  const [a, b] = [GUARD.from, GUARD.to];
  const middle = (a + b) / 2;
  const guard = `    <path id="guard" stroke-width="${GUARD.width}" d="M${at(LANES_END, a)} L${at(GUARD.radius, a)} ${arc(GUARD.radius, a, middle)} ${arc(GUARD.radius, middle, b)} L${at(LANES_END, b)}"/>`;
  const size = 2 * SVG_MIDDLE;
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" width="${size}mm" height="${size}mm" viewBox="0 0 ${size} ${size}">`,
    '  <title>Touch dial: electrodes, leads and guard</title>',
    `  <g transform="translate(${SVG_MIDDLE} ${SVG_MIDDLE})" fill="black">`,
    ...electrodes,
    '  </g>',
    `  <g transform="translate(${SVG_MIDDLE} ${SVG_MIDDLE})" fill="none" stroke="black" stroke-width="0.6" stroke-linecap="round" stroke-linejoin="round">`,
    ...leads,
    guard,
    '  </g>',
    '</svg>',
    '',
  ].join('\n');
}

/** Where a place of the skirt comes to lie when the skirt is rolled off flat: u to the right, v up the slope, seen from outside. */
function unrolled(r: number, deg: number): [number, number] {
  const share = Math.cos(TAIL.slope);
  const angle = rad(deg - TAIL.angle) * share;
  return [(r / share) * Math.sin(angle), TAIL.radius / share - (r / share) * Math.cos(angle)];
}

export function tailGerber(): string {
  // Six digits after the point, as the format wants them at the least.
  const xy = ([u, v]: [number, number]): string => `X${Math.round(u * 1e6)}Y${Math.round(v * 1e6)}`;
  const lines = FOOT.map(
    ({ net, angle, guard }) =>
      `%TO.N,${net}*%\nD${guard ? 11 : 10}*\n${xy(unrolled(AT_TAIL, angle))}D02*\n${xy(unrolled(AT_PAD, angle))}D01*\n%TD.N*%`,
  );
  // Long side down the slope: along u it would lie across.
  const pads = FOOT.map(({ net, angle, pin }) => {
    const turn = 90 + (angle - TAIL.angle) * Math.cos(TAIL.slope);
    return `%TO.N,${net}*%\n%TO.P,J1,${pin}*%\n%LR${short(turn)}*%\nD12*\n${xy(unrolled(PAD.radius, angle))}D03*\n%TD*%`;
  });
  return [
    'G04 Touch dial: connector tail, rolled off the skirt*',
    '%FSLAX36Y36*%',
    '%MOMM*%',
    '%TF.FileFunction,Copper,L1,Top*%',
    '%TF.Part,Single*%',
    '%TA.AperFunction,Conductor*%',
    '%ADD10C,0.600000*%',
    `%ADD11C,${GUARD.width.toFixed(6)}*%`,
    '%TA.AperFunction,ConnectorPad*%',
    `%ADD12R,${PAD.length.toFixed(6)}X${PAD.width.toFixed(6)}*%`,
    '%TD*%',
    'G01*',
    ...lines,
    ...pads,
    '%LR0*%',
    'M02*',
    '',
  ].join('\n');
}
