/** A confidence interval, always with what it rests on. */
export interface Interval {
  readonly low: number;
  readonly high: number;
  /** 0.95 unless said otherwise. */
  readonly level: number;
  /** How it was made, in words. */
  readonly method: string;
  /** What it is conditional on; null when inference is to new specimens by these annotators. */
  readonly conditionalOn: string | null;
  /** True when it rests on 5 to 9 specimens. */
  readonly weak: boolean;
}

/** Why a number or interval is missing: a sentence for each key that is null. */
export type Reasons = Readonly<Record<string, string>>;

/** Fewest specimens from which an interval on new specimens is given. */
export const FEWEST_SPECIMENS = 5;

/** Fewest specimens from which an interval is not called weak, and a bootstrap is made. */
export const ENOUGH_SPECIMENS = 10;

/** What an interval that treats items of the same valves as independent is conditional on. */
export const THESE_VALVES = "these valves";

/** Where the independent units of an interval come from: one item of each specimen, or many items of the same specimens. */
export type IntervalBasis = "one-item-per-specimen" | "items-of-these-valves";

/** The sentence that refuses an interval for too few specimens; null when there are enough. */
export function tooFewSpecimens(specimens: number): string | null {
  if (specimens >= FEWEST_SPECIMENS) return null;
  return specimens === 1
    ? "One specimen says nothing about other specimens: no interval is given."
    : `An interval needs at least ${FEWEST_SPECIMENS} specimens; there are ${specimens}. The values of each specimen and their range are given instead.`;
}

/**
 * An interval from its ends, or the sentence why there is none: too few specimens, or ends that are not numbers.
 * @param units independent units that the interval rests on: specimens, or items of these valves.
 */
export function intervalOn(
  basis: IntervalBasis,
  units: number,
  method: string,
  ends: () => readonly [number, number],
  level = 0.95,
): { readonly interval: Interval | null; readonly reason: string | null } {
  const refusal = basis === "one-item-per-specimen" ? tooFewSpecimens(units) : null;
  if (refusal) return { interval: null, reason: refusal };
  const [low, high] = ends();
  if (!Number.isFinite(low) || !Number.isFinite(high))
    return {
      interval: null,
      reason:
        "No interval can be made from these values: no error is left, or the number lies too far below zero to have a meaning.",
    };
  const conditionalOn = basis === "one-item-per-specimen" ? null : THESE_VALVES;
  const weak = basis === "one-item-per-specimen" && units < ENOUGH_SPECIMENS;
  return { interval: { low, high, level, method, conditionalOn, weak }, reason: null };
}
