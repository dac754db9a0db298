/**
 * Process classes: the mark speed of the command is lowered where a stroke climbs, so that pulses stay equally far apart
 * on the surface; in steps, so that a file needs few of them.
 */

/** Ratio of neighbouring speeds: a pulse spacing is then off by at most √1.2 - 1 = 9.5 %. */
const STEP = 1.2;
/** A stroke keeps its class until the spacing is off by this much: fewer pieces, still inside ±10 %. */
const HOLD = 1.095;

/** Speed of step j below the asked mark speed, mm/s, rounded to what files hold. */
export const stepSpeed = (markSpeed: number, j: number): number =>
  Math.round(markSpeed * STEP ** -j * 1000) / 1000;

/**
 * Step of each piece of a stroke.
 * @param onSurface, onCommand  lengths of the pieces, mm
 */
export function speedSteps(onSurface: Float64Array, onCommand: Float64Array): Int32Array {
  const steps = new Int32Array(onSurface.length);
  let held: number | null = null;
  for (let i = 0; i < steps.length; i++) {
    if (onCommand[i] <= 0 || onSurface[i] <= 0) {
      steps[i] = held ?? 0;
      continue;
    }
    // Speed wanted is markSpeed / ratio.
    const ratio = onSurface[i] / onCommand[i];
    const exact = Math.log(ratio) / Math.log(STEP);
    if (held === null || Math.abs(exact - held) > Math.log(HOLD) / Math.log(STEP)) held = Math.round(exact);
    steps[i] = held;
  }
  return steps;
}
