import type { Vec3 } from "#shared/geometry/types.ts";
import type { EndKind, LegKind, NodeId, TreeDocument } from "#shared/trees/document.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { extendInto } from "#shared/trees/edits/extend-strand.ts";
import { inheritedLabels, type NodeLabels, withNodeLabels } from "#shared/trees/edits/node-labels.ts";
import { nodeOf, refusal } from "#shared/trees/edits/refusal.ts";
import { asKind, isLooseEnd } from "#shared/trees/edits/rewiring.ts";
import type { IdSource } from "#shared/trees/ids.ts";

/** How and where a strand ends. */
export interface EndStrandArgs {
  readonly node: NodeId;
  readonly kind: EndKind;
  /** Where the strand ends; left out: where it is. */
  readonly to?: Vec3;
  readonly through?: readonly Vec3[];
  readonly leg?: LegKind;
  /** Set on top of what the end inherits. */
  readonly labels?: NodeLabels;
}

/**
 * Plan of ending a strand and saying how. An insertion takes the labels set on the nodes above it.
 * @throws misuse when the node is no end of a strand
 */
export function endStrand(document: TreeDocument, ids: IdSource, args: EndStrandArgs): EditPlan {
  const draft = new EditDraft(document, ids);
  const { kind, to } = args;
  const id = to === undefined ? args.node : extendInto(draft, { ...args, to }, kind);
  const node = nodeOf(draft.document, id);
  if (!isLooseEnd(draft.document, node)) {
    throw refusal(
      `${id} is not the end of a strand.`,
      "end of a strand",
      "Choose a node with a single strand that is not the origin.",
    );
  }
  const ended = asKind(node, kind);
  const inherited = kind === "insertion" ? inheritedLabels(draft.document, id) : {};
  draft.putNode(withNodeLabels(withNodeLabels(ended, inherited), args.labels ?? {}));
  return draft.finish("end-strand");
}
