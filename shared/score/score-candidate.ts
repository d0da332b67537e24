import { comparePairs } from "#shared/compare/compare-pairs.ts";
import { assembleComparison, distancesAtMerges, frameOfComparison } from "#shared/compare/compare-sets.ts";
import type { CompareOptions, Comparison, TimeLeft } from "#shared/compare/comparison.ts";
import type { EventKind } from "#shared/compare/events/compare-event.ts";
import { matchSets } from "#shared/compare/matched-sets.ts";
import type { PlainSet } from "#shared/trees/plain-trees.ts";

/** Limits at which reports give the accepted share. */
export const REPORTED_LIMITS: readonly number[] = [0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 1];

/** A distance this close below a limit does not count as below it. */
const LIMIT_MARGIN = 1e-9;

/** One reference tree and what a candidate made of it. */
export interface ScoredTree {
  readonly tree: string;
  readonly name: string;
  /** The candidate's tree; null = none matches, and the tree fails. */
  readonly candidate: string | null;
  /** Reference-normalised edit distance and its proven lower bound; null when unmatched. */
  readonly distance: number | null;
  readonly lower: number | null;
  readonly exact: boolean;
  readonly accepted: boolean;
  readonly meanDistance: number | null;
  readonly events: readonly { readonly event: EventKind; readonly length: number }[];
}

export interface CandidateScore {
  readonly candidate: string;
  readonly trees: readonly ScoredTree[];
  readonly accepted: number;
  /** Accepted / reference trees; null without reference trees. */
  readonly acceptedShare: number | null;
  /** Share accepted at each of {@link REPORTED_LIMITS}. */
  readonly acceptedAt: readonly (number | null)[];
  /** Candidate trees that match no reference tree; counted apart. */
  readonly unmatchedCandidates: number;
  readonly whole: Comparison["whole"];
  /** Accepted share and whole reference-normalised distance with other merge tolerances. */
  readonly sensitivity: readonly {
    readonly merge: number;
    readonly acceptedShare: number | null;
    readonly distance: number | null;
  }[];
  readonly eventCounts: Readonly<Record<EventKind, number>>;
  readonly warnings: readonly string[];
}

/** Merge tolerances that every score repeats: none, half, once and twice the given one. */
export function mergesOf(merge: number): number[] {
  return [0, merge / 2, merge, merge * 2];
}

/**
 * The score of a candidate against a reference: which reference trees are accepted, how the accepted share depends on the
 * limit and the merge tolerance, and the errors by kind. An unmatched reference tree fails.
 * @param limit a tree is accepted when its reference-normalised distance is below it (0.6: common practice, no source).
 */
export function scoreCandidate(
  name: string,
  reference: PlainSet,
  candidate: PlainSet,
  options: CompareOptions,
  limit: number,
  timeLeft: TimeLeft,
): CandidateScore {
  const matched = matchSets(reference, candidate);
  const compared = comparePairs(matched, [...matched.pairs.keys()], options, timeLeft);
  const main = assembleComparison(frameOfComparison(matched, options), compared.pairs, compared.warnings.flat());
  const trees = scoredTrees(reference, main, limit);
  const sensitivity = distancesAtMerges(matched, options, mergesOf(options.merge), timeLeft).map((at) => ({
    merge: at.merge,
    acceptedShare: trees.length === 0 ? null : at.trees.filter((distance) => isBelow(distance, limit)).length / trees.length,
    distance: at.whole,
  }));
  const eventCounts: Record<EventKind, number> = {
    "missed-branch": 0,
    "extra-branch": 0,
    "moved-fork": 0,
    "moved-end": 0,
    "short-end": 0,
    "joined-differently": 0,
    "exchanged-tails": 0,
    renamed: 0,
  };
  for (const tree of trees) for (const event of tree.events) eventCounts[event.event] += 1;
  return {
    candidate: name,
    trees,
    accepted: trees.filter((tree) => tree.accepted).length,
    acceptedShare: share(trees),
    acceptedAt: REPORTED_LIMITS.map((at) =>
      trees.length === 0 ? null : trees.filter((tree) => isBelow(tree.distance, at)).length / trees.length,
    ),
    unmatchedCandidates: main.onlyB.length,
    whole: main.whole,
    sensitivity,
    eventCounts,
    warnings: main.warnings,
  };
}

function scoredTrees(reference: PlainSet, compared: Comparison, limit: number): ScoredTree[] {
  const pairs = new Map(compared.pairs.map((pair) => [pair.a, pair]));
  return reference.trees.map((tree): ScoredTree => {
    const pair = pairs.get(tree.id);
    const distance = pair?.normalised.reference ?? null;
    return {
      tree: tree.id,
      name: tree.name ?? "",
      candidate: pair?.b ?? null,
      distance,
      lower: !pair || distance === null || pair.ged === 0 ? distance : (distance * pair.lower) / pair.ged,
      exact: pair?.exact ?? true,
      accepted: isBelow(distance, limit),
      meanDistance: pair?.distances.mean ?? null,
      events: (pair?.events ?? []).map(({ event, length }) => ({ event, length })),
    };
  });
}

function isBelow(distance: number | null, limit: number): boolean {
  return distance !== null && distance < limit - LIMIT_MARGIN;
}

function share(trees: readonly ScoredTree[]): number | null {
  return trees.length === 0 ? null : trees.filter((tree) => tree.accepted).length / trees.length;
}
