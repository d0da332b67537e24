import type { Vec3 } from "#shared/geometry/types.ts";
import { nodesOf } from "#shared/trees/adjacency.ts";
import type { NodeId, StrandId, TreeDocument, TreeId } from "#shared/trees/document.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { placeOnLine } from "#shared/trees/edits/place-on-line.ts";
import { nodeOf, refusal, strandOf, treeOf } from "#shared/trees/edits/refusal.ts";
import { isLooseEnd, partFrom, retag, splitStrand, tidyNode, withEndMoved } from "#shared/trees/edits/rewiring.ts";
import type { IdSource } from "#shared/trees/ids.ts";
import { nextTreeName } from "#shared/trees/names.ts";

/** Where a strand is cut. */
export interface CutArgs {
  readonly strand: StrandId;
  /** The cut is at the place nearest to this point; at one of the strand's nodes the strand is cut off there. */
  readonly near: Vec3;
}

/**
 * Plan of a cut: two open ends at one place. What no longer hangs together with the root becomes a tree of its own, without
 * an origin, under the next free name. @throws misuse at a loose end, where there is nothing to cut off
 */
export function cutStrand(document: TreeDocument, ids: IdSource, args: CutArgs): EditPlan {
  const draft = new EditDraft(document, ids);
  const strand = strandOf(document, args.strand);
  const place = placeOnLine(document, strand, args.near);
  if (place.node) {
    cutOffAt(draft, strand.id, place.node);
  } else {
    const { node, far } = splitStrand(draft, strand.id, place, "open");
    detach(draft, far, node);
    separate(draft, node, draft.document.strands.get(far)!.from);
  }
  return draft.finish("cut-strand");
}

/** Cuts a strand off one of its nodes. */
function cutOffAt(draft: EditDraft, id: StrandId, at: NodeId): void {
  const node = nodeOf(draft.document, at);
  if (isLooseEnd(draft.document, node)) {
    throw refusal("The strand ends here already.", "cut at an end", "Choose a place along the strand, or delete the strand.");
  }
  const end = detach(draft, id, at);
  separate(draft, at, end);
  tidyNode(draft, at);
}

/** Gives the strand an open end of its own where it ended at `at`. @returns the new end */
function detach(draft: EditDraft, id: StrandId, at: NodeId): NodeId {
  const strand = strandOf(draft.document, id);
  const end = draft.ids.next("node");
  draft.putNode({ id: end, tree: strand.tree, kind: "open", position: nodeOf(draft.document, at).position });
  draft.putStrand(withEndMoved(strand, at, end));
  return end;
}

/** Makes the side without the root a tree of its own, when the two sides hang together no more. */
function separate(draft: EditDraft, a: NodeId, b: NodeId): void {
  const { document } = draft;
  const tree = treeOf(document, nodeOf(document, a).tree);
  const parts = [partFrom(document, a), partFrom(document, b)] as const;
  if (parts[0].nodes.includes(b)) return;
  const keeps = tree.root ?? nodesOf(document, tree.id)[0];
  const loose = keeps !== undefined && parts[1].nodes.includes(keeps) ? parts[0] : parts[1];
  const muscle = tree.root === null ? undefined : nodeOf(document, tree.root).muscle;
  const id: TreeId = draft.ids.next("tree");
  draft.putTree({ id, name: nextTreeName(document, muscle), root: null });
  retag(draft, loose, id);
}
