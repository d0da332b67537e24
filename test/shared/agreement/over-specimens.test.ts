import { describe, expect, it } from "vitest";
import { disagreementOf, equivalence } from "#shared/agreement/equivalence.ts";
import { overSpecimens } from "#shared/agreement/jackknife.ts";
import { mean } from "#shared/agreement/mean-squares.ts";
import { specimensFor, subjectsForTest, subjectsForWidth } from "#shared/agreement/planning.ts";
import { type LongValue, varianceComponents } from "#shared/agreement/variance-components.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";

const meanOf = (values: readonly number[]) => (chosen: readonly number[]) => mean(chosen.map((i) => values[i]!));

describe("intervals over specimens", () => {
  it("of a mean are the classical t interval", () => {
    // textbook: 2 4 4 5 7 9, mean 31/6, sd 2.483277, t(5) 2.570582
    const result = overSpecimens(meanOf([2, 4, 4, 5, 7, 9]), 6, 1);
    const half = (2.570582 * 2.483277) / Math.sqrt(6);
    expect(result.jackknife!.low).toBeCloseTo(31 / 6 - half, 5);
    expect(result.jackknife!.high).toBeCloseTo(31 / 6 + half, 5);
    expect(result.jackknife!.weak).toBe(true);
    expect(result.bootstrap).toBeNull();
    expect(result.reasons.bootstrap).toContain("there are 6");
  });

  it("of a correlation have the published jackknife error", () => {
    // Efron & Tibshirani 1993, the law school data: correlation .776, jackknife standard error .1425 (memory)
    const lsat = [576, 635, 558, 578, 666, 580, 555, 661, 651, 605, 653, 575, 545, 572, 594];
    const gpa = [3.39, 3.3, 2.81, 3.03, 3.44, 3.07, 3.0, 3.43, 3.36, 3.13, 3.12, 2.74, 2.76, 2.88, 2.96];
    const correlation = (chosen: readonly number[]) => {
      const [x, y] = [chosen.map((i) => lsat[i]!), chosen.map((i) => gpa[i]!)];
      const [mx, my] = [mean(x), mean(y)];
      const sum = (f: (i: number) => number) => x.reduce((total, _, i) => total + f(i), 0);
      const below = sum((i) => (x[i]! - mx) ** 2) * sum((i) => (y[i]! - my) ** 2);
      return below > 0 ? sum((i) => (x[i]! - mx) * (y[i]! - my)) / Math.sqrt(below) : null;
    };
    const result = overSpecimens(correlation, 15, 1);
    expect(result.value).toBeCloseTo(0.776, 3);
    expect(result.standardError).toBeCloseTo(0.1425, 4);
    expect(result.jackknife!.weak).toBe(false);
    // a correlation's interval is longer below than above
    expect(result.value! - result.bootstrap!.low).toBeGreaterThan(result.bootstrap!.high - result.value!);
    expect(result.bootstrap!.high).toBeLessThanOrEqual(1);
  });

  it("cover a skewed mean about as often as they say", () => {
    // own simulation: mean of 20 exponential values, truth 1; a BCa interval is known to fall a little short
    const random = new SeededRandom(21);
    let covered = 0;
    for (let run = 0; run < 150; run++) {
      const values = Array.from({ length: 20 }, () => -Math.log(1 - random.unit()));
      const { low, high } = overSpecimens(meanOf(values), 20, run).bootstrap!;
      if (low <= 1 && 1 <= high) covered += 1;
    }
    expect(covered / 150).toBeGreaterThan(0.85);
    expect(covered / 150).toBeLessThan(0.99);
  });

  it("are refused for one specimen and for two to four, with the values and their range", () => {
    const one = overSpecimens(meanOf([3]), 1, 1);
    expect(one).toMatchObject({ value: 3, jackknife: null, bootstrap: null });
    expect(one.reasons.jackknife).toContain("One specimen says nothing");
    const two = overSpecimens(meanOf([3, 7]), 2, 1);
    expect(two).toMatchObject({ value: 5, perSpecimen: [3, 7], range: [3, 7], jackknife: null, standardError: null });
    expect(two.reasons.jackknife).toContain("at least 5 specimens; there are 2");
    expect(overSpecimens(() => 1, 0, 1)).toMatchObject({ value: null, range: null });
  });

  it("are refused in words when all specimens are the same", () => {
    const result = overSpecimens(meanOf(Array.from({ length: 12 }, () => 2)), 12, 1);
    expect(result).toMatchObject({ value: 2, standardError: 0, jackknife: null, bootstrap: null });
    expect(result.reasons.bootstrap).toContain("no spread");
  });

  it("are cut at the greatest value that the number can take, and say so", () => {
    const shares = [1, 1, 0.9, 1, 0.8, 1];
    expect(overSpecimens(meanOf(shares), 6, 1).jackknife!.high).toBeGreaterThan(1);
    expect(overSpecimens(meanOf(shares), 6, 1, 1).jackknife).toMatchObject({
      high: 1,
      method: expect.stringContaining("cut at 1"),
    });
  });

  it("say so when the number cannot be given without one of the specimens", () => {
    const needsFirst = (chosen: readonly number[]) => (chosen.includes(0) ? 1 : null);
    expect(overSpecimens(needsFirst, 6, 1).reasons.jackknife).toContain("Without one");
    expect(overSpecimens(() => null, 6, 1)).toMatchObject({ value: null, reasons: { value: expect.any(String) } });
  });

  it("are the same for the same seed", () => {
    const values = [1, 5, 2, 8, 3, 9, 4, 7, 6, 2, 5];
    expect(overSpecimens(meanOf(values), 11, 4)).toEqual(overSpecimens(meanOf(values), 11, 4));
  });
});

describe("a method against annotators", () => {
  // Obuchowski et al. 2014 (gamma), Barnhart et al. 2007 (CIA); toy recomputed with an independent program
  const a = [10, 12, 9, 15, 11];
  const b = [11, 12, 8, 16, 10];
  const method = [10.5, 13, 9, 15, 12];
  const specimens = (scale: "absolute" | "squared") => a.map((_, i) => disagreementOf([[a[i]!], [b[i]!]], [method[i]!], scale)!);

  it("on squared differences has the recomputed gamma, bound, interval and coefficient", () => {
    const result = equivalence(specimens("squared"), null, false);
    expect(result.methodAnnotator).toBeCloseTo(0.95, 12);
    expect(result.annotatorAnnotator).toBeCloseTo(0.8, 12);
    expect(result.difference).toBeCloseTo(0.15, 12);
    expect(result.upperBound).toBeCloseTo(1.1269, 4);
    expect(result.interval!.low).toBeCloseTo(-1.1223, 4);
    expect(result.interval!.high).toBeCloseTo(1.4223, 4);
    expect(result.ratio).toBeCloseTo(0.8421, 4);
  });

  it("on distances has the recomputed D, bound and interval", () => {
    const result = equivalence(specimens("absolute"), null, false);
    expect(result.methodAnnotator).toBeCloseTo(0.8, 12);
    expect(result.annotatorAnnotator).toBeCloseTo(0.8, 12);
    expect(result.difference).toBeCloseTo(0, 12);
    expect(result.upperBound).toBeCloseTo(0.6741, 4);
    expect(result.interval!.low).toBeCloseTo(-0.878, 4);
    expect(result.interval!.high).toBeCloseTo(0.878, 4);
  });

  it("gets a verdict only against a margin, and only when the bound lies below it", () => {
    expect(equivalence(specimens("absolute"), null, false).reasons.verdict).toContain("no margin");
    expect(equivalence(specimens("absolute"), 0.7, false).verdict).toBe("equivalent");
    expect(equivalence(specimens("absolute"), 0.6, false).verdict).toBe("not shown to be equivalent");
  });

  it("gets neither interval nor verdict from fewer than five specimens, and nothing from none", () => {
    const four = equivalence(specimens("absolute").slice(0, 4), 5, true);
    expect(four).toMatchObject({ interval: null, upperBound: null, verdict: null });
    expect(four.reasons.verdict).toContain("there are 4");
    expect(four.notes[0]).toContain("engine");
    expect(equivalence([], 1, false)).toMatchObject({ difference: null, verdict: null });
    expect(disagreementOf([[1]], [1], "absolute")).toBeNull();
  });
});

describe("planning", () => {
  it("gives the subjects for an interval width", () => {
    // Bonett, Stat Med 2002;21:1331-1335
    expect(subjectsForWidth(0.8, 2, 0.2).exact - 5 * 0.8).toBeLessThan(51);
    expect(Math.ceil(subjectsForWidth(0.8, 2, 0.2).exact - 5 * 0.8)).toBe(51);
    expect(subjectsForWidth(0.8, 2, 0.2)).toMatchObject({ subjects: 55, corrected: true });
    expect(subjectsForWidth(0.8, 3, 0.2)).toMatchObject({ subjects: 36, corrected: false });
    expect(subjectsForWidth(0.7, 3, 0.2).subjects).toBe(68);
    expect(subjectsForWidth(0.9, 3, 0.1).subjects).toBe(42);
  });

  it("gives the subjects for a test", () => {
    // Walter, Eliasziw & Donner, Stat Med 1998;17:101-110
    expect(subjectsForTest(0.6, 0.8, 2).exact).toBeCloseTo(38.6, 1);
    expect(subjectsForTest(0.6, 0.8, 3).exact).toBeCloseTo(26.1, 1);
    expect(subjectsForTest(0.75, 0.9, 3).exact).toBeCloseTo(18.5, 1);
    expect(subjectsForTest(0.6, 0.8, 2).subjects).toBe(39);
  });

  it("answers in specimens when strands of one specimen are alike", () => {
    const planned = { exact: 50, subjects: 50 };
    expect(specimensFor(planned, 20, 0)).toEqual({ designEffect: 1, strands: 50, specimens: 3 });
    // own derivation: 1 + 19 x 0.5 = 10.5, 525 strands, 26.25 specimens
    expect(specimensFor(planned, 20, 0.5)).toEqual({ designEffect: 10.5, strands: 525, specimens: 27 });
    expect(specimensFor(planned, 20, 1).specimens).toBe(50);
  });

  it("refuses values outside their range in words", () => {
    expect(() => subjectsForWidth(1, 2, 0.2)).toThrow(/between 0 and 1, found 1/);
    expect(() => subjectsForTest(0.8, 0.6, 2)).toThrow(/least acceptable/);
    expect(() => specimensFor({ exact: 5, subjects: 5 }, 0, 0.5)).toThrow(/found 0/);
  });
});

describe("variance components", () => {
  const rows = [
    [9, 2, 5, 8],
    [6, 1, 3, 2],
    [8, 4, 6, 8],
    [7, 1, 2, 6],
    [10, 5, 6, 9],
    [6, 2, 4, 7],
  ];

  it("of a complete table are those of the two-way analysis of variance", () => {
    // Shrout & Fleiss 1979: (BMS - EMS) / 4, (JMS - EMS) / 6, EMS
    const values = rows.flatMap((row, i) =>
      row.map((value, j): LongValue => ({ specimen: `${i}`, item: "total", annotator: `${j}`, pass: 1, value })),
    );
    const variance = varianceComponents(values);
    const { reasons } = variance;
    expect(variance.specimen).toBeCloseTo((11.241667 - 1.019444) / 4, 5);
    expect(variance.annotator).toBeCloseTo((32.486111 - 1.019444) / 6, 5);
    expect(variance.residual).toBeCloseTo(1.019444, 5);
    expect(variance).toMatchObject({ item: null, pass: null });
    expect(reasons.item).toContain("specimen");
    expect(reasons.pass).toContain("residual");
  });

  it("come near the variances that simulated annotators have, also with gaps", () => {
    // own simulation: 60 specimens, 10 items, 12 annotators, 2 passes; a tenth missing
    const random = new SeededRandom(9);
    const truth = { specimen: 4, item: 2, annotator: 1, pass: 0.5, residual: 0.25 };
    const draw = (name: keyof typeof truth) => Math.sqrt(truth[name]) * random.normal();
    const annotators = Array.from({ length: 12 }, () => draw("annotator"));
    const values: LongValue[] = [];
    for (let s = 0; s < 60; s++) {
      const specimen = draw("specimen");
      const items = Array.from({ length: 10 }, () => draw("item"));
      annotators.forEach((annotator, j) => {
        for (const pass of [1, 2]) {
          const shift = draw("pass");
          items.forEach((item, i) => {
            if (random.unit() < 0.1) return;
            const value = 50 + specimen + item + annotator + shift + draw("residual");
            values.push({ specimen: `${s}`, item: `${i}`, annotator: `${j}`, pass, value });
          });
        }
      });
    }
    const variance = varianceComponents(values);
    expect(variance.residual).toBeCloseTo(0.25, 1);
    expect(Math.abs(variance.pass! - 0.5)).toBeLessThan(0.08);
    expect(Math.abs(variance.item! - 2)).toBeLessThan(0.5);
    // 60 specimens and 12 annotators: relative standard errors of 18 % and 43 %
    expect(Math.abs(variance.specimen! - 4)).toBeLessThan(2.2);
    expect(Math.abs(variance.annotator! - 1)).toBeLessThan(0.9);
  });

  it("are reasons, not numbers, for single values and for nothing", () => {
    const one: LongValue = { specimen: "a", item: "1", annotator: "x", pass: 1, value: 3 };
    for (const values of [[], [one], [one, { ...one, specimen: "b" }]]) {
      const { reasons, setToZero: _, ...variance } = varianceComponents(values);
      for (const [name, value] of Object.entries(variance)) {
        if (value === null) expect(reasons[name]).toBeTruthy();
        else expect(Number.isFinite(value)).toBe(true);
      }
    }
    expect(varianceComponents([]).residual).toBeNull();
  });
});
