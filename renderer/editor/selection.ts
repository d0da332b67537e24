import type { CrossLinkId, NodeId, StrandId, TreeDocument, TreeId } from "#shared/trees/document.ts";

/** What is picked out; a node or a line, with the tree it belongs to. Cross-links belong to no single tree. */
export interface Selection {
  readonly tree?: TreeId;
  readonly strand?: StrandId | CrossLinkId;
  readonly node?: NodeId;
}

export const NO_SELECTION: Selection = {};

export function selectNode(document: TreeDocument, node: NodeId): Selection {
  const record = document.nodes.get(node);
  return record === undefined ? NO_SELECTION : { tree: record.tree, node };
}

export function selectLine(document: TreeDocument, line: StrandId | CrossLinkId): Selection {
  if (line.startsWith("x")) return document.crossLinks.has(line as CrossLinkId) ? { strand: line } : NO_SELECTION;
  const strand = document.strands.get(line as StrandId);
  return strand === undefined ? NO_SELECTION : { tree: strand.tree, strand: line };
}

/** The selection without what the document no longer has. */
export function stillThere(document: TreeDocument, selection: Selection): Selection {
  const { tree, strand, node } = selection;
  if (node !== undefined) return selectNode(document, node);
  if (strand !== undefined) return selectLine(document, strand);
  return tree !== undefined && document.trees.has(tree) ? selection : NO_SELECTION;
}
