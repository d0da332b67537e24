import type { PointMm } from "#shared/geometry/types.ts";
import type { OverlookedStretch } from "#shared/tracing/overlooked/stretch.ts";
import type { Polarity } from "#shared/tracing/strand-request.ts";

/**
 * The search for overlooked strings, in two parts. (1) `startSearch` searches a specimen's scan for strings in the background,
 * whatever is traced: a job (`what: "search"`) whose states come as events; `cancelJob` stops it, starting again goes on where it
 * stopped, also after a restart, and starting while it runs gives the job that runs. What it found is kept beside the scan.
 * (2) `overlooked` lists what no strand of a pass explains, longest first, from what was searched so far: quick, so ask again after
 * edits and while the search runs.
 *
 * To dismiss a stretch: the edit `dismissFinding` with the stretch's `key` and a reason. It lies in the pass's log, so it can be
 * undone and travels with the pass; dismissed stretches are not listed again unless asked for. To bring one back:
 * `dismissFinding` with the `dismissedBy` of a listed one and reason null.
 */
export interface SearchRequest {
  readonly polarity: Polarity;
  /** Two opposite corners of a box, millimetres; absent = the whole scan. */
  readonly region?: { readonly from: PointMm; readonly to: PointMm };
}

/** How far a specimen's search is. */
export interface SearchState {
  readonly polarity: Polarity;
  /** Blocks searched and blocks in all (of the whole scan). */
  readonly done: number;
  readonly total: number;
  /** The job that searches now; null when none does. */
  readonly job: string | null;
}

export interface OverlookedRequest {
  readonly specimen: string;
  readonly pass: string;
  readonly polarity: Polarity;
  /** Stretches shorter than this are left out, millimetres; 1 when not given. */
  readonly minimumMm?: number;
  /** True lists dismissed stretches too, with `dismissedBy`. */
  readonly withDismissed?: boolean;
}

export interface OverlookedAnswer {
  /** Longest first. */
  readonly stretches: readonly ListedStretch[];
  readonly search: SearchState;
}

export interface ListedStretch extends OverlookedStretch {
  /** Under which a dismissal is kept; it holds the stretch's place, so that it is found again after another search. */
  readonly key: string;
  /** Key of the dismissal that sets this stretch aside; null when none does. */
  readonly dismissedBy: string | null;
  readonly reason: string | null;
}
