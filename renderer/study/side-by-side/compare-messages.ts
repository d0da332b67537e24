import type { CompareOptions, CompareProgress, Comparison } from "#shared/compare/comparison.ts";
import type { PlainSet } from "#shared/trees/plain-trees.ts";

/** What the page asks of the worker that compares. */
export interface CompareOrder {
  readonly what: "compare" | "merges";
  readonly a: PlainSet;
  readonly b: PlainSet;
  readonly options: CompareOptions;
  /** Merge tolerances to repeat the result at, millimetres; used by `merges` alone. */
  readonly merges: readonly number[];
  /** Wall time for the whole order, milliseconds; bounds are proven when it ends. */
  readonly budgetMs: number;
}

/** The whole set's reference-normalised distance at another merge tolerance. */
export interface AtMerge {
  readonly merge: number;
  readonly whole: number | null;
}

/** What the worker says. */
export type CompareMessage =
  | { readonly kind: "progress"; readonly progress: CompareProgress }
  | { readonly kind: "compared"; readonly comparison: Comparison }
  | { readonly kind: "merges"; readonly merges: readonly AtMerge[] }
  | { readonly kind: "failed"; readonly message: string };
