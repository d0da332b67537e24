import { describe, expect, test } from "vitest";
import { gaussianKernels } from "#shared/tracing/ridge/gaussian-kernels.ts";

/** Answer of an even half kernel to a function at 0. */
function even(kernel: Float64Array, f: (x: number) => number): number {
  let sum = kernel[0]! * f(0);
  for (let k = 1; k < kernel.length; k++) sum += kernel[k]! * (f(k) + f(-k));
  return sum;
}

describe("Gaussian derivative kernels", () => {
  for (const sigma of [0, 0.05, 0.3, 0.7, 0.99, 1, 1.01, 1.25, 1.4, 2, 3.7])
    test(`at sigma ${sigma} answer constants, ramps and parabolas exactly`, () => {
      const { smooth, first, second } = gaussianKernels(sigma);
      let ramp = 0;
      for (let k = 1; k < first.length; k++) ramp += first[k]! * 2 * k;
      expect(even(smooth, () => 1)).toBeCloseTo(1, 12);
      expect(ramp).toBeCloseTo(1, 12);
      expect(even(second, () => 1)).toBeCloseTo(0, 12);
      expect(even(second, (x) => x * x)).toBeCloseTo(2, 12);
    });

  for (const sigma of [0.8, 1, 1.05, 1.25, 1.6, 2, 3])
    test(`at sigma ${sigma} answer a cosine as the continuous Gaussian does`, () => {
      // The transform of the Gaussian's second derivative is -w^2 exp(-w^2 sigma^2 / 2): textbook, no source needed.
      const { second } = gaussianKernels(sigma);
      for (const w of [0.2 / sigma, 0.6 / sigma, 1 / sigma]) {
        const expected = -w * w * Math.exp((-w * w * sigma * sigma) / 2);
        // Sampling and truncation at 4 sigma: below 2 % where the Gaussian is 0.8 voxels wide or more.
        expect(Math.abs(even(second, (x) => Math.cos(w * x)) / expected - 1)).toBeLessThan(0.02);
      }
      expect(second[0]).toBeLessThan(0);
    });
});
