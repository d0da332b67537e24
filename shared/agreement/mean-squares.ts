/** Mean squares of a complete table of items x raters, in the values' unit squared. */
export interface MeanSquares {
  readonly items: number;
  readonly raters: number;
  /** Between items (BMS). */
  readonly between: number;
  /** Within items (WMS), one-way. */
  readonly within: number;
  /** Between raters (JMS), two-way. */
  readonly rater: number;
  /** Residual (EMS), two-way. */
  readonly residual: number;
}

/** Sums of squares below this share of the total are what rounding leaves of nothing. */
const ROUNDING = 1e-20;

/**
 * One-way and two-way mean squares of a complete table; null when it has fewer than two items or two raters.
 * @param rows shape [items][raters], finite, every row as long as the first.
 * @source Shrout & Fleiss, Psychol Bull 1979;86:420-428
 */
export function meanSquares(rows: readonly (readonly number[])[]): MeanSquares | null {
  const n = rows.length;
  const k = rows[0]?.length ?? 0;
  if (n < 2 || k < 2) return null;
  const rowMeans = rows.map(mean);
  const columnMeans = rows[0]!.map((_, j) => mean(rows.map((row) => row[j]!)));
  const grand = mean(rowMeans);
  const largest = Math.max(...rows.flat().map((x) => Math.abs(x)));
  const nothing = ROUNDING * largest * largest * n * k;
  const clean = (sum: number) => (sum <= nothing ? 0 : sum);
  const squares = (values: readonly number[]) => clean(values.reduce((sum, x) => sum + x * x, 0));
  const between = k * squares(rowMeans.map((m) => m - grand));
  const rater = n * squares(columnMeans.map((m) => m - grand));
  const within = squares(rows.flatMap((row, i) => row.map((x) => x - rowMeans[i]!)));
  const residual = squares(rows.flatMap((row, i) => row.map((x, j) => x - rowMeans[i]! - columnMeans[j]! + grand)));
  return {
    items: n,
    raters: k,
    between: between / (n - 1),
    within: within / (n * (k - 1)),
    rater: rater / (k - 1),
    residual: residual / ((n - 1) * (k - 1)),
  };
}

/** Arithmetic mean; NaN of nothing, so that callers ask first. */
export function mean(values: readonly number[]): number {
  return values.reduce((sum, x) => sum + x, 0) / values.length;
}

/** Variance with n - 1; NaN of fewer than two values, so that callers ask first. */
export function variance(values: readonly number[]): number {
  const m = mean(values);
  return values.reduce((sum, x) => sum + (x - m) ** 2, 0) / (values.length - 1);
}
