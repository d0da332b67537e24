import { arcLengths, nearestOnPolyline, pointAt, polylineLength } from "#shared/geometry/polyline.ts";
import { type PointMm, roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import type { CrossLink, NodeId, Strand, TreeDocument } from "#shared/trees/document.ts";
import { isSamePlace } from "#shared/trees/edits/pin-run.ts";
import { polylineOf } from "#shared/trees/geometry.ts";

/** A place on a strand or cross-link. */
export interface PlaceOnLine {
  /** On the line, rounded to 1e-6 mm. */
  readonly point: PointMm;
  /** Arc length from `from`, millimetres. */
  readonly atMm: number;
  /** The stretch between neighbouring pins that holds it, from 0. */
  readonly leg: number;
  /** The node when the place is one of the line's ends. */
  readonly node: NodeId | null;
}

/** The place on a line nearest to a point: on its traced curve, or on its pins when it has none. */
export function placeOnLine(document: TreeDocument, line: Strand | CrossLink, near: Vec3): PlaceOnLine {
  const points = polylineOf(document, line);
  const { at } = nearestOnPolyline(points, near);
  const point = roundPoint(pointAt(points, at));
  const leg = arcLengthsOfPins(points, line.via).filter((pin) => pin < at).length;
  const ends = [line.from, line.to].filter((id) => isSamePlace(document.nodes.get(id)!.position, point));
  // A short loop may have both ends here; the nearer end along the line is meant.
  const node = ends.length === 2 && at > polylineLength(points) / 2 ? line.to : (ends[0] ?? null);
  return { point, atMm: at, leg, node };
}

/**
 * Arc length at which a traced line passes each of its pins, in pin order and never decreasing: the assignment of pins to
 * curve points with the least sum of squared distances among those that keep the order, then refined along the neighbouring
 * segments. (The nearest point alone would exchange pins where a string comes back near itself.) Complexity: points x pins.
 * @param points shape [n, 3], n >= 2, order xyz, millimetres
 * @source own derivation (dynamic programming over ordered assignments)
 */
export function arcLengthsOfPins(points: readonly Vec3[], pins: readonly Vec3[]): number[] {
  if (pins.length === 0) return [];
  const n = points.length;
  let best: number[] = new Array<number>(n).fill(0);
  const choice: Int32Array[] = [];
  for (const pin of pins) {
    const next = new Array<number>(n);
    const from = new Int32Array(n);
    let least = 0;
    for (let i = 0; i < n; i++) {
      if (best[i]! < best[least]!) least = i;
      next[i] = best[least]! + distance(points[i]!, pin) ** 2;
      from[i] = least;
    }
    choice.push(from);
    best = next;
  }
  const indices = new Array<number>(pins.length);
  indices[pins.length - 1] = best.reduce((least, cost, i) => (cost < best[least]! ? i : least), 0);
  for (let k = pins.length - 1; k > 0; k--) indices[k - 1] = choice[k]![indices[k]!]!;
  const along = arcLengths(points);
  let last = 0;
  return indices.map((index, k) => {
    const first = Math.max(0, index - 1);
    const near = along[first]! + nearestOnPolyline(points.slice(first, index + 2), pins[k]!).at;
    // Not beyond the next pin's point, so that it can keep that point.
    const next = indices[k + 1];
    last = Math.min(Math.max(last, near), next === undefined ? Number.POSITIVE_INFINITY : along[next]!);
    return last;
  });
}
