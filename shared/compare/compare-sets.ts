import { AFFINITY_STEP_MM } from "#shared/compare/affinity.ts";
import { type CanonicalTree, canonicalTree } from "#shared/compare/canonical.ts";
import { comparePairs, costsOf, normalise, overlapOptions } from "#shared/compare/compare-pairs.ts";
import type {
  ComparedPair,
  ComparedWhole,
  CompareOptions,
  Comparison,
  TellProgress,
  TimeLeft,
} from "#shared/compare/comparison.ts";
import { matchCrossLinks } from "#shared/compare/cross-links.ts";
import { detection } from "#shared/compare/detection.ts";
import { editDistance } from "#shared/compare/edit-distance/edit-distance.ts";
import { inTurns } from "#shared/compare/in-turns.ts";
import { type MatchedSets, matchSets, splitsAndMerges } from "#shared/compare/matched-sets.ts";
import { overlapOf } from "#shared/compare/overlap.ts";
import type { PlainSet } from "#shared/trees/plain-trees.ts";
import type { RootedStrand } from "#shared/trees/rooted-strands.ts";

/**
 * Compares two sets of trees, A being the reference: which tree is which by affinity, each pair's edit distance with proven
 * bounds, the script, the events, overlap and distances; unmatched trees at full cost.
 */
export function compareSets(
  a: PlainSet,
  b: PlainSet,
  options: CompareOptions,
  timeLeft: TimeLeft,
  tell: TellProgress = () => undefined,
): Comparison {
  tell({ stage: "matching", begun: 0, of: 0 });
  const matched = matchSets(a, b);
  const { pairs, warnings } = comparePairs(matched, [...matched.pairs.keys()], options, timeLeft, tell);
  tell({ stage: "whole", begun: 0, of: 0 });
  return assembleComparison(frameOfComparison(matched, options), pairs, warnings.flat());
}

/** Everything of a comparison but its pairs; `whole` lacks what is summed over them. */
export interface ComparisonFrame extends Omit<Comparison, "pairs" | "whole"> {
  readonly whole: Pick<ComparedWhole, "overlap" | "distances" | "detection">;
  /** Full cost of the trees that match none, and of each whole side. */
  readonly unmatchedCost: number;
  readonly costOfA: number;
  readonly costOfB: number;
}

/** The part of a comparison that is not one pair's. */
export function frameOfComparison(matched: MatchedSets, options: CompareOptions): ComparisonFrame {
  const { a, b, freeA, freeB } = matched;
  const costs = costsOf(options);
  const [canonA, canonB] = [a, b].map((set) => set.trees.map((tree) => canonicalTree(tree, options.merge))) as [
    CanonicalTree[],
    CanonicalTree[],
  ];
  return {
    costs: { preset: costs.preset, origin: options.origin, positionScale: costs.positionScale, merge: options.merge },
    onlyA: freeA.map((i) => a.trees[i]!.id),
    onlyB: freeB.map((j) => b.trees[j]!.id),
    crossLinks: matchCrossLinks(a, b),
    warnings: splitsAndMerges(matched),
    whole: {
      ...overlapOf(inOneList(matched.linesA), inOneList(matched.linesB), overlapOptions(options)),
      detection: detection(a, b, options.merge, options.tolerance, AFFINITY_STEP_MM),
    },
    unmatchedCost: unmatchedCost(matched, canonA, canonB),
    costOfA: fullCost(canonA),
    costOfB: fullCost(canonB),
  };
}

/** The whole comparison from its frame and all of its pairs in order. */
export function assembleComparison(
  frame: ComparisonFrame,
  pairs: readonly ComparedPair[],
  warnings: readonly string[],
): Comparison {
  const { costs, onlyA, onlyB, crossLinks, whole, unmatchedCost: unmatched, costOfA, costOfB } = frame;
  const total = (value: (pair: ComparedPair) => number) => pairs.reduce((sum, pair) => sum + value(pair), unmatched);
  const ged = total((pair) => pair.ged);
  return {
    costs,
    pairs,
    onlyA,
    onlyB,
    crossLinks,
    warnings: [...warnings, ...frame.warnings],
    whole: {
      ged,
      lower: total((pair) => pair.lower),
      upper: total((pair) => pair.upper),
      exact: pairs.every((pair) => pair.exact),
      normalised: normalise(ged, costOfA, costOfB),
      ...whole,
    },
  };
}

/**
 * Reference-normalised distances with other merge tolerances: of each of A's trees (null = unmatched) and of the whole set.
 * Matching does not depend on the tolerance, so that it is done once.
 */
export function distancesAtMerges(
  matched: MatchedSets,
  options: CompareOptions,
  merges: readonly number[],
  timeLeft: TimeLeft,
): { readonly merge: number; readonly trees: readonly (number | null)[]; readonly whole: number | null }[] {
  const { a, b, pairs } = matched;
  return merges.map((merge) => {
    const [canonA, canonB] = [a, b].map((set) => set.trees.map((tree) => canonicalTree(tree, merge))) as [
      CanonicalTree[],
      CanonicalTree[],
    ];
    const found = inTurns(pairs.length, timeLeft, (k, shouldStop) =>
      editDistance(canonA[pairs[k]![0]]!, canonB[pairs[k]![1]]!, costsOf(options), options.origin, shouldStop),
    );
    const trees = a.trees.map((_, i) => {
      const k = pairs.findIndex((pair) => pair[0] === i);
      return k < 0 ? null : normalise(found[k]!.ged, found[k]!.whole.a, found[k]!.whole.b).reference;
    });
    const total = found.reduce((sum, one) => sum + one.ged, unmatchedCost(matched, canonA, canonB));
    return { merge, trees, whole: normalise(total, fullCost(canonA), fullCost(canonB)).reference };
  });
}

/** Cost of deleting or inserting all of these trees. */
function fullCost(trees: readonly CanonicalTree[]): number {
  return trees.reduce((sum, tree) => sum + tree.nodes.length + tree.strands.length, 0);
}

function unmatchedCost(
  { freeA, freeB }: MatchedSets,
  canonA: readonly CanonicalTree[],
  canonB: readonly CanonicalTree[],
): number {
  return fullCost(freeA.map((i) => canonA[i]!)) + fullCost(freeB.map((j) => canonB[j]!));
}

/** Strands of all trees in one list, their links to the strand before kept right. */
function inOneList(trees: readonly (readonly RootedStrand[])[]): RootedStrand[] {
  const out: RootedStrand[] = [];
  for (const strands of trees) {
    const offset = out.length;
    for (const strand of strands) out.push({ ...strand, before: strand.before < 0 ? -1 : strand.before + offset });
  }
  return out;
}
