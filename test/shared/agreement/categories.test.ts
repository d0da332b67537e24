import { describe, expect, it } from "vitest";
import { krippendorffAlpha, nominalAlphaOf, nominalSums } from "#shared/agreement/alpha.ts";
import { gwetAgreement } from "#shared/agreement/gwet.ts";
import { cohenKappa, fleissKappa } from "#shared/agreement/kappa.ts";
import { positiveAgreement, positiveAgreementOf } from "#shared/agreement/positive-agreement.ts";

/** Counts per subject and category of two raters' table. */
const subjectsOf = (table: readonly (readonly number[])[]) =>
  table.flatMap((row, i) =>
    row.flatMap((count, j) => Array.from({ length: count }, () => row.map((_, c) => (c === i ? 1 : 0) + (c === j ? 1 : 0)))),
  );

describe("Cohen's kappa", () => {
  // Cohen, Psychol Bull 1968;70:213-220 (formula), SE of Fleiss, Cohen & Everitt 1969; tables recomputed with an independent program
  const three = [
    [20, 5, 1],
    [4, 15, 6],
    [1, 4, 14],
  ];
  it.each([
    [
      [
        [20, 5],
        [10, 15],
      ],
      "plain",
      0.4,
      0.126996,
    ],
    [three, "plain", 0.5478, 0.082469],
    [three, "linear", 0.6231, 0.074629],
    [three, "quadratic", 0.7007, 0.073709],
  ] as const)("of %j with %s weights is the recomputed value", (table, weights, value, se) => {
    const result = cohenKappa(table, weights);
    expect(result.value).toBeCloseTo(value, 4);
    expect(result.se).toBeCloseTo(se, 6);
    expect(result.interval!.conditionalOn).toBe("these valves");
  });

  it("is refused when only one category was used and when there is no item", () => {
    expect(
      cohenKappa(
        [
          [9, 0],
          [0, 0],
        ],
        "linear",
      ),
    ).toMatchObject({ value: null, observed: 1 });
    expect(
      cohenKappa(
        [
          [9, 0],
          [0, 0],
        ],
        "plain",
      ).reasons.value,
    ).toContain("one category");
    expect(
      cohenKappa(
        [
          [0, 0],
          [0, 0],
        ],
        "plain",
      ).reasons.value,
    ).toContain("no item");
    expect(cohenKappa([], "plain").value).toBeNull();
  });

  it("is 1 with no error when both always agree", () => {
    expect(
      cohenKappa(
        [
          [4, 0],
          [0, 6],
        ],
        "plain",
      ),
    ).toMatchObject({ value: 1, se: 0 });
  });
});

describe("Fleiss' kappa", () => {
  it("of 10 subjects, 14 raters and 5 categories is the published value", () => {
    // Fleiss, Psychol Bull 1971;76:378-382 (formula); example from memory
    const rows = [
      "0 0 0 0 14",
      "0 2 6 4 2",
      "0 0 3 5 6",
      "0 3 9 2 0",
      "2 2 8 1 1",
      "7 7 0 0 0",
      "3 2 6 3 0",
      "2 5 3 2 2",
      "6 5 2 1 0",
      "0 2 2 3 7",
    ];
    expect(fleissKappa(rows.map((row) => row.split(" ").map(Number))).value).toBeCloseTo(0.20993, 5);
  });

  it("refuses gaps, one category and one rater in words", () => {
    expect(
      fleissKappa([
        [2, 0],
        [1, 0],
      ]).reasons.value,
    ).toContain("same number");
    expect(
      fleissKappa([
        [2, 0],
        [2, 0],
      ]).reasons.value,
    ).toContain("one category");
    expect(fleissKappa([[1, 0]]).value).toBeNull();
    expect(fleissKappa([]).value).toBeNull();
  });
});

describe("Gwet's AC1 and positive agreement", () => {
  // Feinstein & Cicchetti 1990 (paradox), Gwet, Br J Math Stat Psychol 2008;61:29-48; recomputed with an independent program
  it.each([
    [
      [
        [40, 9],
        [6, 45],
      ],
      0.6995,
      0.7007,
      0.071711,
      0.842105,
    ],
    [
      [
        [80, 10],
        [5, 5],
      ],
      0.3182,
      0.808,
      0.052392,
      0.914286,
    ],
    [
      [
        [118, 5],
        [2, 0],
      ],
      -0.0234,
      0.9408,
      0.023057,
      0.971193,
    ],
  ] as const)("of %j are the recomputed values beside kappa", (table, kappa, ac1, se, positive) => {
    expect(cohenKappa(table, "plain").value).toBeCloseTo(kappa, 4);
    const gwet = gwetAgreement(subjectsOf(table), "plain");
    expect(gwet.value).toBeCloseTo(ac1, 4);
    expect(gwet.se).toBeCloseTo(se, 6);
    expect(positiveAgreement(table[0][0], table[0][1], table[1][0]).value).toBeCloseTo(positive, 6);
  });

  it("give a reason when there is nothing to agree on", () => {
    expect(gwetAgreement([[1, 0]], "plain").reasons.value).toContain("two annotators");
    expect(gwetAgreement([[2]], "plain").reasons.value).toContain("two categories");
    expect(gwetAgreement([], "plain").value).toBeNull();
    expect(gwetAgreement([[2, 0]], "plain")).toMatchObject({ value: 1, se: null, interval: null });
    expect(positiveAgreement(0, 0, 0).reasons.value).toContain("Nobody marked");
  });

  it("count each pair of annotators that both did the specimen", () => {
    const result = positiveAgreementOf([
      [true, true, false],
      [true, false, null],
      [true, true, true],
    ]);
    // pairs: (1 1) (1 0) (1 0); (1 0); three times (1 1)
    expect(result).toMatchObject({ both: 4, onlyOne: 3 });
    expect(result.value).toBeCloseTo(8 / 11, 12);
  });
});

describe("Krippendorff's alpha", () => {
  // Krippendorff, Computing Krippendorff's alpha-reliability, 2011: four coders, twelve units, "." = missing
  const units = "11.1 2232 3333 3333 2222 1234 4444 1121 2222 .555 ..11 ..3."
    .split(" ")
    .map((unit) => [...unit].map((mark) => (mark === "." ? null : Number(mark))));

  it.each([
    ["nominal", 0.743421],
    ["ordinal", 0.815388],
    ["interval", 0.849107],
    ["ratio", 0.797403],
  ] as const)("with the %s metric is the published value", (metric, value) => {
    expect(krippendorffAlpha(units, metric).value).toBeCloseTo(value, 6);
  });

  it("stands beside AC1 and AC2 of the same ratings", () => {
    const counts = units.map((unit) => [1, 2, 3, 4, 5].map((c) => unit.filter((value) => value === c).length));
    expect(gwetAgreement(counts, "plain").value).toBeCloseTo(0.77544, 5);
    expect(gwetAgreement(counts, "linear").value).toBeCloseTo(0.85874, 5);
    expect(gwetAgreement(counts, "quadratic").value).toBeCloseTo(0.914, 5);
  });

  it("is refused in words for equal values, for single values, and for negative values under the ratio metric", () => {
    expect(
      krippendorffAlpha(
        [
          [1, 1],
          [1, 1],
        ],
        "interval",
      ).reasons.value,
    ).toContain("the same");
    expect(
      krippendorffAlpha(
        [
          [1, null],
          [2, null],
        ],
        "interval",
      ).reasons.value,
    ).toContain("two annotators");
    expect(krippendorffAlpha([[1, -1]], "ratio").reasons.value).toContain("not negative");
    expect(krippendorffAlpha([], "nominal").value).toBeNull();
  });

  it("follows from sums of its parts, which resampling uses", () => {
    const numbered = units.map((unit) => unit.map((value) => (value === null ? null : value - 1)));
    const parts = [numbered.slice(0, 5), numbered.slice(5), numbered.slice(0, 0)].map((part) => nominalSums(part, 5));
    expect(nominalAlphaOf(parts)).toBeCloseTo(0.743421, 6);
    expect(nominalAlphaOf([nominalSums([[1, 1]], 2)])).toBeNull();
    expect(nominalAlphaOf([])).toBeNull();
  });

  it("does not change with the order of coders and units", () => {
    const turned = [...units].reverse().map((unit) => [...unit].reverse());
    expect(krippendorffAlpha(turned, "ordinal").value).toBeCloseTo(krippendorffAlpha(units, "ordinal").value!, 12);
  });
});
