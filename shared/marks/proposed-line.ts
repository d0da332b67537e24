/** One line of a proposal: a string that the program suggests and a person may take, take in part, or leave. */
export interface ProposedLine {
  /** Flat xyz, millimetres. */
  readonly points: readonly number[];
  /** False = left out by the person. */
  readonly kept: boolean;
  /** First and last point of each stretch that should be looked at. */
  readonly doubtful: readonly (readonly [number, number])[];
}
