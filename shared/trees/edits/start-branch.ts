import type { Vec3 } from "#shared/geometry/types.ts";
import type { LegKind, TreeDocument } from "#shared/trees/document.ts";
import { type Anchor, anchorNode } from "#shared/trees/edits/anchor.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { extendInto } from "#shared/trees/edits/extend-strand.ts";
import { nodeOf, refusal } from "#shared/trees/edits/refusal.ts";
import { asKind, isLooseEnd } from "#shared/trees/edits/rewiring.ts";
import type { IdSource } from "#shared/trees/ids.ts";

/** Where a branch starts and goes. */
export interface StartBranchArgs {
  readonly on: Anchor;
  /** First pin of the branch; left out: the fork is made and the branch is still to come. */
  readonly to?: Vec3;
  readonly through?: readonly Vec3[];
  readonly leg?: LegKind;
}

/**
 * Plan of a branch: a fork on the strand at the place nearest to the point (both halves are to be solved), and the branch's
 * first stretch. @throws misuse at a loose end, where the strand simply goes on
 */
export function startBranch(document: TreeDocument, ids: IdSource, args: StartBranchArgs): EditPlan {
  const draft = new EditDraft(document, ids);
  const node = anchorNode(draft, args.on, "fork");
  const record = nodeOf(draft.document, node);
  if (isLooseEnd(draft.document, record)) {
    throw refusal("The strand ends here.", "branch at an end", "Go on with the strand, or branch from a place along it.");
  }
  if (record.kind === "waypoint") draft.putNode(asKind(record, "fork"));
  if (args.to !== undefined) extendInto(draft, { ...args, node, to: args.to }, "open");
  return draft.finish("start-branch");
}
