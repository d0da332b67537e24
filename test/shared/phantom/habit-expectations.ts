import { type AnnotatorHabits, DEMO_HABITS } from "#shared/phantom/annotator-habits.ts";
import type { DemoStudy } from "#shared/phantom/demo-study.ts";
import { branchesOf } from "#shared/phantom/tree-mistakes.ts";

// What the habits of the demo study's annotators make one expect, by enumeration of every place where a mistake is possible:
// written from the habits alone, independently of the statistics that are tested against it.

/** Half-widths are this many standard errors: one false alarm in a thousand checks (two-sided normal). */
export const Z_GATE = 3.29;

export interface Expected {
  readonly value: number;
  /** Z_GATE standard errors. */
  readonly within: number;
}

const habitsOf = (annotator: string) => DEMO_HABITS.find((one) => one.annotator === annotator)!;

/** True ends of all specimens, each with what can go wrong there. */
function endsOf(study: DemoStudy) {
  return study.specimens.flatMap(({ name, truth }) => {
    const { missable, shortable } = study.chances.get(name)!;
    return branchesOf(truth.trees)
      .filter(({ to }) => to.kind !== "fork")
      .map(({ strand }) => ({ missable: missable.includes(strand.id), shortable: shortable.includes(strand.id) }));
  });
}

/** Chance that an annotator leaves an end out, sets it in its place, or sets it so short that it counts as another. */
function states(habits: AnnotatorHabits, end: { missable: boolean; shortable: boolean }) {
  const out = end.missable ? habits.missed : 0;
  const short = (1 - out) * (end.shortable ? habits.shortEnds : 0);
  return { out, short, place: 1 - out - short };
}

/** Positive agreement of two annotators on ends, by the delta method over independent ends. */
export function expectedAgreementOnEnds(study: DemoStudy, a: string, b: string): Expected {
  let [both, differ, varBoth, varDiffer, covariance] = [0, 0, 0, 0, 0];
  for (const end of endsOf(study)) {
    const [x, y] = [states(habitsOf(a), end), states(habitsOf(b), end)];
    const same = x.place * y.place + x.short * y.short;
    const one = x.out * (1 - y.out) + y.out * (1 - x.out);
    const two = x.place * y.short + x.short * y.place;
    const mean = one + 2 * two;
    both += same;
    differ += mean;
    varBoth += same * (1 - same);
    varDiffer += one + 4 * two - mean ** 2;
    covariance -= same * mean;
  }
  const whole = 2 * both + differ;
  const [byBoth, byDiffer] = [(2 * differ) / whole ** 2, (-2 * both) / whole ** 2];
  const variance = byBoth ** 2 * varBoth + byDiffer ** 2 * varDiffer + 2 * byBoth * byDiffer * covariance;
  return { value: (2 * both) / whole, within: Z_GATE * Math.sqrt(variance) };
}

/** How many ends one annotator's two passes do not share. */
export function expectedOwnDifferences(study: DemoStudy, annotator: string): Expected {
  const { missed, shortEnds, sameAgain } = habitsOf(annotator);
  let [mean, variance] = [0, 0];
  for (const { missable, shortable } of endsOf(study)) {
    // Decided otherwise the second time: once either way round.
    const once = missable ? 2 * missed * (1 - missed) * (1 - sameAgain) : 0;
    const twice = shortable ? 2 * shortEnds * (1 - shortEnds) * (1 - sameAgain) : 0;
    mean += once + 2 * twice;
    variance += once * (1 - once) + 4 * twice * (1 - twice);
  }
  return { value: mean, within: Z_GATE * Math.sqrt(variance) };
}

/** Ends that can be missed, over all specimens. */
export function missableEnds(study: DemoStudy): number {
  return endsOf(study).filter(({ missable }) => missable).length;
}

/** Sum over the three axes of the variance of forks about their mean place, all annotators' first passes. */
export function expectedForkVariance(study: DemoStudy): Expected {
  let [freedom, squares, variance] = [0, 0, 0];
  for (const { name, truth } of study.specimens) {
    const missable = new Set(study.chances.get(name)!.missable);
    for (const fork of truth.trees.flatMap(({ nodes, strands }) =>
      nodes.filter(({ kind }) => kind === "fork").map(({ id }) => strands.filter(({ from }) => from === id)),
    )) {
      const kept = fork.filter(({ id }) => !missable.has(id)).length;
      const lost = DEMO_HABITS.map(({ missed }) => (kept > 1 ? 0 : missed ** (fork.length - kept)));
      for (let set = 0; set < 8; set++) {
        const there = DEMO_HABITS.filter((_, j) => (set >> j) & 1);
        if (there.length < 2) continue;
        const chance = DEMO_HABITS.reduce((product, _, j) => product * ((set >> j) & 1 ? 1 - lost[j]! : lost[j]!), 1);
        const n = there.length;
        const meanLow = there.reduce((sum, { forkLowMm }) => sum + forkLowMm / n, 0);
        const bias = there.reduce((sum, { forkLowMm }) => sum + (forkLowMm - meanLow) ** 2, 0);
        const spread = there.reduce((sum, habits) => sum + placeVariance(habits) / n, 0);
        freedom += chance * (n - 1);
        squares += chance * (3 * (n - 1) * spread + bias);
        // of a noncentral chi-square with 3 (n - 1) degrees of freedom, scaled
        variance += chance * (2 * 3 * (n - 1) * spread ** 2 + 4 * bias * spread);
      }
    }
  }
  return { value: squares / freedom, within: (Z_GATE * Math.sqrt(variance)) / freedom };
}

/** Variance of a node along one axis; three waves of a third of the sway each add sway^2 / 6. */
function placeVariance({ placeMm, swayMm }: AnnotatorHabits): number {
  return placeMm.own ** 2 + placeMm.pass ** 2 + swayMm ** 2 / 6;
}

/** Variances that enter a path length: of its end, and of its origin along the string (which all paths of a tree share). */
function pathVariances({ endMm, placeMm, swayMm }: AnnotatorHabits, part: "all" | "pass") {
  const of = ({ own, pass }: { own: number; pass: number }) => (part === "all" ? own ** 2 : 0) + pass ** 2;
  return { end: of(endMm) + swayMm ** 2 / 6, origin: of(placeMm) + swayMm ** 2 / 6 };
}

/** Standard deviation of one difference in path length between two annotators. */
export function expectedPathSpread(a: string, b: string, paths: number, trees: number): Expected {
  const [x, y] = [pathVariances(habitsOf(a), "all"), pathVariances(habitsOf(b), "all")];
  return spreadOf(x.end + y.end, x.origin + y.origin, paths, trees);
}

/** Standard deviation of one difference in path length between an annotator's two passes. */
export function expectedOwnPathSpread(annotator: string, paths: number, trees: number): Expected {
  const own = pathVariances(habitsOf(annotator), "pass");
  return spreadOf(2 * own.end, 2 * own.origin, paths, trees);
}

function spreadOf(end: number, origin: number, paths: number, trees: number): Expected {
  const sd = Math.sqrt(end + origin);
  // Variance of the estimated variance: of `paths` ends and of `trees` origins.
  const error = Math.sqrt((2 * end ** 2) / paths + (2 * origin ** 2) / trees) / (2 * sd);
  return { value: sd, within: Z_GATE * error };
}

/** Mean difference in path length of two annotators, a - b. */
export function expectedPathBias(a: string, b: string, paths: number, trees: number): Expected {
  const [x, y] = [pathVariances(habitsOf(a), "all"), pathVariances(habitsOf(b), "all")];
  const error = Math.sqrt((x.end + y.end) / paths + (x.origin + y.origin) / trees);
  return { value: habitsOf(b).endShortMm - habitsOf(a).endShortMm, within: Z_GATE * error };
}

/** Mean difference in path length of an annotator's second pass from the first. */
export function expectedDrift(annotator: string, paths: number, trees: number): Expected {
  const { end, origin } = pathVariances(habitsOf(annotator), "pass");
  const error = Math.sqrt((2 * end) / paths + (2 * origin) / trees);
  return { value: -habitsOf(annotator).endDriftMm, within: Z_GATE * error };
}

/** Share of ends that two annotators give the same segment, and the kappa that follows. */
export function expectedSegments(study: DemoStudy, a: string, b: string, items: number): { same: Expected; kappa: Expected } {
  const [x, y] = [habitsOf(a).wrongSegments, habitsOf(b).wrongSegments];
  const counts = new Map<string, number>();
  let [agree, all] = [0, 0];
  for (const { name, truth } of study.specimens) {
    const nameable = new Set(study.chances.get(name)!.nameable);
    for (const { id, segment } of truth.trees.flatMap(({ nodes }) => nodes)) {
      if (!segment) continue;
      const sameWrong = segment.endsWith("2") ? 0.5 : 1;
      agree += nameable.has(id) ? (1 - x) * (1 - y) + x * y * sameWrong : 1;
      all += 1;
      counts.set(segment, (counts.get(segment) ?? 0) + 1);
    }
  }
  const same = agree / all;
  const error = Math.sqrt((same * (1 - same)) / items);
  const chance = [...counts.values()].reduce((sum, count) => sum + (count / all) ** 2, 0);
  // Wrong names move the marginal shares by less than 0.05, and chance agreement by less than 0.01.
  return {
    same: { value: same, within: Z_GATE * error },
    kappa: { value: (same - chance) / (1 - chance), within: (Z_GATE * error + 0.01) / (1 - chance) },
  };
}

/** Bias and slope of mean radii of two annotators, a - b: each strand's factor is its own, so thick strands err more. */
export function expectedRadii(study: DemoStudy, a: string, b: string): { bias: Expected; slope: Expected } {
  const [x, y] = [habitsOf(a), habitsOf(b)];
  const radii = study.specimens.flatMap(({ truth }) =>
    truth.trees.flatMap(({ strands }) =>
      strands.map(({ radii: own }) => own!.reduce<number>((sum, r) => sum + r! / own!.length, 0)),
    ),
  );
  const n = radii.length;
  const mean = radii.reduce((sum, r) => sum + r / n, 0);
  const step = x.radiusFactor - y.radiusFactor;
  const middle = (x.radiusFactor + y.radiusFactor) / 2;
  const sd = (r: number) => r * Math.hypot(x.radiusFactor * x.radiusSpread, y.radiusFactor * y.radiusSpread);
  const sxx = radii.reduce((sum, r) => sum + (r - mean) ** 2, 0);
  const biasError = Math.sqrt(radii.reduce((sum, r) => sum + sd(r) ** 2, 0)) / n;
  const slopeError = Math.sqrt(radii.reduce((sum, r) => sum + (r - mean) ** 2 * sd(r) ** 2, 0)) / sxx / middle;
  return {
    bias: { value: step * mean, within: Z_GATE * biasError },
    slope: { value: step / middle, within: Z_GATE * slopeError },
  };
}
