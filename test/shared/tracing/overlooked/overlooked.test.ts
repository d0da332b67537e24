import { describe, expect, it } from "vitest";
import { pointMm, type Vec3 } from "#shared/geometry/types.ts";
import { dismissedStretches, overlookedKey } from "#shared/tracing/overlooked/dismissed.ts";
import { findStretches } from "#shared/tracing/overlooked/find-stretches.ts";
import { blockBox, blockCounts, blocksInRegion, searchBlock, searchLevel } from "#shared/tracing/overlooked/search-block.ts";
import { createTraceContext } from "#shared/tracing/trace-context.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";
import { curve, drawTubes, line } from "#test/shared/tracing/tube-phantom.ts";

// Two strings drawn by a phantom that shares no code with the search.
const S = 0.08;
const one = curve((t): Vec3 => [0.6 + 6 * t, 1.6 + 0.4 * Math.sin(3 * t), 1.2]);
const other = line([1, 3.4, 0.6], [5, 3.6, 2.4]);
const phantom = drawTubes(
  [100, 70, 40],
  [S, S, S],
  [
    { points: one, radius: () => 0.2 },
    { points: other, radius: () => 0.15 },
  ],
  { fwhmMm: 0.14, noise: 0.08, seed: 11 },
);
const context = createTraceContext(memoryPyramid(phantom.grid, phantom.voxels), "bright");
const level = context.pyramid.levels[searchLevel(context.pyramid)]!;
const total = blockCounts(level).reduce((a, b) => a * b, 1);
const found = Array.from({ length: total }, (_, block) => searchBlock(context, block));
const explained = (points: readonly Vec3[], radius: number) => ({ points: points.flat(), radii: points.map(() => radius) });

describe("overlooked stretches", () => {
  const all = findStretches(context, found, [], { minimumMm: 1 });

  it("are both strings when nothing is traced, the longest first, across the sides of blocks", () => {
    expect(all).toHaveLength(2);
    // Round ends of the drawn tubes and a voxel or two at each end.
    expect(Math.abs(all[0]!.lengthMm - 6.3)).toBeLessThan(0.5);
    expect(Math.abs(all[1]!.lengthMm - Math.hypot(4, 0.2, 1.8))).toBeLessThan(0.5);
    expect(Math.abs(all[0]!.radiusMm / 0.2 - 1)).toBeLessThan(0.4);
  });

  it("are what is left of a string that is traced in part", () => {
    const half = one.filter((_, i) => i <= 300);
    const left = findStretches(context, found, [explained(half, 0.2), explained(other, 0.15)], { minimumMm: 1 });
    expect(left).toHaveLength(1);
    expect(Math.abs(left[0]!.lengthMm - 3.1)).toBeLessThan(0.5);
  });

  it("are none when all is traced, and none shorter than the minimum", () => {
    expect(findStretches(context, found, [explained(one, 0.2), explained(other, 0.15)], { minimumMm: 1 })).toEqual([]);
    expect(findStretches(context, found, [], { minimumMm: 5.5 })).toHaveLength(1);
  });

  it("do not depend on the order in which blocks were searched, nor on what was computed before", () => {
    expect(findStretches(context, [...found].reverse(), [], { minimumMm: 1 })).toEqual(all);
    const fresh = createTraceContext(context.pyramid, "bright", { ridgeTiles: 2, bricks: 2 });
    for (const block of [total - 1, 0]) expect(searchBlock(fresh, block)).toEqual(found[block]);
  });

  it("stop when they are told to", () => {
    expect(() => searchBlock(context, 0, { aborted: true })).toThrow(expect.objectContaining({ tag: "cancelled" }));
  });
});

describe("dismissed stretches", () => {
  const [long, short] = findStretches(context, found, [], { minimumMm: 1 });

  it("are known again by their place, also when another search finds them a little beside", () => {
    const dismissed = dismissedStretches([overlookedKey(long!), "loop t1 n2 s3"]);
    expect(dismissed.keyOf(long!)).toBe(overlookedKey(long!));
    const shifted = { points: long!.points.map((mm, i) => mm + (i % 3 === 1 ? 0.2 : 0)) };
    expect(dismissed.keyOf(shifted)).toBe(overlookedKey(long!));
    expect(dismissed.keyOf({ points: long!.points.slice(0, 30) })).toBe(overlookedKey(long!));
    expect(dismissed.keyOf(short!)).toBeNull();
  });

  it("pass over keys that are no places", () => {
    expect(dismissedStretches(["overlooked", "overlooked 1,2", "overlooked a,b,c"]).keyOf(long!)).toBeNull();
  });
});

describe("blocks", () => {
  it("cover the level once, and those of a region are the ones it touches", () => {
    let voxels = 0;
    for (let block = 0; block < total; block++) voxels += blockBox(level, block).size.reduce((a, b) => a * b, 1);
    expect(voxels).toBe(level.size[0] * level.size[1] * level.size[2]);
    expect(blocksInRegion(level, pointMm(-9, -9, -9), pointMm(99, 99, 99))).toHaveLength(total);
    expect(blocksInRegion(level, pointMm(0.1, 0.1, 0.1), pointMm(0.2, 0.2, 0.2))).toEqual([0]);
  });

  it("without anything bright hold nothing", () => {
    const flat = createTraceContext(memoryPyramid(plainGrid([64, 64, 64], [S, S, S]), new Uint8Array(64 ** 3).fill(7)), "bright");
    expect(searchBlock(flat, 0).strengths).toHaveLength(0);
  });
});
