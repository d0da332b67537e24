import { arcLengths } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";

export interface RadiusStatistics {
  /** Millimetres; all null when no point is left. */
  readonly meanRadius: number | null;
  readonly minRadius: number | null;
  readonly maxRadius: number | null;
  /** Square millimetres: mean of pi r^2. */
  readonly meanArea: number | null;
}

/**
 * Radius statistics of a strand, weighted by length, over its measured points farther along than one local diameter (twice
 * the nearest measured radius) from both ends, where it flares into a fork, muscle or leaflet.
 * @param points shape [n], millimetres. @param radii shape [n], millimetres, null = below resolution.
 */
export function radiusStatistics(points: readonly Vec3[], radii: readonly (number | null)[] | undefined): RadiusStatistics {
  const none = { meanRadius: null, minRadius: null, maxRadius: null, meanArea: null };
  if (!radii || radii.length !== points.length) return none;
  const at = arcLengths(points);
  const total = at[at.length - 1] ?? 0;
  const first = radii.find((r) => r !== null);
  const last = [...radii].reverse().find((r) => r !== null);
  if (first === undefined || first === null || last === undefined || last === null) return none;
  let weight = 0;
  let sum = 0;
  let squares = 0;
  let min = Number.POSITIVE_INFINITY;
  let max = 0;
  radii.forEach((r, k) => {
    if (r === null || at[k]! <= 2 * first || total - at[k]! <= 2 * last) return;
    const w = ((at[k + 1] ?? at[k]!) - (at[k - 1] ?? at[k]!)) / 2;
    weight += w;
    sum += w * r;
    squares += w * r * r;
    min = Math.min(min, r);
    max = Math.max(max, r);
  });
  if (weight === 0) return none;
  return { meanRadius: sum / weight, minRadius: min, maxRadius: max, meanArea: (Math.PI * squares) / weight };
}
