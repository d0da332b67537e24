import type { Pointing } from "#renderer/editor/view-control.ts";
import { nearestOnPolyline, pointAt } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { dot, scale, subtract } from "#shared/geometry/vec3.ts";
import type { StrandId, TreeDocument } from "#shared/trees/document.ts";
import { polylineOf } from "#shared/trees/geometry.ts";

/** A strand this far before or behind the plane still counts as passing, besides half the slab, millimetres. */
const DEPTH_MM = 0.5;

/** The strand that passes nearest to the pointer as it is seen, within `reachMm`, and its place there; null when none does. */
export function strandPassing(
  document: TreeDocument,
  pointing: Pointing,
  reachMm: number,
): { readonly strand: StrandId; readonly near: Vec3 } | null {
  let best: { strand: StrandId; near: Vec3; distance: number } | null = null;
  for (const strand of document.strands.values()) {
    const points = polylineOf(document, strand);
    const { distance, at } = nearestOnPolyline(flattened(points, pointing), pointing.at);
    if (distance > (best?.distance ?? reachMm)) continue;
    const near = pointAlong(points, pointing, at);
    const depth = Math.abs(dot(subtract(near, pointing.at), pointing.normal));
    if (depth <= pointing.slabMm / 2 + DEPTH_MM) best = { strand: strand.id, near, distance };
  }
  return best === null ? null : { strand: best.strand, near: best.near };
}

/** Points moved along the line of sight onto the plane. */
function flattened(points: readonly Vec3[], { at, normal }: Pointing): Vec3[] {
  return points.map((point) => subtract(point, scale(normal, dot(subtract(point, at), normal))));
}

/** The place of a line that is seen at arc length `at` of its flattened picture. */
function pointAlong(points: readonly Vec3[], pointing: Pointing, at: number): Vec3 {
  const seen = flattened(points, pointing);
  const place = pointAt(seen, at);
  const { segment, share } = nearestOnPolyline(seen, place);
  const a = points[segment]!;
  const b = points[segment + 1] ?? a;
  return [a[0] + (b[0] - a[0]) * share, a[1] + (b[1] - a[1]) * share, a[2] + (b[2] - a[2]) * share];
}
