import { open, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { gzipSync } from "node:zlib";
import { describe, expect, it } from "vitest";
import { openScan } from "#main/intake/open-scan.ts";
import { scanInfo } from "#main/intake/scan-info.ts";
import { indexToMm } from "#shared/volume/grid.ts";
import { gridOf } from "#shared/volume/scan-header.ts";
import { fuzzFile } from "#test/main/intake/fuzz.ts";
import { gatherVoxels } from "#test/main/intake/gather-voxels.ts";
import { type HandNifti, niftiBytes } from "#test/main/intake/nifti/nifti-by-hand.ts";
import { bytesOf, scratchFolder } from "#test/main/intake/written-by-hand.ts";
import { type ItkImage, readWithItk, writeWithItk } from "#test/main/intake/written-by-itk.ts";

const SAMPLES = {
  int8: [-128, 127],
  uint8: [0, 255],
  int16: [-32768, 32767],
  uint16: [0, 258, 65535],
  int32: [-2147483648, 7],
  uint32: [0, 4294967295],
  int64: [-9007199254740991, 3],
  uint64: [0, 9007199254740991],
  float32: [-1.5, 2 ** 35],
  float64: [-1e300, 0.1],
} as const;
const VALUES = Array.from({ length: 24 }, (_, k) => k * 1000);
const order = (more: Partial<HandNifti> = {}): HandNifti => ({ sizes: [2, 3, 4], dtype: "uint16", values: VALUES, ...more });

async function written(bytes: Uint8Array, name = "a.nii"): Promise<string> {
  const path = join(await scratchFolder(), name);
  await writeFile(path, bytes);
  return path;
}

async function voxelsOf(path: string, choice = {}): Promise<number[]> {
  const source = await openScan(path, choice);
  try {
    return await gatherVoxels(source);
  } finally {
    await source.close();
  }
}

describe("a NIfTI-1 scan", () => {
  it.each(Object.entries(SAMPLES))("of type %s gives its values in both byte orders, plain and gzip", async (dtype, sample) => {
    const values = Array.from({ length: 24 }, (_, k) => sample[k % sample.length]!);
    for (const little of [true, false])
      for (const gzip of [true, false]) {
        const bytes = niftiBytes(order({ dtype, values, little }));
        const path = await written(gzip ? gzipSync(bytes) : bytes, gzip ? "a.nii.gz" : "a.nii");
        const source = await openScan(path);
        expect(source.header.dtype).toBe(dtype);
        expect(await gatherVoxels(source)).toEqual(values);
        expect(await gatherVoxels(source, 1, 3)).toEqual(values.slice(6, 18));
        await source.close();
      }
  });

  it("written by an independent library has its values, its place in LPS and millimetres", async () => {
    const folder = await scratchFolder();
    const data = Int16Array.from({ length: 60 }, (_, k) => (k * 37) % 128);
    const image: ItkImage = { size: [5, 4, 3], spacing: [0.04, 0.05, 0.06], origin: [1, -2, 3], dtype: "int16", data };
    for (const direction of [
      [1, 0, 0, 0, 1, 0, 0, 0, 1],
      [0, -1, 0, 1, 0, 0, 0, 0, 1],
      [-1, 0, 0, 0, 1, 0, 0, 0, 1], // mirrored: the quaternion cannot say it, qfac must
    ])
      for (const name of ["a.nii", "a.nii.gz"]) {
        const path = join(folder, name);
        await writeWithItk(path, { ...image, direction }, name.endsWith("gz"));
        expect(await voxelsOf(path)).toEqual(Array.from(data));
        const { header } = await openScan(path);
        expect(header).toMatchObject({
          origin: [1, -2, 3],
          headerSpacing: [0.04, 0.05, 0.06],
          frame: "LPS",
          unit: "mm",
          notes: [],
        });
        for (const [k, value] of header.direction.entries()) expect(value).toBeCloseTo(direction[k]!, 6);
      }
  });

  // xyzt_units: 0 unknown, 2 millimetres, 3 micrometres; times are in higher bits (nifti1.h).
  it.each([
    [0, null, null, ["no-unit", "no-frame"]],
    [2, "mm", [40, 40, 40], ["spacing-range", "no-frame"]], // sides of 80, 120 and 160 mm lie within 5-200
    [3, "um", [0.04, 0.04, 0.04], ["size-range", "no-frame"]],
    [3 + 8, "um", [0.04, 0.04, 0.04], ["size-range", "no-frame"]],
  ])("with xyzt_units %i takes its voxel size for what it is, and guesses nothing", async (xyzt, unit, spacing, codes) => {
    const info = await scanInfo(await written(niftiBytes(order({ xyzt, pixdim: [1, 40, 40, 40] }))));
    expect(info).toMatchObject({ headerSpacing: [40, 40, 40], unit, spacing });
    expect(info.warnings.map((w) => w.code)).toEqual(codes);
  });

  it("gives the spacing that was typed, not its nearest 32-bit float", async () => {
    const info = await scanInfo(await written(niftiBytes(order({ pixdim: [1, 0.04, 0.0123, 0.7] }))));
    expect(info.headerSpacing).toEqual([0.04, 0.0123, 0.7]);
  });

  it("is turned from RAS to LPS by its affine, as an independent reader does, its centre at the affine's offset", async () => {
    // A scan whose x runs to anterior, y to the left and z to superior.
    const affine = [0, -0.05, 0, 7, 0.04, 0, 0, -8, 0, 0, 0.06, 9];
    const path = await written(niftiBytes(order({ sform: [1, affine], pixdim: [1, 0.04, 0.05, 0.06] })));
    const { header } = await openScan(path);
    const other = await readWithItk(path);
    expect(header.frame).toBe("LPS");
    expect(header.origin).toEqual([-7, 8, 9]);
    expect(header.origin).toEqual(other.origin);
    for (const [k, value] of header.direction.entries()) expect(value).toBeCloseTo(other.direction[k]!, 6);
    const grid = gridOf(header, [0.04, 0.05, 0.06]);
    expect(indexToMm(grid, [0, 0, 0])).toEqual([-7, 8, 9]);
    // By hand: voxel (1, 0, 0) is 0.04 anterior of (-8): y = -7.96 in RAS, 7.96 in LPS; voxel (0, 1, 0) is 0.05 to the left.
    expect(indexToMm(grid, [1, 0, 0])[1]).toBeCloseTo(7.96, 9);
    expect(indexToMm(grid, [0, 1, 0])[0]).toBeCloseTo(-6.95, 9);
  });

  it("is turned by its quaternion where it has no affine, mirrored where qfac says so", async () => {
    const half = Math.SQRT1_2;
    for (const qfac of [1, -1]) {
      const path = await written(niftiBytes(order({ qform: [1, 0, 0, half, 1, 2, 3], pixdim: [qfac, 0.04, 0.04, 0.04] })));
      const { header } = await openScan(path);
      const other = await readWithItk(path);
      expect(header.origin).toEqual([-1, -2, 3]);
      for (const [k, value] of header.direction.entries()) expect(value).toBeCloseTo(other.direction[k]!, 6);
      expect(header.direction[8]).toBe(qfac);
    }
  });

  it("without an orientation keeps its own axes and says so", async () => {
    const { header } = await openScan(await written(niftiBytes(order())));
    expect(header).toMatchObject({ frame: "scan", origin: [0, 0, 0], direction: [1, 0, 0, 0, 1, 0, 0, 0, 1] });
  });

  it("says where its two orientations differ, its pixdim contradicts its affine, or values are scaled", async () => {
    const sform = [2, [0.08, 0, 0, 0, 0, 0.08, 0, 0, 0, 0, 0.08, 0]] as const;
    const { header } = await openScan(await written(niftiBytes(order({ sform, qform: [1, 0, 0, 1, 0, 0, 0], scale: [2, -5] }))));
    expect(header.headerSpacing).toEqual([0.08, 0.08, 0.08]);
    expect(header.notes.join(" ")).toMatch(/differ; sform is taken.*pixdim says 0\.04.*slope 2, intercept -5\) is not applied/);
  });

  it("of several time points asks for one, and reads it", async () => {
    const values = Array.from({ length: 72 }, (_, k) => k);
    const bytes = niftiBytes(order({ sizes: [2, 3, 4, 3], values }));
    for (const name of ["a.nii", "a.nii.gz"]) {
      const path = await written(name.endsWith("gz") ? gzipSync(bytes) : bytes, name);
      await expect(openScan(path)).rejects.toThrow(/expected one time point, found 3.*--time 0 to 2/);
      await expect(openScan(path, { time: 3 })).rejects.toThrow(/number 3 of 3/);
      expect(await voxelsOf(path, { time: 1 })).toEqual(values.slice(24, 48));
    }
  });

  it("in two files is read by its header's name", async () => {
    const folder = await scratchFolder();
    await writeFile(join(folder, "a.hdr"), niftiBytes(order({ pair: true, little: false })));
    await expect(openScan(join(folder, "a.hdr"))).rejects.toThrow(/a\.img.*nothing under this name/);
    await writeFile(join(folder, "a.img"), bytesOf(VALUES, "uint16", false));
    expect(await voxelsOf(join(folder, "a.hdr"))).toEqual(VALUES);
    await writeFile(join(folder, "b.hdr"), niftiBytes(order({ pair: true })));
    await writeFile(join(folder, "b.img.gz"), gzipSync(bytesOf(VALUES, "uint16", true)));
    expect(await voxelsOf(join(folder, "b.hdr"))).toEqual(VALUES);
  });

  it("whose voxels begin beyond 4 GiB is read there (a sparse file)", async () => {
    const at = 2 ** 32 + 2 ** 24; // a 32-bit float holds it exactly
    const path = await written(niftiBytes(order()).subarray(0, 352));
    const file = await open(path, "r+");
    const offset = Buffer.alloc(4);
    offset.writeFloatLE(at);
    await file.write(offset, 0, 4, 108);
    await file.write(bytesOf(VALUES, "uint16", true), 0, 48, at);
    await file.close();
    expect(await voxelsOf(path)).toEqual(VALUES);
  });

  it.each([
    ["a side the format cannot say", { sizes: [-25536, 3, 4] }, /sides from 1 to 32767 .*found -25536 x 3 x 4/],
    ["two axes", { sizes: [6, 4] }, /3 to 7 axes, found 2/],
    ["voxels inside its header", { voxOffset: 348 }, /byte 352 or later/],
    ["a sheared affine", { sform: [1, [0.04, 0.02, 0, 0, 0, 0.04, 0, 0, 0, 0, 0.04, 0]] }, /right angles/],
    ["an affine without extent", { sform: [1, [0, 0, 0, 0, 0, 0.04, 0, 0, 0, 0, 0.04, 0]] }, /spans space/],
    ["a quaternion that is too long", { qform: [1, 1, 1, 1, 0, 0, 0] }, /quaternion/],
    ["sizes that lie", { sizes: [200, 300, 400] }, /expected 48000000 bytes of voxels as the header says, found 48 bytes/],
  ] as [string, Partial<HandNifti>, RegExp][])("with %s is refused by a clear sentence", async (_, more, sentence) => {
    await expect(openScan(await written(niftiBytes(order(more))))).rejects.toThrow(sentence);
  });

  it("of colours, of version 2 or cut short is refused", async () => {
    const colours = niftiBytes(order());
    colours.writeInt16LE(128, 70);
    await expect(openScan(await written(colours))).rejects.toThrow(/datatype 128/);
    const two = Buffer.alloc(600);
    two.writeInt32LE(540, 0);
    two.write("n+2\0\r\n\x1a\n", 4, "latin1");
    await expect(openScan(await written(two))).rejects.toThrow(/NIfTI-2/);
    const whole = niftiBytes(order());
    await expect(openScan(await written(whole.subarray(0, whole.length - 1)))).rejects.toThrow(/found 47 bytes/);
    const noise = gzipSync(niftiBytes(order({ values: VALUES.map((v) => (v * 40503) % 65536) })));
    await expect(scanInfo(await written(noise.subarray(0, noise.length - 20), "a.nii.gz"))).rejects.toThrow(
      /one that ends early/,
    );
    await expect(openScan(await written(gzipSync(Buffer.from("no scan")), "a.nii.gz"))).rejects.toThrow(/found a gzip file/);
  });

  it("mutated or truncated anywhere gives a typed error or a scan, never anything else", async () => {
    const folder = await scratchFolder();
    const sform = [1, [0.04, 0, 0, 1, 0, 0.04, 0, 2, 0, 0, 0.04, 3]] as const;
    const plain = niftiBytes(order({ sform, qform: [1, 0, 0, 0, 1, 2, 3] }));
    for (const [k, whole] of [plain, gzipSync(plain)].entries()) {
      const found = await fuzzFile({ path: join(folder, "f.nii"), whole, headerBytes: 352, turns: 200, seed: 5 + k });
      expect(found.refused).toBeGreaterThan(40);
      expect(k === 1 || found.read > 20).toBe(true);
    }
  });
});
