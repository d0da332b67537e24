import { describe, expect, it } from "vitest";
import { pointMm, sizeXyz, spacingMm, type Vec3 } from "#shared/geometry/types.ts";
import { openGuideFronts } from "#shared/tracing/guide/guide-fronts.ts";
import { previewGuide } from "#shared/tracing/guide/guide-preview.ts";
import { impassableVoxels } from "#shared/tracing/guide/impassable.ts";
import { createTraceContext } from "#shared/tracing/trace-context.ts";
import { indexToMm, type VolumeGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";

const grid: VolumeGrid = {
  size: sizeXyz(64, 48, 40),
  spacing: spacingMm(0.1, 0.1, 0.15),
  origin: pointMm(3, -2, 8),
  direction: [0, -1, 0, 1, 0, 0, 0, 0, 1],
  frame: "LPS",
};
const place = (x: number, y: number, z: number) => indexToMm(grid, [x, y, z]);

/** A straight bright string along the first voxel axis, and a bow that leaves it at 12 and comes back at 52. */
function scan() {
  const voxels = new Uint16Array(64 * 48 * 40);
  const bow = (x: number) => (x < 12 || x > 52 ? 12 : 12 + 18 * Math.sin(((x - 12) / 40) * Math.PI));
  for (let z = 0; z < 40; z++)
    for (let y = 0; y < 48; y++)
      for (let x = 0; x < 64; x++) {
        const across = Math.min(Math.abs(y - 12), Math.abs(y - bow(x)) * 0.6) * 0.1;
        const near = Math.hypot(across, (z - 20) * 0.15);
        voxels[(z * 48 + y) * 64 + x] = 1000 + 2000 * Math.min(1, Math.max(0, (0.3 - near) / 0.1));
      }
  return memoryPyramid(grid, voxels);
}

/** Distance of a place from the straight string's stretch between 20 and 44, millimetres: by definition, point by point. */
const fromClosed = (p: Vec3) => {
  let nearest = Number.POSITIVE_INFINITY;
  for (let i = 0; i <= 240; i++) {
    const q = place(20 + i / 10, 12, 20);
    nearest = Math.min(nearest, Math.hypot(p[0] - q[0], p[1] - q[1], p[2] - q[2]));
  }
  return nearest;
};
const closed = { points: [...place(20, 12, 20), ...place(44, 12, 20)], radiusMm: 0.25 };

describe("impassable strings", () => {
  const pyramid = scan();
  const level = pyramid.levels[0]!;

  it("are the voxels within their radius, on turned and uneven axes", () => {
    const box = { start: [8, 0, 10], size: [48, 40, 24] } as const;
    const found = impassableVoxels(grid, level, box, [closed], place(0, 40, 0));
    const expected: number[] = [];
    for (let z = 0; z < 24; z++)
      for (let y = 0; y < 40; y++)
        for (let x = 0; x < 48; x++) if (fromClosed(place(x + 8, y, z + 10)) <= 0.25 - 0.02) expected.push((z * 40 + y) * 48 + x);
    expect(expected.length).toBeGreaterThan(300);
    expect(expected.filter((voxel) => !found.includes(voxel))).toEqual([]);
    const away = found.map((voxel) =>
      fromClosed(place((voxel % 48) + 8, (Math.floor(voxel / 48) % 40) + 0, Math.floor(voxel / 1920) + 10)),
    );
    expect(Math.max(...away)).toBeLessThan(0.25 + 1e-3);
  });

  it("close a thin string over at least a voxel to each side, so that nothing slips through", () => {
    const box = { start: [0, 0, 0], size: [64, 48, 40] } as const;
    const found = new Set(impassableVoxels(grid, level, box, [{ ...closed, radiusMm: 0 }], place(0, 40, 0)));
    for (let x = 20; x <= 44; x++) expect(found.has((20 * 48 + 12) * 64 + x)).toBe(true);
  });

  it("stay open around a pin on them, so that a branch can leave", () => {
    const box = { start: [0, 0, 0], size: [64, 48, 40] } as const;
    const found = impassableVoxels(grid, level, box, [closed], place(32, 12, 20));
    const x = found.map((voxel) => voxel % 64);
    expect(x.some((each) => Math.abs(each - 32) < 6)).toBe(false);
    expect(x.some((each) => each < 24) && x.some((each) => each > 40)).toBe(true);
  });

  it("make the guide take the other way round, and none where there is none", () => {
    const context = createTraceContext(pyramid, "bright");
    const [from, to] = [place(4, 12, 20), place(60, 12, 20)];
    const shown = (impassable: (typeof closed)[]) => {
      const { points } = previewGuide(openGuideFronts(context, from, 64e6, impassable), to, () => false);
      return Array.from({ length: points.length / 3 }, (_, i): Vec3 => [points[3 * i]!, points[3 * i + 1]!, points[3 * i + 2]!]);
    };
    expect(Math.min(...shown([]).map(fromClosed))).toBeLessThan(0.1);
    const around = shown([closed]);
    expect(Math.min(...around.map(fromClosed))).toBeGreaterThan(0.2);
    // The bow reaches 18 voxels of 0.1 mm to the side.
    expect(Math.max(...around.map(fromClosed))).toBeGreaterThan(1.4);
  });
});
