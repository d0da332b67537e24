import { strandsAt } from "#shared/trees/adjacency.ts";
import type { EndKind, Muscle, NodeId, OriginSite, TreeDocument } from "#shared/trees/document.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { nodeOf, treeOf } from "#shared/trees/edits/refusal.ts";
import { asKind } from "#shared/trees/edits/rewiring.ts";
import type { IdSource } from "#shared/trees/ids.ts";

/** The new origin and what is known of it. */
export interface ReRootArgs {
  readonly node: NodeId;
  readonly site: OriginSite;
  readonly muscle?: Muscle;
  readonly head?: number;
  /** What the former origin is when it ends a strand; `open` when left out. */
  readonly formerOrigin?: EndKind;
}

/**
 * Plan of another origin for a tree. Strands keep their direction and curves (readers orient them from the root). Where muscle
 * or head are left out, the former origin's pass over.
 */
export function reRoot(document: TreeDocument, ids: IdSource, args: ReRootArgs): EditPlan {
  const draft = new EditDraft(document, ids);
  const node = nodeOf(document, args.node);
  const tree = treeOf(document, node.tree);
  const former = tree.root === null ? undefined : nodeOf(document, tree.root);
  const muscle = args.muscle ?? former?.muscle;
  const head = args.head ?? former?.head;
  if (former && former.id !== node.id) {
    const degree = strandsAt(document, former.id).length;
    draft.putNode(asKind(former, degree > 2 ? "fork" : degree === 2 ? "waypoint" : (args.formerOrigin ?? "open")));
  }
  draft.putNode({ ...asKind(node, "origin"), site: args.site, ...(muscle && { muscle }), ...(head !== undefined && { head }) });
  draft.putTree({ ...tree, root: node.id });
  return draft.finish("re-root");
}
