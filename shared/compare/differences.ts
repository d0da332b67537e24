import type { ComparedPair, Comparison } from "#shared/compare/comparison.ts";
import type { EventKind } from "#shared/compare/events/compare-event.ts";
import { pointAt, polylineLength } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { centreline, type PlainSet, type PlainTree, placeOf, strandLength } from "#shared/trees/plain-trees.ts";

/** The events of compared trees, and whole trees or cross-links that only one side has. */
export type DifferenceKind = EventKind | "tree-only-a" | "tree-only-b" | "link-only-a" | "link-only-b";

/** One difference between two sets, as a person steps through them. */
export interface Difference {
  /** Unique within its comparison. */
  readonly key: string;
  readonly kind: DifferenceKind;
  /** Trees that are held against each other here; null = none on that side. */
  readonly treeA: string | null;
  readonly treeB: string | null;
  /** The tree of B that goes on with A's string where that is not the matching one; null = none. */
  readonly followedBy: string | null;
  /** Ids as in the event: of strands, nodes, trees or cross-links. */
  readonly a: string | null;
  readonly b: string | null;
  readonly at: Vec3;
  /** Millimetres of string concerned, or of displacement; 0 where neither is meant. */
  readonly length: number;
}

/** Differences that belong together: of one pair of trees, or of what only one side has. */
export interface DifferenceGroup {
  readonly of: "pair" | "only-a" | "only-b" | "links";
  readonly pair: ComparedPair | null;
  readonly differences: readonly Difference[];
}

/** The events of a comparison by tree pair, in the pairs' order, pairs without any left out; then trees and cross-links of one side only. */
export function differenceGroups(comparison: Comparison, a: PlainSet, b: PlainSet): DifferenceGroup[] {
  const groups: DifferenceGroup[] = comparison.pairs.map((pair) => ({
    of: "pair",
    pair,
    differences: pair.events.map((event, k) => ({
      key: `${pair.a} ${pair.b} ${k}`,
      kind: event.event,
      treeA: pair.a,
      treeB: pair.b,
      followedBy: otherTree(b, event.b, pair.b),
      a: event.a,
      b: event.b,
      at: event.at,
      length: event.length,
    })),
  }));
  const { crossLinks } = comparison;
  groups.push({ of: "only-a", pair: null, differences: comparison.onlyA.flatMap((id) => wholeTree(a, id, "tree-only-a")) });
  groups.push({ of: "only-b", pair: null, differences: comparison.onlyB.flatMap((id) => wholeTree(b, id, "tree-only-b")) });
  groups.push({
    of: "links",
    pair: null,
    differences: [
      ...crossLinks.onlyA.flatMap((id) => crossLink(a, id, "link-only-a")),
      ...crossLinks.onlyB.flatMap((id) => crossLink(b, id, "link-only-b")),
    ],
  });
  return groups.filter((group) => group.differences.length > 0);
}

function otherTree(set: PlainSet, strand: string | null, matching: string): string | null {
  if (strand === null) return null;
  const owner = set.trees.find((tree) => tree.strands.some((one) => one.id === strand));
  return owner === undefined || owner.id === matching ? null : owner.id;
}

function wholeTree(set: PlainSet, id: string, kind: "tree-only-a" | "tree-only-b"): Difference[] {
  const tree = set.trees.find((one) => one.id === id);
  if (!tree) return [];
  const first = tree.nodes.find((node) => node.id === tree.root) ?? tree.nodes[0];
  const isA = kind === "tree-only-a";
  const side = { treeA: isA ? id : null, treeB: isA ? null : id, followedBy: null, a: isA ? id : null, b: isA ? null : id };
  return [{ key: `${kind} ${id}`, kind, ...side, at: first ? placeOf(first) : [0, 0, 0], length: lengthOfTree(tree) }];
}

function lengthOfTree(tree: PlainTree): number {
  const nodes = new Map(tree.nodes.map((node) => [node.id, node]));
  return tree.strands.reduce((sum, strand) => sum + strandLength(strand, nodes.get(strand.from), nodes.get(strand.to)), 0);
}

function crossLink(set: PlainSet, id: string, kind: "link-only-a" | "link-only-b"): Difference[] {
  const link = set.crossLinks?.find((one) => one.id === id);
  if (!link) return [];
  const nodes = new Map(set.trees.flatMap((tree) => tree.nodes).map((node) => [node.id, node]));
  const line = centreline(link, nodes.get(link.from), nodes.get(link.to));
  const length = polylineLength(line);
  const isA = kind === "link-only-a";
  const side = { treeA: null, treeB: null, followedBy: null, a: isA ? id : null, b: isA ? null : id };
  return [{ key: `${kind} ${id}`, kind, ...side, at: line.length === 0 ? [0, 0, 0] : pointAt(line, length / 2), length }];
}
