import type { Vec3 } from "#shared/geometry/types.ts";
import { distance, mix } from "#shared/geometry/vec3.ts";

/** Sum of the distances between consecutive points, in the points' unit; 0 for fewer than two points. */
export function polylineLength(points: readonly Vec3[]): number {
  let length = 0;
  for (let i = 1; i < points.length; i++) length += distance(points[i - 1]!, points[i]!);
  return length;
}

/** Arc length at each point from the first, in the points' unit; shape [n]. */
export function arcLengths(points: readonly Vec3[]): number[] {
  const at: number[] = [];
  let sum = 0;
  points.forEach((point, i) => {
    if (i > 0) sum += distance(points[i - 1]!, point);
    at.push(sum);
  });
  return at;
}

/** The polyline with points no farther apart than `step` along it; every original point is kept. @param step > 0 */
export function refine(points: readonly Vec3[], step: number): Vec3[] {
  if (points.length === 0) return [];
  const out: Vec3[] = [points[0]!];
  for (let i = 1; i < points.length; i++) {
    const a = points[i - 1]!;
    const b = points[i]!;
    const pieces = Math.max(1, Math.ceil(distance(a, b) / step - 1e-9));
    for (let k = 1; k < pieces; k++) out.push(mix(a, b, k / pieces));
    out.push(b);
  }
  return out;
}

/**
 * Points at equal arc-length steps not above `step`, ends included; at least two points for a polyline with length, one
 * for a polyline without.
 */
export function resample(points: readonly Vec3[], step: number): Vec3[] {
  if (points.length < 2) return [...points];
  const at = arcLengths(points);
  const total = at[at.length - 1]!;
  if (total === 0) return [points[0]!];
  const pieces = Math.max(1, Math.ceil(total / step - 1e-9));
  const out: Vec3[] = [];
  let segment = 1;
  for (let k = 0; k <= pieces; k++) {
    const s = (total * k) / pieces;
    while (segment < at.length - 1 && at[segment]! < s) segment += 1;
    const span = at[segment]! - at[segment - 1]!;
    const t = span === 0 ? 0 : (s - at[segment - 1]!) / span;
    out.push(k === pieces ? points[points.length - 1]! : mix(points[segment - 1]!, points[segment]!, t));
  }
  return out;
}

/** Point at arc length `s` from the first point, clamped to the ends. @throws RangeError on an empty polyline */
export function pointAt(points: readonly Vec3[], s: number): Vec3 {
  if (points.length === 0) throw new RangeError("a point of an empty polyline was asked for");
  let left = s;
  if (left <= 0) return points[0]!;
  for (let i = 1; i < points.length; i++) {
    const step = distance(points[i - 1]!, points[i]!);
    if (left <= step) return step === 0 ? points[i]! : mix(points[i - 1]!, points[i]!, left / step);
    left -= step;
  }
  return points[points.length - 1]!;
}

/** Where a polyline comes nearest to a point: its distance, the arc length there, the segment (index of its first point) and the share along it. */
export interface NearestOnPolyline {
  readonly distance: number;
  readonly at: number;
  readonly segment: number;
  readonly share: number;
}

/** The nearest place on a polyline; the first one when several are equally near; distance Infinity for no points. */
export function nearestOnPolyline(points: readonly Vec3[], p: Vec3): NearestOnPolyline {
  let best = points.length === 0 ? Number.POSITIVE_INFINITY : distance(points[0]!, p);
  let at = 0;
  let segment = 0;
  let share = 0;
  let sum = 0;
  for (let i = 1; i < points.length; i++) {
    const a = points[i - 1]!;
    const b = points[i]!;
    const t = shareAlong(a, b, p);
    const d = distance(mix(a, b, t), p);
    const step = distance(a, b);
    if (d < best) {
      best = d;
      at = sum + step * t;
      segment = i - 1;
      share = t;
    }
    sum += step;
  }
  return { distance: best, at, segment, share };
}

/** Share (0-1) of the way from a to b at which the segment is nearest to p. */
export function shareAlong(a: Vec3, b: Vec3, p: Vec3): number {
  const x = b[0] - a[0];
  const y = b[1] - a[1];
  const z = b[2] - a[2];
  const squared = x * x + y * y + z * z;
  if (squared === 0) return 0;
  const t = ((p[0] - a[0]) * x + (p[1] - a[1]) * y + (p[2] - a[2]) * z) / squared;
  return t < 0 ? 0 : Math.min(t, 1);
}
