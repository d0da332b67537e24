import { describe, expect, it } from "vitest";
import { icc } from "#shared/agreement/icc.ts";
import { meanSquaresOf, squareSums } from "#shared/agreement/mean-squares.ts";
import { measurementError } from "#shared/agreement/sem.ts";

// Shrout & Fleiss, Psychol Bull 1979;86:420-428, their six targets by four judges.
const SHROUT_FLEISS = [
  [9, 2, 5, 8],
  [6, 1, 3, 2],
  [8, 4, 6, 8],
  [7, 1, 2, 6],
  [10, 5, 6, 9],
  [6, 2, 4, 7],
];

const ofForm = (table: ReturnType<typeof icc>, form: string) => table.forms.find((one) => one.form === form)!;

describe("the intraclass correlations", () => {
  const table = icc(SHROUT_FLEISS, "one-item-per-specimen");

  it("give the published mean squares and F ratios", () => {
    expect(table.meanSquares!.between).toBeCloseTo(11.241667, 6);
    expect(table.meanSquares!.within).toBeCloseTo(6.263889, 6);
    expect(table.meanSquares!.rater).toBeCloseTo(32.486111, 6);
    expect(table.meanSquares!.residual).toBeCloseTo(1.019444, 6);
    expect(table.oneWayF).toMatchObject({ freedom: [5, 18] });
    expect(table.oneWayF!.f).toBeCloseTo(1.794678, 6);
    expect(table.twoWayF).toMatchObject({ freedom: [5, 15] });
    expect(table.twoWayF!.f).toBeCloseTo(11.027248, 6);
  });

  it.each([
    ["ICC(1)", 0.165742],
    ["ICC(A,1)", 0.289764],
    ["ICC(C,1)", 0.714841],
    ["ICC(1,k)", 0.442797],
    ["ICC(A,k)", 0.620051],
    ["ICC(C,k)", 0.909316],
  ])("give the published value of %s", (form, value) => {
    expect(ofForm(table, form).value).toBeCloseTo(value, 6);
  });

  it.each([
    ["ICC(1)", -0.132932, 0.72256],
    ["ICC(A,1)", 0.018787, 0.761084],
    ["ICC(C,1)", 0.342465, 0.945858],
  ])("give the exact interval of %s", (form, low, high) => {
    const interval = ofForm(table, form).interval!;
    expect(interval.low).toBeCloseTo(low, 6);
    expect(interval.high).toBeCloseTo(high, 6);
    expect(interval.conditionalOn).toBeNull();
    expect(interval.weak).toBe(true);
  });

  it("step the intervals of single raters up to those of the mean of k raters (Spearman-Brown)", () => {
    for (const [single, average] of [
      ["ICC(1)", "ICC(1,k)"],
      ["ICC(A,1)", "ICC(A,k)"],
      ["ICC(C,1)", "ICC(C,k)"],
    ] as const) {
      const step = (r: number) => (4 * r) / (1 + 3 * r);
      expect(ofForm(table, average).interval!.low).toBeCloseTo(step(ofForm(table, single).interval!.low), 9);
      expect(ofForm(table, average).interval!.high).toBeCloseTo(step(ofForm(table, single).interval!.high), 9);
    }
  });

  it("title intervals over many items of the same valves as conditional on these valves", () => {
    expect(ofForm(icc(SHROUT_FLEISS, "items-of-these-valves"), "ICC(A,1)").interval!.conditionalOn).toBe("these valves");
  });

  it("refuse an interval from two specimens but give the value", () => {
    const two = ofForm(icc(SHROUT_FLEISS.slice(0, 2), "one-item-per-specimen"), "ICC(C,1)");
    expect(two.value).not.toBeNull();
    expect(two.interval).toBeNull();
    expect(two.reasons.interval).toContain("at least 5 specimens; there are 2");
  });

  it("do not change when every value is shifted and scaled", () => {
    const moved = icc(
      SHROUT_FLEISS.map((row) => row.map((x) => 1000 + 7 * x)),
      "one-item-per-specimen",
    );
    for (const one of table.forms) expect(ofForm(moved, one.form).value).toBeCloseTo(one.value!, 9);
  });

  it("give 1 without an interval when all raters say the same", () => {
    const same = icc(
      [1.1, 2.2, 3.3, 4.7, 5.1].map((x) => [x, x, x]),
      "one-item-per-specimen",
    );
    for (const one of same.forms) {
      expect(one.value).toBe(1);
      expect(one.interval).toBeNull();
      expect(one.reasons.interval).toBeTruthy();
    }
    expect(same.twoWayF!.f).toBeNull();
  });

  it("give a reason, not a number, without any spread, with one item and with one rater", () => {
    for (const rows of [
      [
        [2, 2],
        [2, 2],
      ],
      [[1, 2]],
      [[1], [2]],
      [],
    ])
      for (const one of icc(rows, "one-item-per-specimen").forms) {
        expect(one.value).toBeNull();
        expect(one.reasons.value).toBeTruthy();
      }
  });
});

describe("mean squares from sums of parts, which resampling uses", () => {
  it("are those of the whole table", () => {
    const parts = [SHROUT_FLEISS.slice(0, 1), SHROUT_FLEISS.slice(1, 4), [], SHROUT_FLEISS.slice(4)];
    const found = meanSquaresOf(parts.map((rows) => squareSums(rows, 4, 5)))!;
    expect(found.between).toBeCloseTo(11.241667, 6);
    expect(found.within).toBeCloseTo(6.263889, 6);
    expect(found.rater).toBeCloseTo(32.486111, 6);
    expect(found.residual).toBeCloseTo(1.019444, 6);
  });

  it("leave nothing where there is nothing", () => {
    const rows = [1.1, 2.2, 3.3].map((x) => [x, x + 0.7, x - 0.3]);
    expect(meanSquaresOf([squareSums(rows, 3, 2)])!.residual).toBe(0);
    const same = [0.1, 0.1, 0.1].map((x) => [x, x]);
    expect(meanSquaresOf([squareSums(same, 2, 0.1)])).toMatchObject({ between: 0, within: 0 });
    expect(meanSquaresOf([squareSums([[1, 2]], 2, 1)])).toBeNull();
    expect(meanSquaresOf([])).toBeNull();
  });
});

describe("the error of measurement", () => {
  it("has the values that the formula gives for the published example", () => {
    // de Vet et al., J Clin Epidemiol 2006;59:1033-1039 (formula from memory)
    const error = measurementError(SHROUT_FLEISS);
    expect(error.semConsistency).toBeCloseTo(1.0097, 4);
    expect(error.semAgreement).toBeCloseTo(2.5028, 4);
    expect(error.sdcAgreement).toBeCloseTo(6.937, 3);
    expect(error.raterVarianceSetToZero).toBe(false);
  });

  it("takes a negative variance between raters as 0 and says so", () => {
    const error = measurementError([
      [1, 3],
      [4, 2],
      [6, 5],
      [2, 2],
    ]);
    expect(error.raterVarianceSetToZero).toBe(true);
    expect(error.semAgreement).toBe(error.semConsistency);
  });

  it("gives a reason for a single rater", () => {
    expect(measurementError([[1], [2]])).toMatchObject({ semAgreement: null, reasons: { semAgreement: expect.any(String) } });
  });
});
