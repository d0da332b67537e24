// Stores used where they lie: written by hand from the Zarr v2 and v3 specifications (zarr-by-hand), with the shards of the
// program's own writer, and by zarrita; what comes out is held against the values that went in and against a copied specimen.
import { createHash } from "node:crypto";
import { cp, mkdir, readdir, readFile, rename, rm, utimes, writeFile } from "node:fs/promises";
import { join } from "node:path";
import FileSystemStore from "@zarrita/storage/fs";
import { describe, expect, it } from "vitest";
import * as zarr from "zarrita";
import { openStorePyramid } from "#main/engine/store-reader.ts";
import { checkInPlace, placeVerdict } from "#main/intake/in-place/in-place-scan.ts";
import { openScan } from "#main/intake/open-scan.ts";
import { lookAtScan } from "#main/intake/scan-info.ts";
import { takeIn } from "#main/intake/take-in.ts";
import { gatherVoxels } from "#test/main/intake/gather-voxels.ts";
import { AXES, type HandZarr, writeZarr } from "#test/main/intake/ome-zarr/zarr-by-hand.ts";
import { bytesOf, scratchFolder, seeded } from "#test/main/intake/written-by-hand.ts";

const order = (library: string, path: string, id: string) =>
  ({ library, path, id, created: 0, name: "HB-07", spacing: [0.04, 0.04, 0.04], handedness: "unknown", facts: {} }) as const;

/** Every file under a folder with its bytes' hash, and its time of change. */
async function facts(folder: string): Promise<string[]> {
  const found: string[] = [];
  for (const entry of await readdir(folder, { withFileTypes: true, recursive: true })) {
    if (!entry.isFile()) continue;
    const path = join(entry.parentPath, entry.name);
    found.push(
      `${path} ${createHash("sha256")
        .update(await readFile(path))
        .digest("hex")}`,
    );
  }
  return found.sort();
}

function valuesOf(dtype: string, count: number): number[] {
  const random = seeded(count);
  return Array.from({ length: count }, () => {
    if (dtype === "float32") return Math.fround(random() * 20 - 10);
    return Math.floor(random() * 250) - (dtype === "int16" ? 120 : 0);
  });
}

/** Voxel by voxel; printing thousands of them would help nobody. */
const same = (found: ArrayLike<number>, values: ArrayLike<number>) =>
  found.length === values.length && Array.from(found).every((value, n) => value === values[n]);

async function wholeLevel(specimen: string, level: number): Promise<Float32Array> {
  // A cache of 16 bricks, so that bricks come and go.
  const store = openStorePyramid(specimen, 16 * 65536);
  try {
    const { size } = store.levels[level]!;
    const out = new Float32Array(size[0] * size[1] * size[2]);
    store.readBoxInto(level, [0, 0, 0], size, out);
    return out;
  } finally {
    store.close();
  }
}

const CASES: { name: string; zarr: Partial<HandZarr>; choice?: { channel?: number; time?: number } }[] = [
  { name: "plain v2 chunks", zarr: { version: "0.4", chunks: [16, 20, 40] } },
  { name: "v2 chunks packed with gzip", zarr: { version: "0.4", chunks: [32, 32, 32], gzip: true } },
  { name: "v2 chunks packed with zlib", zarr: { version: "0.4", chunks: [33, 8, 64], zlib: true, dtype: "int16" } },
  { name: "plain v3 chunks of a brick's size", zarr: { version: "0.5", chunks: [32, 32, 32], dtype: "float32" } },
  { name: "plain v3 chunks in one piece", zarr: { version: "0.5", chunks: [38, 35, 70], dtype: "uint8" } },
  { name: "v3 chunks packed with gzip", zarr: { version: "0.5", chunks: [38, 24, 50], gzip: true, dtype: "float32" } },
  {
    name: "one channel of two",
    zarr: { version: "0.5", chunks: [1, 32, 32, 32], shape: [2, 38, 35, 70], axes: [AXES.c, AXES.z, AXES.y, AXES.x] },
    choice: { channel: 1 },
  },
  {
    name: "one time point of two, packed",
    zarr: { version: "0.4", chunks: [1, 32, 32, 32], shape: [2, 38, 35, 70], gzip: true, axes: [AXES.t, AXES.z, AXES.y, AXES.x] },
    choice: { time: 0 },
  },
];

describe("a scan used where it lies", () => {
  it.each(CASES)("gives the same voxels and coarser levels as a copy: $name", async ({ zarr: given, choice }) => {
    const dtype = given.dtype ?? "uint16";
    const shape = given.shape ?? [38, 35, 70];
    const values = valuesOf(
      dtype,
      shape.reduce((a, b) => a * b),
    );
    const path = await writeZarr({ dtype, shape, values, version: "0.5", chunks: [32, 32, 32], ...given });
    const before = await facts(path);
    const library = await scratchFolder();
    const copied = await takeIn({ ...order(library, path, "copiedaaaaaaaaaaaaaa"), ...choice });
    const made = await takeIn({ ...order(library, path, "inplaceaaaaaaaaaaaaa"), keep: "in-place", ...choice });
    const home = (id: string) => join(library, "specimens", id);
    expect(made.record.volume.sha256).toBe(copied.record.volume.sha256);
    expect({ ...made.record.volume, inPlace: undefined }).toEqual({ ...copied.record.volume, inPlace: undefined });
    // Level 0 was not written: the finest of what was is level 1.
    expect((await readdir(join(home(made.record.id), "scan.ome.zarr"))).sort()).toEqual(["1", "zarr.json"]);
    expect(made.storeBytes).toBeLessThan(copied.storeBytes / 2);
    // Values straight from the list, per voxel.
    const volume = 38 * 35 * 70;
    const from = (choice?.channel ?? choice?.time ?? 0) * volume;
    const found = await wholeLevel(home(made.record.id), 0);
    const chosen = values.slice(from, from + volume);
    expect(same(found, chosen)).toBe(true);
    expect(same(await wholeLevel(home(made.record.id), 1), await wholeLevel(home(copied.record.id), 1))).toBe(true);
    // The specimen's folder stands for its scan, in its own frame.
    const source = await openScan(home(made.record.id));
    expect(source.header.headerSpacing).toEqual([0.04, 0.04, 0.04]);
    expect(same(await gatherVoxels(source), chosen)).toBe(true);
    // The scan was only read.
    expect(await facts(path)).toEqual(before);
  });

  it("is the store of another library's specimen, in shards, plain or packed", async () => {
    const values = valuesOf("uint16", 38 * 35 * 70);
    const path = await writeZarr({ version: "0.5", dtype: "uint16", shape: [38, 35, 70], chunks: [38, 35, 70], values });
    const library = await scratchFolder();
    for (const keep of ["plain", "packed"] as const) {
      const first = await takeIn({ ...order(library, path, `${keep}aaaaaaaaaaaaaaaaa`.slice(0, 20)), keep });
      const scan = join(library, "specimens", first.record.id);
      const next = await takeIn({ ...order(library, scan, `next${keep}aaaaaaaaaaaa`.slice(0, 20)), keep: "in-place" });
      expect(next.record.volume.sha256).toBe(first.record.volume.sha256);
      expect(same(await wholeLevel(join(library, "specimens", next.record.id), 0), values)).toBe(true);
    }
  });

  it.each([
    ["plain", []],
    [
      "packed with blosc",
      [{ name: "blosc", configuration: { cname: "lz4", clevel: 5, shuffle: "shuffle", typesize: 2, blocksize: 0 } }],
    ],
  ])("is a store that zarrita wrote, %s", async (_, packing) => {
    const folder = join(await scratchFolder(), "made.zarr");
    const values = valuesOf("uint16", 40 * 33 * 70);
    const axes = [AXES.z, AXES.y, AXES.x];
    const datasets = [{ path: "0", coordinateTransformations: [{ type: "scale", scale: [40, 40, 40] }] }];
    const root = zarr.root(new FileSystemStore(folder));
    await zarr.create(root, { attributes: { ome: { version: "0.5", multiscales: [{ axes, datasets }] } } });
    const array = await zarr.create(root.resolve("0"), {
      dtype: "uint16",
      shape: [40, 33, 70],
      chunkShape: [20, 33, 35],
      codecs: [{ name: "bytes", configuration: { endian: "little" } }, ...packing],
    });
    await zarr.set(array, null, { data: Uint16Array.from(values), shape: [40, 33, 70], stride: [33 * 70, 70, 1] });
    const library = await scratchFolder();
    const made = await takeIn({ ...order(library, folder, "inplaceaaaaaaaaaaaaa"), keep: "in-place" });
    expect(made.record.volume.sha256).toBe(
      createHash("sha256")
        .update(bytesOf(values, "uint16", true))
        .digest("hex"),
    );
    expect(same(await wholeLevel(join(library, "specimens", made.record.id), 0), values)).toBe(true);
  });

  it("has zeros, or its fill value, where chunks were left out", async () => {
    const values = valuesOf("uint16", 64 * 40 * 40).map((value, n) => (n < 32 * 40 * 40 ? 0 : value + 1));
    const path = await writeZarr({
      version: "0.5",
      dtype: "uint16",
      shape: [64, 40, 40],
      chunks: [32, 40, 40],
      values,
      sparse: true,
    });
    expect(await readdir(join(path, "s0", "c"))).toEqual(["1"]);
    const library = await scratchFolder();
    const made = await takeIn({ ...order(library, path, "inplaceaaaaaaaaaaaaa"), keep: "in-place" });
    expect(same(await wholeLevel(join(library, "specimens", made.record.id), 0), values)).toBe(true);
  });
});

describe("a scan that was used in place", () => {
  async function placed() {
    const values = valuesOf("uint16", 40 * 34 * 36);
    const path = await writeZarr({ version: "0.5", dtype: "uint16", shape: [40, 34, 36], chunks: [20, 34, 36], values });
    const library = await scratchFolder();
    const { record } = await takeIn({ ...order(library, path, "inplaceaaaaaaaaaaaaa"), keep: "in-place" });
    return { path, home: join(library, "specimens", record.id), scan: record.volume.inPlace! };
  }
  const said = (act: Promise<unknown>) =>
    act.then(
      () => "nothing",
      (error: Error) => error.message,
    );

  it("and was moved is missed, with what to do, when it is opened and when a brick is read", async () => {
    const { path, home, scan } = await placed();
    expect(await said(checkInPlace(scan))).toBe("nothing");
    await rename(path, `${path}-away`);
    for (const sentence of [await said(checkInPlace(scan)), await said(openScan(home)), await said(wholeLevel(home, 0))]) {
      expect(sentence).toMatch(/found nothing there\..*Put it back where it was.*or take it in again/);
      expect(sentence).not.toContain(path.slice(0, -"scan.zarr".length));
    }
    await rename(`${path}-away`, path);
    expect(await said(checkInPlace(scan))).toBe("nothing");
  });

  it("and was moved gets its new place when it is taken in again from there, and keeps its id", async () => {
    const { path, home, scan } = await placed();
    const library = join(home, "..", "..");
    const again = (id: string, from: string) => takeIn({ ...order(library, from, id), name: "again", keep: "in-place" });
    // While it is there a second specimen is a second specimen.
    expect((await again("secondaaaaaaaaaaaaaa", path)).record.id).toBe("secondaaaaaaaaaaaaaa");
    await rm(join(library, "specimens", "secondaaaaaaaaaaaaaa"), { recursive: true });
    const away = join(path, "..", "moved.zarr");
    await rename(path, away);
    const { record } = await again("thirdaaaaaaaaaaaaaaa", away);
    expect([record.id, record.name, record.volume.inPlace]).toEqual([home.split("/").at(-1), "HB-07", { ...scan, path: away }]);
    expect(JSON.parse(await readFile(join(home, "specimen.json"), "utf8"))).toEqual(record);
    expect([await readdir(join(library, "specimens")), (await readdir(home)).sort()]).toEqual([
      [record.id],
      ["scan.ome.zarr", "specimen.json"],
    ]);
    expect(await said(wholeLevel(home, 0))).toBe("nothing");
    // Other voxels are another specimen.
    await rename(away, path);
    const values = valuesOf("uint16", 40 * 34 * 36).reverse();
    const other = await writeZarr({ version: "0.5", dtype: "uint16", shape: [40, 34, 36], chunks: [20, 34, 36], values });
    expect((await again("fourthaaaaaaaaaaaaaa", other)).record.id).toBe("fourthaaaaaaaaaaaaaa");
  });

  it("and was changed is found, by its files, bytes and times", async () => {
    const { path, home, scan } = await placed();
    const chunk = join(path, "s0", "c", "1", "0", "0");
    const whole = await readFile(chunk);
    // In the middle of its millisecond: seconds as a fraction may come out a little short.
    const stat = (scan.changed + 0.5) / 1000;
    await writeFile(chunk, whole);
    expect(await said(checkInPlace(scan))).toMatch(/found files of .*Put the earlier one back/);
    expect(await said(wholeLevel(home, 0))).toContain("a chunk that was written since");
    await writeFile(chunk, whole.subarray(2));
    expect(await said(checkInPlace(scan))).toMatch(/bytes instead of/);
    await writeFile(chunk, whole);
    await utimes(chunk, stat, stat);
    expect(await said(checkInPlace(scan))).toBe("nothing");
    await rm(chunk);
    expect(await said(checkInPlace(scan))).toMatch(/files instead of/);
    await cp(join(path, "s0", "c", "0", "0", "0"), chunk);
    const metadata = join(path, "s0", "zarr.json");
    await writeFile(metadata, (await readFile(metadata, "utf8")).replace("uint16", "uint8"));
    expect(await said(wholeLevel(home, 0))).toContain("uint8 voxels");
  });
});

describe("whether a store can be used where it lies", () => {
  const small = {
    version: "0.5",
    dtype: "uint16",
    shape: [40, 34, 36],
    chunks: [20, 34, 36],
    values: valuesOf("uint16", 40 * 34 * 36),
  } as const;
  it.each([
    ["big-endian", { ...small, little: false }, "big-endian"],
    ["packed with blosc (v2)", { ...small, version: "0.4", named: "blosc" }, "its chunks are packed with blosc"],
    ["packed with zstd (v3)", { ...small, named: "zstd" }, "its chunks are packed with zstd"],
    ["of a type that is converted", { ...small, dtype: "int32" }, "its voxels are of type 'int32'"],
    ["in slices", { ...small, chunks: [1, 34, 36] }, "those thinner than 8 voxels"],
    [
      "in large packed chunks",
      { ...small, shape: [70, 66, 66], chunks: [70, 66, 66], values: [], gzip: true },
      "up to 64 x 64 x 64",
    ],
    ["column-major", { ...small, version: "0.4", fortran: true, shape: [36, 36, 36], chunks: [36, 36, 36] }, "stored x-slowest"],
    [
      "of several channels in each chunk",
      { ...small, shape: [2, 20, 34, 36], chunks: [2, 20, 34, 36], axes: [AXES.c, AXES.z, AXES.y, AXES.x] },
      "several channels or time points together",
    ],
  ] as const)("is answered with the reason when it is %s, and nothing is made", async (_, given, why) => {
    const path = await writeZarr(given as HandZarr);
    expect(await placeVerdict(path, { orFirst: true })).toMatchObject({ fits: false, why: expect.stringContaining(why) });
    const library = await scratchFolder();
    await expect(takeIn({ ...order(library, path, "inplaceaaaaaaaaaaaaa"), channel: 0, keep: "in-place" })).rejects.toThrow();
    expect(await readdir(library)).toEqual([]);
  });

  it("is told by a look, and is no question for other scans", async () => {
    expect((await lookAtScan(await writeZarr(small))).inPlace).toEqual({ fits: true });
    const path = await writeZarr({
      ...small,
      shape: [3, 20, 17, 18],
      chunks: [1, 20, 17, 18],
      axes: [AXES.c, AXES.z, AXES.y, AXES.x],
      values: valuesOf("uint16", 3 * 20 * 17 * 18),
    });
    const look = await lookAtScan(path);
    expect([look.readings, look.inPlace]).toEqual([{ channels: 3, times: 1 }, { fits: true }]);
    // Without a choice the look is at the first; with one, at that one.
    const second = await lookAtScan(path, { choice: { channel: 1 } });
    expect(second.slice.data).not.toBe(look.slice.data);
    await mkdir(join(path, "..", "library"));
    await expect(takeIn(order(join(path, "..", "library"), path, "unchosenaaaaaaaaaaaa"))).rejects.toThrow(/--channel 0 to 2/);
  });

  it.each([{ mirror: true }, { region: { crop: [0, 0, 0, 36, 34, 39], bin: 1 } }] as const)(
    "is refused together with %j",
    async (more) => {
      const library = await scratchFolder();
      const path = await writeZarr(small);
      const asked = { ...order(library, path, "inplaceaaaaaaaaaaaaa"), keep: "in-place", ...more } as const;
      await expect(takeIn(asked)).rejects.toThrow(/always copied/);
      expect(await readdir(library)).toEqual([]);
    },
  );
});
