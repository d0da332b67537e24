import { describe, expect, it } from "vitest";
import { extendedPyramid } from "#shared/tracing/extended-pyramid.ts";
import { indexToLocal, localToIndex } from "#shared/tracing/local-frame.ts";
import { indexToMm, plainGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";

describe("the pyramid continued for tracing", () => {
  const grid = plainGrid([70, 9, 5], [0.02, 0.02, 0.05]);
  const voxels = Float32Array.from({ length: 70 * 9 * 5 }, (_, i) => (i * 37) % 101);
  const scan = memoryPyramid(grid, voxels);
  const pyramid = extendedPyramid(scan);

  it("keeps the scan's own levels and goes on until the widest scale spans two voxels", () => {
    expect(pyramid.levels.slice(0, scan.levels.length)).toEqual(scan.levels);
    const last = pyramid.levels[pyramid.levels.length - 1]!;
    const done = 2 * Math.min(...last.spacing) >= 3 / 2 / Math.SQRT2;
    expect(done || last.size.every((side, axis) => side === 1 || last.spacing[axis]! >= 2 * Math.min(...last.spacing))).toBe(
      true,
    );
    expect(extendedPyramid(pyramid)).toBe(pyramid);
  });

  it("holds the mean of all voxels at a level of one, and repeats edges outside", () => {
    const even = memoryPyramid(
      plainGrid([64, 64, 64], [0.01, 0.01, 0.01]),
      Float32Array.from({ length: 64 ** 3 }, (_, i) => i % 7),
    );
    const all = extendedPyramid(even);
    const top = all.levels[all.levels.length - 1]!;
    expect([...top.size]).toEqual([1, 1, 1]);
    const out = new Float32Array(8);
    all.readBoxInto(top.level, [-1, 0, 5], [2, 2, 2], out);
    let mean = 0;
    for (let i = 0; i < 64 ** 3; i++) mean += (i % 7) / 64 ** 3;
    for (const value of out) expect(value).toBeCloseTo(mean, 4);
  });

  it("places its levels where the scan's frame does", () => {
    for (const level of pyramid.levels) {
      const index = [1.25, -0.5, 2] as const;
      const local = indexToLocal(level, index);
      const place = indexToMm(level, index);
      for (const axis of [0, 1, 2] as const) {
        expect(local[axis]).toBeCloseTo(place[axis], 12);
        expect(localToIndex(level, local)[axis]).toBeCloseTo(index[axis], 9);
      }
    }
  });
});
