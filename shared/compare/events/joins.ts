import type { CanonicalTree } from "#shared/compare/canonical.ts";
import { geometryCosts } from "#shared/compare/costs.ts";
import { editDistance } from "#shared/compare/edit-distance/edit-distance.ts";
import type { CompareEvent } from "#shared/compare/events/compare-event.ts";
import { distance } from "#shared/geometry/vec3.ts";
import type { PlainTree } from "#shared/trees/plain-trees.ts";

/** Partial maps the search for corresponding nodes may look at before its best so far is taken. */
const CORRESPONDENCE_BUDGET = 4_000;

/** A tree without some strands; forks left with two strands become waypoints, so that a missed branch leaves no trace in the join. */
export function withoutStrands(tree: PlainTree, gone: ReadonlySet<string>): PlainTree {
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
export function compareJoins(
  a: CanonicalTree,
  b: CanonicalTree,
  tolerance: number,
  settled: ReadonlySet<string>,
): CompareEvent[] {
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
