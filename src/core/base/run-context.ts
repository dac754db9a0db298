/** What a stage may ask of the world outside: to be heard, and to be told to stop. */

export type Phase = 'load' | 'drape' | 'reach' | 'layers' | 'scan' | 'files' | 'proof';

export interface RunContext {
  /**
   * Says that `done` of `of` parts of a phase are ready.
   * @throws Cancelled when the person has asked to stop
   */
  step(phase: Phase, done: number, of: number): void;
}

/** Says nothing and never stops: for tests and for short work. */
export const quiet: RunContext = { step: () => {} };
