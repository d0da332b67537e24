import { roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { crossLinksAt, strandsAt } from "#shared/trees/adjacency.ts";
import type { NodeId, TreeDocument } from "#shared/trees/document.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { nodeOf } from "#shared/trees/edits/refusal.ts";
import type { IdSource } from "#shared/trees/ids.ts";

/** Plan of a node in another place; every strand and cross-link that meets there is to be solved. */
export function moveNode(document: TreeDocument, ids: IdSource, args: { readonly node: NodeId; readonly to: Vec3 }): EditPlan {
  const draft = new EditDraft(document, ids);
  const node = nodeOf(document, args.node);
  draft.putNode({ ...node, position: roundPoint(args.to) });
  for (const strand of strandsAt(document, node.id)) draft.putStrand({ ...strand, curve: null });
  for (const link of crossLinksAt(document, node.id)) draft.putCrossLink({ ...link, curve: null });
  return draft.finish("move-node");
}
