import { readdirSync, readFileSync, truncateSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { openStorePyramid } from "#main/engine/store-reader.ts";
import { sourceFromSlabs } from "#main/intake/generated-source.ts";
import { makeSpecimen } from "#main/intake/make-specimen.ts";
import { isTautlineError } from "#shared/errors.ts";
import { pointMm, sizeXyz, spacingMm } from "#shared/geometry/types.ts";
import { bricksOf } from "#shared/volume/bricks.ts";
import { createStored, type StoredDtype } from "#shared/volume/dtype.ts";
import { plainGrid, type VolumeGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";
import { section } from "#shared/volume/section.ts";
import { scratchFolder, seeded, writeSpecimen } from "#test/main/engine/write-store.ts";

const grid: VolumeGrid = {
  size: sizeXyz(101, 67, 130),
  spacing: spacingMm(0.04, 0.05, 0.03),
  origin: pointMm(1, 2, 3),
  direction: [0, 1, 0, -1, 0, 0, 0, 0, 1],
  frame: "LPS",
};

function noise(dtype: StoredDtype, seed: number) {
  const random = seeded(seed);
  const voxels = createStored(dtype, 101 * 67 * 130);
  for (let n = 0; n < voxels.length; n++) {
    voxels[n] = dtype === "float32" ? random() - 0.5 : Math.floor(random() * 250) - (dtype === "int16" ? 120 : 0);
  }
  return voxels;
}

describe("A store opened as a pyramid", () => {
  let scratch: ReturnType<typeof scratchFolder>;
  beforeAll(() => {
    scratch = scratchFolder();
  });
  afterAll(() => scratch.remove());

  for (const dtype of ["uint8", "uint16", "int16", "float32"] as const)
    test(`gives the ${dtype} voxels that an independent writer put there, at every level, also beyond the edges`, () => {
      const voxels = noise(dtype, 5);
      const { folder } = writeSpecimen(scratch.path, `spec-${dtype}`, grid, voxels);
      const expected = memoryPyramid(grid, voxels);
      // A cache of 16 bricks, so that boxes are read in several batches and bricks are evicted.
      const pyramid = openStorePyramid(folder, 16 * 65536);
      expect(pyramid.levels).toEqual(expected.levels);
      const random = seeded(6);
      for (let round = 0; round < 40; round++) {
        const level = Math.floor(random() * expected.levels.length);
        const pick = (axis: 0 | 1 | 2) => Math.floor(random() * (expected.levels[level]!.size[axis] + 40)) - 30;
        const start: [number, number, number] = [pick(0), pick(1), pick(2)];
        const size: [number, number, number] = [
          1 + Math.floor(random() * 60),
          1 + Math.floor(random() * 50),
          1 + Math.floor(random() * 70),
        ];
        const a = new Float32Array(size[0] * size[1] * size[2]);
        const b = new Float32Array(a.length);
        pyramid.readBoxInto(level, start, size, a);
        expected.readBoxInto(level, start, size, b);
        expect(Buffer.compare(Buffer.from(a.buffer), Buffer.from(b.buffer))).toBe(0);
      }
      pyramid.close();
    });

  test("shows the same section as the same scan in memory, with float32 bricks of half a chunk", () => {
    const voxels = noise("float32", 9);
    const { folder } = writeSpecimen(scratch.path, "spec-same", grid, voxels);
    const pyramid = openStorePyramid(folder, 32 * 65536);
    const plane = { origin: pointMm(0, 0, 2), u: [0.02, 0.01, 0.011], v: [-0.012, 0.02, 0.01], width: 300, height: 200 } as const;
    const request = { plane, slabMm: 0.1, slabMode: "mean", low: -0.5, high: 0.5, quality: "still" } as const;
    const found = section(pyramid, request).body;
    expect(Buffer.compare(found, section(bricksOf(memoryPyramid(grid, voxels)), request).body)).toBe(0);
    expect(found.some((value) => value > 0)).toBe(true);
    pyramid.close();
  });

  test("reads what the program's own intake writes", async () => {
    const plain = plainGrid([101, 67, 130], [0.04, 0.05, 0.03]);
    const voxels = noise("uint16", 13);
    const source = sourceFromSlabs("made", plain, "uint16", (z0, z1, out) => {
      out.set(voxels.subarray(z0 * 101 * 67, z1 * 101 * 67));
    });
    const id = "abcdefghijklmnopqrst";
    await makeSpecimen(source, {
      library: scratch.path,
      id,
      name: "HB-07",
      created: 0,
      spacing: plain.spacing,
      handedness: "unknown",
      facts: {},
      synthetic: true,
    });
    const pyramid = openStorePyramid(join(scratch.path, "specimens", id));
    const expected = memoryPyramid(plain, voxels);
    for (const { level, size } of pyramid.levels) {
      const found = new Float32Array(size[0] * size[1] * size[2]);
      pyramid.readBoxInto(level, [0, 0, 0], size, found);
      expect(found.every((value, n) => value === expected.arrays[level]![n])).toBe(true);
    }
    pyramid.close();
  });

  test("names the damaged file when a shard is cut short, its index is wrong or it is missing", () => {
    const { folder } = writeSpecimen(scratch.path, "spec-damaged", grid, noise("uint8", 3));
    const shard = join(folder, "scan.ome.zarr", "0", "c", "0", "0", "0");
    const whole = readFileSync(shard);
    const read = () => {
      const pyramid = openStorePyramid(folder);
      try {
        // In the last chunk of the shard.
        pyramid.readBoxInto(0, [97, 65, 40], [2, 2, 2], new Float32Array(8));
      } finally {
        pyramid.close();
      }
    };
    const failure = () => {
      try {
        read();
      } catch (error) {
        expect(isTautlineError(error, "unreadable-input")).toBe(true);
        expect((error as Error).message).toContain(shard);
        return (error as Error).message;
      }
      throw new Error("a damaged store was read");
    };
    truncateSync(shard, 3000);
    expect(failure()).toContain("8196");
    writeFileSync(shard, whole.subarray(20_000));
    expect(failure()).toContain("chunk");
    const flipped = Buffer.from(whole);
    flipped[flipped.length - 100]! ^= 1;
    writeFileSync(shard, flipped);
    expect(failure()).toContain("checksum");
    writeFileSync(shard, whole);
    read();
    expect(() => openStorePyramid(join(scratch.path, "nothing-here"))).toThrow(/specimen/);
    expect(readdirSync(folder)).toContain("specimen.json");
  });
});
