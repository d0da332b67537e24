import { roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { crossLinksAt } from "#shared/trees/adjacency.ts";
import type { Certainty, CrossLinkId, TreeDocument } from "#shared/trees/document.ts";
import { type Anchor, anchorNodes } from "#shared/trees/edits/anchor.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { crossLinkOf, nodeOf, refusal } from "#shared/trees/edits/refusal.ts";
import { dissolveNode } from "#shared/trees/edits/rewiring.ts";
import type { IdSource } from "#shared/trees/ids.ts";

/** Where a cross-link runs. */
export interface AddCrossLinkArgs {
  readonly from: Anchor;
  readonly to: Anchor;
  /** Pins between, in order from `from`. */
  readonly via?: readonly Vec3[];
  readonly certainty?: Certainty;
}

/** Plan of a cross-link between two places; on a strand a waypoint is made. @throws misuse when both are one place */
export function addCrossLink(document: TreeDocument, ids: IdSource, args: AddCrossLinkArgs): EditPlan {
  const draft = new EditDraft(document, ids);
  const [from, to] = anchorNodes(draft, args.from, args.to, "waypoint");
  if (from === to) throw refusal("Both ends of the cross-link are one place.", "cross-link", "Choose two places.");
  draft.putCrossLink({
    id: ids.next("cross-link"),
    from,
    to,
    curve: null,
    via: (args.via ?? []).map(roundPoint),
    ...(args.certainty && { certainty: args.certainty }),
  });
  return draft.finish("add-cross-link");
}

/** Plan of removing a cross-link; a waypoint that only it needed dissolves. */
export function deleteCrossLink(document: TreeDocument, ids: IdSource, args: { readonly crossLink: CrossLinkId }): EditPlan {
  const draft = new EditDraft(document, ids);
  const link = crossLinkOf(document, args.crossLink);
  draft.removeCrossLink(link.id);
  for (const id of [link.from, link.to]) {
    if (nodeOf(document, id).kind === "waypoint" && crossLinksAt(draft.document, id).length === 0) dissolveNode(draft, id);
  }
  return draft.finish("delete-cross-link");
}
