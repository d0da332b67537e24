import { otherEnd } from "#shared/trees/adjacency.ts";
import type { NodeId, StrandId, TreeDocument } from "#shared/trees/document.ts";
import { type Anchor, anchorNode, forkIfBranching } from "#shared/trees/edits/anchor.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { nodeOf, refusal, strandOf, treeOf } from "#shared/trees/edits/refusal.ts";
import { asKind, isLooseEnd, partFrom, retag, rootSideOf, tidyNode, withEndMoved } from "#shared/trees/edits/rewiring.ts";
import type { IdSource } from "#shared/trees/ids.ts";

/** A branch and its new place. */
export interface MoveBranchArgs {
  readonly strand: StrandId;
  readonly to: Anchor;
  /** The strand's end that moves; its root side when left out. */
  readonly end?: NodeId;
}

/**
 * Plan of hanging a branch, with all that hangs on it, on another strand or node, of its own or another tree. The fork left
 * idle dissolves. @throws misuse when the new place hangs on the branch itself, or the branch would take a second origin along
 */
export function moveBranch(document: TreeDocument, ids: IdSource, args: MoveBranchArgs): EditPlan {
  const draft = new EditDraft(document, ids);
  const strand = strandOf(document, args.strand);
  const end = args.end ?? rootSideOf(document, strand);
  const moved = partFrom(document, otherEnd(strand, end), strand.id);
  const isOnBranch =
    "node" in args.to ? moved.nodes.includes(args.to.node) : [...moved.strands, strand.id].includes(args.to.strand);
  if (isOnBranch || moved.nodes.includes(end)) {
    throw refusal("The new place hangs on the branch itself.", "move a branch", "Choose a strand that does not hang on it.");
  }
  const target = anchorNode(draft, args.to, "fork");
  if (target === end) throw refusal("The branch starts there already.", "move a branch", "Choose another place.");
  const targetTree = nodeOf(draft.document, target).tree;
  if (targetTree !== strand.tree) {
    const { root, name } = treeOf(document, strand.tree);
    if (root !== null && moved.nodes.includes(root)) {
      throw refusal(`The branch carries the origin of ${name}.`, "move a branch", "Re-root the tree first.");
    }
    retag(draft, { nodes: moved.nodes, strands: [...moved.strands, strand.id] }, targetTree);
  }
  const wasEnd = isLooseEnd(draft.document, nodeOf(draft.document, target));
  draft.putStrand(withEndMoved(strandOf(draft.document, strand.id), end, target));
  if (wasEnd) draft.putNode(asKind(nodeOf(draft.document, target), "waypoint"));
  else forkIfBranching(draft, target);
  tidyNode(draft, end);
  return draft.finish("move-branch");
}
