/** Sizes of the touch dial's circuit. Angles in degrees about the dial's axis, radii and lengths in mm. */

/** Electrodes; no two are alike. `leave` is where the lead leaves, `lane` its radius, `tail` its angle in the tail. */
export const ELECTRODES = [
  { net: 'SENSE1', from: -50, to: 10, inner: 6.2, outer: 10.6, leave: -42, lane: 12.6, tail: -69.8 },
  { net: 'SENSE2', from: 22, to: 76, inner: 5.6, outer: 10.4, leave: 30, lane: 13.9, tail: -64.6 },
  { net: 'SENSE3', from: 88, to: 150, inner: 6.4, outer: 10.8, leave: 143, lane: 15.2, tail: -85.4 },
  { net: 'SENSE4', from: 161, to: 208, inner: 5.8, outer: 10.2, leave: 200, lane: 13.9, tail: -80.2 },
  { net: 'SENSE5', from: 219, to: 262, inner: 6.8, outer: 10.6, leave: 255, lane: 12.6, tail: -75 },
];
/** Open at the tail: its ends go down on both sides. */
export const GUARD = { radius: 16.6, from: -59.2, to: 269.2, width: 0.8 };
/** Where leads and guard end in the drawing about the middle. */
export const LANES_END = 18;

/** The tail's drawing: its anchor on the skirt, and the skirt's slope. */
export const TAIL = { angle: -75, radius: 24.5, slope: (41 * Math.PI) / 180 };
/** Its lines run from here down to the pads. */
export const AT_TAIL = 21;
export const AT_PAD = 28.3;
export const PAD = { radius: AT_PAD, width: 1.1, length: 2.2 };

/** Lines of the tail in the order of the connector's pins. */
export const FOOT = [
  { net: 'GUARD', angle: GUARD.to - 360, guard: true },
  ...ELECTRODES.map((e) => ({ net: e.net, angle: e.tail, guard: false })),
  { net: 'GUARD', angle: GUARD.from, guard: true },
]
  .sort((a, b) => a.angle - b.angle)
  .map((line, i) => ({ ...line, pin: i + 1 }));
