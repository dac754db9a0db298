/** The kinds of news that travel by being thrown. Findings are data in results and never come here. */

export interface InputProblem {
  /** Short stable word for tests and tools, such as `far-from-surface`. */
  code: string;
  /** File the person gave, as they named it. */
  file: string;
  /** Where in it: a JSON path, a line, a facet. Empty when the whole file is meant. */
  place: string;
  /** What is wrong, without a full stop. */
  problem: string;
  /** What the person can do about it, without a full stop. */
  mend: string;
}

export const sentence = (p: InputProblem): string =>
  `${p.file}${p.place ? `, ${p.place}` : ''}: ${p.problem}; ${p.mend}.`;

/** A file or a number that cannot be used. Carries every problem found, at least one. */
export class InputError extends Error {
  readonly problems: readonly InputProblem[];
  constructor(first: InputProblem, ...more: InputProblem[]) {
    super([first, ...more].map(sentence).join('\n'));
    this.name = 'InputError';
    this.problems = [first, ...more];
  }
  get code(): string {
    return this.problems[0].code;
  }
}

/** The person changed their mind: never shown as an error. */
export class Cancelled extends Error {
  constructor() {
    super('cancelled');
    this.name = 'Cancelled';
  }
}

/** A broken invariant: our mistake, not the person's. */
export class Fault extends Error {
  constructor(message: string) {
    super(message);
    this.name = 'Fault';
  }
}
