import { writeFile } from "node:fs/promises";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { lookAtScan, scanInfo } from "#main/intake/scan-info.ts";
import { niftiBytes } from "#test/main/intake/nifti/nifti-by-hand.ts";
import { type HandNrrd, SETTLED, scratchFolder, writeNrrd } from "#test/main/intake/written-by-hand.ts";

const order = (sizes: number[], value: (x: number, y: number, z: number) => number, more: Partial<HandNrrd> = {}): HandNrrd => {
  const [nx, ny, nz] = sizes as [number, number, number];
  const values: number[] = [];
  for (let z = 0; z < nz; z++) for (let y = 0; y < ny; y++) for (let x = 0; x < nx; x++) values.push(value(x, y, z));
  return { sizes, type: "ushort", dtype: "uint16", values, lines: SETTLED, ...more };
};

describe("looking at a scan", () => {
  it("shows its middle slice, at most 512 a side, windowed from dark to bright", async () => {
    const path = await writeNrrd(
      await scratchFolder(),
      "a.nrrd",
      order([1100, 20, 3], (x, _y, z) => (z === 1 ? x : 0)),
    );
    const { slice, info, histogram } = await lookAtScan(path);
    expect([slice.width, slice.height]).toEqual([367, 7]); // every third voxel
    const pixels = Buffer.from(slice.data, "base64");
    expect(pixels).toHaveLength(367 * 7);
    const row = [...pixels.subarray(0, 367)];
    expect(row[0]).toBe(0);
    expect(row[366]).toBe(255);
    expect(row).toEqual([...row].sort((a, b) => a - b));
    expect(info.range).toEqual({ min: 0, max: 1099, sampled: false });
    expect(histogram.counts).toHaveLength(256);
    expect(histogram.counts.reduce((a, b) => a + b, 0)).toBe(1100 * 20 * 3);
  });

  it("says what intake would convert", async () => {
    const folder = await scratchFolder();
    const scan = order([4, 4, 4], (x) => x, { type: "int", dtype: "int32" });
    expect((await lookAtScan(await writeNrrd(folder, "b.nrrd", scan))).conversions.join()).toMatch(/int32 are kept as int16/);
    expect(
      (
        await lookAtScan(
          await writeNrrd(
            folder,
            "c.nrrd",
            order([4, 4, 4], (x) => x),
          ),
        )
      ).conversions,
    ).toEqual([]);
  });

  it("of more than 128 MB takes a sample of slices and says so, and knows no type that all values would decide", async () => {
    const path = join(await scratchFolder(), "big.nrrd");
    const header = `NRRD0004\ntype: int\ndimension: 3\nsizes: 600 600 100\nendian: little\nencoding: raw\n${SETTLED.join("\n")}\n\n`;
    const body = Buffer.alloc(600 * 600 * 100 * 4);
    body.writeInt32LE(70000, body.length - 4);
    await writeFile(path, Buffer.concat([Buffer.from(header), body]));
    const { info, conversions } = await lookAtScan(path);
    expect(info.range).toEqual({ min: 0, max: 70000, sampled: true }); // the last slice is always looked at
    expect(conversions.join()).toMatch(/will be kept as int16, uint16 or float32/);
  });

  it("of several time points and channels is at the first, says how many there are, and goes to the chosen one", async () => {
    const sizes = [4, 3, 2, 3, 2];
    const values = Array.from({ length: 4 * 3 * 2 * 3 * 2 }, (_, k) => k);
    const path = join(await scratchFolder(), "several.nii");
    await writeFile(path, niftiBytes({ sizes, dtype: "uint16", values }));
    const first = await lookAtScan(path);
    expect([first.readings, first.info.range.min]).toEqual([{ channels: 2, times: 3 }, 0]);
    // Volumes follow each other: time points first, then channels, 24 voxels each.
    const chosen = await lookAtScan(path, { choice: { time: 2, channel: 1 } });
    expect([chosen.readings, chosen.info.range.min]).toEqual([{ channels: 2, times: 3 }, 24 * (3 + 2)]);
    await expect(lookAtScan(path, { choice: { time: 3 } })).rejects.toThrow(/time point from 0 to 2/);
    // A person has to choose before it is taken in; the command line's info asks as well.
    await expect(scanInfo(path)).rejects.toThrow(/--time 0 to 2/);
  });
});
