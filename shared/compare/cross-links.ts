import { AFFINITY_STEP_MM, affinities, matchByAffinity } from "#shared/compare/affinity.ts";
import type { Comparison } from "#shared/compare/comparison.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { centreline, type PlainSet } from "#shared/trees/plain-trees.ts";

/** Which cross-link of A is which of B, by where they lie; they take no part in the trees' distance. */
export function matchCrossLinks(a: PlainSet, b: PlainSet): Comparison["crossLinks"] {
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
