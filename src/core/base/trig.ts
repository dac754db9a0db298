/**
 * Sine, cosine and tangent that are the same to the last bit in every JavaScript engine.
 *
 * The language leaves the last bit of `Math.sin` and `Math.cos` to the engine, and engines changed theirs: with those the
 * window and the command line would write files that differ. These are the polynomials of fdlibm (K. C. Ng, Sun
 * Microsystems 1993: k_sin.c, k_cos.c), with the reduction of e_rem_pio2.c after W. Cody and W. Waite: π/2 in three parts.
 * Errors are below one unit in the last place up to a million turns, far more than an angle here ever is.
 */

/** @param x  radians */
export function sine(x: number): number {
  const { quarter, high, low } = reduced(x);
  const value = quarter & 1 ? cosNear(high, low) : sinNear(high, low);
  return quarter & 2 ? -value : value;
}

/** @param x  radians */
export function cosine(x: number): number {
  const { quarter, high, low } = reduced(x);
  const value = quarter & 1 ? sinNear(high, low) : cosNear(high, low);
  return (quarter + 1) & 2 ? -value : value;
}

/** @param x  radians */
export const tangent = (x: number): number => sine(x) / cosine(x);

/** π/2 in parts of 33 bits, and what is left after each. */
const HALF_PI = [1.5707963267341256, 6.077100506303966e-11, 2.0222662487111665e-21];
const REST = [6.077100506506192e-11, 2.0222662487959506e-21, 8.4784276603689e-32];
const QUARTERS = 0.6366197723675814;
/** So much of an angle may cancel before the next part of π/2 is needed: 16 bits, and 33 more. */
const CANCELLED = [2 ** -16, 2 ** -49];

interface Reduced {
  /** Number of the quarter turn, of which the last two bits count. */
  quarter: number;
  /** What is left of the angle, as a sum: within ±π/4. */
  high: number;
  low: number;
}

function reduced(x: number): Reduced {
  if (Math.abs(x) <= Math.PI / 4) return { quarter: 0, high: x, low: 0 };
  const n = Math.round(x * QUARTERS);
  let r = x - n * HALF_PI[0];
  let w = n * REST[0];
  let high = r - w;
  for (let part = 1; part < 3 && Math.abs(high) < Math.abs(x) * CANCELLED[part - 1]; part++) {
    const t = r;
    w = n * HALF_PI[part];
    r = t - w;
    w = n * REST[part] - (t - r - w);
    high = r - w;
  }
  // The last two bits, of negative numbers too, and of numbers beyond 32 bits.
  return { quarter: ((n % 4) + 4) % 4, high, low: r - high - w };
}

function sinNear(x: number, low: number): number {
  const z = x * x;
  const v = z * x;
  const r =
    0.00833333333332249 +
    z *
      (-0.0001984126982985795 +
        z * (2.7557313707070068e-6 + z * (-2.5050760253406863e-8 + z * 1.58969099521155e-10)));
  return x - (z * (0.5 * low - v * r) - low - v * -0.16666666666666632);
}

function cosNear(x: number, low: number): number {
  const z = x * x;
  const w = z * z;
  const r =
    z * (0.0416666666666666 + z * (-0.001388888888887411 + z * 2.480158728947673e-5)) +
    w * w * (-2.7557314351390663e-7 + z * (2.087572321298175e-9 + z * -1.1359647557788195e-11));
  const half = 0.5 * z;
  const one = 1 - half;
  return one + (1 - one - half + (z * r - x * low));
}
