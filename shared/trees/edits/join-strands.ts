import { crossLinksAt, strandsAt } from "#shared/trees/adjacency.ts";
import type { NodeId, TreeDocument, TreeId } from "#shared/trees/document.ts";
import { forkIfBranching } from "#shared/trees/edits/anchor.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { continued, outwardRun } from "#shared/trees/edits/extend-strand.ts";
import { isSamePlace, joinedRun } from "#shared/trees/edits/pin-run.ts";
import { nodeOf, refusal, treeOf } from "#shared/trees/edits/refusal.ts";
import { asKind, dissolveNode, isLooseEnd, partFrom, removeIfEmpty, retag, withEndMoved } from "#shared/trees/edits/rewiring.ts";
import type { IdSource } from "#shared/trees/ids.ts";

/**
 * Plan of joining a loose end to another node. Two loose ends become one strand, their places pins on it; an end joined to a
 * fork, waypoint or origin becomes a branch of it. The tree with an origin keeps its id and name.
 * @param args.givesUpOrigin the tree of the loose end was drawn from its far end: where both trees have an origin, that one
 * becomes an open end.
 * @throws misuse when both are in one tree (a loop), both trees have an origin, or neither node is a loose end
 */
export function joinStrands(
  document: TreeDocument,
  ids: IdSource,
  args: { readonly a: NodeId; readonly b: NodeId; readonly givesUpOrigin?: boolean },
): EditPlan {
  const draft = new EditDraft(document, ids);
  const nodes = [nodeOf(document, args.a), nodeOf(document, args.b)] as const;
  const free = nodes.map((node) => isLooseEnd(document, node) && crossLinksAt(document, node.id).length === 0);
  if (!free[0] && !free[1])
    throw refusal("Neither place is a loose end.", "join", "Choose the end of a strand that no cross-link holds.");
  const [end, target] = free[0] ? nodes : [nodes[1], nodes[0]];
  if (args.givesUpOrigin === true) giveUpOrigin(draft, end.tree, target.tree);
  mergeTrees(draft, end.id, target.id);
  attach(draft, end.id, target.id);
  if (!isLooseEnd(document, target)) forkIfBranching(draft, target.id);
  else if (!dissolveNode(draft, target.id)) draft.putNode(asKind(nodeOf(draft.document, target.id), "waypoint"));
  return draft.finish("join-strands");
}

/** Plan of taking a waypoint or two-strand fork out; its place stays as a pin. @throws misuse when other strands or cross-links need it */
export function dissolve(document: TreeDocument, ids: IdSource, args: { readonly node: NodeId }): EditPlan {
  const draft = new EditDraft(document, ids);
  nodeOf(document, args.node);
  if (!dissolveNode(draft, args.node)) {
    throw refusal(
      `${args.node} cannot be taken out.`,
      "dissolve a node",
      "Only a node with exactly two strands and no cross-link can.",
    );
  }
  return draft.finish("join-strands");
}

/** Runs the strand of a loose end on to `target`; the end's place stays as a pin. */
function attach(draft: EditDraft, id: NodeId, target: NodeId): void {
  const { document } = draft;
  const end = nodeOf(document, id);
  const strand = strandsAt(document, id)[0]!;
  const run = outwardRun(strand, id);
  const isThere = isSamePlace(end.position, nodeOf(document, target).position);
  const longer = isThere ? run : joinedRun(run, [end.position], { via: [], legs: ["guide"] });
  draft.putStrand(withEndMoved(continued(strand, id, longer), id, target));
  draft.removeNode(id);
}

/** Where both trees have an origin, the first one's becomes what its strands make of it. */
function giveUpOrigin(draft: EditDraft, id: TreeId, other: TreeId): void {
  const { document } = draft;
  const tree = treeOf(document, id);
  if (id === other || tree.root === null || treeOf(document, other).root === null) return;
  const degree = strandsAt(document, tree.root).length;
  draft.putNode(asKind(nodeOf(document, tree.root), degree > 2 ? "fork" : degree === 2 ? "waypoint" : "open"));
  draft.putTree({ ...tree, root: null });
}

/** Brings both nodes into one tree: the one that has an origin, else the target's. */
function mergeTrees(draft: EditDraft, end: NodeId, target: NodeId): void {
  const { document } = draft;
  const parts = [partFrom(document, end), partFrom(document, target)] as const;
  const trees = [treeOf(document, nodeOf(document, end).tree), treeOf(document, nodeOf(document, target).tree)] as const;
  if (parts[0].nodes.includes(target)) {
    throw refusal("Both ends hang on one origin; joining them would close a loop.", "join", "Draw a cross-link instead.");
  }
  if (trees[0].id === trees[1].id) return;
  const rooted = trees.map((tree, i) => tree.root !== null && parts[i]!.nodes.includes(tree.root));
  if (rooted[0] && rooted[1]) {
    throw refusal(
      `${trees[0].name} and ${trees[1].name} each have an origin; a tree has one.`,
      "join",
      "Draw a cross-link, or re-root one of them.",
    );
  }
  const [loser, winner] = rooted[0] ? [1, 0] : [0, 1];
  retag(draft, parts[loser]!, trees[winner]!.id);
  removeIfEmpty(draft, trees[loser]!.id);
}
