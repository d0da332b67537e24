import { writeFile } from "node:fs/promises";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { openScan } from "#main/intake/open-scan.ts";
import { scanInfo } from "#main/intake/scan-info.ts";
import { indexToMm } from "#shared/volume/grid.ts";
import { gridOf } from "#shared/volume/scan-header.ts";
import { dicomBytes, type HandDicom, SYNTAX, type Syntax } from "#test/main/intake/dicom/dicom-by-hand.ts";
import { fuzzFile } from "#test/main/intake/fuzz.ts";
import { gatherVoxels } from "#test/main/intake/gather-voxels.ts";
import { scratchFolder } from "#test/main/intake/written-by-hand.ts";
import { readWithItk } from "#test/main/intake/written-by-itk.ts";

const SAMPLES = {
  uint8: [0, 7, 255],
  int8: [-128, 127, 3],
  uint16: [0, 65535, 258],
  int16: [-32768, 32767, -2],
  uint32: [0, 4294967295],
  int32: [-2147483648, 5],
} as const;

const slice = (z: number, more: Partial<HandDicom> = {}): HandDicom => ({
  columns: 3,
  rows: 2,
  dtype: "uint16",
  values: Array.from({ length: 6 }, (_, k) => z * 100 + k),
  position: `0\\0\\${(z * 0.04).toFixed(4)}`,
  ...more,
});

/** Writes slices; `name(k)` of each file need not follow their order. */
async function series(slices: readonly HandDicom[], name = (k: number) => `s${k}.dcm`): Promise<string> {
  const folder = await scratchFolder();
  for (const [k, one] of slices.entries()) await writeFile(join(folder, name(k)), dicomBytes(one));
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

describe("a DICOM series", () => {
  for (const syntax of Object.keys(SYNTAX) as Syntax[])
    for (const [dtype, sample] of Object.entries(SAMPLES))
      it(`in ${syntax} form (${SYNTAX[syntax]}) gives its values of type ${dtype}`, async () => {
        const values = (z: number) => Array.from({ length: 6 }, (_, k) => sample[(k + z) % sample.length]!);
        const order = (z: number) => slice(z, { syntax, dtype: dtype as HandDicom["dtype"], values: values(z) });
        const folder = await series([0, 1, 2, 3].map(order));
        const source = await openScan(folder);
        expect(source.header).toMatchObject({ family: "DICOM", dtype, size: [3, 2, 4], frame: "LPS" });
        expect(await gatherVoxels(source)).toEqual([0, 1, 2, 3].flatMap(values));
        expect(await gatherVoxels(source, 1, 3)).toEqual([1, 2].flatMap(values));
        await source.close();
      });

  it("of one-byte voxels in big-endian words gives its values in order (PS3.5, section 8.2: words are exchanged)", async () => {
    const order = (z: number) => slice(z, { syntax: "big", dtype: "uint8", pixelVr: "OW", values: [1, 2, 3, 4, 5, 6 + z] });
    expect(await voxelsOf(await series([order(0), order(1)]))).toEqual([1, 2, 3, 4, 5, 6, 1, 2, 3, 4, 5, 7]);
  });

  it("is ordered by the slices' places, not by the names or numbers of its files", async () => {
    const shuffled = [2, 0, 3, 1];
    const folder = await series(shuffled.map((z, k) => slice(z, { more: [[0x20, 0x13, "IS", String(9 - k)]] })));
    expect(await voxelsOf(folder)).toEqual([0, 1, 2, 3].flatMap((z) => slice(z).values));
    // One of its files stands for the series.
    expect(await voxelsOf(join(folder, "s2.dcm"))).toEqual([0, 1, 2, 3].flatMap((z) => slice(z).values));
  });

  it("whose positions fall along the normal is turned round, so that it is not mirrored", async () => {
    // Rows to the left, columns to posterior: the normal is superior. Files run from superior to inferior.
    const folder = await series([0, 1, 2].map((z) => slice(z, { position: `1\\2\\${10 - z * 0.04}` })));
    const { header } = await openScan(folder);
    expect(header.origin).toEqual([1, 2, 9.92]);
    expect(header.direction).toEqual([1, 0, 0, 0, 1, 0, 0, 0, 1]);
    expect(await voxelsOf(folder)).toEqual([2, 1, 0].flatMap((z) => slice(z).values));
  });

  it("takes Pixel Spacing as rows first, and its directions as row first, as an independent reader does", async () => {
    const pixelSpacing = "0.05\\0.03"; // rows are 0.05 apart (y), columns 0.03 (x)
    const orientation = "0\\1\\0\\-1\\0\\0"; // along a row: posterior; along a column: right
    const folder = await series([0, 1].map((z) => slice(z, { pixelSpacing, orientation, position: `7\\8\\${z * 0.04}` })));
    const { header } = await openScan(folder);
    expect(header.headerSpacing).toEqual([0.03, 0.05, 0.04]);
    expect(header.direction).toEqual([0, -1, 0, 1, 0, 0, 0, 0, 1]);
    const other = await readWithItk(join(folder, "s0.dcm"));
    expect(other.spacing.slice(0, 2)).toEqual([0.03, 0.05]);
    expect(other.direction.map((v) => v + 0)).toEqual(header.direction); // it writes -0
    expect(other.origin).toEqual([7, 8, 0]);
    expect(other.data).toEqual(slice(0).values);
    // Image Position (Patient) is the centre of the first voxel (PS3.3, C.7.6.2.1.1).
    const grid = gridOf(header, [0.03, 0.05, 0.04]);
    expect(indexToMm(grid, [0, 0, 0])).toEqual([7, 8, 0]);
    expect(indexToMm(grid, [1, 0, 0])).toEqual([7, 8.03, 0]);
    expect(indexToMm(grid, [0, 1, 0])).toEqual([6.95, 8, 0]);
  });

  it("takes the distance of slices along an oblique normal from their positions alone", async () => {
    // Rows along x, columns along (0, 0.6, 0.8); the normal is (0, -0.8, 0.6).
    const at = (z: number) => `0\\${(-0.8 * 0.05 * z).toFixed(6)}\\${(0.6 * 0.05 * z).toFixed(6)}`;
    const orientation = "1\\0\\0\\0\\0.6\\0.8";
    const wrong: HandDicom["more"] = [
      [0x18, 0x50, "DS", "9"],
      [0x18, 0x88, "DS", "5"],
    ];
    const folder = await series([0, 1, 2, 3].map((z) => slice(z, { orientation, position: at(z), more: wrong })));
    const { header } = await openScan(folder);
    expect(header.headerSpacing![2]).toBeCloseTo(0.05, 9);
    expect(header.notes.join()).toMatch(
      /Spacing Between Slices, 5 mm, is not used: by their positions slices are 0\.05 mm apart/,
    );
    expect((await scanInfo(folder)).unit).toBe("mm");
  });

  it("with one missing slice is an error that names the gap", async () => {
    const folder = await series(
      [0, 1, 2, 4, 5].map((z) => slice(z)),
      (k) => `im${[0, 1, 2, 4, 5][k]}.dcm`,
    );
    await expect(openScan(folder)).rejects.toThrow(
      /im4\.dcm.*expected slices 0\.04 mm apart, found a gap of 0\.08 mm \(1 missing\) between slice 3 and the next: im2\.dcm at 0\.08 mm and im4\.dcm at 0\.16 mm/,
    );
  });

  it("with a place taken twice, slices off their places, or a tilt is refused", async () => {
    const twice = await series([0, 1, 1, 2].map((z) => slice(z)));
    await expect(openScan(twice)).rejects.toThrow(/places of their own, found two 0 mm apart: s1\.dcm.*s2\.dcm/);
    const uneven = await series([0, 1, 2.3, 3].map((z) => slice(z, { values: slice(0).values })));
    await expect(openScan(uneven)).rejects.toThrow(/s2\.dcm.*evenly.*off its place/);
    const tilted = await series([0, 1, 2].map((z) => slice(z, { position: `0\\${z * 0.03}\\${z * 0.04}` })));
    await expect(openScan(tilted)).rejects.toThrow(/shifted sideways by 0\.03 mm/);
  });

  it("keeps only the bits that are stored, with their sign", async () => {
    const masked = await series([0, 1].map((z) => slice(z, { bitsStored: 12, values: [0xf001, 0x0fff, 0x1000, 5, 6, 7 + z] })));
    expect(await voxelsOf(masked)).toEqual([1, 4095, 0, 5, 6, 7, 1, 4095, 0, 5, 6, 8]);
    const signed = await series(
      [0, 1].map((z) => slice(z, { dtype: "int16", bitsStored: 12, values: [0x0fff, 0x0800, 2047, -1, 0, z] })),
    );
    expect((await voxelsOf(signed)).slice(0, 6)).toEqual([-1, -2048, 2047, -1, 0, 0]);
  });

  it("walks past sequences of given and undefined length, also in unknown values", async () => {
    const item = (bytes: number[], length: number) => [0xfe, 0xff, 0x00, 0xe0, ...le(length), ...bytes];
    const le = (v: number) => [v & 255, (v >> 8) & 255, (v >> 16) & 255, (v >>> 24) & 255];
    const inner = [8, 0, 0x50, 0x11, 0x55, 0x49, 2, 0, 0x31, 0]; // a UI inside, explicit
    const plain = [8, 0, 0x50, 0x11, 2, 0, 0, 0, 0x31, 0]; // the same, implicit
    const end = [0xfe, 0xff, 0x0d, 0xe0, 0, 0, 0, 0];
    const close = [0xfe, 0xff, 0xdd, 0xe0, 0, 0, 0, 0];
    const sequence = [
      8,
      0,
      0x40,
      0x11,
      0x53,
      0x51,
      0,
      0,
      ...le(0xffffffff),
      ...item([...inner, ...end], 0xffffffff),
      ...item(inner, 10),
      ...close,
    ];
    const unknown = [9, 0, 0x10, 0x10, 0x55, 0x4e, 0, 0, ...le(0xffffffff), ...item([...plain, ...end], 0xffffffff), ...close];
    const raw = Uint8Array.from([...sequence, ...unknown]);
    expect(await voxelsOf(await series([slice(0, { raw }), slice(1, { raw })]))).toEqual([
      ...slice(0).values,
      ...slice(1).values,
    ]);
    const implicit = Uint8Array.from([8, 0, 0x40, 0x11, ...le(0xffffffff), ...item([...plain, ...end], 0xffffffff), ...close]);
    const folder = await series([0, 1].map((z) => slice(z, { syntax: "implicit", raw: implicit })));
    expect(await voxelsOf(folder)).toEqual([...slice(0).values, ...slice(1).values]);
  });

  it("is found among reports and other files; several series ask for one", async () => {
    const folder = await series([0, 1].map((z) => slice(z)));
    await writeFile(join(folder, "readme.txt"), "made by hand");
    const directory = dicomBytes(slice(0)).subarray(0, dicomBytes(slice(0)).indexOf(Buffer.from([0x20, 0, 0x0d, 0])));
    await writeFile(join(folder, "DICOMDIR"), directory);
    expect(await voxelsOf(folder)).toEqual([...slice(0).values, ...slice(1).values]);
    for (const z of [0, 1]) await writeFile(join(folder, `other${z}.dcm`), dicomBytes(slice(z + 50, { series: "9.9" })));
    await expect(openScan(folder)).rejects.toThrow(/expected one series, found 2.*Choose one file of the series/);
    expect(await voxelsOf(join(folder, "other1.dcm"))).toEqual([...slice(50).values, ...slice(51).values]);
  });

  it.each([
    [
      "compressed voxels",
      { claims: "1.2.840.10008.1.2.4.70" },
      /uncompressed voxels, found transfer syntax 1\.2\.840\.10008\.1\.2\.4\.70 \(a picture compression\)/,
    ],
    ["deflated elements", { claims: "1.2.840.10008.1.2.1.99" }, /1\.2\.840\.10008\.1\.2\.1\.99 \(deflated\)/],
    ["run lengths", { claims: "1.2.840.10008.1.2.5" }, /run lengths/],
    ["several frames", { more: [[0x28, 8, "IS", "12"]] }, /one slice a file, found 12 frames/],
    ["colours", { more: [[0x28, 2, "US", 3]] }, /one grey value per voxel/],
    ["no place", { position: null }, /Image Position \(Patient\), found none/],
    ["no orientation", { orientation: null }, /Image Orientation \(Patient\), found none/],
    ["a crooked orientation", { orientation: "1\\0\\0\\1\\0\\0" }, /right angles/],
    ["bits at the high end", { more: [[0x28, 0x101, "US", 12]] }, /at its low end/],
    [
      "sizes that lie",
      { more: [[0x28, 0x10, "US", 60000]] },
      /expected 360000 bytes of voxels as the header says, found 12 bytes/,
    ],
    ["a number that is none", { pixelSpacing: "0.04\\abc" }, /2 numbers/],
  ] as [string, Partial<HandDicom>, RegExp][])("with %s is refused by a clear sentence", async (_, more, sentence) => {
    await expect(openScan(await series([0, 1].map((z) => slice(z, more))))).rejects.toThrow(sentence);
  });

  it("without Pixel Spacing leaves the voxel size open, and says what it knows", async () => {
    const info = await scanInfo(await series([0, 1].map((z) => slice(z, { pixelSpacing: null }))));
    expect(info.spacing).toBeNull();
    expect(info.warnings[0]!.message).toMatch(/0\.04 mm apart.*no Pixel Spacing/);
  });

  it("with one slice that is of another size or cut short names it", async () => {
    const odd = await series([slice(0), slice(1), slice(2, { columns: 2, values: [1, 2, 3, 4] })]);
    await expect(openScan(odd)).rejects.toThrow(/s2\.dcm: expected 3 x 2 uint16 of 16 bits as in s0\.dcm, found 2 x 2/);
    const folder = await series([0, 1].map((z) => slice(z)));
    await writeFile(join(folder, "s1.dcm"), dicomBytes(slice(1)).subarray(0, -3));
    await expect(openScan(folder)).rejects.toThrow(/s1\.dcm.*expected 12 bytes of voxels as the header says, found 9 bytes/);
  });

  it("mutated or truncated anywhere gives a typed error or a scan, never anything else", async () => {
    for (const [k, syntax] of (Object.keys(SYNTAX) as Syntax[]).entries()) {
      const folder = await series([slice(0, { syntax }), slice(1, { syntax })]);
      const whole = dicomBytes(slice(1, { syntax }));
      const headerBytes = whole.length - 12;
      const found = await fuzzFile({ path: join(folder, "s1.dcm"), open: folder, whole, headerBytes, turns: 120, seed: 11 + k });
      expect(found.refused).toBeGreaterThan(30);
      expect(found.read).toBeGreaterThan(5);
    }
  });
});
