import type { Reasons } from "#shared/agreement/interval.ts";

export type AlphaMetric = "nominal" | "ordinal" | "interval" | "ratio";

/** Krippendorff's alpha and what it rests on. */
export interface Alpha {
  readonly metric: AlphaMetric;
  readonly value: number | null;
  /** Values in units with two values or more. */
  readonly pairable: number;
  /** Units with two values or more. */
  readonly units: number;
  readonly reasons: Reasons;
}

/**
 * Krippendorff's alpha; units with a single value take no part, missing values are null.
 * @param units shape [units][coders]; for nominal and ordinal data each category is a number.
 * @source Krippendorff, Computing Krippendorff's alpha-reliability, 2011
 */
export function krippendorffAlpha(units: readonly (readonly (number | null)[])[], metric: AlphaMetric): Alpha {
  const kept = units.map((unit) => unit.filter((value) => value !== null)).filter((unit) => unit.length >= 2);
  const values = [...new Set(kept.flat())].sort((a, b) => a - b);
  const count = new Map(values.map((value) => [value, 0]));
  for (const value of kept.flat()) count.set(value, count.get(value)! + 1);
  const pairable = kept.reduce((sum, unit) => sum + unit.length, 0);
  const refuse = (why: string): Alpha => ({ metric, value: null, pairable, units: kept.length, reasons: { value: why } });
  if (pairable === 0) return refuse("No item has values of two annotators or more.");
  if (values.length === 1) return refuse("All values are the same: agreement beyond chance cannot be told.");
  if (metric === "ratio" && values[0]! < 0) return refuse("The ratio form needs values that are not negative.");
  const difference = squaredDifference(metric, values, count);
  const observed = kept.reduce((sum, unit) => sum + pairSum(unit, () => 1, difference) / (unit.length - 1), 0) / pairable;
  const expected = pairSum(values, (value) => count.get(value)!, difference) / (pairable * (pairable - 1));
  return { metric, value: 1 - observed / expected, pairable, units: kept.length, reasons: {} };
}

/** Sum over ordered pairs of different places of weight(a) weight(b) difference(a, b). */
function pairSum(
  values: readonly number[],
  weight: (value: number) => number,
  difference: (a: number, b: number) => number,
): number {
  let sum = 0;
  for (let i = 0; i < values.length; i++)
    for (let j = 0; j < i; j++) sum += 2 * weight(values[i]!) * weight(values[j]!) * difference(values[i]!, values[j]!);
  return sum;
}

function squaredDifference(
  metric: AlphaMetric,
  ascending: readonly number[],
  count: ReadonlyMap<number, number>,
): (a: number, b: number) => number {
  switch (metric) {
    case "nominal":
      return (a, b) => (a === b ? 0 : 1);
    case "interval":
      return (a, b) => (a - b) ** 2;
    case "ratio":
      return (a, b) => (a === b ? 0 : ((a - b) / (a + b)) ** 2);
    case "ordinal": {
      // The distance of two ranks is the number of values between their middles.
      const middle = new Map<number, number>();
      let below = 0;
      for (const value of ascending) {
        middle.set(value, below + count.get(value)! / 2);
        below += count.get(value)!;
      }
      return (a, b) => (middle.get(a)! - middle.get(b)!) ** 2;
    }
  }
}

/** What a specimen adds to nominal alpha: sums, so that the alpha of many resampled specimens needs no second look at the units. */
export interface NominalSums {
  readonly pairable: number;
  /** Sum over units of disagreeing ordered pairs / (values - 1). */
  readonly disagreement: number;
  /** shape [categories]: pairable values of each. */
  readonly counts: readonly number[];
}

/** The sums of some units. @param units shape [units][coders], category numbers from 0. @param categories how many there are. */
export function nominalSums(units: readonly (readonly (number | null)[])[], categories: number): NominalSums {
  const counts = new Array<number>(categories).fill(0);
  let [pairable, disagreement] = [0, 0];
  for (const unit of units) {
    const own = new Array<number>(categories).fill(0);
    for (const value of unit) if (value !== null) own[value]! += 1;
    const values = own.reduce((sum, count) => sum + count, 0);
    if (values < 2) continue;
    pairable += values;
    disagreement += own.reduce((sum, count) => sum + count * (values - count), 0) / (values - 1);
    own.forEach((count, c) => {
      counts[c]! += count;
    });
  }
  return { pairable, disagreement, counts };
}

/** Nominal alpha of units whose sums are given; null where fewer than two categories were used. */
export function nominalAlphaOf(parts: readonly NominalSums[]): number | null {
  const pairable = parts.reduce((sum, part) => sum + part.pairable, 0);
  const disagreement = parts.reduce((sum, part) => sum + part.disagreement, 0);
  const squares = (parts[0]?.counts ?? []).reduce(
    (sum, _, c) => sum + parts.reduce((total, part) => total + part.counts[c]!, 0) ** 2,
    0,
  );
  const expected = (pairable * pairable - squares) / (pairable - 1);
  return pairable >= 2 && expected > 0 ? 1 - disagreement / expected : null;
}
