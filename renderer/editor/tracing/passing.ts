import { TautlineError } from "#shared/errors.ts";
import { nearestOnPolyline } from "#shared/geometry/polyline.ts";
import { type PointMm, roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { distance, dot, mix, scale, subtract } from "#shared/geometry/vec3.ts";
import type { NodeId, StrandId, TreeDocument } from "#shared/trees/document.ts";
import type { Anchor } from "#shared/trees/edits/anchor.ts";
import { polylineOf } from "#shared/trees/geometry.ts";

/** A place on a section and how it is looked at. */
export interface Sight {
  readonly at: PointMm;
  /** Unit normal of the section, away from the viewer. */
  readonly normal: Vec3;
  readonly mmPerPx: number;
  readonly slabMm: number;
}

/** A node counts as here within so many screen pixels: half of the smallest target. */
const NODE_PX = 12;
/** A strand passes within so many: at a fork the traced curve cuts the corner. */
const STRAND_PX = 20;
/** What lies this far before or behind the slab still counts, millimetres. */
const DEPTH_MM = 0.5;

/** The node here, else the strand that passes nearest as it is seen, with its place; null when there is neither. */
export function passing(document: TreeDocument, sight: Sight): Anchor | null {
  let best: { node: NodeId; distance: number } | null = null;
  for (const node of document.nodes.values()) {
    const away = distance(flattened(node.position, sight), sight.at);
    if (away > Math.min(best?.distance ?? Number.POSITIVE_INFINITY, NODE_PX * sight.mmPerPx)) continue;
    if (!isDeep(node.position, sight)) best = { node: node.id, distance: away };
  }
  return best === null ? passingStrand(document, sight) : { node: best.node };
}

/** The strand that passes nearest as it is seen, with its place; null when none does. */
export function passingStrand(document: TreeDocument, sight: Sight): { strand: StrandId; near: PointMm } | null {
  const lines = [...document.strands.values()].map((strand) => ({ id: strand.id, points: polylineOf(document, strand) }));
  const seen = nearestSeen(lines, sight);
  return seen === null ? null : { strand: seen.id, near: seen.near };
}

/** The line that passes nearest as it is seen, with the place on it; null when none does. */
export function nearestSeen<Id>(
  lines: readonly { readonly id: Id; readonly points: readonly Vec3[] }[],
  sight: Sight,
): { readonly id: Id; readonly near: PointMm } | null {
  let best: { id: Id; near: PointMm; distance: number } | null = null;
  for (const { id, points } of lines) {
    const seen = points.map((point) => flattened(point, sight));
    const nearest = nearestOnPolyline(seen, sight.at);
    if (nearest.distance > (best?.distance ?? STRAND_PX * sight.mmPerPx)) continue;
    const a = points[nearest.segment]!;
    const near = roundPoint(mix(a, points[nearest.segment + 1] ?? a, nearest.share));
    if (!isDeep(near, sight)) best = { id, near, distance: nearest.distance };
  }
  return best;
}

/** The anchor meant, looked for now when it is only a sight. @throws misuse when nothing passes there */
export function settleAnchor(document: TreeDocument, place: Anchor | { readonly passing: Sight }): Anchor {
  if (!("passing" in place)) return place;
  const found = passing(document, place.passing);
  if (found !== null) return found;
  throw new TautlineError("misuse", "No string of a tree passes here. Point at the string to branch from, and try again.", {
    what: "no string under the pointer",
  });
}

function isDeep(place: Vec3, { at, normal, slabMm }: Sight): boolean {
  return Math.abs(dot(subtract(place, at), normal)) > slabMm / 2 + DEPTH_MM;
}

/** A place moved along the line of sight onto the plane. */
function flattened(place: Vec3, { at, normal }: Sight): Vec3 {
  return subtract(place, scale(normal, dot(subtract(place, at), normal)));
}
