import { describe, expect, it } from "vitest";
import { greyLevels } from "#shared/tracing/grey-levels.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";
import { drawTubes, line } from "#test/shared/tracing/tube-phantom.ts";

describe("the grey levels of a scan", () => {
  it("are those it was made with, for bright strings and for dark ones", () => {
    const tubes = [{ points: line([0.2, 0.8, 0.8], [2.3, 1, 1.4]), radius: () => 0.3 }];
    const phantom = drawTubes([64, 64, 64], [0.04, 0.04, 0.04], tubes, { noise: 0.1, seed: 3 });
    const bright = greyLevels(memoryPyramid(phantom.grid, phantom.voxels), "bright");
    // Made with background 1000, noise 100, strings 1000 above; estimated from some 100 000 voxels and bins of 1/256 of the range.
    expect(Math.abs(bright.background - 1000)).toBeLessThan(40);
    expect(Math.abs(bright.noise - 100)).toBeLessThan(25);
    expect(Math.abs(bright.contrast - 1000)).toBeLessThan(150);
    const turned = phantom.voxels.map((value) => 5000 - value);
    const dark = greyLevels(memoryPyramid(phantom.grid, turned), "dark");
    expect(Math.abs(dark.background - 4000)).toBeLessThan(40);
    expect(Math.abs(dark.contrast - 1000)).toBeLessThan(150);
  });

  it("are finite for a scan of one value, a tiny one, and one without values", () => {
    for (const voxels of [new Float32Array(27).fill(7), new Float32Array(27).fill(Number.NaN)]) {
      const found = greyLevels(memoryPyramid(plainGrid([3, 3, 3], [1, 1, 1]), voxels), "bright");
      for (const value of Object.values(found)) expect(Number.isFinite(value)).toBe(true);
      expect(found.noise).toBeGreaterThan(0);
    }
  });
});
