import { describe, expect, it } from "vitest";
import { measureOverlap, percentile, sampleStrand } from "#shared/compare/overlap.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import type { RootedStrand } from "#shared/trees/rooted-strands.ts";

// A line of 11 points with radius 1 against the same line 0.5 off that stops at 6. Definitions: Schaap et al., Med Image
// Anal 2009;13:701-714 (from memory); values recomputed by an independent program.
const reference: RootedStrand = {
  strand: { id: "s1", from: "n1", to: "n2" },
  from: "n1",
  to: "n2",
  line: Array.from({ length: 11 }, (_, x): Vec3 => [x, 0, 0]),
  radii: new Array(11).fill(1),
  before: -1,
};
const other: RootedStrand = {
  ...reference,
  line: Array.from({ length: 7 }, (_, x): Vec3 => [x, 0.5, 0]),
  radii: new Array(7).fill(null),
};
const options = { step: 1, toleranceMm: 0.1, minimumDiameterMm: null };

describe("overlap of centrelines", () => {
  it("has the tabulated values with the points as given", () => {
    const { overlap, distances } = measureOverlap(
      [{ strand: reference, points: reference.line, radii: reference.radii }],
      [{ strand: other, points: other.line, radii: other.radii }],
      [[0]],
      options,
    );
    expect(overlap.ov).toBeCloseTo(0.7778, 4);
    expect(overlap.of).toBeCloseTo(0.6364, 4);
    expect(overlap.ai).toBeCloseTo(0.5, 4);
    expect(overlap.ot).toBeNull();
    expect(overlap.reasons.ot).toContain("minimum diameter");
    expect(distances.mean).toBeCloseTo(0.8751, 4);
    expect(distances.hd).toBeCloseTo(4.0311, 4);
    expect(distances.hd95).toBeCloseTo(3.1898, 4);
  });

  it("comes to the tabulated limits with fine resampling", () => {
    const step = 0.0005;
    const { overlap, distances } = measureOverlap([sampleStrand(reference, step)], [sampleStrand(other, step)], [[0]], {
      ...options,
      step,
    });
    expect(overlap.ov).toBeCloseTo(0.8041, 3);
    expect(overlap.of).toBeCloseTo(0.6866, 3);
    expect(overlap.ai).toBeCloseTo(0.524, 3);
    expect(distances.mean).toBeCloseTo(0.8205, 3);
    expect(distances.hd95).toBeCloseTo(3.2388, 3);
  });

  it("decides by the tolerance where the reference has no radius, and says how often", () => {
    const radii = new Array(11).fill(null);
    const bare = { strand: { ...reference, radii }, points: reference.line, radii };
    const { overlap } = measureOverlap([bare], [{ strand: other, points: other.line, radii: other.radii }], [[0]], options);
    expect(overlap.noRadiusShare).toBe(1);
    expect(overlap.ov).toBe(0);
    expect(overlap.reasons.ai).toBeTruthy();
  });

  it("gives no distance when a side is empty", () => {
    const { overlap, distances } = measureOverlap(
      [{ strand: reference, points: reference.line, radii: reference.radii }],
      [],
      [[0]],
      options,
    );
    expect(distances.mean).toBeNull();
    expect(overlap.ov).toBe(0);
    expect(overlap.of).toBe(0);
  });

  it("reads percentiles linearly between ranks", () => {
    // The common definition of statistics packages (type 7): 0.95 of 1..11 lies at 10.5.
    expect(percentile([1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11], 0.95)).toBeCloseTo(10.5, 12);
  });
});
