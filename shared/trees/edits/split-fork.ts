import { roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { strandsAt } from "#shared/trees/adjacency.ts";
import type { NodeId, StrandId, TreeDocument } from "#shared/trees/document.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { isSamePlace } from "#shared/trees/edits/pin-run.ts";
import { nodeOf, refusal, strandOf, treeOf } from "#shared/trees/edits/refusal.ts";
import { withEndMoved } from "#shared/trees/edits/rewiring.ts";
import type { IdSource } from "#shared/trees/ids.ts";
import { orientTree } from "#shared/trees/orientation.ts";

/** A fork and what moves to the new one. */
export interface SplitForkArgs {
  readonly node: NodeId;
  /** The strands, two or more, that start at the new fork. */
  readonly moved: readonly StrandId[];
  readonly to: Vec3;
}

/**
 * Plan of one fork made two: the named strands move to a new fork, which a new strand joins to the old one.
 * @throws misuse unless two or more strands away from the root move and at least one stays
 */
export function splitFork(document: TreeDocument, ids: IdSource, args: SplitForkArgs): EditPlan {
  const draft = new EditDraft(document, ids);
  const node = nodeOf(document, args.node);
  const trunk = orientTree(document, treeOf(document, node.tree)).towardsRoot.get(node.id) ?? null;
  const here = strandsAt(document, node.id).filter((strand) => strand.id !== trunk?.id);
  const moved = new Set(args.moved);
  const fits = moved.size >= 2 && moved.size < here.length && [...moved].every((id) => here.some((strand) => strand.id === id));
  if (!fits) {
    throw refusal(
      "To split a fork, two or more of its branches move and at least one stays.",
      "split a fork",
      "Choose branches of this fork that lead away from the origin.",
    );
  }
  const position = roundPoint(args.to);
  if (isSamePlace(position, node.position))
    throw refusal("The new fork lies on the old one.", "split a fork", "Choose another place.");
  const fork = ids.next("node");
  const between = ids.next("strand");
  draft.putNode({ id: fork, tree: node.tree, kind: "fork", position });
  draft.putStrand({ id: between, tree: node.tree, from: node.id, to: fork, curve: null, via: [] });
  for (const id of moved) draft.putStrand(withEndMoved(strandOf(document, id), node.id, fork));
  return draft.finish("split-fork");
}
