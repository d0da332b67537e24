import { nodesOf, otherEnd, strandsOf } from "#shared/trees/adjacency.ts";
import type { StrandId, TreeDocument, TreeId } from "#shared/trees/document.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { strandOf, treeOf } from "#shared/trees/edits/refusal.ts";
import { partFrom, removePart, rootSideOf, tidyNode } from "#shared/trees/edits/rewiring.ts";
import type { IdSource } from "#shared/trees/ids.ts";

/**
 * Plan of deleting a strand and what hangs on it (in a tree without origin: what lies beyond it from the lowest node). A
 * fork left with two strands dissolves; in a loop only the strand itself goes.
 */
export function deleteStrand(document: TreeDocument, ids: IdSource, args: { readonly strand: StrandId }): EditPlan {
  const draft = new EditDraft(document, ids);
  const strand = strandOf(document, args.strand);
  const near = rootSideOf(document, strand);
  const far = otherEnd(strand, near);
  const beyond = partFrom(document, far, strand.id);
  draft.removeStrand(strand.id);
  if (beyond.nodes.includes(near)) tidyNode(draft, far);
  else removePart(draft, beyond);
  if (draft.document.nodes.has(near)) tidyNode(draft, near);
  return draft.finish("delete-strand");
}

/** Plan of deleting a whole tree, with the cross-links that end on it. Waypoints that these leave on other trees stay. */
export function deleteTree(document: TreeDocument, ids: IdSource, args: { readonly tree: TreeId }): EditPlan {
  const draft = new EditDraft(document, ids);
  const { id } = treeOf(document, args.tree);
  removePart(draft, { nodes: nodesOf(document, id), strands: strandsOf(document, id) });
  draft.removeTree(id);
  return draft.finish("delete-tree");
}
