import { describe, expect, test } from "vitest";
import { pointMm, sizeXyz, spacingMm, type Vec3 } from "#shared/geometry/types.ts";
import { indexToMm, type VolumeGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";
import { scanHistogram } from "#shared/volume/scan-histogram.ts";
import { surfacePoints } from "#shared/volume/surface-points.ts";
import { valueAt } from "#shared/volume/value-at.ts";
import { seeded } from "#test/main/engine/write-store.ts";

const grid: VolumeGrid = {
  size: sizeXyz(90, 80, 70),
  spacing: spacingMm(0.05, 0.04, 0.06),
  origin: pointMm(4, -2, 1),
  direction: [0, 0, 1, 1, 0, 0, 0, 1, 0],
  frame: "LPS",
};

function filled(greyAt: (p: Vec3, x: number, y: number, z: number) => number) {
  const voxels = new Uint16Array(90 * 80 * 70);
  for (let z = 0; z < 70; z++)
    for (let y = 0; y < 80; y++)
      for (let x = 0; x < 90; x++) voxels[(z * 80 + y) * 90 + x] = greyAt(indexToMm(grid, [x, y, z]), x, y, z);
  return memoryPyramid(grid, voxels);
}

describe("The value under the pointer", () => {
  const pyramid = filled((_, x, y, z) => x + 100 * y + 200 * z);

  test("is that of the nearest voxel, as stored", () => {
    for (const [x, y, z] of [
      [0, 0, 0],
      [89, 79, 69],
      [12, 34, 56],
    ] as const) {
      for (const off of [-0.45, 0, 0.45]) {
        expect(valueAt(pyramid, indexToMm(grid, [x + off, y - off, z + off]))).toEqual({
          value: x + 100 * y + 200 * z,
          index: [x, y, z],
        });
      }
    }
  });

  test("is null outside the scan", () => {
    expect(valueAt(pyramid, indexToMm(grid, [-0.6, 3, 3]))).toEqual({ value: null, index: [-1, 3, 3] });
    expect(valueAt(pyramid, indexToMm(grid, [3, 79.6, 3])).value).toBeNull();
  });
});

describe("The histogram of a scan", () => {
  test("counts an even sample: shares of a two-valued scan come out within four standard deviations", () => {
    const random = seeded(4);
    const pyramid = filled(() => (random() < 0.2 ? 3000 : 1000));
    const { counts, min, max, low, high } = scanHistogram(pyramid, { min: 1000, max: 3000 }, 10);
    const total = counts.reduce((a, b) => a + b, 0);
    expect([min, max]).toEqual([1000, 3000]);
    expect(total).toBeGreaterThan(10_000);
    expect(counts.slice(1, 9)).toEqual(new Array(8).fill(0));
    // Binomial share: SD = sqrt(0.2 * 0.8 / n).
    expect(Math.abs(counts[9]! / total - 0.2)).toBeLessThan(4 * Math.sqrt(0.16 / total));
    expect([low, high]).toEqual([1000, 3000]);
  });

  test("of a scan of one value has a display window of some width", () => {
    const { low, high, counts } = scanHistogram(
      filled(() => 500),
      { min: 500, max: 500 },
      4,
    );
    expect(low).toBeLessThan(high);
    expect(counts[0]).toBeGreaterThan(0);
  });
});

describe("Surface points", () => {
  const middle = indexToMm(grid, [44.5, 39.5, 34.5]);
  const ball = (inside: number, outside: number) =>
    filled((p) => {
      const d = Math.hypot(p[0] - middle[0], p[1] - middle[1], p[2] - middle[2]);
      return outside + (inside - outside) * Math.min(1, Math.max(0, (1.2 - d) / 0.1 + 0.5));
    });

  for (const [polarity, inside, outside] of [
    ["bright", 2000, 100],
    ["dark", 100, 2000],
  ] as const)
    test(`of a ${polarity} ball lie on its sphere to within a voxel, all around`, () => {
      const { header, body } = surfacePoints(ball(inside, outside), { limit: 100_000, polarity });
      const points = new Float32Array(body.buffer, body.byteOffset, body.byteLength / 4);
      expect(header.count).toBe(points.length / 3);
      expect(header.count).toBeGreaterThan(3000);
      const octants = new Set<number>();
      for (let n = 0; n < points.length; n += 3) {
        const d = [0, 1, 2].map((c) => points[n + c]! - middle[c]!) as [number, number, number];
        // The threshold lies within the slope, which is 0.1 mm wide; voxels measure 0.04 to 0.06 mm.
        expect(Math.abs(Math.hypot(...d) - 1.2)).toBeLessThan(0.05);
        octants.add((d[0] > 0 ? 1 : 0) + (d[1] > 0 ? 2 : 0) + (d[2] > 0 ? 4 : 0));
      }
      expect(octants.size).toBe(8);
    });

  test("are at most as many as asked for, spread over the whole, none twice, the same every time", () => {
    const pyramid = ball(2000, 100);
    const { header, body } = surfacePoints(pyramid, { limit: 200, polarity: "bright" });
    const points = new Float32Array(body.buffer);
    expect(header.count).toBe(200);
    const places = new Set(Array.from({ length: 200 }, (_, n) => points.slice(3 * n, 3 * n + 3).join()));
    expect(places.size).toBe(200);
    const above = [0, 1, 2].map(
      (c) => Array.from({ length: 200 }, (_, n) => points[3 * n + c]! > middle[c]!).filter(Boolean).length,
    );
    for (const count of above) expect(Math.abs(count - 100)).toBeLessThan(30);
    expect(Buffer.compare(body, surfacePoints(pyramid, { limit: 200, polarity: "bright" }).body)).toBe(0);
  });

  test("of a scan without contrast are none", () => {
    expect(
      surfacePoints(
        filled(() => 7),
        { limit: 10, polarity: "bright" },
      ),
    ).toMatchObject({ header: { count: 0 } });
  });
});
