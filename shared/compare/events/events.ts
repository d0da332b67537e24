import { type CanonicalTree, canonicalTree } from "#shared/compare/canonical.ts";
import { geometryCosts } from "#shared/compare/costs.ts";
import { editDistance } from "#shared/compare/edit-distance/edit-distance.ts";
import { nearestNode, type UncoveredPart, uncoveredParts } from "#shared/compare/events/uncovered.ts";
import { SegmentIndex } from "#shared/geometry/segment-index.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { type PlainSet, type PlainTree, placeOf } from "#shared/trees/plain-trees.ts";
import { rootedStrands } from "#shared/trees/rooted-strands.ts";

export type EventKind =
  | "missed-branch"
  | "extra-branch"
  | "moved-fork"
  | "moved-end"
  | "short-end"
  | "joined-differently"
  | "exchanged-tails"
  | "renamed";

/** A difference in an annotator's words: one human error is one event. `a`, `b` are ids of strands, or of nodes for moved and short ones, or of trees when renamed. */
export interface CompareEvent {
  readonly event: EventKind;
  readonly a: string | null;
  readonly b: string | null;
  readonly at: readonly [number, number, number];
  /** Millimetres of string concerned, or of displacement. */
  readonly length: number;
}

/** Partial maps the search for corresponding nodes may look at before its best so far is taken. */
const CORRESPONDENCE_BUDGET = 4_000;

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
      } else leaveOut(nameMissing(treeA, treeB, part, tolerance, settled), part, onlyA);
    }
    for (const part of extra) leaveOut(nameAdded(treeA, treeB, part, tolerance, settled), part, onlyB);
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

function nameMissing(
  treeA: PlainTree,
  treeB: PlainTree,
  part: UncoveredPart,
  tolerance: number,
  settled: Set<string>,
): CompareEvent {
  const stop = nearestNode(
    treeB.nodes.filter((node) => isEnd(node.kind)),
    part.start,
    2 * tolerance,
  );
  const lastNode = part.nodes[part.nodes.length - 1];
  const end = treeA.nodes.find((node) => node.id === lastNode);
  if (stop && end && part.nodes.length === 1) {
    settled.add(`a ${end.id}`);
    settled.add(`b ${stop.id}`);
    return {
      event: "short-end",
      a: end.id,
      b: stop.id,
      at: placeOf(stop),
      length: part.length + distance(placeOf(stop), part.start),
    };
  }
  return { event: "missed-branch", a: part.strands[0] ?? part.firstStrand, b: null, at: part.start, length: part.length };
}

function nameAdded(
  treeA: PlainTree,
  treeB: PlainTree,
  part: UncoveredPart,
  tolerance: number,
  settled: Set<string>,
): CompareEvent {
  const stop = nearestNode(
    treeA.nodes.filter((node) => isEnd(node.kind)),
    part.start,
    2 * tolerance,
  );
  const lastNode = part.nodes[part.nodes.length - 1];
  const end = treeB.nodes.find((node) => node.id === lastNode);
  if (stop && end && part.nodes.length === 1) {
    settled.add(`a ${stop.id}`);
    settled.add(`b ${end.id}`);
    return {
      event: "moved-end",
      a: stop.id,
      b: end.id,
      at: placeOf(stop),
      length: part.length + distance(placeOf(stop), part.start),
    };
  }
  return { event: "extra-branch", a: null, b: part.strands[0] ?? part.firstStrand, at: part.start, length: part.length };
}

/** A tree without some strands; forks left with two strands become waypoints, so that a missed branch leaves no trace in the join. */
function withoutStrands(tree: PlainTree, gone: ReadonlySet<string>): PlainTree {
  if (gone.size === 0) return tree;
  const strands = tree.strands.filter((strand) => !gone.has(strand.id));
  const degree = new Map<string, number>();
  for (const strand of strands) for (const end of [strand.from, strand.to]) degree.set(end, (degree.get(end) ?? 0) + 1);
  const wasLess = new Map<string, number>();
  for (const strand of tree.strands) for (const end of [strand.from, strand.to]) wasLess.set(end, (wasLess.get(end) ?? 0) + 1);
  const nodes = tree.nodes
    .filter((node) => degree.has(node.id) || node.id === tree.root)
    .map((node) =>
      node.kind === "fork" && degree.get(node.id) === 2 && wasLess.get(node.id)! > 2 ? { ...node, kind: "waypoint" } : node,
    );
  return { ...tree, nodes, strands };
}

/** Forks and ends that sit elsewhere, and nodes that hang on another fork, between two trees of which everything else is explained. */
function compareJoins(a: CanonicalTree, b: CanonicalTree, tolerance: number, settled: ReadonlySet<string>): CompareEvent[] {
  let left = CORRESPONDENCE_BUDGET;
  const isSpent = () => {
    left -= 64; // asked once every 64 partial maps
    return left <= 0;
  };
  const { map } = editDistance(a, b, geometryCosts(2), "held", isSpent);
  const events: CompareEvent[] = [];
  const [parentA, parentB] = [parents(a), parents(b)];
  const mapped = new Set(map);
  a.nodes.forEach((node, i) => {
    const j = map[i]!;
    if (j < 0) return;
    const image = b.nodes[j]!;
    const far = distance(node.place, image.place);
    if (far <= tolerance || settled.has(`a ${node.id}`) || settled.has(`b ${image.id}`)) return;
    if (node.type === "fork" && image.type === "fork")
      events.push({ event: "moved-fork", a: node.id, b: image.id, at: node.place, length: far });
    else if (node.type === "end" && image.type === "end")
      events.push({ event: "moved-end", a: node.id, b: image.id, at: node.place, length: far });
  });
  interface Rehung {
    readonly i: number;
    readonly wasOn: number;
    readonly nowOn: number;
  }
  const rehung: Rehung[] = [];
  a.nodes.forEach((node, i) => {
    const j = map[i]!;
    const above = parentA[i]!;
    if (j < 0 || !above || !parentB[j] || settled.has(`a ${node.id}`)) return;
    const wasOn = map[above.node]!;
    const nowOn = parentB[j]!.node;
    if (wasOn >= 0 && mapped.has(nowOn) && wasOn !== nowOn) rehung.push({ i, wasOn, nowOn });
  });
  const done = new Set<Rehung>();
  for (const one of rehung) {
    if (done.has(one)) continue;
    const partner = rehung.find(
      (other) => other !== one && !done.has(other) && other.wasOn === one.nowOn && other.nowOn === one.wasOn,
    );
    const strandA = a.strands[parentA[one.i]!.strand]!;
    const strandB = b.strands[parentB[map[one.i]!]!.strand]!;
    const at = a.nodes[parentA[one.i]!.node]!.place;
    events.push({
      event: partner ? "exchanged-tails" : "joined-differently",
      a: strandA.id,
      b: strandB.id,
      at,
      length: strandA.length,
    });
    done.add(one);
    if (partner) done.add(partner);
  }
  a.nodes.forEach((node, i) => {
    if (node.type === "fork" && map[i]! < 0)
      events.push({ event: "joined-differently", a: node.id, b: null, at: node.place, length: 0 });
  });
  b.nodes.forEach((node, j) => {
    if (node.type === "fork" && !mapped.has(j))
      events.push({ event: "joined-differently", a: null, b: node.id, at: node.place, length: 0 });
  });
  return events;
}

/** For each node the node and strand above it, seen from the root; null at the root and where the root does not reach. */
function parents(tree: CanonicalTree): ({ node: number; strand: number } | null)[] {
  const out: ({ node: number; strand: number } | null)[] = tree.nodes.map(() => null);
  if (tree.root === null) return out;
  const seen = new Set([tree.root]);
  const queue = [tree.root];
  for (const node of queue) {
    tree.strands.forEach((strand, k) => {
      const other = strand.from === node ? strand.to : strand.to === node ? strand.from : -1;
      if (other < 0 || seen.has(other)) return;
      seen.add(other);
      out[other] = { node, strand: k };
      queue.push(other);
    });
  }
  return out;
}
