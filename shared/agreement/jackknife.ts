import { normalCdf, normalQuantile, tQuantile } from "#shared/agreement/distributions.ts";
import { ENOUGH_SPECIMENS, type Interval, type Reasons, tooFewSpecimens } from "#shared/agreement/interval.ts";
import { mean } from "#shared/agreement/mean-squares.ts";
import { percentile } from "#shared/compare/overlap.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";

/** A statistic over specimens with the interval that the number of specimens allows. */
export interface OverSpecimens {
  readonly value: number | null;
  readonly specimens: number;
  /** The statistic of each specimen alone; null where one specimen cannot give it. */
  readonly perSpecimen: readonly (number | null)[];
  /** Least and greatest of the specimens' values. */
  readonly range: readonly [number, number] | null;
  /** Delete-one-specimen jackknife. */
  readonly jackknife: Interval | null;
  readonly standardError: number | null;
  /** Bootstrap over specimens, from ten on. */
  readonly bootstrap: Interval | null;
  readonly reasons: Reasons;
}

/** A statistic of the named specimens; a specimen may be named more than once. Null where it cannot be given. */
export type SpecimenStatistic = (specimens: readonly number[]) => number | null;

const RESAMPLES = 2000;

/**
 * A statistic with its 95 % intervals over specimens: one specimen none; two to four none but each value and the range;
 * five to nine the jackknife, called weak; ten or more the BCa bootstrap beside it. Inference is to new specimens by these
 * annotators.
 * @param count number of specimens. @param seed of the bootstrap.
 * @param most the greatest value that the statistic can take, at which an interval is cut; null = none.
 * @source Efron & Tibshirani, An Introduction to the Bootstrap, 1993, chapters 11 and 14
 */
export function overSpecimens(
  statistic: SpecimenStatistic,
  count: number,
  seed: number,
  most: number | null = null,
): OverSpecimens {
  const everyone = Array.from({ length: count }, (_, i) => i);
  const reasons: Record<string, string> = {};
  const value = count === 0 ? null : statistic(everyone);
  const perSpecimen = everyone.map((i) => statistic([i]));
  const known = perSpecimen.filter((one) => one !== null);
  const range = known.length === 0 ? null : ([Math.min(...known), Math.max(...known)] as const);
  if (!range) reasons.range = "No single specimen gives this number.";
  const base = { value, specimens: count, perSpecimen, range, reasons };
  const refuse = (why: string): OverSpecimens => {
    Object.assign(reasons, { jackknife: why, standardError: why, bootstrap: why });
    return { ...base, jackknife: null, standardError: null, bootstrap: null };
  };
  if (value === null) {
    reasons.value = count === 0 ? "There is no specimen." : "The specimens together do not give this number.";
    return refuse(reasons.value);
  }
  const few = tooFewSpecimens(count);
  if (few) return refuse(few);
  const without = everyone.map((i) => statistic(everyone.filter((k) => k !== i)));
  if (without.some((one) => one === null)) return refuse("Without one of the specimens the number cannot be given.");
  const left = without.filter((one) => one !== null);
  const centre = mean(left);
  const squares = left.reduce((sum, one) => sum + (one - centre) ** 2, 0);
  const standardError = Math.sqrt(((count - 1) / count) * squares);
  if (standardError <= 1e-12 * Math.abs(value)) {
    const why = "The number does not change with any of the specimens left out: there is no spread to make an interval from.";
    Object.assign(reasons, { jackknife: why, bootstrap: why });
    return { ...base, jackknife: null, standardError: 0, bootstrap: null };
  }
  const half = tQuantile(0.975, count - 1) * standardError;
  const isCut = most !== null && value + half > most;
  const jackknife: Interval = {
    low: value - half,
    high: isCut ? most : value + half,
    level: 0.95,
    method: `delete-one-specimen jackknife, t with ${count - 1} degrees of freedom${isCut ? `, cut at ${most}` : ""}`,
    conditionalOn: null,
    weak: count < ENOUGH_SPECIMENS,
  };
  if (count < ENOUGH_SPECIMENS) {
    reasons.bootstrap = `A bootstrap over specimens is made from ${ENOUGH_SPECIMENS} specimens on; there are ${count}.`;
    return { ...base, jackknife, standardError, bootstrap: null };
  }
  return { ...base, jackknife, standardError, bootstrap: bootstrapInterval(statistic, value, left, seed, reasons) };
}

/** BCa interval; null with a reason where more than a twentieth of the resamples cannot give the statistic. */
function bootstrapInterval(
  statistic: SpecimenStatistic,
  value: number,
  without: readonly number[],
  seed: number,
  reasons: Record<string, string>,
): Interval | null {
  const count = without.length;
  const random = new SeededRandom(seed);
  const drawn: number[] = [];
  for (let b = 0; b < RESAMPLES; b++) {
    const one = statistic(without.map(() => random.below(count)));
    if (one !== null) drawn.push(one);
  }
  if (drawn.length < 0.95 * RESAMPLES) {
    reasons.bootstrap = `${RESAMPLES - drawn.length} of ${RESAMPLES} resamples do not give this number.`;
    return null;
  }
  const ascending = Float64Array.from(drawn).sort();
  const below = drawn.reduce((sum, one) => sum + (one < value ? 1 : one === value ? 0.5 : 0), 0);
  if (below === 0 || below === drawn.length) {
    reasons.bootstrap = "All resamples lie on one side of the value.";
    return null;
  }
  const bias = normalQuantile(below / drawn.length);
  const centre = mean(without);
  const cubes = without.reduce((sum, one) => sum + (centre - one) ** 3, 0);
  const squares = without.reduce((sum, one) => sum + (centre - one) ** 2, 0);
  const acceleration = squares === 0 ? 0 : cubes / (6 * squares ** 1.5);
  const end = (p: number) => {
    const z = bias + normalQuantile(p);
    return percentile(ascending, normalCdf(bias + z / (1 - acceleration * z)));
  };
  const method = `BCa bootstrap over specimens, ${drawn.length} resamples`;
  return { low: end(0.025), high: end(0.975), level: 0.95, method, conditionalOn: null, weak: false };
}
