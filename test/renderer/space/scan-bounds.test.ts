import { expect, test } from "vitest";
import { mirroredPoints, scanBounds } from "#renderer/space/scan-bounds.ts";
import { plainGrid } from "#shared/volume/grid.ts";

test("a scan's bounds are the middle of its voxel centres and half of its diagonal", () => {
  const { centre, radiusMm } = scanBounds(plainGrid([11, 21, 31], [0.1, 0.2, 0.3]));
  expect([...centre].map((v) => Number(v.toFixed(9)))).toEqual([0.5, 2, 4.5]);
  expect(radiusMm).toBeCloseTo(Math.hypot(1, 4, 9) / 2, 9);
});

test("mirroring keeps distances from the plane, swaps its sides, and twice gives the points back", () => {
  const points = Float32Array.of(1, 2, 3, -4, 0, 7);
  const mirrored = mirroredPoints(points, [0, 0, 5], [0, 0, 1]);
  expect([...mirrored]).toEqual([1, 2, 7, -4, 0, 3]);
  expect([...mirroredPoints(mirrored, [0, 0, 5], [0, 0, 1])]).toEqual([...points]);
});
