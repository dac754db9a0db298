/** A question to the person. */
export interface Question {
  title: string;
  text: string;
  /** First is the one that Enter takes. */
  answers: readonly (readonly [id: string, label: string])[];
  /** A text to give, with its first value. */
  entry?: { label: string; value: string };
  /** Things to choose among instead of answers. */
  choices?: readonly string[];
}
