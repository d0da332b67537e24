import { mkdir, symlink, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { openScan } from "#main/intake/open-scan.ts";
import { scanInfo } from "#main/intake/scan-info.ts";
import { fuzzFile } from "#test/main/intake/fuzz.ts";
import { gatherVoxels } from "#test/main/intake/gather-voxels.ts";
import { bmpBytes, crcOf, type HandBmp, type HandPng, pngBytes } from "#test/main/intake/slice-folder/pictures-by-hand.ts";
import { tiffBytes } from "#test/main/intake/tiff-by-hand.ts";
import { scratchFolder, seeded } from "#test/main/intake/written-by-hand.ts";
import { readWithItk, writeWithItk } from "#test/main/intake/written-by-itk.ts";

const [W, H] = [5, 4];
const noise = (seed: number, most: number) => {
  const random = seeded(seed);
  return Array.from({ length: W * H }, () => Math.floor(random() * most));
};
const tiff = (values: readonly number[], dtype = "uint8") => tiffBytes({ width: W, height: H, pages: [values], dtype });
const png = (values: readonly number[], more: Partial<HandPng> = {}) => pngBytes({ width: W, height: H, values, ...more });
const bmp = (values: readonly number[], more: Partial<HandBmp> = {}) => bmpBytes({ width: W, height: H, values, ...more });

async function folderOf(files: Record<string, Uint8Array>): Promise<string> {
  const folder = join(await scratchFolder(), "slices");
  await mkdir(folder);
  for (const [name, bytes] of Object.entries(files)) await writeFile(join(folder, name), bytes);
  return folder;
}

async function voxelsOf(path: string): Promise<number[]> {
  const source = await openScan(path);
  try {
    return await gatherVoxels(source);
  } finally {
    await source.close();
  }
}

const A = noise(1, 256);
const B = noise(2, 256);
const C = noise(3, 256);

describe("a folder of slices", () => {
  it("is read in the natural order of its numbers, whatever their digits", async () => {
    const slices = Array.from({ length: 12 }, (_, k) => noise(k, 256));
    for (const [ending, write] of [
      ["tif", tiff],
      ["png", png],
      ["bmp", bmp],
    ] as const) {
      const files = Object.fromEntries(slices.map((values, k) => [`HB-07 rec${k + 1}.${ending}`, write(values)]));
      const folder = await folderOf({ ...files, "scan.log": Buffer.from("notes"), ".hidden": Buffer.from("x") });
      await mkdir(join(folder, "inside"));
      const source = await openScan(folder);
      expect(source.header).toMatchObject({
        family: `${ending === "tif" ? "TIFF" : ending.toUpperCase()} slices`,
        size: [W, H, 12],
      });
      expect(await gatherVoxels(source)).toEqual(slices.flat());
      expect(await gatherVoxels(source, 9, 11)).toEqual([...slices[9]!, ...slices[10]!]);
      const before = await source.fingerprint();
      await writeFile(join(folder, `HB-07 rec4.${ending}`), write(A));
      expect(await source.fingerprint()).not.toBe(before);
    }
  });

  it("says what it knows of the voxel size, and that the distance of slices is not known", async () => {
    const resolution = [250, 250, 3] as const; // pixels per centimetre: 0.04 mm
    const page = tiffBytes({ width: W, height: H, pages: [A], dtype: "uint8", resolution });
    for (const one of [page, png(A, { perMetre: [25000, 25000] }), bmp(A, { perMetre: [25000, 25000] })]) {
      const info = await scanInfo(await folderOf({ "a1.x": one, "a2.x": one }));
      expect(info.spacing).toBeNull();
      expect(info.warnings.map((w) => w.code)).toEqual(["no-spacing", "no-frame"]);
      expect(info.warnings[0]!.message).toMatch(/0\.04 x 0\.04 mm within a slice, and no distance between slices/);
    }
    const bare = await scanInfo(await folderOf({ "a1.x": png(A), "a2.x": png(B) }));
    expect(bare.warnings.map((w) => w.code)).toEqual(["no-unit", "no-spacing", "no-frame"]);
  });

  it("with a gap in its numbers, or a number twice, is refused by naming it", async () => {
    const gap = await folderOf({ "s08.png": png(A), "s09.png": png(A), "s11.png": png(A), "s12.png": png(A) });
    await expect(openScan(gap)).rejects.toThrow(
      /expected slices numbered without gaps, found no number 10 between s09\.png and s11\.png/,
    );
    const twice = await folderOf({ "s1.png": png(A), "s01.png": png(A), "s2.png": png(A) });
    await expect(openScan(twice)).rejects.toThrow(/number of its own.*s01\.png and s1\.png|s1\.png and s01\.png/);
  });

  it("numbered in even steps is taken as neighbours, and says so", async () => {
    const folder = await folderOf({ "s10.png": png(A), "s20.png": png(B), "s30.png": png(C) });
    const source = await openScan(folder);
    expect(await gatherVoxels(source)).toEqual([...A, ...B, ...C]);
    expect(source.header.notes.join()).toMatch(/steps of 10/);
  });

  it("with a slice of another size, type, kind or name is refused by naming it", async () => {
    const slices = { "s1.png": png(A), "s2.png": png(B) };
    const size = await folderOf({ ...slices, "s3.png": pngBytes({ width: 4, height: 5, values: C }) });
    await expect(openScan(size)).rejects.toThrow(/s3\.png: expected 5 x 4 uint8 as in s1\.png, found 4 x 5 uint8/);
    const type = await folderOf({ ...slices, "s3.png": png(C, { bits: 16 }) });
    await expect(openScan(type)).rejects.toThrow(/s3\.png.*found 5 x 4 uint16/);
    const kind = await folderOf({ ...slices, "s3.bmp": bmp(C) });
    await expect(openScan(kind)).rejects.toThrow(/one kind of slices, found 2 PNG \(s1\.png \.\.\.\), 1 BMP/);
    const name = await folderOf({ ...slices, "preview1.png": png(C) });
    await expect(openScan(name)).rejects.toThrow(/names that differ in one number, such as s1\.png, found preview1\.png/);
    const preview = await folderOf({ ...slices, "s_preview.png": png(C) });
    await expect(openScan(preview)).rejects.toThrow(/such as s1\.png, found s_preview\.png\. Move what is no slice/);
    const two = await folderOf({ "a1-1.png": png(A), "a1-2.png": png(A), "a2-1.png": png(A), "a2-2.png": png(A) });
    await expect(openScan(two)).rejects.toThrow(/names that differ in one number, found a1-1\.png and a2-2\.png/);
    await expect(openScan(await folderOf({ "a.png": png(A), "b.png": png(B) }))).rejects.toThrow(/names with a number/);
  });

  it("of one file, or none, says so; one slice's file points to its folder", async () => {
    await expect(openScan(await folderOf({ "a1.png": png(A) }))).rejects.toThrow(/many slices, found one PNG file/);
    const folder = await folderOf({ "a1.png": png(A), "a2.png": png(A) });
    await expect(openScan(join(folder, "a1.png"))).rejects.toThrow(
      /found a PNG picture\. Choose the folder that holds the slices/,
    );
    const pages = await folderOf({
      "a1.tif": tiff(A),
      "a2.tif": tiffBytes({ width: W, height: H, pages: [A, B], dtype: "uint8" }),
    });
    await expect(openScan(pages)).rejects.toThrow(/a2\.tif.*one page a file.*found 2 pages/);
    await expect(openScan(join(pages, "a1.tif"))).rejects.toThrow(/choose their folder/);
  });

  it("may hold links to its slices", async () => {
    const there = await folderOf({ "x.png": png(A), "y.png": png(B) });
    const folder = await folderOf({});
    await symlink(join(there, "y.png"), join(folder, "s1.png"));
    await symlink(join(there, "x.png"), join(folder, "s2.png"));
    await symlink(join(there, "gone.png"), join(folder, "s3.png"));
    expect(await voxelsOf(folder)).toEqual([...B, ...A]);
  });

  it("of 16-bit, signed and float TIFF pages, and of BigTIFF, gives their values", async () => {
    for (const [dtype, values] of [
      ["uint16", noise(5, 65536)],
      ["int16", noise(6, 65536).map((v) => v - 32768)],
      ["float32", noise(7, 1000).map((v) => v / 8)],
    ] as const)
      for (const big of [false, true]) {
        const page = tiffBytes({ width: W, height: H, pages: [values], dtype, big, little: big });
        expect(await voxelsOf(await folderOf({ "s1.tif": page, "s2.tif": page }))).toEqual([...values, ...values]);
      }
  });
});

describe("a PNG slice", () => {
  it.each([8, 16])("of %i bits gives its values under every row filter and split into chunks", async (bits) => {
    const values = noise(9, 2 ** bits);
    const other = values.map((v) => 2 ** bits - 1 - v);
    for (const filters of [[0], [1], [2], [3], [4], [4, 3, 2, 1]])
      for (const chunk of [undefined, 7]) {
        const form = { bits, filters, ...(chunk ? { chunk } : {}) };
        const folder = await folderOf({ "s1.png": png(values, form), "s2.png": png(other, form) });
        expect(await voxelsOf(folder)).toEqual([...values, ...other]);
      }
  });

  it.each(["uint8", "uint16"] as const)("written by an independent library as %s gives its values", async (dtype) => {
    const folder = await folderOf({});
    const data = (dtype === "uint8" ? Uint8Array : Uint16Array).from(noise(4, dtype === "uint8" ? 256 : 65536));
    const image = { size: [W, H, 1], spacing: [0.04, 0.04, 0.04], dtype, data } as const;
    for (const name of ["s1.png", "s2.png"])
      await writeWithItk(join(folder, name), { ...image, size: [W, H, 1], spacing: [0.04, 0.04, 0.04] }, false);
    expect(await voxelsOf(folder)).toEqual([...data, ...data]);
  });

  it.each([
    ["colours", { colour: 2 }, /one grey value per voxel, found colours/],
    ["a palette", { colour: 3 }, /a colour palette/],
    ["transparency", { colour: 4 }, /grey with transparency/],
    ["1 bit", { bits: 1 }, /8 or 16 bits a voxel, found 1/],
    ["interlacing", { interlace: 1 }, /interlaced/],
    ["a filter that is none", { filters: [0, 7] }, /row filter from 0 to 4.*row 2|row 2/],
  ] as [string, Partial<HandPng>, RegExp][])("with %s is refused by a clear sentence", async (_, more, sentence) => {
    const folder = await folderOf({ "s1.png": png(A, more), "s2.png": png(B, more) });
    await expect(voxelsOf(folder)).rejects.toThrow(sentence);
  });

  it("whose size lies is refused before anything is unpacked", async () => {
    const lying = png(A);
    const folder = await folderOf({ "s1.png": lying, "s2.png": lying });
    lying.writeUInt32BE(20000, 16);
    lying.writeUInt32BE(20000, 20);
    await writeFile(join(folder, "s1.png"), lying);
    await expect(openScan(folder)).rejects.toThrow(/s1\.png.*expected a header with its check sum, found damaged bytes/);
    lying.writeUInt32BE(crcOf(lying.subarray(12, 29)), 29);
    await writeFile(join(folder, "s1.png"), lying);
    await expect(openScan(folder)).rejects.toThrow(/s1\.png.*expected 400020000 bytes of rows.*cannot hold them/);
  });

  it("mutated or truncated anywhere gives a typed error or a scan, never anything else", async () => {
    for (const bits of [8, 16]) {
      const whole = png(noise(3, 2 ** bits), { bits, filters: [1, 2, 3, 4], perMetre: [25000, 25000], chunk: 20 });
      const folder = await folderOf({ "s1.png": whole, "s2.png": whole });
      const found = await fuzzFile({
        path: join(folder, "s2.png"),
        open: folder,
        whole,
        headerBytes: whole.length,
        turns: 120,
        seed: bits,
      });
      expect(found.refused).toBeGreaterThan(40);
      expect(found.read).toBeGreaterThan(2);
    }
  });
});

describe("a BMP slice", () => {
  it("gives its values from the bottom up, from the top down, and with the old header, as an independent reader does", async () => {
    for (const form of [{}, { topDown: true }, { core: true }]) {
      const folder = await folderOf({ "s1.bmp": bmp(A, form), "s2.bmp": bmp(B, form) });
      expect(await voxelsOf(folder)).toEqual([...A, ...B]);
      if ("core" in form) continue;
      const { data } = await readWithItk(join(folder, "s1.bmp")); // it gives red, green, blue
      expect(data.filter((_, k) => k % 3 === 0)).toEqual(A);
    }
  });

  it("with a palette of greys in another order gives the greys, not the numbers", async () => {
    const palette = Array.from({ length: 100 }, (_, k) => [255 - k, 255 - k, 255 - k] as const);
    const numbers = A.map((v) => v % 100);
    const folder = await folderOf({ "s1.bmp": bmp(numbers, { palette }), "s2.bmp": bmp(numbers, { palette }) });
    expect(await voxelsOf(folder)).toEqual([...numbers, ...numbers].map((k) => 255 - k));
    const beyond = await folderOf({
      "s1.bmp": bmp(numbers, { palette }),
      "s2.bmp": bmp(
        A.map(() => 200),
        { palette },
      ),
    });
    await expect(voxelsOf(beyond)).rejects.toThrow(/s2\.bmp.*numbers below 100.*found 200/);
  });

  it.each([
    ["a colour in its palette", { palette: [[1, 2, 3]] }, /palette of greys, found the colour 1, 2, 3 as number 0/],
    ["24 bits", { bits: 24 }, /8 bits a voxel, found 24/],
    ["compression", { compression: 1 }, /no compression, found compression 1/],
  ] as [string, Partial<HandBmp>, RegExp][])("with %s is refused by a clear sentence", async (_, more, sentence) => {
    await expect(openScan(await folderOf({ "s1.bmp": bmp(A, more), "s2.bmp": bmp(B, more) }))).rejects.toThrow(sentence);
  });

  it("mutated or truncated anywhere gives a typed error or a scan, never anything else", async () => {
    const whole = bmp(A);
    const folder = await folderOf({ "s1.bmp": whole, "s2.bmp": whole });
    const found = await fuzzFile({ path: join(folder, "s2.bmp"), open: folder, whole, headerBytes: 54, turns: 100, seed: 8 });
    expect(found.refused).toBeGreaterThan(50);
    expect(found.read).toBeGreaterThan(5);
  });
});
