/**
 * Cuts a triangle by halving its longest edge until no edge is longer than asked (Rivara, Int. J. Numer. Methods
 * Eng. 20 (1984) 745: the angles stay bounded), so that slender triangles do not burst into slivers.
 */

/** Called with the corners of each piece, 9 numbers from `at` on in `flat`. */
export type Emit = (flat: Float64Array, at: number) => void;

/** Halving a triangle once takes at least a quarter off the square of its longest edge in two steps: ample. */
const DEEPEST = 200;
const stack = new Float64Array(9 * (DEEPEST + 2));

/** @param corners  9 numbers; @param longest  mm */
export function bisect(corners: ArrayLike<number>, longest: number, emit: Emit): void {
  const limit = longest * longest;
  for (let k = 0; k < 9; k++) stack[k] = corners[k];
  let top = 1;
  while (top > 0) {
    const o = 9 * (top - 1);
    const ab = squared(o, 0, 3);
    const bc = squared(o, 3, 6);
    const ca = squared(o, 6, 0);
    const most = Math.max(ab, bc, ca);
    if (most <= limit || top > DEEPEST) {
      emit(stack, o);
      top--;
      continue;
    }
    // corners i and j end the longest edge, k faces it
    const i = most === ab ? 0 : most === bc ? 3 : 6;
    const j = i === 6 ? 0 : i + 3;
    for (let c = 0; c < 9; c++) stack[o + 9 + c] = stack[o + c];
    for (let c = 0; c < 3; c++) {
      const middle = (stack[o + i + c] + stack[o + j + c]) / 2;
      stack[o + j + c] = middle;
      stack[o + 9 + i + c] = middle;
    }
    top++;
  }
}

function squared(o: number, i: number, j: number): number {
  const x = stack[o + i] - stack[o + j];
  const y = stack[o + i + 1] - stack[o + j + 1];
  const z = stack[o + i + 2] - stack[o + j + 2];
  return x * x + y * y + z * z;
}
