import { roundMm, roundPoint } from "#shared/geometry/types.ts";
import type { CrossLink, CrossLinkId, Curve, CurveId, NodeId, Strand, TreeDocument, TreeId } from "#shared/trees/document.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { refusal } from "#shared/trees/edits/refusal.ts";
import type { IdSource } from "#shared/trees/ids.ts";
import { brokenInvariants } from "#shared/trees/invariants.ts";
import { nextTreeName, treeNamed } from "#shared/trees/names.ts";

/** A plan of taking trees in, with the trees that got another name because theirs was in use. */
export interface TakeInPlan extends EditPlan {
  readonly renamed: readonly { readonly from: string; readonly to: string }[];
}

/**
 * Plan of taking in all trees and cross-links of another document, under new ids. Curves come along as they are, rounded to
 * 1e-6 mm with their ends at their nodes; strands without one (a pins file) are named for solving. Landmarks fill what this document lacks. Faults that a
 * file may carry (no root, loops) come along as findings.
 * @throws misuse when `incoming` is not sound as a data structure
 */
export function takeInTrees(document: TreeDocument, ids: IdSource, args: { readonly incoming: TreeDocument }): TakeInPlan {
  const { incoming } = args;
  const draft = new EditDraft(document, ids);
  const nodeIds = new Map<NodeId, NodeId>([...incoming.nodes.keys()].map((id) => [id, ids.next("node")]));
  const treeIds = new Map<TreeId, TreeId>();
  const renamed: { from: string; to: string }[] = [];
  for (const tree of incoming.trees.values()) {
    const id = ids.next("tree");
    const muscle = tree.root === null ? undefined : incoming.nodes.get(tree.root)?.muscle;
    const name =
      treeNamed(draft.document, tree.name) === null && tree.name.trim() !== "" ? tree.name : nextTreeName(draft.document, muscle);
    if (name !== tree.name) renamed.push({ from: tree.name, to: name });
    treeIds.set(tree.id, id);
    draft.putTree({ ...tree, id, name, root: tree.root === null ? null : (nodeIds.get(tree.root) ?? null) });
  }
  for (const node of incoming.nodes.values()) {
    const id = nodeIds.get(node.id)!;
    draft.putNode({ ...node, id, tree: known(treeIds, node.tree), position: roundPoint(node.position) });
  }
  for (const strand of incoming.strands.values()) {
    const line = takenLine(draft, incoming, strand, nodeIds);
    draft.putStrand({ ...line, id: ids.next("strand"), tree: known(treeIds, strand.tree) });
  }
  for (const link of incoming.crossLinks.values()) {
    const id: CrossLinkId = ids.next("cross-link");
    draft.putCrossLink({ ...takenLine(draft, incoming, link, nodeIds), id });
  }
  draft.putLandmarks({ ...incoming.landmarks, ...draft.document.landmarks });
  const broken = brokenInvariants(draft.document);
  if (broken.length > 0)
    throw refusal(`The trees cannot be taken in: ${broken[0]}.`, "take in trees", "Check the file they come from.");
  return { ...draft.finish("take-in-trees"), renamed };
}

function takenLine<L extends Strand | CrossLink>(
  draft: EditDraft,
  incoming: TreeDocument,
  line: L,
  nodeIds: ReadonlyMap<NodeId, NodeId>,
): L {
  const from = known(nodeIds, line.from);
  const to = known(nodeIds, line.to);
  const old = line.curve === null ? undefined : incoming.curves.get(line.curve);
  const curve = old ? takenCurve(draft, old, from, to) : null;
  return { ...line, from, to, via: line.via.map(roundPoint), curve };
}

function takenCurve(draft: EditDraft, old: Curve, from: NodeId, to: NodeId): CurveId {
  const points = old.points.map(roundMm);
  points.set(draft.document.nodes.get(from)!.position, 0);
  points.set(draft.document.nodes.get(to)!.position, points.length - 3);
  const id = draft.ids.next("curve");
  draft.addCurve({ ...old, id, points, radii: old.radii.map((r) => (Number.isNaN(r) ? r : roundMm(r))) });
  return id;
}

function known<K, V>(ids: ReadonlyMap<K, V>, id: K): V {
  const found = ids.get(id);
  if (found === undefined)
    throw refusal(
      `The trees cannot be taken in: ${String(id)} names nothing.`,
      "take in trees",
      "Check the file they come from.",
    );
  return found;
}
