import type { Certainty, CrossLinkId, NodeId, StrandId, TreeDocument } from "#shared/trees/document.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { applicable, type NodeLabels, withNodeLabels } from "#shared/trees/edits/node-labels.ts";
import { crossLinkOf, nodeOf, strandOf, treeOf } from "#shared/trees/edits/refusal.ts";
import type { IdSource } from "#shared/trees/ids.ts";
import { hangingOn, orientTree } from "#shared/trees/orientation.ts";

/** Labels to set on a strand; null takes a label away. Cross-links carry certainty only. */
export interface StrandLabels {
  readonly strut?: boolean | null;
  readonly certainty?: Certainty | null;
}

/** What gets which labels. */
export interface SetLabelsArgs {
  readonly nodes?: readonly NodeId[];
  readonly node?: NodeLabels;
  /** Set the node labels also on every node that hangs on those named and carries them (what comes later inherits them). */
  readonly downwards?: boolean;
  readonly strands?: readonly StrandId[];
  readonly crossLinks?: readonly CrossLinkId[];
  readonly strand?: StrandLabels;
}

/** Plan of labels on nodes, strands and cross-links. @throws misuse when a node named cannot carry a label */
export function setLabels(document: TreeDocument, ids: IdSource, args: SetLabelsArgs): EditPlan {
  const draft = new EditDraft(document, ids);
  const labels = args.node ?? {};
  for (const id of args.nodes ?? []) {
    draft.putNode(withNodeLabels(nodeOf(draft.document, id), labels));
    if (!args.downwards) continue;
    for (const below of nodesBelow(document, id)) {
      const node = nodeOf(draft.document, below);
      draft.putNode(withNodeLabels(node, applicable(node, labels)));
    }
  }
  const { strut, certainty } = args.strand ?? {};
  for (const id of args.strands ?? []) {
    draft.putStrand(withValue(withValue(strandOf(draft.document, id), "strut", strut), "certainty", certainty));
  }
  for (const id of args.crossLinks ?? []) draft.putCrossLink(withValue(crossLinkOf(draft.document, id), "certainty", certainty));
  return draft.finish("set-labels");
}

function nodesBelow(document: TreeDocument, id: NodeId): NodeId[] {
  const orientation = orientTree(document, treeOf(document, nodeOf(document, id).tree));
  return (orientation.awayFromRoot.get(id) ?? []).flatMap((strand) => hangingOn(document, orientation, strand).nodes);
}

function withValue<T extends object>(record: T, key: string, value: unknown): T {
  if (value === undefined) return record;
  const { [key]: _, ...rest } = record as Record<string, unknown>;
  return (value === null ? rest : { ...rest, [key]: value }) as T;
}
