import { describe, expect, it } from "vitest";
import { blandAltman } from "#shared/agreement/bland-altman.ts";
import { tQuantile } from "#shared/agreement/distributions.ts";
import { noncentralTCdf, noncentralTQuantile } from "#shared/agreement/noncentral-t.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";

// Bland & Altman, Lancet 1986;i:307-310: peak flow by a large and a mini meter (data from memory).
const LARGE = [494, 395, 516, 434, 476, 557, 413, 442, 650, 433, 417, 656, 267, 478, 178, 423, 427];
const MINI = [512, 430, 520, 428, 500, 600, 364, 380, 658, 445, 432, 626, 260, 477, 259, 350, 451];

describe("Bland-Altman limits with one difference a specimen", () => {
  const result = blandAltman(LARGE.map((a, i) => ({ specimen: `s${i}`, a, b: MINI[i]! })));

  it("are those of the published example", () => {
    expect(result.bias).toBeCloseTo(-2.117647, 6);
    expect(result.sd).toBeCloseTo(38.76513, 5);
    expect(result.lowerLimit).toBeCloseTo(-78.0959, 4);
    expect(result.upperLimit).toBeCloseTo(73.8606, 4);
  });

  it("have exact intervals", () => {
    // Carkeet, Optom Vis Sci 2015;92:e71-80
    expect(result.lowerLimitInterval!.low).toBeCloseTo(-124.1608, 4);
    expect(result.lowerLimitInterval!.high).toBeCloseTo(-53.0949, 4);
    expect(result.upperLimitInterval!.low).toBeCloseTo(48.8596, 4);
    expect(result.upperLimitInterval!.high).toBeCloseTo(119.9255, 4);
    expect(result.upperLimitInterval!.conditionalOn).toBeNull();
  });

  it("find a bias that grows with size", () => {
    // own derivation: b = 1.2 a makes the difference -0.2 a and the mean 1.1 a
    const grows = blandAltman([3, 5, 6, 8, 9].map((a, i) => ({ specimen: `${i}`, a, b: 1.2 * a })));
    expect(grows.slope).toBeCloseTo(-0.2 / 1.1, 9);
  });

  it("refuse intervals from two valves, and everything but the bias from one", () => {
    const two = blandAltman([
      { specimen: "a", a: 1, b: 2 },
      { specimen: "b", a: 4, b: 2 },
    ]);
    expect(two.lowerLimit).not.toBeNull();
    expect(two).toMatchObject({ lowerLimitInterval: null, biasInterval: null, slope: null });
    expect(two.reasons.lowerLimitInterval).toContain("there are 2");
    const one = blandAltman([{ specimen: "a", a: 1, b: 2 }]);
    expect(one).toMatchObject({ bias: -1, sd: null, lowerLimit: null, slope: null });
    expect(one.reasons.lowerLimit).toContain("there is one");
    const within = blandAltman([1, 2, 3].map((a) => ({ specimen: "a", a, b: 0 })));
    expect(within).toMatchObject({ bias: 2, sd: 1, sdWithin: 1, sdBetween: null, lowerLimitInterval: null });
    expect(within.upperLimit).toBeCloseTo(2 + 1.959964, 6);
    expect(within.reasons.upperLimitInterval).toContain("One specimen says nothing");
    expect(blandAltman([])).toMatchObject({ bias: null, reasons: { bias: expect.any(String) } });
  });

  it("give limits without width, and no interval, when all differences are the same", () => {
    const same = blandAltman([1, 2, 3, 4, 5, 6].map((a, i) => ({ specimen: `${i}`, a: a + 1, b: a })));
    expect(same).toMatchObject({ bias: 1, sd: 0, lowerLimit: 1, upperLimit: 1, slope: 0 });
    expect(same).toMatchObject({ biasInterval: null, upperLimitInterval: null, slopeInterval: null });
    expect(same.reasons.upperLimitInterval).toContain("no error is left");
  });
});

describe("Bland-Altman limits with several differences a specimen", () => {
  it("add the variance between and within specimens as the published formula does, written out by hand", () => {
    // Zou, Stat Methods Med Res 2013;22:630-642: specimens' means 1, 3, 5, 7, 9 with two differences each, 1 apart from the mean
    const readings = [1, 3, 5, 7, 9].flatMap((m, i) => [-1, 1].map((d) => ({ specimen: `${i}`, a: m + d, b: 0 })));
    const result = blandAltman(readings);
    expect(result.bias).toBe(5);
    // variance of means 10; within 10 / 5 = 2; total = 10 + (1 - 1/2) 2 = 11
    expect(result.sd).toBeCloseTo(Math.sqrt(11), 12);
    expect(result.sdWithin).toBeCloseTo(Math.sqrt(2), 12);
    expect(result.sdBetween).toBeCloseTo(3, 12);
    // chi-square quantiles of tables: 4 degrees .4844186, 11.1432868; 5 degrees .8312116, 12.8325020
    const high = Math.sqrt(11 + Math.hypot(10 * (4 / 0.4844186 - 1), 5 / 0.8312116 - 1));
    const low = Math.sqrt(11 - Math.hypot(10 * (1 - 4 / 11.1432868), 1 - 5 / 12.832502));
    const z = 1.959964;
    const outward = Math.sqrt((z * z * 10) / 5 + (z * (high - Math.sqrt(11))) ** 2);
    const inward = Math.sqrt((z * z * 10) / 5 + (z * (Math.sqrt(11) - low)) ** 2);
    expect(result.upperLimitInterval!.high).toBeCloseTo(5 + z * Math.sqrt(11) + outward, 4);
    expect(result.upperLimitInterval!.low).toBeCloseTo(5 + z * Math.sqrt(11) - inward, 4);
    expect(result.lowerLimitInterval!.low).toBeCloseTo(5 - z * Math.sqrt(11) - outward, 4);
  });

  it("give the slope an interval that is conditional on these valves", () => {
    const values = [3, 5, 4, 8, 7, 9];
    const readings = values.map((a, i) => ({ specimen: `${i % 3}`, a, b: a + (i % 2) }));
    expect(blandAltman(readings).slopeInterval!.conditionalOn).toBe("these valves");
  });

  it("cover the true limit about as often as they say", () => {
    // own simulation: sd 2 between, 1 within, so that the true upper limit is 1.959964 sqrt 5
    const random = new SeededRandom(11);
    const truth = 1.959964 * Math.sqrt(5);
    let covered = 0;
    for (let run = 0; run < 400; run++) {
      const readings = Array.from({ length: 15 }, (_, i) => {
        const own = 2 * random.normal();
        return Array.from({ length: 2 + (i % 3) }, () => ({ specimen: `${i}`, a: own + random.normal(), b: 0 }));
      }).flat();
      const { low, high } = blandAltman(readings).upperLimitInterval!;
      if (low <= truth && truth <= high) covered += 1;
    }
    // 95 % of 400 with a standard error of 1.1 %
    expect(covered / 400).toBeGreaterThan(0.91);
    expect(covered / 400).toBeLessThan(0.985);
  });
});

describe("the noncentral t distribution", () => {
  it("is Student's without a shift", () => {
    for (const [p, freedom] of [
      [0.975, 1],
      [0.9, 4],
      [0.01, 30],
      [0.6, 500],
    ] as const)
      expect(noncentralTQuantile(p, freedom, 0)).toBeCloseTo(tQuantile(p, freedom), 5);
  });

  it("falls and rises where simulated values do", () => {
    const random = new SeededRandom(5);
    let below = 0;
    for (let i = 0; i < 20000; i++) {
      let squares = 0;
      for (let k = 0; k < 6; k++) squares += random.normal() ** 2;
      if ((random.normal() + 3) / Math.sqrt(squares / 6) <= 4) below += 1;
    }
    // standard error 0.0035
    expect(noncentralTCdf(4, 6, 3)).toBeGreaterThan(below / 20000 - 0.012);
    expect(noncentralTCdf(4, 6, 3)).toBeLessThan(below / 20000 + 0.012);
  });
});
