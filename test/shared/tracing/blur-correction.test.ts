import { describe, expect, it } from "vitest";
import { blurredCylinder, correctedDiameter, FWHM_PER_SIGMA, widthRatio } from "#shared/tracing/blur-correction.ts";

// A cylinder of diameter D blurred by a Gaussian of FWHM 1: peak and width at half of its own peak over D. Recomputed outside this
// project (derivation; published advice agrees: Hoffmann et al., Med Phys 2002).
const TABLE = [
  [0.5, 0.1591, 2.0889],
  [0.75, 0.3229, 1.4708],
  [1, 0.5, 1.1905],
  [1.25, 0.6614, 1.0486],
  [1.5, 0.7898, 0.9774],
  [2, 0.9375, 0.9368],
  [3, 0.998, 0.9592],
  [4, 1, 0.977],
  [6, 1, 0.9899],
] as const;

describe("the blurred cylinder", () => {
  it("has the peaks and half widths of the table", () => {
    for (const [diameter, peak, ratio] of TABLE) {
      expect(blurredCylinder((diameter * FWHM_PER_SIGMA) / 2, 0)).toBeCloseTo(peak, 4);
      expect(widthRatio(diameter)).toBeCloseTo(ratio, 3);
    }
  });

  it("is undone by the correction, in any unit and for both ways of taking the inside level", () => {
    for (const share of [0, 0.35])
      for (const diameter of [0.6, 1, 1.7, 2.4, 5, 11, 20]) {
        const width = 0.07 * diameter * widthRatio(diameter, share);
        expect(correctedDiameter(width, 0.07, share) / 0.07 / diameter).toBeCloseTo(1, 2);
      }
    expect(correctedDiameter(0.5, 0)).toBe(0.5);
    expect(correctedDiameter(0.01, 0.07)).toBe(0);
  });
});
