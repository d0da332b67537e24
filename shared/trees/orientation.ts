import { nodesOf, otherEnd, strandsAt } from "#shared/trees/adjacency.ts";
import type { NodeId, Strand, StrandId, Tree, TreeDocument } from "#shared/trees/document.ts";

/** A tree seen from its root. Nodes that the root does not reach are not in it. */
export interface Orientation {
  readonly root: NodeId | null;
  /** Reached nodes, nearest first (by number of strands, then by strand id). */
  readonly order: readonly NodeId[];
  /** The strand towards the root; null at the root. */
  readonly towardsRoot: ReadonlyMap<NodeId, Strand | null>;
  /** Strands away from the root, in the order of their ids. */
  readonly awayFromRoot: ReadonlyMap<NodeId, readonly Strand[]>;
  /** The strand's node nearer to the root. */
  readonly rootSide: ReadonlyMap<StrandId, NodeId>;
  /** Strands that close a loop; a sound tree has none. */
  readonly closing: readonly StrandId[];
}

/**
 * The orientation of a tree from `from`, by default its root, breadth first. A tree without a root is seen from its lowest
 * node, so that the answer depends on the document alone. Complexity: nodes + strands of the tree.
 */
export function orientTree(document: TreeDocument, tree: Tree, from?: NodeId): Orientation {
  const start = from ?? tree.root ?? nodesOf(document, tree.id)[0];
  const order: NodeId[] = [];
  const towardsRoot = new Map<NodeId, Strand | null>();
  const awayFromRoot = new Map<NodeId, Strand[]>();
  const rootSide = new Map<StrandId, NodeId>();
  const closing: StrandId[] = [];
  if (start !== undefined) {
    order.push(start);
    towardsRoot.set(start, null);
  }
  for (let i = 0; i < order.length; i++) {
    const node = order[i]!;
    const away: Strand[] = [];
    for (const strand of strandsAt(document, node)) {
      if (rootSide.has(strand.id)) continue;
      rootSide.set(strand.id, node);
      const far = otherEnd(strand, node);
      if (towardsRoot.has(far)) {
        closing.push(strand.id);
        continue;
      }
      towardsRoot.set(far, strand);
      order.push(far);
      away.push(strand);
    }
    awayFromRoot.set(node, away);
  }
  return { root: tree.root, order, towardsRoot, awayFromRoot, rootSide, closing };
}

/** Nodes and strands that hang on a strand: itself and all beyond it, seen from the root. */
export function hangingOn(
  document: TreeDocument,
  orientation: Orientation,
  strand: Strand,
): { nodes: NodeId[]; strands: StrandId[] } {
  const near = orientation.rootSide.get(strand.id) ?? strand.from;
  const nodes: NodeId[] = [otherEnd(strand, near)];
  const strands = new Set<StrandId>([strand.id]);
  const seen = new Set<NodeId>(nodes);
  for (let i = 0; i < nodes.length; i++) {
    for (const next of strandsAt(document, nodes[i]!)) {
      if (strands.has(next.id)) continue;
      const far = otherEnd(next, nodes[i]!);
      // In a loop the way round leads back to the near side; that part does not hang on this strand.
      if (far === near) continue;
      strands.add(next.id);
      if (!seen.has(far)) {
        seen.add(far);
        nodes.push(far);
      }
    }
  }
  return { nodes, strands: [...strands] };
}

/**
 * Branch order of every strand reached from the root: 1 at the origin, one more beyond each fork. Waypoints add nothing.
 */
export function branchOrders(document: TreeDocument, orientation: Orientation): Map<StrandId, number> {
  const orders = new Map<StrandId, number>();
  for (const node of orientation.order) {
    const above = orientation.towardsRoot.get(node);
    const away = orientation.awayFromRoot.get(node) ?? [];
    const isFork =
      document.nodes.get(node)?.kind === "fork" || (away.length > 1 && document.nodes.get(node)?.kind !== "waypoint");
    const order = above ? (orders.get(above.id) ?? 1) + (isFork ? 1 : 0) : 1;
    for (const strand of away) orders.set(strand.id, order);
  }
  return orders;
}

/** Strands from the root to a node, in order; null when the root does not reach it. */
export function strandsFromRoot(orientation: Orientation, node: NodeId): Strand[] | null {
  const path: Strand[] = [];
  let at = node;
  for (;;) {
    const above = orientation.towardsRoot.get(at);
    if (above === undefined) return null;
    if (above === null) return path.reverse();
    path.push(above);
    at = otherEnd(above, at);
  }
}
