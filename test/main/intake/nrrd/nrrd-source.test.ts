import { mkdir, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { gzipSync } from "node:zlib";
import { describe, expect, it } from "vitest";
import { openScan } from "#main/intake/open-scan.ts";
import { scanInfo } from "#main/intake/scan-info.ts";
import { gatherVoxels } from "#test/main/intake/gather-voxels.ts";
import {
  bytesOf,
  type HandNrrd,
  nrrdBytes,
  SETTLED,
  scratchFolder,
  seeded,
  writeNrrd,
} from "#test/main/intake/written-by-hand.ts";
import { readWithItk, writeWithItk } from "#test/main/intake/written-by-itk.ts";

async function voxelsOf(path: string): Promise<number[]> {
  const source = await openScan(path);
  try {
    return await gatherVoxels(source);
  } finally {
    await source.close();
  }
}

// Type words: NRRD file format definition, "type" field (all aliases of the standard but the 64-bit float's).
const TYPES = [
  ["int8", "signed char", [-128, -1, 0, 5, 127]],
  ["int8", "int8_t", [-128, 127]],
  ["uint8", "uchar", [0, 1, 255]],
  ["uint8", "unsigned char", [0, 255]],
  ["int16", "signed short int", [-32768, -2, 32767]],
  ["uint16", "ushort", [0, 258, 65535]],
  ["uint16", "unsigned short int", [0, 65535]],
  ["int32", "int", [-2147483648, 7, 2147483647]],
  ["uint32", "unsigned int", [0, 70000, 4294967295]],
  ["int64", "long long int", [-9007199254740991, 3, 9007199254740991]],
  ["uint64", "unsigned long long", [0, 9007199254740991]],
  ["float32", "float", [-1.5, 0, 2 ** 35]],
  ["float64", "double", [-1e300, 0.1, 2 ** -1040]],
] as const;

describe("an NRRD file", () => {
  for (const [dtype, type, sample] of TYPES)
    for (const little of [true, false])
      for (const gzip of [false, true])
        it(`of type '${type}', ${little ? "little" : "big"}-endian, ${gzip ? "gzip" : "raw"}, gives its values`, async () => {
          const values = Array.from({ length: 4 * 3 * 5 }, (_, k) => sample[k % sample.length]!);
          const path = await writeNrrd(await scratchFolder(), "a.nrrd", { sizes: [4, 3, 5], type, dtype, little, gzip, values });
          const source = await openScan(path);
          expect(source.header.dtype).toBe(dtype);
          expect(await gatherVoxels(source)).toEqual(values);
          expect(await gatherVoxels(source, 2, 4)).toEqual(values.slice(24, 48));
          await source.close();
        });

  it.each(["uint8", "int8", "uint16", "int16", "uint32", "int32", "float32", "float64"])(
    "written by an independent library as %s gives its values and place, and lacks a unit",
    async (dtype) => {
      const folder = await scratchFolder();
      const kinds = { uint8: Uint8Array, int8: Int8Array, uint16: Uint16Array, int16: Int16Array, uint32: Uint32Array };
      const more = { int32: Int32Array, float32: Float32Array, float64: Float64Array };
      const Kind = { ...kinds, ...more }[dtype] as typeof Uint8Array;
      const data = Kind.from({ length: 60 }, (_: unknown, k: number) => (k * 37) % 128);
      const direction = [0, -1, 0, 1, 0, 0, 0, 0, 1];
      for (const compress of [false, true]) {
        const path = join(folder, `${compress}.nrrd`);
        await writeWithItk(
          path,
          { size: [5, 4, 3], spacing: [0.04, 0.05, 0.06], origin: [1, -2, 3], direction, dtype, data },
          compress,
        );
        expect(await voxelsOf(path)).toEqual(Array.from(data));
        const source = await openScan(path);
        expect(source.header.direction).toEqual(direction);
        expect(source.header.origin).toEqual([1, -2, 3]);
        expect(source.header.headerSpacing).toEqual([0.04, 0.05, 0.06]);
        expect(source.header.frame).toBe("LPS");
        await source.close();
        const info = await scanInfo(path);
        expect(info.spacing).toBeNull();
        expect(info.warnings.map((w) => w.code)).toEqual(["no-unit", "anisotropic"]);
      }
    },
  );

  const VALUES = Array.from({ length: 24 }, (_, k) => k * 1000);
  const order = (lines: readonly string[], more: Partial<HandNrrd> = {}): HandNrrd => ({
    sizes: [2, 3, 4],
    type: "ushort",
    dtype: "uint16",
    values: VALUES,
    lines,
    ...more,
  });

  it("in RAS is turned to LPS as an independent reader does", async () => {
    const lines = [
      "space: RAS",
      "space directions: (0.1,0.2,0) (0,0.3,0.1) (0,0,-0.4)",
      "space origin: (1,2,3)",
      'space units: "mm" "mm" "mm"',
    ];
    const path = await writeNrrd(await scratchFolder(), "ras.nrrd", order(lines));
    const { header } = await openScan(path);
    const other = await readWithItk(path);
    expect(header.origin).toEqual([-1, -2, 3]);
    expect(header.origin).toEqual(other.origin);
    for (const [k, value] of header.direction.entries()) expect(value).toBeCloseTo(other.direction[k]!, 12);
    for (const [k, value] of header.headerSpacing!.entries()) expect(value).toBeCloseTo(other.spacing[k]!, 12);
  });

  it("in LAS has its second axis turned, since left is left in both (NRRD standard: the space's axes name where they point)", async () => {
    const lines = ["space: left-anterior-superior", "space directions: (1,0,0) (0,1,0) (0,0,1)", "space origin: (1,2,3)"];
    const { header } = await openScan(await writeNrrd(await scratchFolder(), "las.nrrd", order(lines)));
    expect(header.origin).toEqual([1, -2, 3]);
    expect(header.direction).toEqual([1, 0, 0, 0, -1, 0, 0, 0, 1]);
    expect(header.frame).toBe("LPS");
  });

  it.each([
    ['"um" "um" "um"', "um"],
    ['"µm" "µm" "µm"', "µm"],
    ['"microns" "microns" "microns"', "microns"],
    ['"micron" "micron" "micron"', "micron"],
    ["um um um", "um"],
    ['"micrometre" "micrometre" "micrometre"', "micrometre"],
  ])("with space units %s has its spacing and origin in millimetres", async (units, word) => {
    const lines = [
      "space: LPS",
      "space directions: (40,0,0) (0,40,0) (0,0,40)",
      "space origin: (400,0,-80)",
      `space units: ${units}`,
    ];
    const path = await writeNrrd(await scratchFolder(), "um.nrrd", order(lines));
    const info = await scanInfo(path);
    expect(info.spacing).toEqual([0.04, 0.04, 0.04]);
    expect(info.headerSpacing).toEqual([40, 40, 40]);
    expect(info.unit).toBe(word);
  });

  it("without a space takes spacings and units per axis, and says it has no frame", async () => {
    const lines = ["spacings: 0.5 0.5 0.5", 'units: "mm" "mm" "mm"'];
    const info = await scanInfo(await writeNrrd(await scratchFolder(), "s.nrrd", order(lines)));
    expect(info.spacing).toEqual([0.5, 0.5, 0.5]);
    expect(info.frame).toBe("scan");
    expect(info.warnings.map((w) => w.code)).toEqual(["size-range", "no-frame"]);
  });

  it.each([
    ["cell", 0.1, 0.05],
    ["node", 0.2, 0],
  ])("with axis mins and maxs and %s centering puts the first voxel's centre right", async (centering, spacing, origin) => {
    // NRRD standard: a cell-centred axis runs from face to face, a node-centred one from centre to centre.
    const lines = ["axis mins: 0 0 0", "axis maxs: 0.2 0.3 0.4", `centerings: ${centering} cell cell`, 'units: "mm" "mm" "mm"'];
    const { header } = await openScan(await writeNrrd(await scratchFolder(), "m.nrrd", order(lines)));
    expect(header.headerSpacing![0]).toBeCloseTo(spacing, 12);
    expect(header.origin[0]).toBeCloseTo(origin, 12);
  });

  it("keeps space origin as the first voxel's centre whatever the centering", async () => {
    const lines = [
      ...SETTLED.filter((line) => !line.startsWith("space origin")),
      "space origin: (1,2,3)",
      "centerings: cell cell cell",
    ];
    const { header } = await openScan(await writeNrrd(await scratchFolder(), "c.nrrd", order(lines)));
    expect(header.origin).toEqual([1, 2, 3]);
  });

  it.each([
    ["spacings: 0 0.1 0.1", "bad-spacing"],
    ["spacings: -0.1 0.1 0.1", "bad-spacing"],
    ["spacings: inf 0.1 0.1", "bad-spacing"],
    ["spacings: nan 0.1 0.1", "no-spacing"],
    ["content: nothing about spacing", "no-spacing"],
  ])("with '%s' is unsettled (%s)", async (line, code) => {
    const info = await scanInfo(await writeNrrd(await scratchFolder(), "u.nrrd", order([line, 'units: "mm" "mm" "mm"'])));
    expect(info.spacing).toBeNull();
    expect(info.warnings.map((w) => w.code)).toContain(code);
  });

  it("may have an axis of one channel, and no more", async () => {
    const folder = await scratchFolder();
    const lines = ["space: LPS", "space directions: none (0.04,0,0) (0,0.04,0) (0,0,0.04)", "kinds: vector domain domain domain"];
    const one = order(lines, { sizes: [1, 2, 3, 4] });
    expect(await voxelsOf(await writeNrrd(folder, "one.nrrd", one))).toEqual(VALUES);
    const two = order(lines, { sizes: [2, 2, 3, 2] });
    await expect(openScan(await writeNrrd(folder, "two.nrrd", two))).rejects.toMatchObject({ tag: "unreadable-input" });
    const flat = order([], { sizes: [6, 4] });
    await expect(openScan(await writeNrrd(folder, "flat.nrrd", flat))).rejects.toThrow(/three axes/);
  });

  it("may have Windows line ends, comments and key/value pairs", async () => {
    const lines = [...SETTLED, "# a remark", "made by:=nobody: really", "measurement frame: (1,0,0) (0,1,0) (0,0,1)"];
    expect(await voxelsOf(await writeNrrd(await scratchFolder(), "w.nrrd", order(lines, { newline: "\r\n" })))).toEqual(VALUES);
  });

  it("may keep its voxels in one file, in a list of files, or in numbered files, beside it", async () => {
    const folder = await scratchFolder();
    await mkdir(join(folder, "data"));
    const bytes = bytesOf(VALUES, "uint16", false);
    const head = ["NRRD0005", "type: uint16", "dimension: 3", "sizes: 2 3 4", "endian: big", "encoding: raw", ...SETTLED];
    await writeFile(join(folder, "data", "all.raw"), bytes);
    await writeFile(join(folder, "skip.raw"), Buffer.concat([Buffer.from("line\nline\nxyz"), bytes]));
    await writeFile(join(folder, "end.raw"), Buffer.concat([Buffer.from("whatever"), bytes]));
    await writeFile(
      join(folder, "all.gz"),
      Buffer.concat([Buffer.from("a line\n"), gzipSync(Buffer.concat([Buffer.from("abcd"), bytes]))]),
    );
    for (let k = 0; k < 4; k++)
      await writeFile(join(folder, `s${String(k + 7).padStart(3, "0")}.raw`), bytes.subarray(k * 12, k * 12 + 12));
    for (let k = 0; k < 2; k++) await writeFile(join(folder, `h${k}.raw`), bytes.subarray(k * 24, k * 24 + 24));
    const cases: Record<string, string[]> = {
      "one.nhdr": [...head, "data file: data/all.raw"],
      "skip.nhdr": [...head, "line skip: 2", "byte skip: 3", "data file: skip.raw"],
      "end.nhdr": [...head, "byteskip: -1", "datafile: end.raw"],
      "gzip.nhdr": [
        ...head.filter((l) => !l.startsWith("encoding")),
        "encoding: gz",
        "line skip: 1",
        "byte skip: 4",
        "data file: all.gz",
      ],
      "numbered.nhdr": [...head, "data file: s%03d.raw 7 10 1"],
      "back.nhdr": [...head, "data file: s%03d.raw 10 7 -1"],
      "list.nhdr": [...head, "data file: LIST", "h0.raw", "h1.raw"],
    };
    for (const [name, lines] of Object.entries(cases)) {
      await writeFile(join(folder, name), `${lines.join("\n")}\n`);
      const backwards = [3, 2, 1, 0].flatMap((k) => VALUES.slice(k * 6, k * 6 + 6));
      expect(await voxelsOf(join(folder, name)), name).toEqual(name === "back.nhdr" ? backwards : VALUES);
    }
    await writeFile(join(folder, "gone.nhdr"), `${[...head, "data file: nowhere.raw"].join("\n")}\n`);
    await expect(openScan(join(folder, "gone.nhdr"))).rejects.toThrow(/nowhere\.raw.*nothing under this name/);
    await writeFile(join(folder, "short.nhdr"), `${[...head, "data file: LIST", "h0.raw", "s007.raw"].join("\n")}\n`);
    await expect(openScan(join(folder, "short.nhdr"))).rejects.toThrow(/s007\.raw.*expected 24 bytes.*found 12 bytes/);
  });

  it("that is cut short is refused, raw at once and gzip when it is read", async () => {
    const folder = await scratchFolder();
    const raw = nrrdBytes(order(SETTLED));
    await writeFile(join(folder, "raw.nrrd"), raw.subarray(0, raw.length - 1));
    await expect(scanInfo(join(folder, "raw.nrrd"))).rejects.toThrow(/expected 48 bytes of voxels.*found 47 bytes/);
    const gzip = nrrdBytes(order(SETTLED, { gzip: true }));
    await writeFile(join(folder, "gzip.nrrd"), gzip.subarray(0, gzip.length - 14));
    await expect(scanInfo(join(folder, "gzip.nrrd"))).rejects.toThrow(/expected a whole gzip stream, found one that ends early/);
    const lying = nrrdBytes(order(SETTLED, { gzip: true, sizes: [2, 3, 5] }));
    await writeFile(join(folder, "lying.nrrd"), lying);
    await expect(scanInfo(join(folder, "lying.nrrd"))).rejects.toThrow(/expected 60 bytes.*found 48 bytes/);
    const absurd = nrrdBytes(order(SETTLED, { gzip: true, sizes: [20000, 20000, 20000] }));
    await writeFile(join(folder, "absurd.nrrd"), absurd);
    await expect(openScan(join(folder, "absurd.nrrd"))).rejects.toThrow(/cannot hold them/);
  });

  it("whose gzip stream goes on far beyond its size is read to that size and no further", async () => {
    const folder = await scratchFolder();
    const header = nrrdBytes(order(SETTLED, { values: [], gzip: true }))
      .toString("latin1")
      .split("\n\n")[0]!;
    const bomb = gzipSync(Buffer.concat([bytesOf(VALUES, "uint16", true), Buffer.alloc(256 * 1024 * 1024)]), { level: 1 });
    await writeFile(join(folder, "bomb.nrrd"), Buffer.concat([Buffer.from(`${header}\n\n`, "latin1"), bomb]));
    const before = process.memoryUsage().arrayBuffers;
    expect(await voxelsOf(join(folder, "bomb.nrrd"))).toEqual(VALUES);
    expect(process.memoryUsage().arrayBuffers - before).toBeLessThan(64 * 1024 * 1024);
  });

  it("with mutated or truncated gzip data gives a typed error or its voxels, never anything else", async () => {
    const folder = await scratchFolder();
    const noise = Array.from({ length: 24 }, (_, k) => (k * 40503) % 65536);
    const whole = nrrdBytes(order(SETTLED, { gzip: true, values: noise }));
    const start = whole.indexOf("\n\n") + 2;
    const random = seeded(4);
    let refused = 0;
    for (let turn = 0; turn < 300; turn++) {
      const bytes = Buffer.from(
        turn % 3 === 0 ? whole.subarray(0, start + Math.floor(random() * (whole.length - start))) : whole,
      );
      if (bytes.length > start) bytes[start + Math.floor(random() * (bytes.length - start))] = Math.floor(random() * 256);
      const path = join(folder, "fuzz.nrrd");
      await writeFile(path, bytes);
      try {
        await voxelsOf(path);
      } catch (error) {
        expect((error as { tag?: string }).tag, `turn ${turn}: ${String(error)}`).toBe("unreadable-input");
        refused++;
      }
    }
    expect(refused).toBeGreaterThan(100);
  });

  it("with a number or a name of a hundred thousand characters is refused at once", async () => {
    // In quadratic time this would take minutes, and the test would run out of its time.
    const numbers = ["space: LPS", `space origin: (0,0,${"1".repeat(100_000)}x)`, "space directions: (1,0,0) (0,1,0) (0,0,1)"];
    for (const lines of [numbers, [...SETTLED, `data file: ${"%d".repeat(100_000)}`]])
      await expect(openScan(await writeNrrd(await scratchFolder(), "long.nrrd", order(lines)))).rejects.toMatchObject({
        tag: "unreadable-input",
      });
  });

  it("mutated or truncated anywhere in its header gives a typed error or a scan, never anything else", async () => {
    const folder = await scratchFolder();
    const whole = nrrdBytes(order([...SETTLED, "kinds: domain domain domain", "byte skip: 0"]));
    const headerLength = whole.indexOf("\n\n");
    const random = seeded(20261201);
    const outcomes = { scans: 0, refused: 0 };
    for (let turn = 0; turn < 600; turn++) {
      const bytes = Buffer.from(turn % 3 === 0 ? whole.subarray(0, Math.floor(random() * whole.length)) : whole);
      for (let k = 0; k < 1 + Math.floor(random() * 4) && bytes.length > 0; k++)
        bytes[Math.floor(random() * Math.min(bytes.length, headerLength))] = Math.floor(random() * 256);
      const path = join(folder, "fuzz.nrrd");
      await writeFile(path, bytes);
      try {
        await voxelsOf(path);
        outcomes.scans++;
      } catch (error) {
        expect((error as { tag?: string }).tag, `turn ${turn}: ${String(error)}`).toBe("unreadable-input");
        outcomes.refused++;
      }
    }
    expect(outcomes.refused).toBeGreaterThan(100);
    expect(outcomes.scans).toBeGreaterThan(20);
  });
});
