import { tQuantile } from "#shared/agreement/distributions.ts";
import { ENOUGH_SPECIMENS, FEWEST_SPECIMENS, type Interval, type Reasons } from "#shared/agreement/interval.ts";
import { mean, variance } from "#shared/agreement/mean-squares.ts";

/** Mean disagreement on one specimen: of the method with each annotator, and of the annotators with each other. */
export interface SpecimenDisagreement {
  readonly methodAnnotator: number;
  readonly annotatorAnnotator: number;
}

export type EquivalenceVerdict = "equivalent" | "not shown to be equivalent";

/** The method against the annotators, in the disagreements' unit. */
export interface Equivalence {
  readonly specimens: number;
  readonly methodAnnotator: number | null;
  readonly annotatorAnnotator: number | null;
  /** Mean over specimens of method-annotator minus annotator-annotator (D on distances, gamma on squared differences). */
  readonly difference: number | null;
  /** One-sided 95 % upper bound of the difference. */
  readonly upperBound: number | null;
  readonly interval: Interval | null;
  /** Annotator-annotator / method-annotator (the coefficient of individual agreement, on squared differences). */
  readonly ratio: number | null;
  readonly margin: number | null;
  readonly verdict: EquivalenceVerdict | null;
  readonly notes: readonly string[];
  readonly reasons: Reasons;
}

/**
 * How much more a method differs from annotators than they differ from each other, over specimens. A verdict is given only
 * against a margin that was set beforehand, and only with five specimens or more.
 * @param margin in the disagreements' unit; null = none was set.
 * @param sameEngine true when the annotators worked with the engine under test.
 * @source Obuchowski et al. 2014 (gamma); Barnhart et al. 2007 (coefficient of individual agreement)
 */
export function equivalence(specimens: readonly SpecimenDisagreement[], margin: number | null, sameEngine: boolean): Equivalence {
  const m = specimens.length;
  const reasons: Record<string, string> = {};
  const notes = sameEngine
    ? ["The annotators worked with the engine that is tested: they differ from it less than from another method."]
    : [];
  if (m === 0) {
    const why = "There is no specimen that the method and two annotators or more have done.";
    const missing = ["methodAnnotator", "annotatorAnnotator", "difference", "upperBound", "interval", "ratio", "verdict"];
    for (const key of missing) reasons[key] = why;
    return { ...NOTHING, margin, notes, reasons };
  }
  const methodAnnotator = mean(specimens.map((one) => one.methodAnnotator));
  const annotatorAnnotator = mean(specimens.map((one) => one.annotatorAnnotator));
  const differences = specimens.map((one) => one.methodAnnotator - one.annotatorAnnotator);
  const difference = mean(differences);
  const ratio = methodAnnotator > 0 ? annotatorAnnotator / methodAnnotator : null;
  if (ratio === null) reasons.ratio = "The method does not differ from the annotators at all.";
  const base = { specimens: m, methodAnnotator, annotatorAnnotator, difference, ratio, margin, notes, reasons };
  if (m < FEWEST_SPECIMENS) {
    const why = `An interval and a verdict need at least ${FEWEST_SPECIMENS} specimens; there ${m === 1 ? "is 1" : `are ${m}`}.`;
    Object.assign(reasons, { upperBound: why, interval: why, verdict: why });
    return { ...base, upperBound: null, interval: null, verdict: null };
  }
  const error = Math.sqrt(variance(differences) / m);
  const half = tQuantile(0.975, m - 1) * error;
  const upperBound = difference + tQuantile(0.95, m - 1) * error;
  const interval: Interval = {
    low: difference - half,
    high: difference + half,
    level: 0.95,
    method: `t over specimens with ${m - 1} degrees of freedom`,
    conditionalOn: null,
    weak: m < ENOUGH_SPECIMENS,
  };
  if (margin === null)
    reasons.verdict =
      "The protocol set no margin beforehand: how much difference would matter is not said, so no verdict is given.";
  const verdict = margin === null ? null : upperBound < margin ? "equivalent" : "not shown to be equivalent";
  return { ...base, upperBound, interval, verdict };
}

const NOTHING = {
  specimens: 0,
  methodAnnotator: null,
  annotatorAnnotator: null,
  difference: null,
  upperBound: null,
  interval: null,
  ratio: null,
  verdict: null,
};

/**
 * Disagreement of one specimen's readings: mean over items and pairs of the absolute or squared difference; null without
 * an item that the method and two annotators or more have read.
 * @param annotators shape [annotators][items]; null = not read. @param method shape [items].
 */
export function disagreementOf(
  annotators: readonly (readonly (number | null)[])[],
  method: readonly (number | null)[],
  scale: "absolute" | "squared",
): SpecimenDisagreement | null {
  const apart = (a: number, b: number) => (scale === "absolute" ? Math.abs(a - b) : (a - b) ** 2);
  const ofItems = method.flatMap((own, i) => {
    const read = annotators.map((values) => values[i] ?? null).filter((value) => value !== null);
    if (own === null || read.length < 2) return [];
    const pairs = read.flatMap((a, j) => read.slice(j + 1).map((b) => apart(a, b)));
    return [{ methodAnnotator: mean(read.map((a) => apart(own, a))), annotatorAnnotator: mean(pairs) }];
  });
  if (ofItems.length === 0) return null;
  return {
    methodAnnotator: mean(ofItems.map((one) => one.methodAnnotator)),
    annotatorAnnotator: mean(ofItems.map((one) => one.annotatorAnnotator)),
  };
}
