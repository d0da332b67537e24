import type { Intent } from "#renderer/editor/session/intent.ts";
import type { MendIntent } from "#renderer/editor/session/mends.ts";
import { passingStrand } from "#renderer/editor/tracing/passing.ts";
import { stretchAbout } from "#renderer/editor/tracing/stretch-about.ts";
import { TautlineError } from "#shared/errors.ts";
import { nearestOnPolyline } from "#shared/geometry/polyline.ts";
import type { PointMm } from "#shared/geometry/types.ts";
import type { StrandId, TreeDocument } from "#shared/trees/document.ts";
import { runOf } from "#shared/trees/edits/pin-run.ts";
import { placeOnLine } from "#shared/trees/edits/place-on-line.ts";
import { strandOf } from "#shared/trees/edits/refusal.ts";
import { polylineOf } from "#shared/trees/geometry.ts";

type Of<Name extends Intent["do"]> = Extract<Intent, { readonly do: Name }>;

/** A strand still goes through a place while it is this near to it; after it was divided, one of its parts does, millimetres. */
const SAME_PLACE_MM = 0.02;
/** Farther than this from every strand, a place means none, millimetres. */
const LOST_MM = 0.5;

/** The mend asked for at a place on a strand, on the strand that is there now. @throws misuse when none is */
export function strandMend(document: TreeDocument, { make, at }: Of<"on-strand">): MendIntent {
  const here = "passing" in at ? passingStrand(document, at.passing) : strandThrough(document, at.strand, at.near);
  if (here === null) throw noStrand();
  const { strand, near } = here;
  switch (make) {
    case "cut":
      return { do: "cut", args: { strand, near } };
    case "pin":
      return { do: "insert-pin", args: { line: strand, at: near } };
    case "stretch": {
      const record = strandOf(document, strand);
      const { leg } = placeOnLine(document, record, near);
      return { do: "set-leg", args: { strand, leg, kind: runOf(record).legs[leg] === "straight" ? "guide" : "straight" } };
    }
  }
}

/** A radius set by hand about a place, on the strand that goes through it now. @throws misuse when none does */
export function radiusMend(document: TreeDocument, { strand, near, lengthMm, radiusMm }: Of<"radius">): MendIntent {
  const here = strandThrough(document, strand, near);
  if (here === null) throw noStrand();
  const [first, last] = stretchAbout(polylineOf(document, strandOf(document, here.strand)), here.near, lengthMm);
  return { do: "set-radius", args: { strand: here.strand, first, last, radiusMm } };
}

/** The strand of this id while it goes through the place, else the strand that now goes nearest to it. */
function strandThrough(document: TreeDocument, id: StrandId, near: PointMm): { strand: StrandId; near: PointMm } | null {
  const away = (strand: StrandId) => nearestOnPolyline(polylineOf(document, strandOf(document, strand)), near).distance;
  if (document.strands.has(id) && away(id) <= SAME_PLACE_MM) return { strand: id, near };
  let best: { strand: StrandId; near: PointMm; distance: number } | null = null;
  for (const strand of document.strands.keys()) {
    const distance = away(strand);
    if (distance <= (best?.distance ?? LOST_MM)) best = { strand, near, distance };
  }
  return best;
}

function noStrand(): TautlineError<"misuse"> {
  return new TautlineError("misuse", "No strand passes here any more. Point at the strand and try again.", {
    what: "no strand at the place",
  });
}
