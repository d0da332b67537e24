import { describe, expect, it } from "vitest";
import { captureRecapture } from "#shared/agreement/capture-recapture.ts";
import { climbDetection, detectionRates } from "#shared/agreement/em-detection.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";

// Warfield et al., IEEE TMI 2004;23:903-921 (method); toy recomputed with an independent program.
const TOY = ["1111000000", "1110100000", "1100000011"].map((marks) => [...marks].map((mark) => mark === "1"));
const START = [0.9, 0.9, 0.9];
const plain = (iterations: number) => ({ prior: 0.4, beta: 1, iterations });

const near = (found: readonly number[], expected: readonly number[], digits: number) => {
  expect(found).toHaveLength(expected.length);
  found.forEach((value, i) => {
    expect(value).toBeCloseTo(expected[i]!, digits);
  });
};

describe("expectation-maximisation on the toy", () => {
  it("gives the recomputed posteriors at the start", () => {
    const first = climbDetection(TOY, START, START, plain(0));
    near(first.posterior, [0.9979, 0.9979, 0.8571, 0.069, 0.069, 0.0009, 0.0009, 0.0009, 0.069, 0.069], 4);
  });

  it("converges to the recomputed rates without an extra prior", () => {
    const end = climbDetection(TOY, START, START, plain(100_000));
    expect(end.converged).toBe(true);
    near(end.posterior, [0.98499, 0.98499, 0.92497, 0, 0, 0, 0, 0, 0, 0], 5);
    near(end.sensitivity, [1, 1, 0.68049], 5);
    near(end.specificity, [0.84447, 0.84447, 0.71429], 5);
  });

  it("converges to the recomputed rates with Beta(2,2)", () => {
    const { best, others, starts } = detectionRates(TOY, 0.4, 1);
    near(best!.sensitivity, [0.654494, 0.654494, 0.5249], 6);
    near(best!.specificity, [0.732917, 0.732917, 0.640284], 6);
    expect(starts).toBe(20);
    for (const other of others) expect(best!.objective - other.objective).toBeLessThanOrEqual(2);
  });

  it("has a second optimum, which other starts reach", () => {
    const high = climbDetection(TOY, START, START, plain(100_000));
    const low = climbDetection(TOY, [0.1, 0.1, 0.1], [0.1, 0.1, 0.1], plain(100_000));
    expect(high.logLikelihood).toBeCloseTo(-18.066, 3);
    expect(low.logLikelihood).toBeCloseTo(-18.483, 3);
    expect(detectionRates(TOY, 0.4, 1).others).toHaveLength(1);
  });

  it("never goes down on its way", () => {
    let before = Number.NEGATIVE_INFINITY;
    for (let iterations = 0; iterations < 30; iterations++) {
      const { objective } = climbDetection(TOY, START, START, { prior: 0.4, beta: 2, iterations });
      expect(objective).toBeGreaterThanOrEqual(before - 1e-12);
      before = objective;
    }
  });
});

describe("rates without a reference", () => {
  it("are refused with two annotators, and without a candidate that all declined", () => {
    expect(detectionRates(TOY.slice(0, 2), null, 1).reasons.specificity).toContain("there are 2");
    const allMarked = TOY.map((marks) => marks.filter((_, i) => TOY.some((other) => other[i])));
    expect(detectionRates(allMarked, null, 1)).toMatchObject({ best: null, others: [] });
    expect(detectionRates(allMarked, null, 1).reasons.specificity).toContain("declined by all");
    expect(detectionRates([[false], [false], [false]], null, 1).reasons.best).toContain("Nobody marked");
    expect(detectionRates([], null, 1).best).toBeNull();
    expect(detectionRates(TOY, 1, 1).reasons.best).toContain("it was set to 1");
  });

  it("come near the rates that simulated annotators have", () => {
    // own simulation: 4000 candidates, half real
    const random = new SeededRandom(3);
    const [p, q] = [
      [0.9, 0.8, 0.7, 0.85],
      [0.95, 0.9, 0.85, 0.8],
    ];
    const real = Array.from({ length: 4000 }, () => random.unit() < 0.5);
    const decisions = p.map((hit, j) => real.map((is) => random.unit() < (is ? hit : 1 - q[j]!)));
    const { best } = detectionRates(decisions, 0.5, 7);
    best!.sensitivity.forEach((value, j) => {
      expect(Math.abs(value - p[j]!)).toBeLessThan(0.04);
      expect(Math.abs(best!.specificity[j]! - q[j]!)).toBeLessThan(0.04);
    });
  });

  it("are the same for the same seed", () => {
    expect(detectionRates(TOY, null, 5)).toEqual(detectionRates(TOY, null, 5));
  });
});

describe("capture and recapture", () => {
  const items = (patterns: Record<string, number>) =>
    Object.entries(patterns).flatMap(([pattern, count]) =>
      Array.from({ length: count }, () => [...pattern].map((mark) => mark === "1")),
    );

  it("of two annotators is the product of their counts over what both marked", () => {
    // Petersen 1896: 30 and 20 marked, 15 by both: 40 in all
    const result = captureRecapture(items({ "11": 15, "10": 15, "01": 5 }), 2);
    expect(result.total).toBeCloseTo(40, 9);
    expect(result.sensitivity[0]).toBeCloseTo(0.75, 9);
    expect(result.sensitivity[1]).toBeCloseTo(0.5, 9);
    expect(result.together).toBeCloseTo(35 / 40, 9);
    expect(result.assumptions.length).toBeGreaterThan(0);
  });

  it("of three independent annotators finds their rates from the expected counts", () => {
    // own derivation: 1000 items, rates .8 .5 .6, expected counts of each pattern
    const rates = [0.8, 0.5, 0.6];
    const patterns = Object.fromEntries(
      ["111", "110", "101", "011", "100", "010", "001"].map((pattern) => [
        pattern,
        Math.round(1000 * [...pattern].reduce((product, mark, j) => product * (mark === "1" ? rates[j]! : 1 - rates[j]!), 1)),
      ]),
    );
    const result = captureRecapture(items(patterns), 3);
    expect(result.total).toBeCloseTo(1000, 6);
    result.sensitivity.forEach((value, j) => {
      expect(value).toBeCloseTo(rates[j]!, 9);
    });
  });

  it("gives all items as found when one annotator has every item, and reasons where nothing can be told", () => {
    expect(captureRecapture(items({ "11": 3, "10": 2 }), 2)).toMatchObject({ total: 5, together: 1, sensitivity: [1, 0.6] });
    expect(captureRecapture(items({ "10": 3, "01": 2 }), 2).reasons.total).toContain("marked twice");
    expect(captureRecapture(items({ "10": 3 }), 2).reasons.total).toContain("Only one annotator");
    expect(captureRecapture([], 2)).toMatchObject({ total: null, sensitivity: [null, null] });
    expect(captureRecapture(items({ "1": 3 }), 1).total).toBeNull();
  });
});
