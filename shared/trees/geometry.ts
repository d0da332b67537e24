import { polylineLength } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import type { CrossLink, Curve, NodeId, Strand, TreeDocument } from "#shared/trees/document.ts";
import { type Orientation, strandsFromRoot } from "#shared/trees/orientation.ts";

/** Points of a curve, order xyz, millimetres. */
export function pointsOfCurve(curve: Curve): Vec3[] {
  const points: Vec3[] = [];
  for (let i = 0; i + 2 < curve.points.length; i += 3)
    points.push([curve.points[i]!, curve.points[i + 1]!, curve.points[i + 2]!]);
  return points;
}

/** The pins of a strand or cross-link with its two nodes, in order from `from`, millimetres. */
export function pinsOf(document: TreeDocument, line: Strand | CrossLink): Vec3[] {
  return [document.nodes.get(line.from)!.position, ...line.via, document.nodes.get(line.to)!.position];
}

/** The traced points of a strand or cross-link, else its pins: what is drawn and measured. Order from `from`, millimetres. */
export function polylineOf(document: TreeDocument, line: Strand | CrossLink): Vec3[] {
  const curve = line.curve === null ? undefined : document.curves.get(line.curve);
  return curve ? pointsOfCurve(curve) : pinsOf(document, line);
}

/** Length of a strand or cross-link, millimetres: the sum of distances between consecutive points. */
export function lengthOf(document: TreeDocument, line: Strand | CrossLink): number {
  return polylineLength(polylineOf(document, line));
}

/** Path length from the root to a node along the strands, millimetres; null when the root does not reach it. */
export function pathLength(document: TreeDocument, orientation: Orientation, node: NodeId): number | null {
  const path = strandsFromRoot(orientation, node);
  return path === null ? null : path.reduce((sum, strand) => sum + lengthOf(document, strand), 0);
}
