import { type AffinityTable, affinities, matchByAffinity } from "#shared/compare/affinity.ts";
import { type CanonicalTree, canonicalTree } from "#shared/compare/canonical.ts";
import { type CostModel, type CostPreset, geometryCosts, structureCosts } from "#shared/compare/costs.ts";
import { type Detection, detection } from "#shared/compare/detection.ts";
import { type EditDistance, editDistance, type OriginRule } from "#shared/compare/edit-distance/edit-distance.ts";
import { type EditStep, editScript } from "#shared/compare/edit-distance/script.ts";
import { type CompareEvent, eventsOfPairs } from "#shared/compare/events/events.ts";
import { type LineDistances, type Overlap, overlapOf } from "#shared/compare/overlap.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { centreline, type PlainSet, type PlainTree } from "#shared/trees/plain-trees.ts";
import { type RootedStrand, rootedStrands } from "#shared/trees/rooted-strands.ts";

export interface CompareOptions {
  readonly preset: CostPreset;
  readonly origin: OriginRule;
  /** Millimetres; used by `geometry` alone. */
  readonly positionScale: number;
  /** Forks joined by shorter strands are one; millimetres. */
  readonly merge: number;
  /** Millimetres. */
  readonly tolerance: number;
  readonly minimumDiameter: number | null;
  /** Sampling step of overlap and distances, millimetres. */
  readonly step: number;
}

export interface NormalisedDistance {
  /** Distance / (cost of deleting A and inserting B); 0 when both are empty. */
  readonly pair: number;
  /** Distance / cost of all of A; null when A is empty; may exceed 1. */
  readonly reference: number | null;
}

export interface ComparedPair {
  readonly a: string;
  readonly b: string;
  readonly affinity: number;
  readonly sizes: { readonly a: TreeSize; readonly b: TreeSize };
  readonly ged: number;
  readonly lower: number;
  readonly upper: number;
  readonly exact: boolean;
  readonly normalised: NormalisedDistance;
  readonly script: readonly EditStep[];
  readonly events: readonly CompareEvent[];
  readonly overlap: Overlap;
  readonly distances: LineDistances;
}

export interface TreeSize {
  readonly nodes: number;
  readonly strands: number;
}

export interface Comparison {
  readonly costs: {
    readonly preset: CostPreset;
    readonly origin: OriginRule;
    readonly positionScale: number | null;
    readonly merge: number;
  };
  readonly pairs: readonly ComparedPair[];
  readonly onlyA: readonly string[];
  readonly onlyB: readonly string[];
  readonly crossLinks: {
    readonly matched: readonly (readonly [string, string])[];
    readonly onlyA: readonly string[];
    readonly onlyB: readonly string[];
  };
  readonly warnings: readonly string[];
  readonly whole: {
    readonly ged: number;
    readonly lower: number;
    readonly upper: number;
    readonly exact: boolean;
    readonly normalised: NormalisedDistance;
    readonly overlap: Overlap;
    readonly distances: LineDistances;
    readonly detection: Detection;
  };
}

/** Wall time in milliseconds that is left; asked now and then, so that a clock need not be known here. */
export type TimeLeft = () => number;

/** Sampling step of affinities, millimetres: well below their reach. */
const AFFINITY_STEP_MM = 0.1;

/** Which tree of B each tree of A is: index in B, -1 = none; and the affinities it was decided by. A single tree on each side is always paired. */
function matchTrees(
  linesA: readonly (readonly RootedStrand[])[],
  linesB: readonly (readonly RootedStrand[])[],
): { matched: Int32Array; table: AffinityTable } {
  const lines = (strands: readonly RootedStrand[]) => strands.map((strand) => strand.line);
  const table = affinities(linesA.map(lines), linesB.map(lines), AFFINITY_STEP_MM);
  return { table, matched: linesA.length === 1 && linesB.length === 1 ? Int32Array.of(0) : matchByAffinity(table) };
}

/**
 * Reference-normalised distances with other merge tolerances: of each of A's trees (null = unmatched) and of the whole set.
 * Matching does not depend on the tolerance, so that it is done once.
 */
export function distancesAtMerges(
  a: PlainSet,
  b: PlainSet,
  options: CompareOptions,
  merges: readonly number[],
  timeLeft: TimeLeft,
): { readonly merge: number; readonly trees: readonly (number | null)[]; readonly whole: number | null }[] {
  const costs = costsOf(options);
  const { matched } = matchTrees(a.trees.map(rootedStrands), b.trees.map(rootedStrands));
  return merges.map((merge) => {
    const [canonA, canonB] = [a, b].map((set) => set.trees.map((tree) => canonicalTree(tree, merge))) as [
      CanonicalTree[],
      CanonicalTree[],
    ];
    const pairs = pairsOf(matched);
    const found = inTurns(pairs.length, timeLeft, (k, shouldStop) =>
      editDistance(canonA[pairs[k]![0]]!, canonB[pairs[k]![1]]!, costs, options.origin, shouldStop),
    );
    const trees = a.trees.map((_, i) => {
      const k = pairs.findIndex((pair) => pair[0] === i);
      return k < 0 ? null : normalise(found[k]!.ged, found[k]!.whole.a, found[k]!.whole.b).reference;
    });
    const total = found.reduce((sum, one) => sum + one.ged, unmatchedCost(canonA, canonB, matched));
    return { merge, trees, whole: normalise(total, fullCost(canonA), fullCost(canonB)).reference };
  });
}

function costsOf(options: CompareOptions): CostModel {
  return options.preset === "geometry" ? geometryCosts(options.positionScale) : structureCosts();
}

function pairsOf(matched: Int32Array): (readonly [number, number])[] {
  return [...matched].flatMap((j, i) => (j < 0 ? [] : [[i, j] as const]));
}

/** Cost of deleting or inserting all of these trees. */
function fullCost(trees: readonly CanonicalTree[]): number {
  return trees.reduce((sum, tree) => sum + tree.nodes.length + tree.strands.length, 0);
}

function unmatchedCost(canonA: readonly CanonicalTree[], canonB: readonly CanonicalTree[], matched: Int32Array): number {
  return fullCost(canonA.filter((_, i) => matched[i]! < 0)) + fullCost(canonB.filter((_, j) => !matched.includes(j)));
}

/**
 * Compares two sets of trees, A being the reference: which tree is which by affinity, each pair's edit distance with proven
 * bounds, the script, the events, overlap and distances; unmatched trees at full cost. Overlap, distances and detection
 * under `whole` measure each side against the whole other side.
 */
export function compareSets(a: PlainSet, b: PlainSet, options: CompareOptions, timeLeft: TimeLeft): Comparison {
  const warnings: string[] = [];
  const costs = costsOf(options);
  const [linesA, linesB] = [a.trees.map(rootedStrands), b.trees.map(rootedStrands)];
  const { matched, table } = matchTrees(linesA, linesB);
  const pairs = pairsOf(matched);
  const canonA = a.trees.map((tree) => canonicalTree(tree, options.merge));
  const canonB = b.trees.map((tree) => canonicalTree(tree, options.merge));
  const distances = inTurns(pairs.length, timeLeft, (k, shouldStop) =>
    editDistance(canonA[pairs[k]![0]]!, canonB[pairs[k]![1]]!, costs, options.origin, shouldStop),
  );
  const events = eventsOfPairs(a, b, pairs, options.tolerance, options.merge);
  const overlapOptions = { step: options.step, toleranceMm: options.tolerance, minimumDiameterMm: options.minimumDiameter };
  const compared = pairs.map(([i, j], k): ComparedPair => {
    const found = distances[k]!;
    if (found.originFreed)
      warnings.push(
        `${nameOf(a.trees[i]!)} against ${nameOf(b.trees[j]!)}: one of them has no single root, so the origins were not held.`,
      );
    return {
      a: a.trees[i]!.id,
      b: b.trees[j]!.id,
      affinity: table.affinity[i * b.trees.length + j]!,
      sizes: {
        a: { nodes: canonA[i]!.nodes.length, strands: canonA[i]!.strands.length },
        b: { nodes: canonB[j]!.nodes.length, strands: canonB[j]!.strands.length },
      },
      ged: found.ged,
      lower: found.lower,
      upper: found.upper,
      exact: found.exact,
      normalised: normalise(found.ged, found.whole.a, found.whole.b),
      script: editScript(canonA[i]!, canonB[j]!, found.map, costs),
      events: events[k]!,
      ...overlapOf(linesA[i]!, linesB[j]!, overlapOptions),
    };
  });
  const freeA = a.trees.map((_, i) => i).filter((i) => matched[i]! < 0);
  const freeB = b.trees.map((_, j) => j).filter((j) => !matched.includes(j));
  warnings.push(...splitsAndMerges(a, b, pairs, freeA, freeB, table.nearA, table.nearB, table.lengthA, table.lengthB));
  const total = (value: (pair: ComparedPair) => number) =>
    compared.reduce((sum, pair) => sum + value(pair), unmatchedCost(canonA, canonB, matched));
  return {
    costs: { preset: costs.preset, origin: options.origin, positionScale: costs.positionScale, merge: options.merge },
    pairs: compared,
    onlyA: freeA.map((i) => a.trees[i]!.id),
    onlyB: freeB.map((j) => b.trees[j]!.id),
    crossLinks: matchCrossLinks(a, b),
    warnings,
    whole: {
      ged: total((pair) => pair.ged),
      lower: total((pair) => pair.lower),
      upper: total((pair) => pair.upper),
      exact: compared.every((pair) => pair.exact),
      normalised: normalise(
        total((pair) => pair.ged),
        fullCost(canonA),
        fullCost(canonB),
      ),
      ...overlapOf(offsetBefore(linesA), offsetBefore(linesB), overlapOptions),
      detection: detection(a, b, options.merge, options.tolerance, AFFINITY_STEP_MM),
    },
  };
}

/** Strands of all trees in one list, their links to the strand before kept right. */
function offsetBefore(trees: readonly (readonly RootedStrand[])[]): RootedStrand[] {
  const out: RootedStrand[] = [];
  for (const strands of trees) {
    const offset = out.length;
    for (const strand of strands) out.push({ ...strand, before: strand.before < 0 ? -1 : strand.before + offset });
  }
  return out;
}

/** Every pair gets a small share of the time first; what is left goes to those not proven by then. */
function inTurns(
  count: number,
  timeLeft: TimeLeft,
  solve: (k: number, shouldStop: () => boolean) => EditDistance,
): EditDistance[] {
  const answers: EditDistance[] = [];
  const run = (k: number, share: number) => {
    const until = timeLeft() - share;
    return solve(k, () => timeLeft() <= Math.max(0, until));
  };
  for (let k = 0; k < count; k++) answers.push(run(k, timeLeft() / (4 * Math.max(1, count - k))));
  const open = answers.map((_, k) => k).filter((k) => !answers[k]!.exact);
  open.forEach((k, turn) => {
    if (timeLeft() <= 0) return;
    const again = run(k, timeLeft() / (open.length - turn));
    const before = answers[k]!;
    const better = again.upper < before.upper ? again : before;
    const lower = Math.max(again.lower, before.lower);
    answers[k] = { ...better, lower, exact: better.upper - lower < 1e-9 };
  });
  return answers;
}

function normalise(ged: number, a: number, b: number): NormalisedDistance {
  return { pair: a + b === 0 ? 0 : ged / (a + b), reference: a === 0 ? null : ged / a };
}

function nameOf(tree: PlainTree): string {
  return tree.name ? `${tree.name} (${tree.id})` : tree.id;
}

/** Sentences on trees left over that share a stretch with a tree already matched: one tree here, two there. */
function splitsAndMerges(
  a: PlainSet,
  b: PlainSet,
  pairs: readonly (readonly [number, number])[],
  freeA: readonly number[],
  freeB: readonly number[],
  nearA: Float64Array,
  nearB: Float64Array,
  lengthA: Float64Array,
  lengthB: Float64Array,
): string[] {
  const width = b.trees.length;
  const sentences: string[] = [];
  for (const j of freeB) {
    const whole = pairs.find(([i]) => nearB[i * width + j]! >= 0.5 * lengthB[j]!);
    if (whole)
      sentences.push(
        `${nameOf(a.trees[whole[0]]!)} is one tree in A; B has it as two: ${nameOf(b.trees[whole[1]]!)} and ${nameOf(b.trees[j]!)}.`,
      );
  }
  for (const i of freeA) {
    const whole = pairs.find(([, j]) => nearA[i * width + j]! >= 0.5 * lengthA[i]!);
    if (whole)
      sentences.push(
        `${nameOf(b.trees[whole[1]]!)} is one tree in B; A has it as two: ${nameOf(a.trees[whole[0]]!)} and ${nameOf(a.trees[i]!)}.`,
      );
  }
  return sentences;
}

function matchCrossLinks(a: PlainSet, b: PlainSet): Comparison["crossLinks"] {
  const linesOf = (set: PlainSet): (readonly Vec3[])[][] => {
    const nodes = new Map(set.trees.flatMap((tree) => tree.nodes).map((node) => [node.id, node]));
    return (set.crossLinks ?? []).map((link) => [centreline(link, nodes.get(link.from), nodes.get(link.to))]);
  };
  const [linksA, linksB] = [a.crossLinks ?? [], b.crossLinks ?? []];
  const matched = matchByAffinity(affinities(linesOf(a), linesOf(b), AFFINITY_STEP_MM));
  return {
    matched: [...matched].flatMap((j, i) => (j < 0 ? [] : [[linksA[i]!.id, linksB[j]!.id] as const])),
    onlyA: linksA.filter((_, i) => matched[i]! < 0).map((link) => link.id),
    onlyB: linksB.filter((_, j) => !matched.includes(j)).map((link) => link.id),
  };
}
