/** What readers of drawings say: notes that add up, and all the faults of a file at once. */
import { InputError, type InputProblem } from '../base/news.ts';
import { MOST_POINTS, type Note } from './drawing.ts';

/** Something in a file that cannot be used, before it is known where it stands. */
export class BadShape extends Error {
  readonly code: string;
  constructor(code: string, message: string) {
    super(message);
    this.name = 'BadShape';
    this.code = code;
  }
}

/** More than a person reads at once; the reader stops looking there. */
const MOST_PROBLEMS = 20;

/** mm: a kilometre. Coordinates beyond it are a slip of units, and rounding would show there. */
const FARTHEST = 1e6;

/** A coordinate in mm as it is. @throws BadShape `out-of-range` when it is no number or too far away */
export function inReach(x: number): number {
  if (!(Math.abs(x) <= FARTHEST))
    throw new BadShape('out-of-range', `a coordinate of ${x} mm is farther than ${FARTHEST} mm`);
  return x;
}

export interface Findings {
  /** Counts one of the kind `code`; the first place and text are kept. */
  note(code: string, place: string, text: string): void;
  /** Does the work; a `BadShape` in it is kept as a problem of this place, and the answer is then null. */
  at<T>(place: string, work: () => T): T | null;
  /** Counts flattened points. @throws InputError `too-large` beyond `MOST_POINTS` */
  spend(points: number): void;
  notes(): Note[];
  /** @throws InputError with all problems, if there are any */
  settle(): void;
}

export function findings(file: string, mend: string): Findings {
  const notes = new Map<string, Note>();
  const problems: InputProblem[] = [];
  let points = 0;
  const settle = (): void => {
    if (problems.length > 0) throw new InputError(problems[0], ...problems.slice(1));
  };
  return {
    note(code, place, text) {
      const known = notes.get(code);
      if (known) known.count++;
      else notes.set(code, { code, place, text, count: 1 });
    },
    at(place, work) {
      try {
        return work();
      } catch (error) {
        if (!(error instanceof BadShape)) throw error;
        problems.push({ code: error.code, file, place, problem: error.message, mend });
        if (problems.length >= MOST_PROBLEMS) settle();
        return null;
      }
    },
    spend(n) {
      points += n;
      if (!(points <= MOST_POINTS)) throw tooLarge(file, '', `more than ${MOST_POINTS} points`);
    },
    notes: () => [...notes.values()],
    settle,
  };
}

/** @param what  such as `more than 5 points` */
export const tooLarge = (file: string, place: string, what: string): InputError =>
  new InputError({
    code: 'too-large',
    file,
    place,
    problem: `the drawing has ${what}`,
    mend: 'leave out what is no copper, or split the drawing',
  });
