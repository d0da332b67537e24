import { readdir, readFile, rm, truncate, writeFile } from "node:fs/promises";
import { join } from "node:path";
import FileSystemStore from "@zarrita/storage/fs";
import { describe, expect, it } from "vitest";
import * as zarr from "zarrita";
import { openScan } from "#main/intake/open-scan.ts";
import { scanInfo } from "#main/intake/scan-info.ts";
import { gatherVoxels } from "#test/main/intake/gather-voxels.ts";
import { AXES, CODE, writeZarr, ZYX } from "#test/main/intake/ome-zarr/zarr-by-hand.ts";
import { seeded } from "#test/main/intake/written-by-hand.ts";

function ramp(count: number, step = 1): number[] {
  return Array.from({ length: count }, (_, k) => (k * step) % 120);
}

async function voxelsOf(path: string, choice = {}): Promise<number[]> {
  const source = await openScan(path, choice);
  return gatherVoxels(source);
}

describe("an OME-Zarr image", () => {
  for (const version of ["0.4", "0.5"] as const) {
    it.each(Object.keys(CODE))(`${version} of %s gives its values in both byte orders, plain and gzipped`, async (dtype) => {
      const values = ramp(5 * 7 * 9, 3);
      for (const little of [true, false])
        for (const gzip of [true, false]) {
          const folder = await writeZarr({ version, shape: [5, 7, 9], chunks: [2, 4, 5], dtype, values, little, gzip });
          expect(await voxelsOf(folder)).toEqual(values);
        }
    });

    it(`${version} has spacing, origin and unit from its axes and transformations, dataset and multiscale put together`, async () => {
      const folder = await writeZarr({
        version,
        shape: [4, 4, 4],
        chunks: [4, 4, 4],
        dtype: "uint8",
        values: ramp(64),
        transforms: [
          { type: "scale", scale: [20, 20, 20] },
          { type: "translation", translation: [10, 0, -30] },
        ],
        outer: [
          { type: "scale", scale: [2, 2, 2] },
          { type: "translation", translation: [1, 2, 3] },
        ],
      });
      const { header } = await openScan(folder);
      // Applied in turn: 2 * (20 i + t) + t'.
      expect(header.headerSpacing).toEqual([40, 40, 40]);
      expect(header.origin).toEqual([-57, 2, 21]);
      const info = await scanInfo(folder);
      expect(info.spacing).toEqual([0.04, 0.04, 0.04]);
      expect(info.unit).toBe("micrometer");
      expect(info.frame).toBe("scan");
    });

    it(`${version} of five axes is read where time and channel have one entry, and asks for a choice where not`, async () => {
      const axes = [AXES.t, AXES.c, ...ZYX];
      const one = await writeZarr({
        version,
        shape: [1, 1, 3, 2, 4],
        chunks: [1, 1, 2, 2, 2],
        dtype: "uint16",
        values: ramp(24),
        axes,
      });
      expect(await voxelsOf(one)).toEqual(ramp(24));
      const two = await writeZarr({
        version,
        shape: [2, 3, 2, 2, 2],
        chunks: [1, 2, 2, 2, 2],
        dtype: "uint16",
        values: ramp(48),
        axes,
      });
      await expect(openScan(two)).rejects.toThrow(/expected one time point, found 2 .*--time 0 to 1/);
      await expect(openScan(two, { time: 1 })).rejects.toThrow(/expected one channel, found 3/);
      await expect(openScan(two, { time: 1, channel: 3 })).rejects.toThrow(/number 3 of 3/);
      expect(await voxelsOf(two, { time: 1, channel: 2 })).toEqual(ramp(48).slice(40));
    });
  }

  it.each([
    ["zstd", { level: 1 }],
    ["lz4", {}],
    ["blosc", { cname: "lz4", clevel: 5, shuffle: "shuffle", typesize: 2, blocksize: 0 }],
  ])("with chunks packed by %s gives its values", async (name, configuration) => {
    // The library that reads them wrote them too: this shows that its unpackers are there, not that they are right.
    const values = ramp(10 * 11 * 12, 7);
    const folder = await writeZarr({ version: "0.5", shape: [10, 11, 12], chunks: [4, 4, 4], dtype: "uint16", values });
    await rm(join(folder, "s0"), { recursive: true });
    const codecs = [
      { name: "bytes", configuration: { endian: "little" } },
      { name, configuration },
    ];
    const place = zarr.root(new FileSystemStore(folder)).resolve("s0");
    const array = await zarr.create(place, { shape: [10, 11, 12], chunkShape: [4, 4, 4], dtype: "uint16", codecs });
    await zarr.set(array, null, { data: Uint16Array.from(values), shape: [10, 11, 12], stride: [132, 12, 1] });
    expect(await voxelsOf(folder)).toEqual(values);
  });

  it("0.4 with column-major chunks gives its values", async () => {
    const values = ramp(5 * 5 * 5);
    expect(
      await voxelsOf(
        await writeZarr({ version: "0.4", shape: [5, 5, 5], chunks: [3, 3, 3], dtype: "uint16", values, fortran: true }),
      ),
    ).toEqual(values);
  });

  it("with chunks that were never written has the fill value there", async () => {
    const folder = await writeZarr({
      version: "0.5",
      shape: [4, 2, 2],
      chunks: [2, 2, 2],
      dtype: "uint8",
      values: ramp(16).map((v) => v + 1),
    });
    await rm(join(folder, "s0/c/1"), { recursive: true });
    expect(await voxelsOf(folder)).toEqual([1, 2, 3, 4, 5, 6, 7, 8, 0, 0, 0, 0, 0, 0, 0, 0]);
  });

  it.each([
    ["scale 1.0 and no unit", [1, 1, 1], null, ["no-unit", "spacing-one", "no-frame"]],
    ["scale 1.0 and a unit", [1, 1, 1], "micrometer", ["spacing-one", "size-range", "no-frame"]],
    ["a unit that is no length", [40, 40, 40], "pixel", ["no-unit", "no-frame"]],
    ["a scale of 0", [40, 0, 40], "micrometer", ["bad-spacing", "no-frame"]],
    ["millimeters", [0.04, 0.04, 0.04], "millimeter", ["size-range", "no-frame"]],
    ["nanometers", [40000, 40000, 40000], "nanometer", ["size-range", "no-frame"]],
    [
      "unequal units",
      [40, 40, 40],
      ["micrometer", "micrometer", "nanometer"],
      ["anisotropic", "spacing-range", "size-range", "no-frame"],
    ],
  ] as const)("with %s has the warnings it should", async (_, scale, unit, codes) => {
    const units = typeof unit === "object" && unit ? unit : [unit, unit, unit];
    const axes = ["z", "y", "x"].map((name, k) => ({ name, type: "space", ...(units[k] ? { unit: units[k] } : {}) }));
    const folder = await writeZarr({
      version: "0.5",
      shape: [2, 2, 2],
      chunks: [2, 2, 2],
      dtype: "uint8",
      values: ramp(8),
      axes,
      transforms: [{ type: "scale", scale }],
    });
    expect((await scanInfo(folder)).warnings.map((w) => w.code)).toEqual(codes);
  });

  it.each([
    ["two axes", { axes: ZYX.slice(1), shape: [2, 4], chunks: [2, 4] }, /z, y, x/],
    ["axes x, y, z", { axes: [AXES.x, AXES.y, AXES.z] }, /expected axes of space z, y, x in this order, found x, y, z/],
    ["a transformation too short", { transforms: [{ type: "scale", scale: [1, 2] }] }, /3 numbers/],
    [
      "a translation before its scale",
      {
        transforms: [
          { type: "translation", translation: [0, 0, 0] },
          { type: "scale", scale: [1, 1, 1] },
        ],
      },
      /another order/,
    ],
  ] as const)("with %s is refused by a clear sentence", async (_, more, sentence) => {
    const folder = await writeZarr({
      version: "0.5",
      shape: [2, 2, 2],
      chunks: [2, 2, 2],
      dtype: "uint8",
      values: ramp(8),
      ...more,
    });
    await expect(openScan(folder)).rejects.toThrow(sentence);
  });

  it("with a chunk cut short is refused when it is read", async () => {
    for (const gzip of [true, false]) {
      const folder = await writeZarr({
        version: "0.5",
        shape: [4, 4, 4],
        chunks: [4, 4, 4],
        dtype: "uint16",
        values: ramp(64),
        gzip,
      });
      const chunk = join(folder, "s0/c/0/0/0");
      await truncate(chunk, (await readFile(chunk)).length - 6);
      await expect(scanInfo(folder)).rejects.toMatchObject({ tag: "unreadable-input" });
    }
  });

  it("whose array would need chunks beyond bounds, or a path outside it, is refused before anything is read", async () => {
    const folder = await writeZarr({ version: "0.5", shape: [4, 4, 4], chunks: [4, 4, 4], dtype: "uint16", values: ramp(64) });
    const text = await readFile(join(folder, "s0/zarr.json"), "utf8");
    await writeFile(join(folder, "s0/zarr.json"), text.replace('"chunk_shape":[4,4,4]', '"chunk_shape":[40000,40000,40000]'));
    await expect(openScan(folder)).rejects.toThrow(/chunks of at most/);
    const group = await readFile(join(folder, "zarr.json"), "utf8");
    await writeFile(join(folder, "zarr.json"), group.replace('"s0"', '"../../s0"'));
    await expect(openScan(folder)).rejects.toThrow(/inside the group/);
  });

  it("with mutated metadata gives a typed error or a scan, never anything else", async () => {
    const folders = [
      await writeZarr({ version: "0.4", shape: [3, 4, 5], chunks: [2, 4, 4], dtype: "uint16", values: ramp(60) }),
      await writeZarr({ version: "0.5", shape: [3, 4, 5], chunks: [2, 4, 4], dtype: "uint16", values: ramp(60), gzip: true }),
    ];
    const random = seeded(5);
    let refused = 0;
    for (let turn = 0; turn < 400; turn++) {
      const folder = folders[turn % 2]!;
      const names = (await readdir(folder, { recursive: true })).filter((name) =>
        /zarr\.json|\.zattrs|\.zarray|\.zgroup/.test(String(name)),
      );
      const path = join(folder, String(names[Math.floor(random() * names.length)]));
      const whole = await readFile(path);
      const bytes = Buffer.from(turn % 4 === 0 ? whole.subarray(0, Math.floor(random() * whole.length)) : whole);
      for (let k = 0; k < 3 && bytes.length > 0; k++) bytes[Math.floor(random() * bytes.length)] = 32 + Math.floor(random() * 95);
      await writeFile(path, bytes);
      try {
        await voxelsOf(folder);
      } catch (error) {
        expect((error as { tag?: string }).tag, `turn ${turn}: ${String((error as Error).stack)}`).toBe("unreadable-input");
        refused++;
      }
      await writeFile(path, whole);
    }
    expect(refused).toBeGreaterThan(100);
    expect(refused).toBeLessThan(400);
  });
});
