import { crossLinksAt, otherEnd, strandsAt } from "#shared/trees/adjacency.ts";
import type { NodeId, TreeDocument } from "#shared/trees/document.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { continued, outwardRun } from "#shared/trees/edits/extend-strand.ts";
import { nodeOf, refusal, treeOf } from "#shared/trees/edits/refusal.ts";
import { asKind, dissolveNode, isLooseEnd, removePart, tidyNode } from "#shared/trees/edits/rewiring.ts";
import type { IdSource } from "#shared/trees/ids.ts";

/**
 * Plan of taking the last pin back: the end returns, open, to the pin before it; without one the strand goes, and the fork
 * that it left idle; a lone origin goes with its tree; a fork without a branch yet dissolves.
 * @throws misuse on a node from which several strands start
 */
export function takeBackPin(document: TreeDocument, ids: IdSource, args: { readonly node: NodeId }): EditPlan {
  const draft = new EditDraft(document, ids);
  const node = nodeOf(document, args.node);
  const strands = strandsAt(document, node.id);
  if (strands.length === 0 && treeOf(document, node.tree).root === node.id) {
    removePart(draft, { nodes: [node.id], strands: [] });
    draft.removeTree(node.tree);
  } else if (isLooseEnd(document, node)) {
    takeBackEnd(draft, args.node);
  } else if (!dissolveNode(draft, node.id)) {
    throw refusal("Several strands meet here.", "take back a pin", "Choose the end of a strand, or delete a strand.");
  }
  return draft.finish("take-back-pin");
}

function takeBackEnd(draft: EditDraft, id: NodeId): void {
  const { document } = draft;
  const node = nodeOf(document, id);
  const strand = strandsAt(document, id)[0]!;
  const run = outwardRun(strand, id);
  const last = run.via[run.via.length - 1];
  if (last) {
    draft.putStrand(continued(strand, id, { via: run.via.slice(0, -1), legs: run.legs.slice(0, -1) }));
    draft.putNode({ ...asKind(node, "open"), position: last });
    // A cross-link that ends here follows its node.
    for (const link of crossLinksAt(document, id)) draft.putCrossLink({ ...link, curve: null });
    return;
  }
  removePart(draft, { nodes: [id], strands: [strand.id] });
  tidyNode(draft, otherEnd(strand, id));
}
