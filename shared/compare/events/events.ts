import { canonicalTree } from "#shared/compare/canonical.ts";
import type { CompareEvent, EventKind } from "#shared/compare/events/compare-event.ts";
import { compareJoins, withoutStrands } from "#shared/compare/events/joins.ts";
import { nearestNode, type UncoveredPart, uncoveredParts } from "#shared/compare/events/uncovered.ts";
import { SegmentIndex } from "#shared/geometry/segment-index.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { type PlainSet, type PlainTree, placeOf } from "#shared/trees/plain-trees.ts";
import { rootedStrands } from "#shared/trees/rooted-strands.ts";

/**
 * The differences between matched trees as events, one list per pair. Exchanged tails cannot be seen from structure alone:
 * they are found from which other tree follows a part that the matching tree does not.
 *
 * @param pairs [index in A, index in B] of matched trees. @param tolerance millimetres within which lines and places agree.
 */
export function eventsOfPairs(
  a: PlainSet,
  b: PlainSet,
  pairs: readonly (readonly [number, number])[],
  tolerance: number,
  merge: number,
): CompareEvent[][] {
  const partsOf = (own: PlainSet, other: PlainSet, pairList: readonly (readonly [number, number])[]): UncoveredPart[][] => {
    const lines = other.trees.flatMap((tree, k) => rootedStrands(tree).map((strand) => ({ line: strand.line, tree: k })));
    const index = new SegmentIndex(lines.map((entry) => entry.line));
    const treeOfLine = lines.map((entry) => entry.tree);
    return pairList.map(([i, j]) => uncoveredParts(i, rootedStrands(own.trees[i]!), index, treeOfLine, j, tolerance));
  };
  const missing = partsOf(a, b, pairs);
  const added = partsOf(
    b,
    a,
    pairs.map(([i, j]) => [j, i] as const),
  );
  const events: CompareEvent[][] = pairs.map(() => []);
  const exchanged = nameCrossings(a, b, pairs, missing, added, events);
  pairs.forEach(([i, j], k) => {
    const [treeA, treeB] = [a.trees[i]!, b.trees[j]!];
    const gone = missing[k]!.filter((part) => !exchanged.has(part));
    const extra = added[k]!.filter((part) => !exchanged.has(part));
    const settled = new Set<string>();
    // Strands that only one side has are left out of the joins; one that merely ends elsewhere is on both sides and stays.
    const [onlyA, onlyB] = [new Set<string>(), new Set<string>()];
    const leaveOut = (event: CompareEvent, part: UncoveredPart, out: Set<string>) => {
      events[k]!.push(event);
      if (event.event === "missed-branch" || event.event === "extra-branch") for (const id of part.strands) out.add(id);
    };
    for (const part of missing[k]!) if (exchanged.has(part)) for (const id of part.strands) onlyA.add(id);
    for (const part of added[k]!) if (exchanged.has(part)) for (const id of part.strands) onlyB.add(id);
    for (const part of gone) {
      // The same end reached by another way is one error, not a branch missed and another made up.
      const rerouted = extra.find((other) => sharedEnd(treeA, treeB, part, other, tolerance) !== undefined);
      if (rerouted) {
        extra.splice(extra.indexOf(rerouted), 1);
        settled.add(`a ${sharedEnd(treeA, treeB, part, rerouted, tolerance)}`);
        for (const id of part.strands) onlyA.add(id);
        for (const id of rerouted.strands) onlyB.add(id);
        events[k]!.push({
          event: "joined-differently",
          a: part.firstStrand,
          b: rerouted.firstStrand,
          at: part.start,
          length: part.length,
        });
      } else leaveOut(nameOneSided("a", treeA, treeB, part, tolerance, settled), part, onlyA);
    }
    for (const part of extra) leaveOut(nameOneSided("b", treeB, treeA, part, tolerance, settled), part, onlyB);
    const [restA, restB] = [withoutStrands(treeA, onlyA), withoutStrands(treeB, onlyB)];
    events[k]!.push(...compareJoins(canonicalTree(restA, merge), canonicalTree(restB, merge), tolerance, settled));
    if (treeA.name && treeB.name && treeA.name !== treeB.name) {
      const root = treeA.nodes.find((node) => node.id === treeA.root) ?? treeA.nodes[0];
      if (root) events[k]!.push({ event: "renamed", a: treeA.id, b: treeB.id, at: placeOf(root), length: 0 });
    }
  });
  return events;
}

/** Names parts that another tree follows: two that answer each other are exchanged tails, a single one is joined differently. Gives the parts so explained. */
function nameCrossings(
  a: PlainSet,
  b: PlainSet,
  pairs: readonly (readonly [number, number])[],
  missing: readonly UncoveredPart[][],
  added: readonly UncoveredPart[][],
  events: CompareEvent[][],
): Set<UncoveredPart> {
  const explained = new Set<UncoveredPart>();
  const pairOfA = new Map(pairs.map(([i], k) => [i, k]));
  const pairOfB = new Map(pairs.map(([, j], k) => [j, k]));
  missing.forEach((parts, k) => {
    for (const part of parts) {
      const other = pairOfB.get(part.followedBy);
      if (other === undefined || explained.has(part)) continue;
      const back = missing[other]!.find((candidate) => candidate.followedBy === pairs[k]![1] && !explained.has(candidate));
      const event: EventKind = back ? "exchanged-tails" : "joined-differently";
      const follower = nearestStrand(b.trees[part.followedBy]!, part.start);
      events[k]!.push({ event, a: part.firstStrand, b: follower, at: part.start, length: part.length });
      explained.add(part);
      if (back) explained.add(back);
    }
  });
  // What is too much in one tree of B because it belongs to another tree of A is the same error seen from the other side.
  added.forEach((parts, k) => {
    for (const part of parts) {
      const owner = pairOfA.get(part.followedBy);
      if (owner === undefined) continue;
      explained.add(part);
      const seen = missing[owner]!.some((candidate) => explained.has(candidate) && candidate.followedBy === pairs[k]![1]);
      if (!seen)
        events[k]!.push({
          event: "joined-differently",
          a: nearestStrand(a.trees[part.followedBy]!, part.start),
          b: part.firstStrand,
          at: part.start,
          length: part.length,
        });
    }
  });
  return explained;
}

function nearestStrand(tree: PlainTree, p: Vec3): string | null {
  const strands = rootedStrands(tree);
  const near = new SegmentIndex(strands.map((strand) => strand.line));
  const found = near.nearest(p);
  return found.segment < 0 ? null : strands[near.lineOf[found.segment]!]!.strand.id;
}

/** Id of A's end to which an uncovered part of A leads and, within tolerance, one of B too; undefined when there is none. */
function sharedEnd(
  treeA: PlainTree,
  treeB: PlainTree,
  gone: UncoveredPart,
  extra: UncoveredPart,
  tolerance: number,
): string | undefined {
  const endsOf = (tree: PlainTree, part: UncoveredPart) =>
    tree.nodes.filter((node) => part.leadsTo.includes(node.id) && isEnd(node.kind));
  return endsOf(treeA, gone).find((end) => nearestNode(endsOf(treeB, extra), placeOf(end), tolerance) !== undefined)?.id;
}

const isEnd = (kind: string) => kind !== "origin" && kind !== "fork" && kind !== "waypoint";

/**
 * Names a part that only one side follows. Where the other side has an end just where it begins, the string is the same and
 * ends elsewhere; else the whole branch is on one side only.
 * @param owner the side that has the part.
 */
function nameOneSided(
  owner: "a" | "b",
  tree: PlainTree,
  other: PlainTree,
  part: UncoveredPart,
  tolerance: number,
  settled: Set<string>,
): CompareEvent {
  const stops = other.nodes.filter((node) => isEnd(node.kind));
  const stop = nearestNode(stops, part.start, 2 * tolerance);
  const end = part.nodes.length === 1 ? tree.nodes.find((node) => node.id === part.nodes[0]) : undefined;
  if (!stop || !end) {
    const strand = part.strands[0] ?? part.firstStrand;
    const place = { at: part.start, length: part.length };
    return owner === "a"
      ? { event: "missed-branch", a: strand, b: null, ...place }
      : { event: "extra-branch", a: null, b: strand, ...place };
  }
  const [a, b] = owner === "a" ? [end.id, stop.id] : [stop.id, end.id];
  settled.add(`a ${a}`);
  settled.add(`b ${b}`);
  const length = part.length + distance(placeOf(stop), part.start);
  return { event: owner === "a" ? "short-end" : "moved-end", a, b, at: placeOf(stop), length };
}
