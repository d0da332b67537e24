import type { Vec3 } from "#shared/geometry/types.ts";
import { strandsAt } from "#shared/trees/adjacency.ts";
import type { NodeId, NodeKind, StrandId } from "#shared/trees/document.ts";
import type { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import { placeOnLine } from "#shared/trees/edits/place-on-line.ts";
import { nodeOf, strandOf } from "#shared/trees/edits/refusal.ts";
import { asKind, splitStrand } from "#shared/trees/edits/rewiring.ts";

/** Where something is attached: at a node, or on a strand at the place nearest to a point. */
export type Anchor = { readonly node: NodeId } | { readonly strand: StrandId; readonly near: Vec3 };

/** The node at an anchor. On a strand one of `kind` is made there by dividing it; at a strand's end that end's node is meant. */
export function anchorNode(draft: EditDraft, anchor: Anchor, kind: NodeKind): NodeId {
  if ("node" in anchor) return nodeOf(draft.document, anchor.node).id;
  const strand = strandOf(draft.document, anchor.strand);
  const place = placeOnLine(draft.document, strand, anchor.near);
  return place.node ?? splitStrand(draft, strand.id, place, kind).node;
}

/** The nodes at two anchors, which may lie on one strand: its curve tells both places before it is divided. */
export function anchorNodes(draft: EditDraft, a: Anchor, b: Anchor, kind: NodeKind): readonly [NodeId, NodeId] {
  if (!("strand" in a) || !("strand" in b) || a.strand !== b.strand)
    return [anchorNode(draft, a, kind), anchorNode(draft, b, kind)];
  const strand = strandOf(draft.document, a.strand);
  const places = [a, b].map((anchor) => placeOnLine(draft.document, strand, anchor.near));
  // The farther place first: the half at `from` keeps the strand's id, and the nearer place's leg is the same on it.
  const nodes: NodeId[] = [];
  for (const i of places[0]!.atMm > places[1]!.atMm ? [0, 1] : [1, 0]) {
    const place = places[i]!;
    const same = places.findIndex((other, k) => nodes[k] !== undefined && other.atMm === place.atMm);
    nodes[i] = place.node ?? nodes[same] ?? splitStrand(draft, strand.id, place, kind).node;
  }
  return [nodes[0]!, nodes[1]!];
}

/** Makes a waypoint that now carries a third strand a fork. */
export function forkIfBranching(draft: EditDraft, id: NodeId): void {
  const node = nodeOf(draft.document, id);
  if (node.kind === "waypoint" && strandsAt(draft.document, id).length > 2) draft.putNode(asKind(node, "fork"));
}
