/** How much work it is to clip an outline, told before it is begun: a sweep over all sides can take minutes. */
import { randomFrom } from '../base/random.ts';
import { BadShape } from './findings.ts';

/** Sides of one figure: a sweep over more takes seconds, however plain they lie. */
const MOST_SIDES = 250_000;
/** Sides up to which a sweep is over in a moment, whatever lies abreast. */
const FEW = 2000;
/** Sides up to which nobody looks. */
const NONE = 16;
/** Pairs of sides looked at, for each side and at most. */
const SAMPLE = 20;
const MOST_SAMPLE = 400_000;
/** Crossings in a drawing, and sides that a line sweeping up meets at all its stops together: each some two to three seconds. */
const MOST_CROSSINGS = 1e5;
const MOST_SWEPT = 1e7;

/** Figures that need clipping: each takes a moment, however small. */
const MOST_FIGURES = 30_000;

export interface Tangle {
  /** @throws BadShape `too-tangled` */
  check(rings: readonly Float64Array[]): void;
}

/**
 * Refuses what would take minutes to clip: a sweep costs by the crossings there are, here estimated from random pairs of
 * sides, and by the sides it meets at each height at which it stops. Both add up over a drawing; drawings of circuits lie
 * far below.
 */
export function tangle(): Tangle {
  let [crossed, met, figures] = [0, 0, 0];
  return {
    check(rings) {
      const sides = rings.reduce((n, r) => n + r.length / 2, 0);
      if (++figures > MOST_FIGURES)
        throw new BadShape('too-tangled', `more than ${MOST_FIGURES} figures have holes or many corners`);
      if (sides > MOST_SIDES)
        throw new BadShape(
          'too-tangled',
          `it has ${sides} sides, more than the ${MOST_SIDES} that are clipped`,
        );
      if (sides <= NONE) return;
      crossed += crossings(rings, sides);
      if (crossed > MOST_CROSSINGS)
        throw new BadShape('too-tangled', `outlines cross one another some ${Math.round(crossed)} times`);
      if (sides > FEW) met += swept(rings, sides);
      if (met > MOST_SWEPT)
        throw new BadShape('too-tangled', `too many of its ${sides} sides lie abreast of one another`);
    },
  };
}

/** Sides met at each of the heights of corners, and once more for each outline that begins there, added up. */
function swept(rings: readonly Float64Array[], sides: number): number {
  const heights = new Float64Array(sides);
  let k = 0;
  for (const r of rings) for (let i = 1; i < r.length; i += 2) heights[k++] = r[i];
  heights.sort();
  let stops = 0;
  for (let i = 0; i < sides; i++) if (i === 0 || heights[i] !== heights[i - 1]) heights[stops++] = heights[i];
  const level = (y: number): number => {
    let [low, high] = [0, stops];
    while (low < high) {
      const middle = (low + high) >> 1;
      if (heights[middle] < y) low = middle + 1;
      else high = middle;
    }
    return low;
  };
  // How many sides begin less how many end at each stop, and where outlines turn up again.
  const change = new Float64Array(stops + 1);
  const lows = new Float64Array(stops + 1);
  for (const r of rings) {
    let before = level(r[r.length - 1]);
    let falling = level(r[r.length - 3]) >= before;
    for (let i = 1; i < r.length; i += 2) {
      const here = level(r[i]);
      change[Math.min(here, before)]++;
      change[Math.max(here, before)]--;
      if (falling && here > before) lows[before]++;
      if (here !== before) falling = here < before;
      before = here;
    }
  }
  let [sum, abreast] = [0, 0];
  for (let i = 0; i < stops; i++) {
    abreast += change[i];
    // A place among the sides abreast is looked for one by one; a fifth of the work of passing one by.
    sum += abreast * (1 + lows[i] / 5);
  }
  return sum;
}

function crossings(rings: readonly Float64Array[], sides: number): number {
  const ends = new Float64Array(4 * sides);
  let k = 0;
  for (const r of rings)
    for (let i = 0; i < r.length; i += 2) {
      const j = (i + 2) % r.length;
      ends[k++] = r[i];
      ends[k++] = r[i + 1];
      ends[k++] = r[j];
      ends[k++] = r[j + 1];
    }
  const random = randomFrom(sides);
  const sample = Math.min(SAMPLE * sides, MOST_SAMPLE);
  let met = 0;
  for (let s = 0; s < sample; s++) {
    const a = 4 * Math.floor(random() * sides);
    const b = 4 * Math.floor(random() * sides);
    if (cross(ends, a, b) && cross(ends, b, a)) met++;
  }
  return (((met / sample) * sides) / 2) * sides;
}

/** Does the line through side a part the ends of side b? */
function cross(e: Float64Array, a: number, b: number): boolean {
  const [dx, dy] = [e[a + 2] - e[a], e[a + 3] - e[a + 1]];
  const left = dx * (e[b + 1] - e[a + 1]) - dy * (e[b] - e[a]);
  const right = dx * (e[b + 3] - e[a + 1]) - dy * (e[b + 2] - e[a]);
  return left > 0 !== right > 0 && left !== 0 && right !== 0;
}
