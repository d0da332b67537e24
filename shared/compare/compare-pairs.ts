import { type CanonicalTree, canonicalTree } from "#shared/compare/canonical.ts";
import type { ComparedPair, CompareOptions, NormalisedDistance, TellProgress, TimeLeft } from "#shared/compare/comparison.ts";
import { type CostModel, geometryCosts, structureCosts } from "#shared/compare/costs.ts";
import { editDistance } from "#shared/compare/edit-distance/edit-distance.ts";
import { editScript } from "#shared/compare/edit-distance/script.ts";
import { eventsOfPairs } from "#shared/compare/events/events.ts";
import { inTurns } from "#shared/compare/in-turns.ts";
import type { MatchedSets } from "#shared/compare/matched-sets.ts";
import { overlapOf } from "#shared/compare/overlap.ts";
import { nameOfTree } from "#shared/trees/plain-trees.ts";

/**
 * The comparison of some of the matched pairs. A pair's answer does not depend on which others are asked for (short of the
 * time running out), so that pairs can be spread over threads and machines.
 * @param which numbers of pairs in `matched.pairs`.
 * @param tell hears of each search for a distance that begins.
 * @returns the compared pairs and, beside each, sentences on what could not be done as asked.
 */
export function comparePairs(
  matched: MatchedSets,
  which: readonly number[],
  options: CompareOptions,
  timeLeft: TimeLeft,
  tell: TellProgress = () => undefined,
): { pairs: ComparedPair[]; warnings: string[][] } {
  const { a, b, linesA, linesB, table } = matched;
  const costs = costsOf(options);
  const chosen = which.map((k) => matched.pairs[k]!);
  const canonical = chosen.map(
    ([i, j]) => [canonicalTree(a.trees[i]!, options.merge), canonicalTree(b.trees[j]!, options.merge)] as const,
  );
  const distances = inTurns(chosen.length, timeLeft, (k, shouldStop) => {
    tell({ stage: "pairs", begun: k + 1, of: chosen.length });
    return editDistance(...canonical[k]!, costs, options.origin, shouldStop);
  });
  tell({ stage: "events", begun: 0, of: 0 });
  const events = eventsOfPairs(a, b, matched.pairs, options.tolerance, options.merge);
  const pairs = chosen.map(([i, j], k): ComparedPair => {
    const found = distances[k]!;
    const [canonA, canonB] = canonical[k]!;
    return {
      a: a.trees[i]!.id,
      b: b.trees[j]!.id,
      affinity: table.affinity[i * b.trees.length + j]!,
      sizes: { a: sizeOf(canonA), b: sizeOf(canonB) },
      ged: found.ged,
      lower: found.lower,
      upper: found.upper,
      exact: found.exact,
      normalised: normalise(found.ged, found.whole.a, found.whole.b),
      script: editScript(canonA, canonB, found.map, costs),
      events: events[which[k]!]!,
      ...overlapOf(linesA[i]!, linesB[j]!, overlapOptions(options)),
    };
  });
  const warnings = chosen.map(([i, j], k) => {
    const freed = `${nameOfTree(a.trees[i]!)} against ${nameOfTree(b.trees[j]!)}: one of them has no single root, so the origins were not held.`;
    return distances[k]!.originFreed ? [freed] : [];
  });
  return { pairs, warnings };
}

/** The cost model that the options ask for. */
export function costsOf(options: CompareOptions): CostModel {
  return options.preset === "geometry" ? geometryCosts(options.positionScale) : structureCosts();
}

/** A distance over the cost of both sides, and of A alone. */
export function normalise(ged: number, a: number, b: number): NormalisedDistance {
  return { pair: a + b === 0 ? 0 : ged / (a + b), reference: a === 0 ? null : ged / a };
}

/** What overlap and distances are measured with. */
export function overlapOptions(options: CompareOptions) {
  return { step: options.step, toleranceMm: options.tolerance, minimumDiameterMm: options.minimumDiameter };
}

function sizeOf(tree: CanonicalTree) {
  return { nodes: tree.nodes.length, strands: tree.strands.length };
}
