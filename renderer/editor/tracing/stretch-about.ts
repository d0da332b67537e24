import { arcLengths, nearestOnPolyline } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";

/**
 * First and last point of the stretch of a line that lies about a place: all points within half of `lengthMm` along the line,
 * and at least the nearest one.
 * @param points shape [n, 3], order xyz, millimetres
 */
export function stretchAbout(points: readonly Vec3[], place: Vec3, lengthMm: number): readonly [number, number] {
  const along = arcLengths(points);
  const { at } = nearestOnPolyline(points, place);
  const nearest = along.reduce((best, mm, i) => (Math.abs(mm - at) < Math.abs(along[best]! - at) ? i : best), 0);
  const isInside = (mm: number) => Math.abs(mm - at) <= lengthMm / 2 + 1e-9;
  const first = along.findIndex(isInside);
  return first === -1 ? [nearest, nearest] : [first, along.findLastIndex(isInside)];
}
