import { roundMm } from "#shared/geometry/types.ts";
import type { Curve, MadeBy, StrandId, TreeDocument } from "#shared/trees/document.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { refusal, strandOf } from "#shared/trees/edits/refusal.ts";
import type { IdSource } from "#shared/trees/ids.ts";

/** A stretch of a strand and its radius. */
export interface SetRadiusArgs {
  readonly strand: StrandId;
  /** First and last point of the stretch, both included. */
  readonly first: number;
  readonly last: number;
  /** Millimetres; null = below resolution. */
  readonly radiusMm: number | null;
}

type Stretch = readonly [number, number, MadeBy];

/**
 * Plan of a radius set by hand on a stretch of a traced strand: a new curve with the same points, the stretch marked as edited.
 * Solving the strand again measures the radius anew. @throws misuse for an untraced strand, a stretch outside it or a radius not above 0
 */
export function setRadius(document: TreeDocument, ids: IdSource, args: SetRadiusArgs): EditPlan {
  const draft = new EditDraft(document, ids);
  const strand = strandOf(document, args.strand);
  const old = strand.curve === null ? undefined : document.curves.get(strand.curve);
  const { first, last, radiusMm } = args;
  if (!old) throw refusal(`${strand.id} is not traced yet.`, "set a radius", "Trace it first.");
  const n = old.radii.length;
  if (!Number.isInteger(first) || !Number.isInteger(last) || first < 0 || last >= n || first > last) {
    throw refusal(`${strand.id} has points 0 to ${n - 1}; ${first} to ${last} was asked for.`, "set a radius");
  }
  if (radiusMm !== null && !(radiusMm > 0 && Number.isFinite(radiusMm))) throw refusal("A radius is above 0 mm.", "set a radius");
  const radii = Float64Array.from(old.radii);
  radii.fill(radiusMm === null ? Number.NaN : roundMm(radiusMm), first, last + 1);
  const curve: Curve = { ...old, id: ids.next("curve"), radii, madeBy: withEdited(old.madeBy, first, last) };
  draft.addCurve(curve);
  draft.putStrand({ ...strand, curve: curve.id });
  return draft.finish("set-radius");
}

/** The stretches with [first, last] marked edited; neighbours go on sharing a point. */
function withEdited(madeBy: readonly Stretch[], first: number, last: number): Stretch[] {
  const out: Stretch[] = [];
  let isPlaced = false;
  const place = () => {
    if (!isPlaced) out.push([first, last, "edited"]);
    isPlaced = true;
  };
  for (const [a, b, how] of madeBy) {
    if (a < first) out.push([a, Math.min(b, first), how]);
    if (b >= first && (a <= last || isPlaced)) place();
    if (b > last) out.push([Math.max(a, last), b, how]);
  }
  place();
  return out;
}
