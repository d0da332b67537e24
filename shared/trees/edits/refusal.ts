import { TautlineError } from "#shared/errors.ts";
import type {
  CrossLink,
  CrossLinkId,
  NodeId,
  Strand,
  StrandId,
  Tree,
  TreeDocument,
  TreeId,
  TreeNode,
} from "#shared/trees/document.ts";

/** The error of an edit that makes no sense on this document: a sentence on why, and what to do instead. */
export function refusal(message: string, what: string, next?: string): TautlineError<"misuse"> {
  return new TautlineError("misuse", next ? `${message} ${next}` : message, next ? { what, next } : { what });
}

/** The node with this id. @throws not-found */
export function nodeOf(document: TreeDocument, id: NodeId): TreeNode {
  return document.nodes.get(id) ?? missing("node", id);
}

/** The strand with this id. @throws not-found */
export function strandOf(document: TreeDocument, id: StrandId): Strand {
  return document.strands.get(id) ?? missing("strand", id);
}

/** The tree with this id. @throws not-found */
export function treeOf(document: TreeDocument, id: TreeId): Tree {
  return document.trees.get(id) ?? missing("tree", id);
}

/** The cross-link with this id. @throws not-found */
export function crossLinkOf(document: TreeDocument, id: CrossLinkId): CrossLink {
  return document.crossLinks.get(id) ?? missing("cross-link", id);
}

function missing(what: string, id: string): never {
  throw new TautlineError("not-found", `There is no ${what} ${id} any more.`, { what, id });
}
