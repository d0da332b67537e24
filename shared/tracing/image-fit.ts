import { arcLengths } from "#shared/tracing/polyline.ts";

/**
 * How well each point of a curve lies on a string, 0 to 1: its contrast across the curve over the strand's own typical
 * contrast (upper quartile), which counts only when it rises above three standard deviations of the background.
 * @param contrasts shape [n], grey values, positive (see `measureHalfWidths`). @param noise background SD, grey values.
 * @source own derivation.
 */
export function pointFits(contrasts: Float64Array, noise: number): Float64Array {
  const sorted = contrasts.slice().sort();
  const typical = sorted.length > 0 ? sorted[Math.floor(0.75 * (sorted.length - 1))]! : 0;
  const full = Math.max(0.8 * typical, 3 * noise);
  return contrasts.map((contrast) => Math.min(1, Math.max(0, contrast / full)));
}

/** Mean of the fits by length, 0 to 1; the image fit of a curve. @param points shape [n, 3]. @param fits shape [n]. */
export function meanFit(points: Float64Array, fits: Float64Array): number {
  const arc = arcLengths(points);
  const n = arc.length;
  if (n === 0) return 0;
  if (!(arc[n - 1]! > 0)) return fits[0]!;
  let sum = 0;
  for (let i = 1; i < n; i++) sum += ((fits[i - 1]! + fits[i]!) / 2) * (arc[i]! - arc[i - 1]!);
  return sum / arc[n - 1]!;
}
