import { roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import type { LegKind, StrandId, TreeDocument } from "#shared/trees/document.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { isSamePlace, joinedRun, type PinRun, runOf, splitRun, strandWithRun } from "#shared/trees/edits/pin-run.ts";
import { placeOnLine } from "#shared/trees/edits/place-on-line.ts";
import { refusal, strandOf } from "#shared/trees/edits/refusal.ts";
import type { IdSource } from "#shared/trees/ids.ts";

/** The stretch and its new way. */
export interface ReRouteArgs {
  readonly strand: StrandId;
  /** Two places on the strand, in either order; what lies between is drawn anew. */
  readonly between: readonly [Vec3, Vec3];
  /** Pins of the new stretch, in order from the first place of `between` to the second. */
  readonly through: readonly Vec3[];
  readonly leg?: LegKind;
}

/**
 * Plan of another way for a stretch of a strand. Its two places become pins, so that the rest keeps its way; pins between
 * them go.
 */
export function reRoute(document: TreeDocument, ids: IdSource, args: ReRouteArgs): EditPlan {
  const draft = new EditDraft(document, ids);
  const strand = strandOf(document, args.strand);
  const places = args.between.map((near) => placeOnLine(document, strand, near));
  const isReversed = places[0]!.atMm > places[1]!.atMm;
  const [first, last] = isReversed ? [places[1]!, places[0]!] : [places[0]!, places[1]!];
  if (isSamePlace(first.point, last.point)) {
    throw refusal("The stretch has no length.", "re-route", "Choose two places apart from each other.");
  }
  const through = (isReversed ? [...args.through].reverse() : args.through).map(roundPoint);
  const leg = args.leg ?? "guide";
  const run = runOf(strand);
  // A place at a node needs no pin: the new stretch begins at the node itself.
  const before: PinRun | null = first.node === strand.from ? null : splitRun(run, first.leg, first.point)[0];
  const after: PinRun | null = last.node === strand.to ? null : splitRun(run, last.leg, last.point)[1];
  const stretch: PinRun = { via: through, legs: [...through.map((): LegKind => leg), leg] };
  const head = before ? joinedRun(before, [first.point], stretch) : stretch;
  draft.putStrand(strandWithRun(strand, after ? joinedRun(head, [last.point], after) : head));
  return draft.finish("re-route");
}
