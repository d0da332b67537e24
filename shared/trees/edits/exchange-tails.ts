import type { Vec3 } from "#shared/geometry/types.ts";
import { otherEnd } from "#shared/trees/adjacency.ts";
import type { NodeId, Strand, StrandId, TreeDocument } from "#shared/trees/document.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { continued } from "#shared/trees/edits/extend-strand.ts";
import { isSamePlace, joinedRun, type PinRun, reversedRun, runOf, splitRun } from "#shared/trees/edits/pin-run.ts";
import { type PlaceOnLine, placeOnLine } from "#shared/trees/edits/place-on-line.ts";
import { nodeOf, refusal, strandOf, treeOf } from "#shared/trees/edits/refusal.ts";
import { partFrom, retag, rootSideOf, type TreePart, withEndMoved } from "#shared/trees/edits/rewiring.ts";
import type { IdSource } from "#shared/trees/ids.ts";

/** The crossing: a place on each of two strands. */
export interface ExchangeTailsArgs {
  readonly a: { readonly strand: StrandId; readonly near: Vec3 };
  readonly b: { readonly strand: StrandId; readonly near: Vec3 };
}

/** A strand at a crossing, seen from the root: what leads there, what goes on, and what hangs on it. */
interface Crossing {
  readonly strand: Strand;
  readonly place: PlaceOnLine;
  readonly tailEnd: NodeId;
  readonly before: PinRun;
  readonly after: PinRun;
  readonly hanging: TreePart;
}

/**
 * Plan of exchanging what two strands become beyond a crossing: each goes on as the other did, and what hung on the one hangs
 * on the other. Both places stay as pins, in the order passed. Ids, direction and labels of a strand stay with its root side.
 * @throws misuse when one strand hangs on the other, or a tree has no origin (it would not be clear which side is the tail)
 */
export function exchangeTails(document: TreeDocument, ids: IdSource, args: ExchangeTailsArgs): EditPlan {
  const draft = new EditDraft(document, ids);
  const a = crossingOf(document, args.a);
  const b = crossingOf(document, args.b);
  const isNested = a.hanging.strands.includes(b.strand.id) || b.hanging.strands.includes(a.strand.id);
  if (a.strand.id === b.strand.id || isNested) {
    throw refusal(
      "One of the strands hangs on the other.",
      "exchange tails",
      "Choose two strands that only meet at the crossing.",
    );
  }
  retag(draft, a.hanging, b.strand.tree);
  retag(draft, b.hanging, a.strand.tree);
  goOnAs(draft, a, b);
  goOnAs(draft, b, a);
  return draft.finish("exchange-tails");
}

function crossingOf(document: TreeDocument, at: ExchangeTailsArgs["a"]): Crossing {
  const strand = strandOf(document, at.strand);
  const tree = treeOf(document, strand.tree);
  if (tree.root === null) throw refusal(`${tree.name} has no origin.`, "exchange tails", "Give it an origin first.");
  const place = placeOnLine(document, strand, at.near);
  const near = rootSideOf(document, strand);
  const tailEnd = otherEnd(strand, near);
  const [first, second] = splitRun(runOf(strand), place.leg, place.point);
  const [before, after] = tailEnd === strand.to ? [first, second] : [reversedRun(second), reversedRun(first)];
  return { strand, place, tailEnd, before, after, hanging: partFrom(document, tailEnd, strand.id) };
}

function goOnAs(draft: EditDraft, head: Crossing, tail: Crossing): void {
  const isOnePlace = isSamePlace(head.place.point, tail.place.point);
  const points = isOnePlace ? [head.place.point] : [head.place.point, tail.place.point];
  const strand = strandOf(draft.document, head.strand.id);
  const ends = [otherEnd(strand, head.tailEnd), tail.tailEnd].map((id) => nodeOf(draft.document, id).position);
  // A place at the strand's own end is that node, not a pin.
  const pins = points.filter((p) => !ends.some((end) => isSamePlace(p, end)));
  const longer = continued(strand, head.tailEnd, joinedRun(head.before, pins, tail.after));
  draft.putStrand(withEndMoved(longer, head.tailEnd, tail.tailEnd));
}
