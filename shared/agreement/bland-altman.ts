import { chiSquareQuantile, normalQuantile, tQuantile } from "#shared/agreement/distributions.ts";
import { type Interval, intervalOn, type Reasons, tooFewSpecimens } from "#shared/agreement/interval.ts";
import { mean, variance } from "#shared/agreement/mean-squares.ts";
import { noncentralTQuantile } from "#shared/agreement/noncentral-t.ts";

/** Two readings of one item; both in the same unit. */
export interface PairedReading {
  readonly specimen: string;
  readonly a: number;
  readonly b: number;
}

/** Bias and limits of agreement of a - b, in the readings' unit. */
export interface BlandAltman {
  readonly readings: number;
  readonly specimens: number;
  /** Mean difference; with several readings a specimen, the mean of the specimens' means. */
  readonly bias: number | null;
  /** Standard deviation of one difference; with several readings a specimen, between and within specimens together. */
  readonly sd: number | null;
  readonly sdBetween: number | null;
  readonly sdWithin: number | null;
  readonly lowerLimit: number | null;
  readonly upperLimit: number | null;
  readonly biasInterval: Interval | null;
  readonly lowerLimitInterval: Interval | null;
  readonly upperLimitInterval: Interval | null;
  /** Slope of the difference on the mean of the two readings: a bias that grows with size. */
  readonly slope: number | null;
  readonly slopeInterval: Interval | null;
  readonly method: string;
  readonly reasons: Reasons;
}

/**
 * Bland-Altman bias, 95 % limits and their intervals. One reading a specimen: exact limits. Several: variance between and
 * within specimens, intervals by MOVER.
 * @source Bland & Altman, Lancet 1986;i:307-310; Carkeet, Optom Vis Sci 2015;92:e71-80; Zou, Stat Methods Med Res 2013;22:630-642
 */
export function blandAltman(readings: readonly PairedReading[]): BlandAltman {
  const groups = new Map<string, PairedReading[]>();
  for (const reading of readings) groups.set(reading.specimen, [...(groups.get(reading.specimen) ?? []), reading]);
  const perSpecimen = [...groups.keys()].sort().map((name) => groups.get(name)!.map(({ a, b }) => a - b));
  const reasons: Record<string, string> = {};
  const counts = { readings: readings.length, specimens: perSpecimen.length };
  const limits = limitsOf(perSpecimen, reasons);
  return { ...counts, ...limits, ...slopeOf([...groups.values()], reasons), reasons };
}

type Limits = Omit<BlandAltman, "readings" | "specimens" | "slope" | "slopeInterval" | "reasons">;

const NO_LIMITS = {
  sd: null,
  sdBetween: null,
  sdWithin: null,
  lowerLimit: null,
  upperLimit: null,
  biasInterval: null,
  lowerLimitInterval: null,
  upperLimitInterval: null,
};

function refuse(reasons: Record<string, string>, keys: readonly string[], why: string): void {
  for (const key of keys) reasons[key] ??= why;
}

function limitsOf(perSpecimen: readonly (readonly number[])[], reasons: Record<string, string>): Limits {
  const single = perSpecimen.every((group) => group.length === 1);
  const method = single ? "one difference a specimen, exact limits" : "several differences a specimen, MOVER intervals";
  if (perSpecimen.length < 2) return withinOneValve(perSpecimen[0] ?? [], reasons);
  return single ? exactLimits(perSpecimen.flat(), method, reasons) : clusteredLimits(perSpecimen, method, reasons);
}

/** Of one specimen: limits within this valve where it has several readings, and never an interval. */
function withinOneValve(differences: readonly number[], reasons: Record<string, string>): Limits {
  const bias = differences.length === 0 ? null : mean(differences);
  if (differences.length < 2) {
    const why = `Limits of agreement need two readings or more; there is ${bias === null ? "none" : "one"}.`;
    refuse(reasons, [...Object.keys(NO_LIMITS), ...(bias === null ? ["bias"] : [])], why);
    return { ...NO_LIMITS, bias, method: "no limits" };
  }
  refuse(reasons, ["biasInterval", "lowerLimitInterval", "upperLimitInterval"], tooFewSpecimens(1)!);
  reasons.sdBetween = "With one specimen, how specimens differ cannot be told.";
  const sd = Math.sqrt(variance(differences));
  return {
    ...NO_LIMITS,
    bias,
    sd,
    sdWithin: sd,
    lowerLimit: bias! - Z() * sd,
    upperLimit: bias! + Z() * sd,
    method: "one specimen: limits within this valve",
  };
}

const Z = () => normalQuantile(0.975);

function exactLimits(differences: readonly number[], method: string, reasons: Record<string, string>): Limits {
  const n = differences.length;
  const [bias, sd] = [mean(differences), Math.sqrt(variance(differences))];
  for (const key of ["sdBetween", "sdWithin"])
    reasons[key] = "With one difference a specimen, between and within cannot be told apart.";
  const limitEnd = (p: number) => (sd > 0 ? (noncentralTQuantile(p, n - 1, Z() * Math.sqrt(n)) / Math.sqrt(n)) * sd : Number.NaN);
  const interval = (key: string, how: string, ends: () => readonly [number, number]) => {
    const made = intervalOn("one-item-per-specimen", n, how, ends);
    if (made.reason) reasons[key] = made.reason;
    return made.interval;
  };
  const half = () => (sd > 0 ? (tQuantile(0.975, n - 1) * sd) / Math.sqrt(n) : Number.NaN);
  return {
    bias,
    sd,
    sdBetween: null,
    sdWithin: null,
    lowerLimit: bias - Z() * sd,
    upperLimit: bias + Z() * sd,
    biasInterval: interval("biasInterval", `t with ${n - 1} degrees of freedom`, () => [bias - half(), bias + half()]),
    lowerLimitInterval: interval("lowerLimitInterval", "exact, noncentral t", () => [
      bias - limitEnd(0.975),
      bias - limitEnd(0.025),
    ]),
    upperLimitInterval: interval("upperLimitInterval", "exact, noncentral t", () => [
      bias + limitEnd(0.025),
      bias + limitEnd(0.975),
    ]),
    method,
  };
}

function clusteredLimits(perSpecimen: readonly (readonly number[])[], method: string, reasons: Record<string, string>): Limits {
  const n = perSpecimen.length;
  const all = perSpecimen.reduce((sum, group) => sum + group.length, 0);
  const means = perSpecimen.map(mean);
  const harmonic = n / perSpecimen.reduce((sum, group) => sum + 1 / group.length, 0);
  const ofMeans = variance(means);
  const within = perSpecimen.reduce((sum, group, i) => sum + group.reduce((s, d) => s + (d - means[i]!) ** 2, 0), 0) / (all - n);
  const share = (1 - 1 / harmonic) * within;
  const total = ofMeans + share;
  const [bias, sd] = [mean(means), Math.sqrt(total)];
  // Limits of the total variance from the limits of its two parts.
  const spread = (p: number) => {
    const part = (value: number, freedom: number) => value * (freedom / chiSquareQuantile(p, freedom) - 1);
    return Math.hypot(part(ofMeans, n - 1), part(share, all - n));
  };
  const sdLow = Math.sqrt(Math.max(0, total - spread(0.975)));
  const sdHigh = Math.sqrt(total + spread(0.025));
  const ofBias = (Z() ** 2 * ofMeans) / n;
  const outward = Math.sqrt(ofBias + (Z() * (sdHigh - sd)) ** 2);
  const inward = Math.sqrt(ofBias + (Z() * (sd - sdLow)) ** 2);
  const [lowerLimit, upperLimit] = [bias - Z() * sd, bias + Z() * sd];
  const interval = (key: string, how: string, ends: readonly [number, number]) => {
    const made = intervalOn("one-item-per-specimen", n, how, () => (total > 0 ? ends : [Number.NaN, Number.NaN]));
    if (made.reason) reasons[key] = made.reason;
    return made.interval;
  };
  const half = tQuantile(0.975, n - 1) * Math.sqrt(ofMeans / n);
  return {
    bias,
    sd,
    sdBetween: Math.sqrt(Math.max(0, ofMeans - within / harmonic)),
    sdWithin: Math.sqrt(within),
    lowerLimit,
    upperLimit,
    biasInterval: interval("biasInterval", `t of the specimens' means with ${n - 1} degrees of freedom`, [
      bias - half,
      bias + half,
    ]),
    lowerLimitInterval: interval("lowerLimitInterval", "MOVER", [lowerLimit - outward, lowerLimit + inward]),
    upperLimitInterval: interval("upperLimitInterval", "MOVER", [upperLimit - inward, upperLimit + outward]),
    method,
  };
}

/** Slope over all readings; its interval treats readings as independent only where there is one a specimen. */
function slopeOf(
  groups: readonly (readonly PairedReading[])[],
  reasons: Record<string, string>,
): Pick<BlandAltman, "slope" | "slopeInterval"> {
  const readings = groups.flat();
  const n = readings.length;
  const x = readings.map(({ a, b }) => (a + b) / 2);
  const y = readings.map(({ a, b }) => a - b);
  const [mx, my] = [mean(x), mean(y)];
  const sxx = x.reduce((sum, value) => sum + (value - mx) ** 2, 0);
  if (n < 3 || !(sxx > 0)) {
    refuse(reasons, ["slope", "slopeInterval"], "A slope needs three readings or more that differ in size.");
    return { slope: null, slopeInterval: null };
  }
  const slope = x.reduce((sum, value, i) => sum + (value - mx) * (y[i]! - my), 0) / sxx;
  const rest = y.reduce((sum, value, i) => sum + (value - my - slope * (x[i]! - mx)) ** 2, 0);
  const half = rest > 0 ? tQuantile(0.975, n - 2) * Math.sqrt(rest / (n - 2) / sxx) : Number.NaN;
  const clustered = groups.some((group) => group.length > 1);
  const made = intervalOn(
    clustered ? "items-of-these-valves" : "one-item-per-specimen",
    clustered ? n : groups.length,
    `least squares, t with ${n - 2} degrees of freedom`,
    () => [slope - half, slope + half],
  );
  if (made.reason) reasons.slopeInterval = made.reason;
  return { slope, slopeInterval: made.interval };
}
