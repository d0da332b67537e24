import { selectedLine } from "#renderer/desk/model/line-facts.ts";
import type { Selection } from "#renderer/editor/selection.ts";
import { nearestOnPolyline, pointAt } from "#shared/geometry/polyline.ts";
import { type PointMm, roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import type { StrandId, TreeDocument } from "#shared/trees/document.ts";
import { polylineOf } from "#shared/trees/geometry.ts";

/** The section counts as standing on a strand while its middle is this near to it, millimetres. */
const ON_STRAND_MM = 1;

/** Where along a line the section stands, millimetres from the line's first point; null when it stands elsewhere. */
export function arcOfSection(points: readonly Vec3[], centre: Vec3): number | null {
  const nearest = nearestOnPolyline(points, centre);
  return nearest.distance <= ON_STRAND_MM ? nearest.at : null;
}

/** A place on a strand, as a radius is set by hand there. */
export interface PlaceOnStrand {
  readonly strand: StrandId;
  readonly near: PointMm;
}

/** The place on the selected strand that was chosen on the strip: where the section stands. Null when there is none. */
export function placeOnStrip(document: TreeDocument, selection: Selection, centre: Vec3 | null): PlaceOnStrand | null {
  const line = selectedLine(document, selection);
  if (line === null || centre === null || !("tree" in line)) return null;
  const points = polylineOf(document, line);
  const at = arcOfSection(points, centre);
  return at === null ? null : { strand: line.id, near: roundPoint(pointAt(points, at)) };
}
