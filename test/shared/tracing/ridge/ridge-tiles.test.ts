import { describe, expect, it } from "vitest";
import { isTautlineError } from "#shared/errors.ts";
import { extendedPyramid } from "#shared/tracing/extended-pyramid.ts";
import { createRidgeTiles } from "#shared/tracing/ridge/ridge-tiles.ts";
import { allSigmasMm, radiusOfSigma, ridgeScales, sigmaVoxels } from "#shared/tracing/ridge/scales.ts";
import type { StopSwitch } from "#shared/tracing/stop-switch.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";
import { drawTubes, line, seeded } from "#test/shared/tracing/tube-phantom.ts";

describe("the scales of the ridge measure", () => {
  it("cover diameters of 0.1 to 3 mm, each on the finest level where it spans at most two voxels", () => {
    const sigmas = allSigmasMm();
    expect(2 * radiusOfSigma(sigmas[0]!)).toBeCloseTo(0.1, 9);
    expect(2 * radiusOfSigma(sigmas[sigmas.length - 1]!)).toBeGreaterThanOrEqual(3);
    const pyramid = extendedPyramid(memoryPyramid(plainGrid([96, 96, 96], [0.04, 0.04, 0.04]), new Uint8Array(96 ** 3)));
    for (const scale of ridgeScales(pyramid, 0)) {
      const spacing = (level: number) => pyramid.levels[level]!.spacing[0];
      expect(scale.sigmaMm).toBeLessThanOrEqual(2 * spacing(scale.level) * (1 + 1e-6));
      if (scale.level > 0) expect(scale.sigmaMm).toBeGreaterThan(2 * spacing(scale.level - 1));
    }
  });

  it("take off the blur that downsampling has already made", () => {
    const pyramid = extendedPyramid(memoryPyramid(plainGrid([96, 96, 96], [0.04, 0.04, 0.04]), new Uint8Array(96 ** 3)));
    const [x] = sigmaVoxels(pyramid, { sigmaMm: 0.1, level: 1 });
    // Mean of two voxels of 0.04 mm: variance (4 - 1) / 12 of a fine voxel squared.
    expect((x * 0.08) ** 2 + 0.04 ** 2 * 0.25).toBeCloseTo(0.01, 12);
  });
});

describe("ridge tiles", () => {
  const random = seeded(11);
  const noise = Float32Array.from({ length: 70 * 70 * 70 }, () => 100 * random());
  const pyramid = extendedPyramid(memoryPyramid(plainGrid([70, 70, 70], [0.04, 0.04, 0.04]), noise));

  it("are the same numbers in whatever order they are asked for, and with a cache that keeps nothing", () => {
    const roomy = createRidgeTiles(pyramid, "bright");
    const forgetful = createRidgeTiles(pyramid, "bright", 1);
    const places = [
      [1, 1, 0],
      [2, 1, 1],
    ] as const;
    const first = places.map(([i, j, k]) => roomy.tile(0, i, j, k).strength.slice());
    [...places].reverse().forEach(([i, j, k], n) => {
      expect(forgetful.tile(0, i, j, k).strength).toEqual(first[places.length - 1 - n]);
    });
  });

  it("are the same numbers when the work is called away after every scale, and come to an end", () => {
    const stop: StopSwitch = { signal: null };
    const tiles = createRidgeTiles(pyramid, "bright", 64, null, stop);
    stop.signal = { aborted: true };
    let [given, calledAway]: [Float32Array | null, number] = [null, 0];
    while (given === null)
      try {
        given = tiles.tile(0, 1, 1, 0).strength;
      } catch (error) {
        expect(isTautlineError(error, "cancelled")).toBe(true);
        calledAway++;
        expect(calledAway).toBeLessThan(200);
      }
    expect(calledAway).toBeGreaterThan(tiles.scales(0).length / 2);
    expect(given).toEqual(createRidgeTiles(pyramid, "bright").tile(0, 1, 1, 0).strength);
  });

  it("have no seams: neighbouring tiles equal one another's scan moved by whole tiles", () => {
    // The same voxels 32 further along x, with the rest of the scan the same: tile 1 of one is tile 0 of the other where
    // neither touches the edge of the scan.
    const side = 160;
    const wide = Float32Array.from({ length: side * 24 * 24 }, () => 100 * random());
    const tilesOf = (from: number, nx: number) => {
      const cut = new Float32Array(nx * 24 * 24);
      for (let row = 0; row < 24 * 24; row++) for (let x = 0; x < nx; x++) cut[row * nx + x] = wide[row * side + from + x]!;
      const grid = plainGrid([nx, 24, 24], [0.5, 0.5, 0.5]);
      return createRidgeTiles(memoryPyramid(grid, cut), "bright");
    };
    const a = tilesOf(0, 160).tile(0, 2, 0, 0, 2).strength;
    const b = tilesOf(32, 128).tile(0, 1, 0, 0, 2).strength;
    let most = 0;
    for (let v = 0; v < a.length; v++) most = Math.max(most, Math.abs(a[v]! - b[v]!));
    expect(most).toBe(0);
    expect(Math.max(...a)).toBeGreaterThan(1);
  });

  it("name the scale of a cylinder across octaves", () => {
    for (const [radius, expected] of [
      [0.1, 0.1],
      [0.28, 0.28],
    ] as const) {
      const tube = { points: line([-1, 1.3, 1.3], [4, 1.3, 1.3]), radius: () => radius };
      const phantom = drawTubes([64, 64, 64], [0.04, 0.04, 0.04], [tube]);
      const tiles = createRidgeTiles(extendedPyramid(memoryPyramid(phantom.grid, phantom.voxels)), "bright");
      const tile = tiles.tile(0, 1, 1, 1);
      const at = (0 * 32 + 0) * 32 + 0; // voxel 32, 32, 32, half a voxel off the axis at 1.3 mm
      const found = radiusOfSigma(tiles.scales(0)[tile.scale[at]!]!.sigmaMm);
      // Scales are a factor of sqrt 2 apart; the blur of the voxels themselves adds at most one step.
      expect(found / expected).toBeGreaterThan(0.7);
      expect(found / expected).toBeLessThan(1.5);
      expect(tile.strength[at]! / 1000).toBeGreaterThan(0.25);
      expect(tile.strength[at]! / 1000).toBeLessThan(0.38);
    }
  });
});
