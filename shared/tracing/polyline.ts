/** Arc length from the first point to each point. @param points shape [n, 3]. */
export function arcLengths(points: Float64Array): Float64Array {
  const n = points.length / 3;
  const out = new Float64Array(n);
  for (let i = 1; i < n; i++)
    out[i] =
      out[i - 1]! +
      Math.hypot(
        points[3 * i]! - points[3 * i - 3]!,
        points[3 * i + 1]! - points[3 * i - 2]!,
        points[3 * i + 2]! - points[3 * i - 1]!,
      );
  return out;
}

/**
 * The curve at equal steps of arc length near `stepMm`, both ends exact, as shape [m, 3], m >= 2; between points it follows
 * a cubic with the neighbours' directions, so that a bend is not cut short.
 * @source Catmull & Rom 1974, chord-length tangents.
 */
export function resample(points: Float64Array, stepMm: number): Float64Array {
  const n = points.length / 3;
  const arc = arcLengths(points);
  const length = arc[n - 1]!;
  const segments = Math.max(1, Math.round(length / stepMm));
  const out = new Float64Array(3 * (segments + 1));
  let at = 0;
  for (let s = 0; s <= segments; s++) {
    const target = (length * s) / segments;
    while (at < n - 2 && arc[at + 1]! < target) at++;
    const span = arc[at + 1]! - arc[at]!;
    const t = span > 0 ? Math.min(1, Math.max(0, (target - arc[at]!) / span)) : 0;
    for (let c = 0; c < 3; c++) out[3 * s + c] = cubicAt(points, arc, at, t, span, c);
  }
  for (let c = 0; c < 3; c++) {
    out[c] = points[c]!;
    out[3 * segments + c] = points[3 * (n - 1) + c]!;
  }
  return out;
}

function cubicAt(points: Float64Array, arc: Float64Array, i: number, t: number, span: number, c: number): number {
  const n = arc.length;
  const p0 = points[3 * i + c]!;
  const p1 = points[3 * (i + 1) + c]!;
  const slope = (k: number): number => {
    const a = Math.max(0, k - 1);
    const b = Math.min(n - 1, k + 1);
    const d = arc[b]! - arc[a]!;
    return d > 0 ? (points[3 * b + c]! - points[3 * a + c]!) / d : 0;
  };
  const t2 = t * t;
  const t3 = t2 * t;
  return (
    (2 * t3 - 3 * t2 + 1) * p0 + (t3 - 2 * t2 + t) * span * slope(i) + (3 * t2 - 2 * t3) * p1 + (t3 - t2) * span * slope(i + 1)
  );
}

/** Unit tangents by central differences, shape [n, 3]; zero only where neighbouring points coincide. */
export function tangents(points: Float64Array): Float64Array {
  const n = points.length / 3;
  const out = new Float64Array(3 * n);
  for (let i = 0; i < n; i++) {
    const a = 3 * Math.max(0, i - 1);
    const b = 3 * Math.min(n - 1, i + 1);
    const x = points[b]! - points[a]!;
    const y = points[b + 1]! - points[a + 1]!;
    const z = points[b + 2]! - points[a + 2]!;
    const length = Math.hypot(x, y, z);
    if (length > 0) {
      out[3 * i] = x / length;
      out[3 * i + 1] = y / length;
      out[3 * i + 2] = z / length;
    }
  }
  return out;
}

/** `values` at the arc lengths `to`, linear between the arc lengths `from` (ascending), constant beyond its ends. */
export function interpolateAlong(from: Float64Array, values: Float64Array, to: Float64Array): Float64Array {
  const out = new Float64Array(to.length);
  let at = 0;
  for (let i = 0; i < to.length; i++) {
    const s = to[i]!;
    while (at < from.length - 2 && from[at + 1]! < s) at++;
    const span = from.length > 1 ? from[at + 1]! - from[at]! : 0;
    const t = span > 0 ? Math.min(1, Math.max(0, (s - from[at]!) / span)) : 0;
    const a = values[at]!;
    out[i] = t === 0 ? a : a + t * (values[at + 1]! - a);
  }
  return out;
}

/** Median of the finite values among the `half` neighbours to each side; NaN where there is none. */
export function runningMedian(values: Float64Array, half: number): Float64Array {
  const n = values.length;
  const out = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    // Near the ends the window shrinks on both sides, so that a taper is not flattened.
    const reach = Math.min(half, Math.max(i, 1), Math.max(n - 1 - i, 1));
    const window: number[] = [];
    for (let k = Math.max(0, i - reach); k <= Math.min(n - 1, i + reach); k++)
      if (Number.isFinite(values[k]!)) window.push(values[k]!);
    out[i] = medianOf(window);
  }
  return out;
}

/** Mean of the finite values among the `half` neighbours to each side; NaN where there is none. */
export function runningMean(values: Float64Array, half: number): Float64Array {
  const n = values.length;
  const out = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    const reach = Math.min(half, Math.max(i, 1), Math.max(n - 1 - i, 1));
    let sum = 0;
    let count = 0;
    for (let k = Math.max(0, i - reach); k <= Math.min(n - 1, i + reach); k++)
      if (Number.isFinite(values[k]!)) {
        sum += values[k]!;
        count++;
      }
    out[i] = count > 0 ? sum / count : Number.NaN;
  }
  return out;
}

/** Median; NaN of nothing. The array is sorted in place. */
export function medianOf(values: number[]): number {
  if (values.length === 0) return Number.NaN;
  values.sort((a, b) => a - b);
  const middle = values.length >> 1;
  return values.length % 2 === 1 ? values[middle]! : (values[middle - 1]! + values[middle]!) / 2;
}
