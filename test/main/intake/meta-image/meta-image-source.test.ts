import { mkdir, open, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { deflateSync } from "node:zlib";
import { describe, expect, it } from "vitest";
import { openScan } from "#main/intake/open-scan.ts";
import { scanInfo } from "#main/intake/scan-info.ts";
import { indexToMm } from "#shared/volume/grid.ts";
import { gridOf } from "#shared/volume/scan-header.ts";
import { fuzzFile } from "#test/main/intake/fuzz.ts";
import { gatherVoxels } from "#test/main/intake/gather-voxels.ts";
import { bytesOf, scratchFolder } from "#test/main/intake/written-by-hand.ts";
import { type ItkImage, readWithItk, writeWithItk } from "#test/main/intake/written-by-itk.ts";

// Field names and type words: MetaIO's description of its headers (from memory), as ITK writes them.
const TYPES = [
  ["int8", "MET_CHAR", [-128, 127]],
  ["uint8", "MET_UCHAR", [0, 255]],
  ["int16", "MET_SHORT", [-32768, 32767]],
  ["uint16", "MET_USHORT", [0, 258, 65535]],
  ["int32", "MET_INT", [-2147483648, 7]],
  ["uint32", "MET_UINT", [0, 4294967295]],
  ["int64", "MET_LONG_LONG", [-9007199254740991, 3]],
  ["uint64", "MET_ULONG_LONG", [0, 9007199254740991]],
  ["float32", "MET_FLOAT", [-1.5, 2 ** 35]],
  ["float64", "MET_DOUBLE", [-1e300, 0.1]],
] as const;

const VALUES = Array.from({ length: 24 }, (_, k) => k * 1000);
const DATA = bytesOf(VALUES, "uint16", true);
const head = (more: readonly string[] = []): string[] => [
  "ObjectType = Image",
  "NDims = 3",
  "BinaryData = True",
  "BinaryDataByteOrderMSB = False",
  "DimSize = 2 3 4",
  "ElementSpacing = 0.04 0.04 0.04",
  "ElementType = MET_USHORT",
  ...more,
];
const attached = (lines: readonly string[], data: Uint8Array = DATA) =>
  Buffer.concat([Buffer.from(`${[...lines, "ElementDataFile = LOCAL"].join("\n")}\n`), data]);

async function written(bytes: Uint8Array, name = "a.mha"): Promise<string> {
  const path = join(await scratchFolder(), name);
  await writeFile(path, bytes);
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

describe("a MetaImage", () => {
  for (const [dtype, word, sample] of TYPES)
    it(`of type ${word} gives its values in both byte orders, plain and compressed`, async () => {
      const values = Array.from({ length: 24 }, (_, k) => sample[k % sample.length]!);
      for (const little of [true, false])
        for (const compressed of [false, true]) {
          const lines = head().map((line) =>
            line.startsWith("ElementType")
              ? `ElementType = ${word}`
              : line.startsWith("BinaryDataByte")
                ? `ElementByteOrderMSB = ${little ? "False" : "True"}`
                : line,
          );
          const data = bytesOf(values, dtype, little);
          const packed = deflateSync(data);
          const bytes = compressed
            ? attached([...lines, "CompressedData = True", `CompressedDataSize = ${packed.length}`], packed)
            : attached(lines, data);
          const path = await written(bytes);
          const source = await openScan(path);
          expect(source.header.dtype).toBe(dtype);
          expect(await gatherVoxels(source)).toEqual(values);
          expect(await gatherVoxels(source, 1, 3)).toEqual(values.slice(6, 18));
          await source.close();
        }
    });

  it("written by an independent library has its values and place, LPS, and lacks a unit", async () => {
    const folder = await scratchFolder();
    const data = Uint16Array.from({ length: 60 }, (_, k) => (k * 37) % 128);
    const image: ItkImage = { size: [5, 4, 3], spacing: [0.04, 0.05, 0.06], origin: [1, -2, 3], dtype: "uint16", data };
    for (const direction of [
      [1, 0, 0, 0, 1, 0, 0, 0, 1],
      [0, -1, 0, 1, 0, 0, 0, 0, 1],
      [0, 0, 1, 1, 0, 0, 0, 1, 0],
    ])
      for (const compress of [false, true]) {
        const path = join(folder, "a.mha");
        await writeWithItk(path, { ...image, direction }, compress);
        expect(await voxelsOf(path)).toEqual(Array.from(data));
        const { header } = await openScan(path);
        expect(header).toMatchObject({
          direction,
          origin: [1, -2, 3],
          headerSpacing: [0.04, 0.05, 0.06],
          frame: "LPS",
          notes: [],
        });
        const info = await scanInfo(path);
        expect(info.spacing).toBeNull();
        expect(info.warnings.map((w) => w.code)).toEqual(["no-unit", "anisotropic"]);
      }
  });

  it("has the centre of its first voxel at Offset, as an independent reader places it", async () => {
    const lines = head([
      "TransformMatrix = 0 1 0 -1 0 0 0 0 1",
      "Offset = 1 2 3",
      "AnatomicalOrientation = ALI",
      "DistanceUnits = mm",
    ]);
    const path = await written(attached(lines));
    const { header } = await openScan(path);
    const grid = gridOf(header, [0.04, 0.04, 0.04]);
    expect(indexToMm(grid, [0, 0, 0])).toEqual([1, 2, 3]);
    const other = await readWithItk(path);
    expect(other.origin).toEqual([1, 2, 3]);
    expect(header.direction).toEqual(other.direction);
    // Row 1 of the matrix is where the first axis goes: one voxel along x moves 0.04 along the second world axis.
    expect(indexToMm(grid, [1, 0, 0])).toEqual([1, 2.04, 3]);
  });

  it("has no voxel size without a unit, and one in millimetres with one", async () => {
    const codes = async (more: readonly string[]) => {
      const info = await scanInfo(await written(attached(head(more))));
      return [info.spacing, info.unit, info.warnings.map((w) => w.code)];
    };
    expect(await codes([])).toEqual([null, null, ["no-unit", "no-frame"]]);
    expect(await codes(["DistanceUnits = ?"])).toEqual([null, null, ["no-unit", "no-frame"]]);
    expect((await codes(["DistanceUnits = mm"]))[0]).toEqual([0.04, 0.04, 0.04]);
    expect((await codes(["DistanceUnits = um"]))[0]).toEqual([0.00004, 0.00004, 0.00004]);
    const none = head(["ElementSize = 0.04 0.04 0.04"]).filter((line) => !line.startsWith("ElementSpacing"));
    const info = await scanInfo(await written(attached(none)));
    expect(info.headerSpacing).toBeNull();
    expect(info.warnings.find((w) => w.code === "no-spacing")?.message).toMatch(/ElementSize 0\.04/);
  });

  it("whose letters contradict its matrix has its frame left open, and says so", async () => {
    const { header } = await openScan(await written(attached(head(["AnatomicalOrientation = LPI"]))));
    expect(header.frame).toBe("scan");
    expect(header.notes.join()).toMatch(/contradicts/);
  });

  it("may keep its voxels in one file, in a list or in numbered files, beside it", async () => {
    const folder = await scratchFolder();
    await mkdir(join(folder, "data"));
    await writeFile(join(folder, "data", "all of it.raw"), DATA);
    await writeFile(join(folder, "skip.raw"), Buffer.concat([Buffer.from("1234567"), DATA]));
    await writeFile(join(folder, "all.zraw"), deflateSync(DATA));
    for (let k = 0; k < 4; k++) await writeFile(join(folder, `s${k + 9}.raw`), DATA.subarray(k * 12, k * 12 + 12));
    const cases: Record<string, string[]> = {
      "one.mhd": ["ElementDataFile = data/all of it.raw"],
      "skip.mhd": ["HeaderSize = 7", "ElementDataFile = skip.raw"],
      "end.mhd": ["HeaderSize = -1", "ElementDataFile = skip.raw"],
      "packed.mhd": ["CompressedData = True", "ElementDataFile = all.zraw"],
      "numbered.mhd": ["ElementDataFile = s%d.raw 9 12 1"],
      "list.mhd": ["ElementDataFile = LIST", "s9.raw", "s10.raw", "s11.raw", "s12.raw"],
    };
    for (const [name, lines] of Object.entries(cases)) {
      await writeFile(join(folder, name), `${[...head(), ...lines].join("\r\n")}\r\n`);
      expect(await voxelsOf(join(folder, name)), name).toEqual(VALUES);
    }
    await writeFile(join(folder, "gone.mhd"), `${[...head(), "ElementDataFile = nowhere.raw"].join("\n")}\n`);
    await expect(openScan(join(folder, "gone.mhd"))).rejects.toThrow(/nowhere\.raw.*nothing under this name/);
    const short = [...head(), "ElementDataFile = LIST", "s9.raw", "s10.raw", "all.zraw", "s12.raw"];
    await writeFile(join(folder, "short.mhd"), `${short.join("\n").replace("MET_USHORT", "MET_DOUBLE")}\n`);
    await expect(openScan(join(folder, "short.mhd"))).rejects.toThrow(/s9\.raw.*expected 48 bytes.*found 12 bytes/);
  });

  it("whose voxels begin beyond 4 GiB is read there (a sparse file)", async () => {
    const folder = await scratchFolder();
    const at = 2 ** 32 + 5;
    const file = await open(join(folder, "far.raw"), "w");
    await file.write(DATA, 0, DATA.length, at);
    await file.close();
    await writeFile(join(folder, "far.mhd"), `${[...head(), `HeaderSize = ${at}`, "ElementDataFile = far.raw"].join("\n")}\n`);
    expect(await voxelsOf(join(folder, "far.mhd"))).toEqual(VALUES);
  });

  it.each([
    ["four axes of several times", ["NDims = 4", "DimSize = 2 3 4 2"], /three axes/],
    ["channels", ["ElementNumberOfChannels = 3"], /one value per voxel, found 3/],
    ["text voxels", ["BinaryData = False"], /voxels as text/],
    ["a type of unknown width", ["ElementType = MET_LONG"], /width differs between computers/],
    ["a size of 0", ["DimSize = 2 0 4"], /whole numbers from 1/],
    ["a side beyond what can be counted", ["DimSize = 2147483648 3 4"], /whole numbers from 1 to 2147483647/],
    [
      "sizes whose product lies",
      ["DimSize = 2000 3000 4000"],
      /expected 48000000000 bytes of voxels as the header says, found 48 bytes/,
    ],
    ["a matrix in one plane", ["TransformMatrix = 1 0 0 1 0 0 0 0 1"], /span space/],
    ["a size given twice", ["DimSize = 2 3 4", "DimSize = 2 3 4"], /one line 'DimSize', found two/],
  ])("with %s is refused by a clear sentence", async (_, lines, sentence) => {
    const names = lines.map((line) => line.split(" ")[0]);
    const kept = head().filter((line) => !names.includes(line.split(" ")[0]));
    await expect(openScan(await written(attached([...kept, ...lines])))).rejects.toThrow(sentence);
  });

  it("cut short is refused, plain at once and compressed when it is read", async () => {
    await expect(openScan(await written(attached(head(), DATA.subarray(0, 47))))).rejects.toThrow(/found 47 bytes/);
    const packed = deflateSync(
      bytesOf(
        VALUES.map((v) => (v * 40503) % 65536),
        "uint16",
        true,
      ),
    );
    const cut = attached(head(["CompressedData = True"]), packed.subarray(0, packed.length - 12));
    await expect(scanInfo(await written(cut))).rejects.toThrow(/expected a whole zlib or gzip stream, found one that ends early/);
    const lying = attached(head(["CompressedData = True", "CompressedDataSize = 5000"]), packed);
    await expect(openScan(await written(lying))).rejects.toThrow(/expected 5000 compressed bytes/);
  });

  it("with a number or a name of a hundred thousand digits is refused at once", async () => {
    // In quadratic time this would take minutes, and the test would run out of its time.
    for (const line of [`Offset = 0 0 ${"1".repeat(100_000)}x`, `ElementDataFile = ${"%d".repeat(100_000)}`])
      await expect(openScan(await written(attached([...head(), line])))).rejects.toMatchObject({ tag: "unreadable-input" });
  });

  it("mutated or truncated anywhere gives a typed error or a scan, never anything else", async () => {
    const folder = await scratchFolder();
    const plain = attached(head(["Offset = 0 0 0", "TransformMatrix = 1 0 0 0 1 0 0 0 1", "HeaderSize = 0"]));
    const packed = attached(head(["CompressedData = True"]), deflateSync(DATA));
    for (const [k, whole] of [plain, packed].entries()) {
      const headerBytes = k === 0 ? whole.length - DATA.length : whole.length;
      const found = await fuzzFile({ path: join(folder, "f.mha"), whole, headerBytes, turns: 100, seed: 3 + k });
      expect(found.refused).toBeGreaterThan(40);
      expect(found.read).toBeGreaterThan(0);
    }
  });
});
