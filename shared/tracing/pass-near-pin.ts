import type { Vec3 } from "#shared/geometry/types.ts";
import { arcLengths } from "#shared/tracing/polyline.ts";

/**
 * The curve bent, where it must be, so that it passes within one local diameter of a pin: a smooth bump about the nearest
 * point, no wider than needed. A curve that is near enough comes back as it is.
 * @param points shape [n, 3], millimetres; not changed. @param radii shape [n]; NaN = below resolution.
 * @param usualRadiusMm stands in where the radius is not known.
 */
export function passNearPin(points: Float64Array, radii: Float64Array, pin: Vec3, usualRadiusMm: number): Float64Array {
  const n = points.length / 3;
  let nearest = -1;
  let least = Number.POSITIVE_INFINITY;
  for (let i = 1; i < n - 1; i++) {
    const d = Math.hypot(points[3 * i]! - pin[0], points[3 * i + 1]! - pin[1], points[3 * i + 2]! - pin[2]);
    if (d < least) {
      least = d;
      nearest = i;
    }
  }
  if (nearest < 0) return points;
  const radius = Number.isFinite(radii[nearest]!) ? radii[nearest]! : usualRadiusMm;
  // A tenth within the limit, so that rounding and the reader's own radius do not decide.
  const allowed = 1.8 * radius;
  if (least <= allowed) return points;
  const share = (least - allowed) / least;
  const push = [0, 1, 2].map((c) => (pin[c]! - points[3 * nearest + c]!) * share);
  const arc = arcLengths(points);
  const width = Math.max(3 * least, 4 * radius);
  const before = Math.min(width, arc[nearest]!);
  const after = Math.min(width, arc[n - 1]! - arc[nearest]!);
  const out = points.slice();
  for (let i = 1; i < n - 1; i++) {
    const along = arc[i]! - arc[nearest]!;
    const away = along < 0 ? -along / before : along > 0 ? along / after : 0;
    if (away >= 1) continue;
    const weight = (1 + Math.cos(Math.PI * away)) / 2;
    for (let c = 0; c < 3; c++) out[3 * i + c] = out[3 * i + c]! + weight * push[c]!;
  }
  return out;
}
