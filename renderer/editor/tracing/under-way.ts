import type { PointMm } from "#shared/geometry/types.ts";
import { strandsAt } from "#shared/trees/adjacency.ts";
import type { LegKind, NodeId, TreeDocument } from "#shared/trees/document.ts";
import type { Anchor } from "#shared/trees/edits/anchor.ts";

/**
 * What the person is in the middle of. It replaces modes: what a click or key does follows from it.
 * `strand`: the next pin goes on from the node `tip` (an origin, a fork to branch off, or an open end).
 * `branch`: the next pin makes a fork at the anchor. `link`: pins of a cross-link, which is written when its far end is given.
 */
export type UnderWay =
  | { readonly kind: "nothing" }
  | { readonly kind: "strand"; readonly tip: NodeId; readonly leg: LegKind }
  | { readonly kind: "branch"; readonly on: Anchor; readonly point: PointMm; readonly leg: LegKind }
  | { readonly kind: "link"; readonly from: Anchor; readonly point: PointMm; readonly via: readonly PointMm[] };

export const NOTHING: UnderWay = { kind: "nothing" };

/** Going on from a node, guided by the image. */
export function goingOnFrom(tip: NodeId): UnderWay {
  return { kind: "strand", tip, leg: "guide" };
}

/** True for a node at which work waits: an open end, or an origin without a strand. */
export function isUnfinished(document: TreeDocument, id: NodeId): boolean {
  const kind = document.nodes.get(id)?.kind;
  return kind === "open" || (kind === "origin" && strandsAt(document, id).length === 0);
}

/** What is under way with the way the next stretch is made changed over; nothing and cross-links have no choice. */
export function withOtherLeg(underWay: UnderWay): UnderWay {
  if (underWay.kind !== "strand" && underWay.kind !== "branch") return underWay;
  return { ...underWay, leg: underWay.leg === "guide" ? "straight" : "guide" };
}

/** The place that the next pin is joined to; null when nothing is under way or its node is gone. */
export function tipPlace(document: TreeDocument, underWay: UnderWay): PointMm | null {
  switch (underWay.kind) {
    case "nothing":
      return null;
    case "strand":
      return document.nodes.get(underWay.tip)?.position ?? null;
    case "branch":
      return underWay.point;
    case "link":
      return underWay.via.at(-1) ?? underWay.point;
  }
}

/**
 * What is under way after undo or redo: the open end that changed, or else the lone origin that a removed strand left;
 * nothing when there is none. So undo takes pins back one by one, and the next click goes on from there.
 */
export function underWayAfter(before: TreeDocument, after: TreeDocument): UnderWay {
  // Edits share what they leave alone, so a record that changed is another object.
  const changed = [...after.nodes.values()].filter((node) => before.nodes.get(node.id) !== node);
  const open = changed.find((node) => node.kind === "open");
  if (open !== undefined) return goingOnFrom(open.id);
  const lost = [...before.strands.values()].filter((strand) => !after.strands.has(strand.id));
  const left = lost.flatMap((strand) => [after.nodes.get(strand.from), after.nodes.get(strand.to)]);
  const lone = [...changed, ...left].find((node) => node?.kind === "origin" && strandsAt(after, node.id).length === 0);
  return lone === undefined ? NOTHING : goingOnFrom(lone.id);
}
