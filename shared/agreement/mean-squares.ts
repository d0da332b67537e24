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

/** What a specimen's rows add to mean squares, so that resampled specimens need no second look at the rows. */
export interface SquareSums {
  readonly items: number;
  /** Sum and sum of squares of the row means, from the centre. */
  readonly means: number;
  readonly meanSquared: number;
  /** Sum of squared deviations from the row means. */
  readonly within: number;
  /** shape [raters]: sums of the deviations from the row means. */
  readonly raters: readonly number[];
}

/** The sums of some rows. @param rows shape [items][raters]. @param centre a value amid all rows, which keeps sums small. */
export function squareSums(rows: readonly (readonly number[])[], raters: number, centre: number): SquareSums {
  const deviations = new Array<number>(raters).fill(0);
  let [means, meanSquared, within] = [0, 0, 0];
  for (const row of rows) {
    const own = mean(row);
    means += own - centre;
    meanSquared += (own - centre) ** 2;
    row.forEach((x, j) => {
      within += (x - own) ** 2;
      deviations[j]! += x - own;
    });
  }
  return { items: rows.length, means, meanSquared, within, raters: deviations };
}

/** Mean squares of all rows whose sums are given; null with fewer than two items or two raters. */
export function meanSquaresOf(parts: readonly SquareSums[]): MeanSquares | null {
  const sum = (value: (part: SquareSums) => number) => parts.reduce((total, part) => total + value(part), 0);
  const n = sum((part) => part.items);
  const k = parts[0]?.raters.length ?? 0;
  if (n < 2 || k < 2) return null;
  const squares = sum((part) => part.meanSquared);
  const within = sum((part) => part.within);
  // What is left of a difference of sums below their rounding is nothing.
  const clean = (value: number, of: number) => (value <= 1e-13 * of ? 0 : value);
  const between = k * clean(squares - sum((part) => part.means) ** 2 / n, squares);
  const rater = parts[0]!.raters.reduce((total, _, j) => total + sum((part) => part.raters[j]!) ** 2, 0) / n;
  return {
    items: n,
    raters: k,
    between: between / (n - 1),
    within: within / (n * (k - 1)),
    rater: rater / (k - 1),
    residual: clean(within - rater, within) / ((n - 1) * (k - 1)),
  };
}
