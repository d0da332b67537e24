import type { Landmarks, TreeDocument } from "#shared/trees/document.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import type { IdSource } from "#shared/trees/ids.ts";

/** Plan of other landmarks, whole. */
export function setLandmarks(document: TreeDocument, ids: IdSource, args: { readonly landmarks: Landmarks }): EditPlan {
  const draft = new EditDraft(document, ids);
  draft.putLandmarks(args.landmarks);
  return draft.finish("set-landmarks");
}
