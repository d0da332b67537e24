import { writeFile } from "node:fs/promises";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { openScan } from "#main/intake/open-scan.ts";
import { scanInfo } from "#main/intake/scan-info.ts";
import { gatherVoxels } from "#test/main/intake/gather-voxels.ts";
import { type HandTiff, tiffBytes } from "#test/main/intake/tiff-by-hand.ts";
import { scratchFolder, seeded } from "#test/main/intake/written-by-hand.ts";
import { writeWithItk } from "#test/main/intake/written-by-itk.ts";

const SAMPLES: Record<string, readonly number[]> = {
  uint8: [0, 7, 255, 254],
  int8: [-128, -1, 3, 127],
  uint16: [0, 65535, 258, 12000],
  int16: [-32768, 32767, -2, 9],
  uint32: [0, 4294967295, 70000],
  int32: [-2147483648, 2147483647, 5],
  float32: [-1.5, 0, 2 ** 30, 0.25],
  float64: [-1e200, 0.1, 3],
};

function pagesOf(dtype: string, width: number, height: number, count: number): number[][] {
  const sample = SAMPLES[dtype]!;
  return Array.from({ length: count }, (_, z) =>
    Array.from({ length: width * height }, (_, k) => sample[(k + z + Math.floor(k / width)) % sample.length]!),
  );
}

async function writeTiff(tiff: HandTiff): Promise<string> {
  const path = join(await scratchFolder(), "a.tif");
  await writeFile(path, tiffBytes(tiff));
  return path;
}

async function voxelsOf(path: string): Promise<number[]> {
  const source = await openScan(path);
  try {
    return await gatherVoxels(source);
  } finally {
    await source.close();
  }
}

describe("a multi-page TIFF", () => {
  const forms: [string, Partial<HandTiff>][] = [
    ["one strip a page", {}],
    ["strips of 3 rows", { rowsPerStrip: 3 }],
    ["tiles of 16", { tile: 16 }],
    ["deflate strips", { rowsPerStrip: 4, compression: 8 }],
    ["deflate tiles", { tile: 16, compression: 8 }],
    ["LZW strips", { rowsPerStrip: 4, compression: 5 }],
    ["PackBits strips", { rowsPerStrip: 5, compression: 32773 }],
    ["64-bit offsets", { big: true, rowsPerStrip: 3 }],
  ];
  for (const [name, form] of forms)
    for (const little of [true, false])
      it(`with ${name}, ${little ? "little" : "big"}-endian, gives the values of every type`, async () => {
        for (const dtype of Object.keys(SAMPLES)) {
          const pages = pagesOf(dtype, 21, 11, 3);
          const path = await writeTiff({ width: 21, height: 11, pages, dtype, little, ...form });
          expect(await voxelsOf(path), dtype).toEqual(pages.flat());
        }
      });

  it("with LZW strips long enough to fill the table gives its values", async () => {
    const random = seeded(8);
    const page = Array.from({ length: 120 * 90 }, () => Math.floor(random() * 3000));
    for (const predictor of [1, 2] as const) {
      const path = await writeTiff({ width: 120, height: 90, pages: [page, page], dtype: "uint16", compression: 5, predictor });
      expect(await voxelsOf(path)).toEqual([...page, ...page]);
    }
  });

  it.each([
    ["uint8", 2],
    ["uint16", 2],
    ["int16", 2],
    ["uint32", 2],
    ["float32", 3],
    ["float64", 3],
  ] as const)("of %s with predictor %i gives its values in both byte orders", async (dtype, predictor) => {
    for (const little of [true, false])
      for (const tile of [0, 16]) {
        const pages = pagesOf(dtype, 21, 11, 2);
        const path = await writeTiff({
          width: 21,
          height: 11,
          pages,
          dtype,
          little,
          compression: 8,
          predictor,
          ...(tile ? { tile } : {}),
        });
        expect(await voxelsOf(path)).toEqual(pages.flat());
      }
  });

  it.each(["uint8", "uint16", "int16", "float32"])("written by an independent library as %s gives its values", async (dtype) => {
    const Kind = { uint8: Uint8Array, uint16: Uint16Array, int16: Int16Array, float32: Float32Array }[dtype] as typeof Uint8Array;
    const data = Kind.from({ length: 40 * 30 * 4 }, (_: unknown, k: number) => (k * 7) % 128);
    for (const compress of [false, true]) {
      const path = join(await scratchFolder(), "itk.tif");
      await writeWithItk(path, { size: [40, 30, 4], spacing: [0.04, 0.04, 0.04], dtype, data }, compress);
      expect(await voxelsOf(path)).toEqual(Array.from(data));
    }
  });

  it("gives any run of slices", async () => {
    const pages = pagesOf("uint16", 6, 5, 7);
    const source = await openScan(await writeTiff({ width: 6, height: 5, pages, dtype: "uint16" }));
    expect(await gatherVoxels(source, 3, 5)).toEqual(pages.slice(3, 5).flat());
    await source.close();
  });

  it.each([
    [[250, 250, 3], "cm", ["no-spacing", "no-frame"], /0\.04 x 0\.04 mm within a slice, and no distance between slices/],
    [[254, 254, 2], "inch", ["no-spacing", "no-frame"], /0\.1 x 0\.1 mm/],
    [[250, 250, 1], null, ["no-unit", "no-spacing", "no-frame"], /does not give a voxel size/],
    [undefined, null, ["no-unit", "no-spacing", "no-frame"], /does not give a voxel size/],
  ] as const)(
    "with resolution %j is unsettled, since a TIFF has no distance of slices",
    async (resolution, unit, codes, remark) => {
      const tiff = { width: 6, height: 5, pages: pagesOf("uint8", 6, 5, 2), dtype: "uint8" };
      const info = await scanInfo(await writeTiff({ ...tiff, ...(resolution ? { resolution } : {}) }));
      expect(info.spacing).toBeNull();
      expect(info.headerSpacing).toBeNull();
      expect(info.unit).toBe(unit);
      expect(info.warnings.map((w) => w.code)).toEqual(codes);
      expect(info.warnings.map((w) => w.message).join(" ")).toMatch(remark);
    },
  );

  it("skips pages that are smaller copies, and names a page that differs", async () => {
    const pages = pagesOf("uint8", 6, 5, 3);
    const tiff: HandTiff = { width: 6, height: 5, pages, dtype: "uint8" };
    const reduced = await writeTiff({ ...tiff, more: (n) => (n === 1 ? [[254, 4, [1]]] : []) });
    expect(await voxelsOf(reduced)).toEqual([...pages[0]!, ...pages[2]!]);
    const odd = await writeTiff({
      ...tiff,
      more: (n) =>
        n === 2
          ? [
              [257, 4, [4]],
              [278, 4, [4]],
            ]
          : [],
    });
    await expect(openScan(odd)).rejects.toThrow(/page 3.*expected pages alike, 6 x 5 uint8, found 6 x 4 uint8/);
  });

  it.each([
    [
      "colours",
      [
        [277, 3, [3]],
        [262, 3, [2]],
      ],
      /one grey value per voxel/,
    ],
    ["a palette", [[262, 3, [3]]], /colour palette/],
    ["12 bits", [[258, 3, [12]]], /12 bits/],
    ["a picture compression", [[259, 3, [7]]], /compression 7/],
  ] as const)("with %s is refused by a clear sentence", async (_, more, sentence) => {
    const path = await writeTiff({ width: 6, height: 5, pages: pagesOf("uint8", 6, 5, 2), dtype: "uint8", more: () => more });
    await expect(openScan(path)).rejects.toThrow(sentence);
  });

  it("of one page, cut short, or with a circle of pages is refused", async () => {
    const folder = await scratchFolder();
    const pages = pagesOf("uint16", 6, 5, 3);
    const whole = tiffBytes({ width: 6, height: 5, pages, dtype: "uint16" });
    await expect(openScan(await writeTiff({ width: 6, height: 5, pages: pages.slice(0, 1), dtype: "uint16" }))).rejects.toThrow(
      /one page/,
    );
    await writeFile(join(folder, "cut.tif"), whole.subarray(0, whole.length - 20));
    await expect(scanInfo(join(folder, "cut.tif"))).rejects.toMatchObject({ tag: "unreadable-input" });
    const circle = Buffer.from(whole);
    circle.writeUInt32LE(whole.readUInt32LE(4), whole.length - 4);
    await writeFile(join(folder, "circle.tif"), circle);
    await expect(openScan(join(folder, "circle.tif"))).rejects.toThrow(/a circle/);
  });

  it("mutated or truncated anywhere gives a typed error or a scan, never anything else", async () => {
    const folder = await scratchFolder();
    const small = { width: 18, height: 9, dtype: "uint16" };
    const files = [
      tiffBytes({ ...small, pages: pagesOf("uint16", 18, 9, 2), rowsPerStrip: 4 }),
      tiffBytes({ ...small, pages: pagesOf("uint16", 18, 9, 2), tile: 16, compression: 8, predictor: 2, little: false }),
      tiffBytes({ ...small, pages: pagesOf("uint16", 18, 9, 2), compression: 32773, big: true }),
    ];
    const random = seeded(77);
    let refused = 0;
    for (let turn = 0; turn < 600; turn++) {
      const whole = files[turn % 3]!;
      const bytes = Buffer.from(turn % 4 === 0 ? whole.subarray(0, Math.floor(random() * whole.length)) : whole);
      for (let k = 0; k < 1 + Math.floor(random() * 6) && bytes.length > 0; k++) {
        const tail = Math.max(0, bytes.length - 500);
        bytes[random() < 0.5 ? Math.floor(random() * bytes.length) : tail + Math.floor(random() * (bytes.length - tail))] =
          Math.floor(random() * 256);
      }
      const path = join(folder, "fuzz.tif");
      await writeFile(path, bytes);
      try {
        await voxelsOf(path);
      } catch (error) {
        expect((error as { tag?: string }).tag, `turn ${turn}: ${String((error as Error).stack)}`).toBe("unreadable-input");
        refused++;
      }
    }
    expect(refused).toBeGreaterThan(100);
    expect(refused).toBeLessThan(600);
  });
});
