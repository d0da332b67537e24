import type { Reasons } from "#shared/agreement/interval.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";

/** Hit rates without a reference, at one optimum of the likelihood. */
export interface DetectionOptimum {
  /** Sensitivity and specificity of each annotator, 0-1; shape [annotators]. */
  readonly sensitivity: readonly number[];
  readonly specificity: readonly number[];
  /** Posterior that each candidate is real, 0-1; shape [candidates]. */
  readonly posterior: readonly number[];
  /** Of the decisions alone, without the extra prior on the rates. */
  readonly logLikelihood: number;
  /** What is climbed: the log-likelihood plus the log of the extra prior. */
  readonly objective: number;
  readonly iterations: number;
  readonly converged: boolean;
}

export interface EmOptions {
  /** Share of candidates that are real, 0-1, held fixed. */
  readonly prior: number;
  /** Parameters of the Beta prior on every rate: 1 = none, 2 = Beta(2,2). */
  readonly beta: number;
  readonly iterations: number;
}

/** Decisions of all annotators on all candidates; shape [annotators][candidates]. */
export type Decisions = readonly (readonly boolean[])[];

/**
 * One climb of expectation-maximisation from given rates.
 * @param p, q sensitivity and specificity to start from; shape [annotators], 0-1, both out.
 * @source Warfield et al., IEEE TMI 2004;23:903-921; with a Beta prior on the rates (maximum a posteriori)
 */
export function climbDetection(
  decisions: Decisions,
  p: readonly number[],
  q: readonly number[],
  options: EmOptions,
): DetectionOptimum {
  let [sensitivity, specificity] = [[...p], [...q]];
  let step = expectation(decisions, sensitivity, specificity, options);
  let iterations = 0;
  let converged = false;
  while (iterations < options.iterations && !converged) {
    iterations += 1;
    const extra = options.beta - 1;
    const share = (annotator: readonly boolean[], real: boolean) => {
      let [agreeing, all] = [extra, 2 * extra];
      annotator.forEach((marked, i) => {
        const weight = real ? step.posterior[i]! : 1 - step.posterior[i]!;
        all += weight;
        if (marked === real) agreeing += weight;
      });
      return all > 0 ? agreeing / all : 0.5;
    };
    const next = [decisions.map((one) => share(one, true)), decisions.map((one) => share(one, false))] as const;
    const moved = Math.max(
      ...next[0].map((x, j) => Math.abs(x - sensitivity[j]!)),
      ...next[1].map((x, j) => Math.abs(x - specificity[j]!)),
    );
    [sensitivity, specificity] = [next[0], next[1]];
    step = expectation(decisions, sensitivity, specificity, options);
    converged = moved < 1e-10;
  }
  return { sensitivity, specificity, ...step, iterations, converged };
}

/** Posterior of each candidate, and the likelihood, under given rates. */
function expectation(decisions: Decisions, p: readonly number[], q: readonly number[], { prior, beta }: EmOptions) {
  let logLikelihood = 0;
  const posterior = decisions[0]!.map((_, i) => {
    let real = prior;
    let none = 1 - prior;
    decisions.forEach((marks, j) => {
      real *= marks[i] ? p[j]! : 1 - p[j]!;
      none *= marks[i] ? 1 - q[j]! : q[j]!;
    });
    logLikelihood += Math.log(real + none);
    return real + none > 0 ? real / (real + none) : prior;
  });
  const extra = [...p, ...q].reduce((sum, x) => sum + (beta === 1 ? 0 : (beta - 1) * Math.log(x * (1 - x))), 0);
  return { posterior, logLikelihood, objective: logLikelihood + extra };
}

/** The best optimum of several climbs and those almost as good. */
export interface DetectionRates {
  readonly best: DetectionOptimum | null;
  /** Other optima whose objective is within 2 log-units of the best, best first. */
  readonly others: readonly DetectionOptimum[];
  readonly starts: number;
  readonly prior: number | null;
  readonly reasons: Reasons;
}

const STARTS = 20;
const NEAR_LOG_UNITS = 2;
const SAME_RATES = 1e-4;

/**
 * Sensitivity and specificity of annotators without a reference (Beta(2,2) maximum a posteriori, 20 seeded starts), only
 * where they can be known: three annotators or more *and* candidates that all of them were shown and none accepted.
 * @param prior share of candidates that are real; null = the mean share of positive decisions, as the source advises.
 */
export function detectionRates(decisions: Decisions, prior: number | null, seed: number): DetectionRates {
  const candidates = decisions[0]?.length ?? 0;
  const refuse = (why: string): DetectionRates => ({
    best: null,
    others: [],
    starts: 0,
    prior: null,
    reasons: { best: why, prior: why, sensitivity: why, specificity: why },
  });
  if (decisions.length < 3)
    return refuse(`Rates without a reference need three annotators or more; there are ${decisions.length}.`);
  const isNegative = (i: number) => decisions.every((marks) => !marks[i]);
  if (!decisions[0]!.some((_, i) => isNegative(i)))
    return refuse(
      "No specificity: no candidate was shown to every annotator and declined by all. Sensitivity is estimated by capture and recapture instead.",
    );
  const positive = decisions.flat().filter(Boolean).length / (decisions.length * candidates);
  if (positive === 0) return refuse("Nobody marked any candidate.");
  if (prior !== null && !(prior > 0 && prior < 1))
    return refuse(`The share of candidates that are real must lie between 0 and 1; it was set to ${prior}.`);
  const fixed = prior ?? positive;
  const options: EmOptions = { prior: fixed, beta: 2, iterations: 5000 };
  const random = new SeededRandom(seed);
  const found: DetectionOptimum[] = [];
  for (let start = 0; start < STARTS; start++) {
    const draw = () => decisions.map(() => (start === 0 ? 0.9 : random.between(0.05, 0.95)));
    const optimum = climbDetection(decisions, draw(), draw(), options);
    if (!found.some((one) => sameRates(one, optimum))) found.push(optimum);
  }
  found.sort((a, b) => b.objective - a.objective);
  const others = found.slice(1).filter((one) => found[0]!.objective - one.objective <= NEAR_LOG_UNITS);
  return { best: found[0]!, others, starts: STARTS, prior: fixed, reasons: {} };
}

function sameRates(a: DetectionOptimum, b: DetectionOptimum): boolean {
  const near = (x: readonly number[], y: readonly number[]) => x.every((value, j) => Math.abs(value - y[j]!) < SAME_RATES);
  return near(a.sensitivity, b.sensitivity) && near(a.specificity, b.specificity);
}
