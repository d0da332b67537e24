import { AFFINITY_STEP_MM, type AffinityTable, affinities, matchByAffinity } from "#shared/compare/affinity.ts";
import { nameOfTree, type PlainSet } from "#shared/trees/plain-trees.ts";
import { type RootedStrand, rootedStrands } from "#shared/trees/rooted-strands.ts";

/** Two sets with the trees of one matched to the trees of the other. */
export interface MatchedSets {
  readonly a: PlainSet;
  readonly b: PlainSet;
  /** Strands of each tree, seen from its root. */
  readonly linesA: readonly (readonly RootedStrand[])[];
  readonly linesB: readonly (readonly RootedStrand[])[];
  readonly table: AffinityTable;
  /** [index in A, index in B] of matched trees, in A's order. */
  readonly pairs: readonly (readonly [number, number])[];
  /** Indices of trees that match none. */
  readonly freeA: readonly number[];
  readonly freeB: readonly number[];
}

/** Matches the trees of two sets by affinity. A single tree on each side is always paired. */
export function matchSets(a: PlainSet, b: PlainSet): MatchedSets {
  const [linesA, linesB] = [a.trees.map(rootedStrands), b.trees.map(rootedStrands)];
  const lines = (strands: readonly RootedStrand[]) => strands.map((strand) => strand.line);
  const table = affinities(linesA.map(lines), linesB.map(lines), AFFINITY_STEP_MM);
  const matched = linesA.length === 1 && linesB.length === 1 ? Int32Array.of(0) : matchByAffinity(table);
  return {
    a,
    b,
    linesA,
    linesB,
    table,
    pairs: [...matched].flatMap((j, i) => (j < 0 ? [] : [[i, j] as const])),
    freeA: a.trees.map((_, i) => i).filter((i) => matched[i]! < 0),
    freeB: b.trees.map((_, j) => j).filter((j) => !matched.includes(j)),
  };
}

/** Sentences on trees left over that share a stretch with a tree already matched: one tree here, two there. */
export function splitsAndMerges({ a, b, pairs, freeA, freeB, table }: MatchedSets): string[] {
  const width = b.trees.length;
  const sentences: string[] = [];
  for (const j of freeB) {
    const whole = pairs.find(([i]) => table.nearB[i * width + j]! >= 0.5 * table.lengthB[j]!);
    if (whole)
      sentences.push(
        `${nameOfTree(a.trees[whole[0]]!)} is one tree in A; B has it as two: ${nameOfTree(b.trees[whole[1]]!)} and ${nameOfTree(b.trees[j]!)}.`,
      );
  }
  for (const i of freeA) {
    const whole = pairs.find(([, j]) => table.nearA[i * width + j]! >= 0.5 * table.lengthA[i]!);
    if (whole)
      sentences.push(
        `${nameOfTree(b.trees[whole[1]]!)} is one tree in B; A has it as two: ${nameOfTree(a.trees[whole[0]]!)} and ${nameOfTree(a.trees[i]!)}.`,
      );
  }
  return sentences;
}
