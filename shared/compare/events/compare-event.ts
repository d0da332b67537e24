export type EventKind =
  | "missed-branch"
  | "extra-branch"
  | "moved-fork"
  | "moved-end"
  | "short-end"
  | "joined-differently"
  | "exchanged-tails"
  | "renamed";

/** A difference in an annotator's words: one human error is one event. `a`, `b` are ids of strands, or of nodes for moved and short ones, or of trees when renamed. */
export interface CompareEvent {
  readonly event: EventKind;
  readonly a: string | null;
  readonly b: string | null;
  readonly at: readonly [number, number, number];
  /** Millimetres of string concerned, or of displacement. */
  readonly length: number;
}
