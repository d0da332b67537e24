import { fQuantile } from "#shared/agreement/distributions.ts";
import { type Interval, type IntervalBasis, intervalOn, type Reasons } from "#shared/agreement/interval.ts";
import { type MeanSquares, meanSquares } from "#shared/agreement/mean-squares.ts";

export type IccForm = "ICC(1)" | "ICC(A,1)" | "ICC(C,1)" | "ICC(1,k)" | "ICC(A,k)" | "ICC(C,k)";

/** One form of the intraclass correlation, with model, type and definition as a report has to print them. */
export interface Icc {
  /** Name after McGraw & Wong. */
  readonly form: IccForm;
  /** Name after Shrout & Fleiss. */
  readonly alsoCalled: string;
  readonly model: string;
  readonly type: string;
  readonly definition: string;
  readonly value: number | null;
  readonly interval: Interval | null;
  readonly reasons: Reasons;
}

/** A ratio of mean squares with its degrees of freedom. */
export interface FRatio {
  readonly f: number | null;
  readonly freedom: readonly [number, number];
  readonly reasons: Reasons;
}

/** All six forms with the mean squares and F ratios they rest on; null where they cannot be given. */
export interface IccTable {
  readonly meanSquares: MeanSquares | null;
  /** BMS / WMS, one-way, with its degrees of freedom. */
  readonly oneWayF: FRatio | null;
  /** BMS / EMS, two-way. */
  readonly twoWayF: FRatio | null;
  readonly forms: readonly Icc[];
  readonly reasons: Reasons;
}

const ONE_WAY = "one-way random: each item by raters drawn anew";
const TWO_WAY = "two-way random: the same raters, a sample of raters";
const TWO_WAY_EITHER = "two-way: the same raters, taken as random or fixed";

const DESCRIPTIONS: readonly Pick<Icc, "form" | "alsoCalled" | "model" | "type" | "definition">[] = [
  { form: "ICC(1)", alsoCalled: "ICC(1,1)", model: ONE_WAY, type: "single rater", definition: "absolute agreement" },
  { form: "ICC(A,1)", alsoCalled: "ICC(2,1)", model: TWO_WAY, type: "single rater", definition: "absolute agreement" },
  { form: "ICC(C,1)", alsoCalled: "ICC(3,1)", model: TWO_WAY_EITHER, type: "single rater", definition: "consistency" },
  { form: "ICC(1,k)", alsoCalled: "ICC(1,k)", model: ONE_WAY, type: "mean of k raters", definition: "absolute agreement" },
  { form: "ICC(A,k)", alsoCalled: "ICC(2,k)", model: TWO_WAY, type: "mean of k raters", definition: "absolute agreement" },
  { form: "ICC(C,k)", alsoCalled: "ICC(3,k)", model: TWO_WAY_EITHER, type: "mean of k raters", definition: "consistency" },
];

/**
 * The six intraclass correlations of a complete table with their F-based 95 % intervals.
 * @param rows shape [items][raters], finite; one row an item.
 * @param basis one item of each specimen, else the intervals are conditional on these valves.
 * @source Shrout & Fleiss, Psychol Bull 1979;86:420-428; McGraw & Wong, Psychol Methods 1996;1:30-46 with the erratum of
 *   1:390; what a report prints after Koo & Li, J Chiropr Med 2016;15:155-163
 */
export function icc(rows: readonly (readonly number[])[], basis: IntervalBasis): IccTable {
  const squares = meanSquares(rows);
  if (!squares) {
    const why = `An intraclass correlation needs two items and two raters or more; there are ${rows.length} and ${rows[0]?.length ?? 0}.`;
    const forms = DESCRIPTIONS.map((text) => ({ ...text, value: null, interval: null, reasons: { value: why, interval: why } }));
    return { meanSquares: null, oneWayF: null, twoWayF: null, forms, reasons: { meanSquares: why, oneWayF: why, twoWayF: why } };
  }
  const { items: n, raters: k, between, within, residual } = squares;
  const ratio = (below: number, freedom: readonly [number, number]): FRatio =>
    below > 0
      ? { f: between / below, freedom, reasons: {} }
      : { f: null, freedom, reasons: { f: "There is no error to divide by." } };
  return {
    meanSquares: squares,
    oneWayF: ratio(within, [n - 1, n * (k - 1)]),
    twoWayF: ratio(residual, [n - 1, (n - 1) * (k - 1)]),
    forms: DESCRIPTIONS.map((text) => oneForm(text, squares, basis)),
    reasons: {},
  };
}

function oneForm(text: (typeof DESCRIPTIONS)[number], squares: MeanSquares, basis: IntervalBasis): Icc {
  const value = iccValue(text.form, squares);
  if (value === null) {
    const why =
      squares.between === 0 && squares.within === 0
        ? "All values are the same: there is no spread between items to compare the error with."
        : "The items differ so little from each other that this form has no meaning.";
    return { ...text, value, interval: null, reasons: { value: why, interval: why } };
  }
  const { interval, reason } = intervalOn(basis, squares.items, "exact, from F", () => endsOf(text.form, squares));
  return { ...text, value, interval, reasons: reason === null ? {} : { interval: reason } };
}

/** One form's value from the mean squares; null where its denominator is not above zero. */
export function iccValue(form: IccForm, s: MeanSquares): number | null {
  const { items: n, raters: k, between, within, rater, residual } = s;
  const over = (above: number, below: number) => (below > 0 ? above / below : null);
  switch (form) {
    case "ICC(1)":
      return over(between - within, between + (k - 1) * within);
    case "ICC(A,1)":
      return over(between - residual, between + (k - 1) * residual + (k * (rater - residual)) / n);
    case "ICC(C,1)":
      return over(between - residual, between + (k - 1) * residual);
    case "ICC(1,k)":
      return over(between - within, between);
    case "ICC(A,k)":
      return over(between - residual, between + (rater - residual) / n);
    case "ICC(C,k)":
      return over(between - residual, between);
  }
}

/** Ends of the 95 % interval; not finite where the error is nothing. */
function endsOf(form: IccForm, s: MeanSquares): [number, number] {
  const { items: n, raters: k, between, within, residual } = s;
  const single = ([low, high]: readonly [number, number]): [number, number] => [
    (low - 1) / (low + k - 1),
    (high - 1) / (high + k - 1),
  ];
  const average = ([low, high]: readonly [number, number]): [number, number] => [1 - 1 / low, 1 - 1 / high];
  const oneWay = () => scaledF(between / within, n - 1, n * (k - 1));
  const twoWay = () => scaledF(between / residual, n - 1, (n - 1) * (k - 1));
  switch (form) {
    case "ICC(1)":
      return single(oneWay());
    case "ICC(1,k)":
      return average(oneWay());
    case "ICC(C,1)":
      return single(twoWay());
    case "ICC(C,k)":
      return average(twoWay());
    case "ICC(A,1)":
      return agreementEnds(s);
    case "ICC(A,k)": {
      const [low, high] = agreementEnds(s);
      const step = (r: number) => (1 + (k - 1) * r > 0 ? (k * r) / (1 + (k - 1) * r) : Number.NaN);
      return [step(low), step(high)];
    }
  }
}

function scaledF(f: number, above: number, below: number): [number, number] {
  if (!Number.isFinite(f)) return [Number.NaN, Number.NaN];
  return [f / fQuantile(0.975, above, below), f * fQuantile(0.975, below, above)];
}

/** Interval of ICC(A,1), its degrees of freedom after Satterthwaite; that of ICC(A,k) is its Spearman-Brown step. */
function agreementEnds(s: MeanSquares): [number, number] {
  const { items: n, raters: k, between, rater, residual } = s;
  const value = iccValue("ICC(A,1)", s)!;
  if (value >= 1) return [Number.NaN, Number.NaN];
  const a = (k * value) / (n * (1 - value));
  const b = 1 + (k * value * (n - 1)) / (n * (1 - value));
  const freedom = (a * rater + b * residual) ** 2 / ((a * rater) ** 2 / (k - 1) + (b * residual) ** 2 / ((n - 1) * (k - 1)));
  if (!(freedom > 0)) return [Number.NaN, Number.NaN];
  const error = k * rater + (k * n - k - n) * residual;
  const low = fQuantile(0.975, n - 1, freedom);
  const high = fQuantile(0.975, freedom, n - 1);
  return [
    (n * (between - low * residual)) / (low * error + n * between),
    (n * (high * between - residual)) / (error + n * high * between),
  ];
}
