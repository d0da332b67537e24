import { type NearPair, nearPairs } from "#shared/agreement/gated-affinity.ts";
import { type Attraction, bestPartition } from "#shared/agreement/partition.ts";
import { type CanonicalNode, type CanonicalTree, canonicalTree } from "#shared/compare/canonical.ts";
import { linesOfCanonical } from "#shared/compare/detection.ts";
import { distance } from "#shared/geometry/vec3.ts";
import type { PlainSet } from "#shared/trees/plain-trees.ts";

/** One annotator's one go at one specimen. */
export interface AgreementPass {
  readonly annotator: string;
  /** 1 for the first go. */
  readonly pass: number;
  readonly set: PlainSet;
}

/** One thing that one or more passes marked. */
export interface Item {
  /** Index into each pass's list of strands or nodes, in the order of the passes given; -1 = this pass has none. */
  readonly members: readonly number[];
}

/** All passes' strands, or nodes, sorted into items. */
export interface ItemTable {
  /** Items in an order that does not depend on the order of the passes. */
  readonly items: readonly Item[];
  /** Sum of affinities inside items: millimetres for strands, a plain number for nodes. */
  readonly affinity: number;
  readonly exact: boolean;
  /** What to print about exactness. */
  readonly note: string;
  /** Pairs inside items that only a third pass holds together: they would not match by themselves. */
  readonly indirectPairs: number;
  /** Tolerance at which each matched pair just matches, over the tolerance used; 1 = at the gate. */
  readonly matchedGates: readonly number[];
  /** The same of pairs just outside the gate whose two sides have no partner in each other's pass. */
  readonly missedGates: readonly number[];
}

/** A strand that takes part: waypoints dissolved, short strands between forks contracted. */
export interface ItemStrand {
  readonly tree: number;
  /** Index into the canonical tree's strands. */
  readonly strand: number;
  readonly id: string;
  readonly length: number;
}

/** A node that takes part. */
export interface ItemNode extends CanonicalNode {
  readonly tree: number;
  /** Index into the canonical tree's nodes. */
  readonly node: number;
}

/** A pass as the matching sees it; `strands` and `nodes` are what items' members point into. */
export interface CanonicalPass {
  readonly trees: readonly CanonicalTree[];
  readonly strands: readonly ItemStrand[];
  readonly nodes: readonly ItemNode[];
}

/** The canonical form of a pass. @param merge forks joined by shorter strands are one, millimetres. */
export function canonicalPass(set: PlainSet, merge: number): CanonicalPass {
  const trees = set.trees.map((tree) => canonicalTree(tree, merge));
  return {
    trees,
    strands: trees.flatMap((tree, t) =>
      tree.strands.map((strand, k) => ({ tree: t, strand: k, id: strand.id, length: strand.length })),
    ),
    nodes: trees.flatMap((tree, t) => tree.nodes.map((node, k) => ({ ...node, tree: t, node: k }))),
  };
}

/** What of two passes comes near each other, so that items at several tolerances need no second search. */
export interface Nearness {
  readonly passes: readonly AgreementPass[];
  /** Strands, or nodes, of each pass. */
  readonly counts: readonly number[];
  /** Indices of the passes in an order that depends on what they are, not on how they were given. */
  readonly order: readonly number[];
  /** Pairs of passes, the one earlier in that order first. */
  readonly near: readonly { readonly p: number; readonly q: number; readonly pairs: readonly NearPair[] }[];
}

/** Which strands of which passes come near each other. @param most the largest tolerance to be asked for, millimetres. */
export function strandNearness(passes: readonly AgreementPass[], most: number, merge: number): Nearness {
  const lines = passes.map(({ set }) => set.trees.flatMap((tree) => linesOfCanonical(tree, canonicalTree(tree, merge))));
  return nearness(
    passes,
    lines.map((items) => items.length),
    (p, q) => nearPairs(lines[p]!, lines[q]!, most),
  );
}

/** Which nodes of one type (origin, fork, end) come near each other. @param most the largest tolerance, millimetres. */
export function nodeNearness(passes: readonly AgreementPass[], most: number, merge: number): Nearness {
  const nodes = passes.map(({ set }) => canonicalPass(set, merge).nodes);
  const near = (p: number, q: number): NearPair[] =>
    nodes[p]!.flatMap((x, a) =>
      nodes[q]!.flatMap((y, b) => {
        const gateMm = distance(x.place, y.place);
        // Affinity is still above nothing at the gate, so that any pair inside it can match.
        return x.type === y.type && gateMm <= 1.1 * most ? [{ a, b, affinity: 1 - gateMm / (2 * most), gateMm }] : [];
      }),
    );
  return nearness(
    passes,
    nodes.map((list) => list.length),
    near,
  );
}

/**
 * All passes' strands in items: at most one strand of each pass, greatest total affinity; two strands attract each other
 * only when at least half of each lies within the tolerance of the other. No consensus enters, and the order of the passes
 * changes nothing.
 * @param tolerance millimetres. @param merge millimetres, see {@link canonicalPass}.
 */
export function strandItems(passes: readonly AgreementPass[], tolerance: number, merge: number): ItemTable {
  return itemsWithin(strandNearness(passes, tolerance, merge), tolerance);
}

/** All passes' nodes in items; nodes attract each other when of one type and within the tolerance. */
export function nodeItems(passes: readonly AgreementPass[], tolerance: number, merge: number): ItemTable {
  return itemsWithin(nodeNearness(passes, tolerance, merge), tolerance);
}

function nearness(
  passes: readonly AgreementPass[],
  counts: readonly number[],
  pairsOf: (p: number, q: number) => NearPair[],
): Nearness {
  const order = ownOrder(passes);
  const near = order.flatMap((q, rank) => order.slice(0, rank).map((p) => ({ p, q, pairs: pairsOf(p, q) })));
  return { passes, counts, order, near };
}

/** Items at a tolerance not above the one that nearness was asked for. @param tolerance millimetres. */
export function itemsWithin({ passes, counts, order, near }: Nearness, tolerance: number): ItemTable {
  const first: number[] = [];
  const passOf: number[] = [];
  order.forEach((p, rank) => {
    first[p] = passOf.length;
    for (let k = 0; k < counts[p]!; k++) passOf.push(rank);
  });
  const pairs = near.flatMap(({ p, q, pairs: found }) =>
    found.map((pair) => ({ ...pair, a: first[p]! + pair.a, b: first[q]! + pair.b })),
  );
  const attractions: Attraction[] = pairs
    .filter((pair) => pair.gateMm <= tolerance)
    .map(({ a, b, affinity }) => ({ a, b, gain: affinity }));
  const partition = bestPartition(passOf, attractions);
  const groupOf: number[] = [];
  partition.groups.forEach((group, g) => {
    for (const vertex of group) groupOf[vertex] = g;
  });
  const hasPass = (vertex: number, rank: number) => partition.groups[groupOf[vertex]!]!.some((other) => passOf[other] === rank);
  const inside = pairs.filter(({ a, b, gateMm }) => groupOf[a] === groupOf[b] && gateMm <= tolerance);
  const missed = pairs.filter(
    ({ a, b, gateMm }) => gateMm > tolerance && gateMm <= 1.1 * tolerance && !hasPass(a, passOf[b]!) && !hasPass(b, passOf[a]!),
  );
  const together = partition.groups.reduce((sum, group) => sum + (group.length * (group.length - 1)) / 2, 0);
  const items = partition.groups.map((group): Item => {
    const members = passes.map(() => -1);
    for (const vertex of group) {
      const p = order[passOf[vertex]!]!;
      members[p] = vertex - first[p]!;
    }
    return { members };
  });
  return {
    items,
    affinity: partition.total,
    exact: partition.exact,
    note: noteOf(partition.unproven),
    indirectPairs: together - inside.length,
    matchedGates: inside.map(({ gateMm }) => gateMm / tolerance),
    missedGates: missed.map(({ gateMm }) => gateMm / tolerance),
  };
}

function noteOf(unproven: readonly number[]): string {
  if (unproven.length === 0) return "The matching is proven to have the greatest total affinity.";
  const largest = Math.max(...unproven);
  return `In ${unproven.length} place${unproven.length === 1 ? "" : "s"} (up to ${largest} strands or nodes together) the matching is the best found, not proven to be the best.`;
}

/** An order of the passes that depends on what they are, not on how they were given. */
function ownOrder(passes: readonly AgreementPass[]): number[] {
  const keys = passes.map(({ annotator, pass, set }) => ({ annotator, pass, text: JSON.stringify(set.trees) }));
  return passes
    .map((_, i) => i)
    .sort((i, j) => {
      const [x, y] = [keys[i]!, keys[j]!];
      if (x.annotator !== y.annotator) return x.annotator < y.annotator ? -1 : 1;
      return x.pass - y.pass || (x.text < y.text ? -1 : x.text > y.text ? 1 : 0);
    });
}
