// The fewest vertices with which somebody who clicks polylines, never beside the string, reaches an error: exact, by dynamic
// programming. Vertices are points of the curve as given; each stretch of the curve counts against the chord over it.

import { nearestOnPolyline } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";

/** Distances of the points of a curve from the chords over them. */
interface ChordErrors {
  /** shape [n, n]; at [i n + j], i < j: the sum, and the greatest, over the points between i and j. */
  readonly sum: Float64Array;
  readonly most: Float64Array;
}

function chordErrors(curve: readonly Vec3[]): ChordErrors {
  const n = curve.length;
  const sum = new Float64Array(n * n);
  const most = new Float64Array(n * n);
  for (let i = 0; i < n; i++)
    for (let j = i + 1; j < n; j++) {
      const chord = [curve[i]!, curve[j]!];
      for (let k = i + 1; k < j; k++) {
        const { distance } = nearestOnPolyline(chord, curve[k]!);
        sum[i * n + j]! += distance;
        most[i * n + j] = Math.max(most[i * n + j]!, distance);
      }
    }
  return { sum, most };
}

/**
 * Fewest vertices, both ends included, of a polyline whose chords stay within `mostMm` of the curve's points.
 * @param curve two points or more. O(n^3).
 */
export function fewestVerticesWithin(curve: readonly Vec3[], mostMm: number, errors = chordErrors(curve)): number {
  const n = curve.length;
  const fewest = new Int32Array(n).fill(n);
  fewest[0] = 1;
  for (let j = 1; j < n; j++)
    for (let i = 0; i < j; i++) if (errors.most[i * n + j]! <= mostMm) fewest[j] = Math.min(fewest[j]!, fewest[i]! + 1);
  return fewest[n - 1]!;
}

/**
 * Fewest vertices, both ends included, of a polyline from which the curve's points are `meanMm` away on average.
 * @param curve two points or more. O(n^3).
 */
export function fewestVerticesOnAverage(curve: readonly Vec3[], meanMm: number, errors = chordErrors(curve)): number {
  const n = curve.length;
  // Least sum of distances up to each point with a number of vertices.
  let least = new Float64Array(n).fill(Number.POSITIVE_INFINITY);
  least[0] = 0;
  for (let vertices = 2; vertices < n; vertices++) {
    const next = new Float64Array(n).fill(Number.POSITIVE_INFINITY);
    for (let j = 1; j < n; j++) for (let i = 0; i < j; i++) next[j] = Math.min(next[j]!, least[i]! + errors.sum[i * n + j]!);
    if (next[n - 1]! / n <= meanMm) return vertices;
    least = next;
  }
  return n;
}

/** Both counts of one curve, for an error on average and at most. */
export function fewestVertices(curve: readonly Vec3[], reached: { readonly meanMm: number; readonly mostMm: number }) {
  const errors = chordErrors(curve);
  return {
    onAverage: fewestVerticesOnAverage(curve, reached.meanMm, errors),
    within: fewestVerticesWithin(curve, reached.mostMm, errors),
  };
}
