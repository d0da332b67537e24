import type { CrossLink, NodeId, Strand, StrandId, TreeDocument, TreeId } from "#shared/trees/document.ts";
import { byCounter } from "#shared/trees/ids.ts";

/** Which strands meet at a node and what belongs to a tree. Lists are in the order of the ids' counters. */
export interface Adjacency {
  readonly strandsAt: ReadonlyMap<NodeId, readonly Strand[]>;
  readonly crossLinksAt: ReadonlyMap<NodeId, readonly CrossLink[]>;
  readonly nodesOf: ReadonlyMap<TreeId, readonly NodeId[]>;
  readonly strandsOf: ReadonlyMap<TreeId, readonly StrandId[]>;
}

const known = new WeakMap<TreeDocument, Adjacency>();

/**
 * The adjacency of a document; a strand from a node to itself stands twice at it. Made once per document (documents never
 * change), so asking again is free. Complexity: nodes + strands, sorted.
 */
export function adjacencyOf(document: TreeDocument): Adjacency {
  let adjacency = known.get(document);
  if (!adjacency) {
    adjacency = build(document);
    known.set(document, adjacency);
  }
  return adjacency;
}

/** Strands that meet at a node, in the order of their ids; empty for a lone node. */
export function strandsAt(document: TreeDocument, node: NodeId): readonly Strand[] {
  return adjacencyOf(document).strandsAt.get(node) ?? [];
}

/** Cross-links that meet at a node. */
export function crossLinksAt(document: TreeDocument, node: NodeId): readonly CrossLink[] {
  return adjacencyOf(document).crossLinksAt.get(node) ?? [];
}

/** Nodes of a tree, in the order of their ids. */
export function nodesOf(document: TreeDocument, tree: TreeId): readonly NodeId[] {
  return adjacencyOf(document).nodesOf.get(tree) ?? [];
}

/** Strands of a tree, in the order of their ids. */
export function strandsOf(document: TreeDocument, tree: TreeId): readonly StrandId[] {
  return adjacencyOf(document).strandsOf.get(tree) ?? [];
}

/** The other node of a strand. */
export function otherEnd(strand: Strand, node: NodeId): NodeId {
  return strand.from === node ? strand.to : strand.from;
}

function build(document: TreeDocument): Adjacency {
  const strandsAt = new Map<NodeId, Strand[]>();
  const crossLinksAt = new Map<NodeId, CrossLink[]>();
  const nodesOf = new Map<TreeId, NodeId[]>();
  const strandsOf = new Map<TreeId, StrandId[]>();
  for (const node of document.nodes.values()) push(nodesOf, node.tree, node.id);
  for (const strand of document.strands.values()) {
    push(strandsOf, strand.tree, strand.id);
    push(strandsAt, strand.from, strand);
    push(strandsAt, strand.to, strand);
  }
  for (const link of document.crossLinks.values()) {
    push(crossLinksAt, link.from, link);
    push(crossLinksAt, link.to, link);
  }
  for (const list of [...nodesOf.values(), ...strandsOf.values()]) list.sort(byCounter);
  for (const list of [...strandsAt.values(), ...crossLinksAt.values()]) list.sort((a, b) => byCounter(a.id, b.id));
  return { strandsAt, crossLinksAt, nodesOf, strandsOf };
}

function push<K, V>(map: Map<K, V[]>, key: K, value: V): void {
  const list = map.get(key);
  if (list) list.push(value);
  else map.set(key, [value]);
}
