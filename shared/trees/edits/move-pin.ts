import { roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import type { CrossLink, CrossLinkId, LegKind, Strand, StrandId, TreeDocument } from "#shared/trees/document.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan, LineId } from "#shared/trees/edits/edit-plan.ts";
import { joinedRun, type PinRun, runOf, strandWithRun } from "#shared/trees/edits/pin-run.ts";
import { placeOnLine } from "#shared/trees/edits/place-on-line.ts";
import { crossLinkOf, refusal, strandOf } from "#shared/trees/edits/refusal.ts";
import type { IdSource } from "#shared/trees/ids.ts";

/** Plan of a pin in another place. @param args.index of the pin, from 0 at `from`. @throws misuse when there is no such pin */
export function movePin(
  document: TreeDocument,
  ids: IdSource,
  args: { readonly line: LineId; readonly index: number; readonly to: Vec3 },
): EditPlan {
  const line = lineOf(document, args.line);
  expectPin(line, args.index);
  const run = runOf(line);
  return withRun(document, ids, line, { ...run, via: run.via.with(args.index, roundPoint(args.to)) });
}

/** Plan of one more pin on a strand or cross-link, between the pins that it lies between. */
export function insertPin(
  document: TreeDocument,
  ids: IdSource,
  args: {
    readonly line: LineId;
    readonly at: Vec3;
    /** Where on the line it was taken hold of; left out: nearest to `at`. */
    readonly near?: Vec3;
  },
): EditPlan {
  const line = lineOf(document, args.line);
  const { leg } = placeOnLine(document, line, args.near ?? args.at);
  const run = runOf(line);
  const kind = run.legs[leg]!;
  return withRun(document, ids, line, {
    via: run.via.toSpliced(leg, 0, roundPoint(args.at)),
    legs: run.legs.toSpliced(leg, 1, kind, kind),
  });
}

/** Plan of a pin less. @throws misuse when there is no such pin */
export function removePin(
  document: TreeDocument,
  ids: IdSource,
  args: { readonly line: LineId; readonly index: number },
): EditPlan {
  const line = lineOf(document, args.line);
  expectPin(line, args.index);
  const { via, legs } = runOf(line);
  const before: PinRun = { via: via.slice(0, args.index), legs: legs.slice(0, args.index + 1) };
  const after: PinRun = { via: via.slice(args.index + 1), legs: legs.slice(args.index + 1) };
  return withRun(document, ids, line, joinedRun(before, [], after));
}

/** Plan of how a stretch between two pins is made: following the image, or straight. Cross-links always follow the image. */
export function setLeg(
  document: TreeDocument,
  ids: IdSource,
  args: { readonly strand: StrandId; readonly leg: number; readonly kind: LegKind },
): EditPlan {
  const strand = strandOf(document, args.strand);
  const run = runOf(strand);
  if (run.legs[args.leg] === undefined) throw refusal(`${strand.id} has no stretch ${args.leg}.`, "stretch between pins");
  return withRun(document, ids, strand, { ...run, legs: run.legs.with(args.leg, args.kind) });
}

/** The strand or cross-link with this id. @throws not-found */
export function lineOf(document: TreeDocument, id: LineId): Strand | CrossLink {
  return isCrossLinkId(id) ? crossLinkOf(document, id) : strandOf(document, id);
}

function withRun(document: TreeDocument, ids: IdSource, line: Strand | CrossLink, run: PinRun): EditPlan {
  const draft = new EditDraft(document, ids);
  if (isStrand(line)) draft.putStrand(strandWithRun(line, run));
  else draft.putCrossLink({ ...line, via: run.via, curve: null });
  return draft.finish("move-pin");
}

function isCrossLinkId(id: LineId): id is CrossLinkId {
  return id.startsWith("x");
}

function isStrand(line: Strand | CrossLink): line is Strand {
  return "tree" in line;
}

function expectPin(line: Strand | CrossLink, index: number): void {
  if (line.via[index] === undefined) throw refusal(`${line.id} has no pin ${index}.`, "pin");
}
