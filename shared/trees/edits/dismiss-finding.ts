import type { TreeDocument } from "#shared/trees/document.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { refusal } from "#shared/trees/edits/refusal.ts";
import type { IdSource } from "#shared/trees/ids.ts";

/** A finding and what is said of it. */
export interface DismissFindingArgs {
  /** The finding's stable text, made of its code and place. */
  readonly key: string;
  /** Why; null brings the finding back. */
  readonly reason: string | null;
}

/** Plan of setting a finding aside with a reason, or of bringing it back. @throws misuse for an empty reason */
export function dismissFinding(document: TreeDocument, ids: IdSource, args: DismissFindingArgs): EditPlan {
  const draft = new EditDraft(document, ids);
  const reason = args.reason?.trim();
  if (reason === "")
    throw refusal("A finding is dismissed with a reason.", "dismiss a finding", "Say in a few words why it is none.");
  draft.putDismissal(args.key, reason === undefined ? null : { key: args.key, reason });
  return draft.finish("dismiss-finding");
}
