import { mkdir, readdir, readFile, rm, truncate, writeFile } from "node:fs/promises";
import { dirname, join } from "node:path";
import { gzipSync } from "node:zlib";
import FileSystemStore from "@zarrita/storage/fs";
import { describe, expect, it } from "vitest";
import * as zarr from "zarrita";
import { openScan } from "#main/intake/open-scan.ts";
import { scanInfo } from "#main/intake/scan-info.ts";
import { gatherVoxels } from "#test/main/intake/gather-voxels.ts";
import { bytesOf, scratchFolder, seeded } from "#test/main/intake/written-by-hand.ts";

interface HandZarr {
  readonly version: "0.4" | "0.5";
  readonly shape: readonly number[];
  readonly chunks: readonly number[];
  readonly dtype: string;
  /** C order. */
  readonly values: readonly number[];
  readonly axes?: readonly unknown[];
  /** Transformations of the dataset. */
  readonly transforms?: unknown;
  /** Transformations of the multiscale. */
  readonly outer?: unknown;
  readonly little?: boolean;
  readonly gzip?: boolean;
  /** Column-major chunks (Zarr v2 only). */
  readonly fortran?: boolean;
}

const AXES = {
  z: { name: "z", type: "space", unit: "micrometer" },
  y: { name: "y", type: "space", unit: "micrometer" },
  x: { name: "x", type: "space", unit: "micrometer" },
  t: { name: "t", type: "time", unit: "second" },
  c: { name: "c", type: "channel" },
};
const ZYX = [AXES.z, AXES.y, AXES.x];
const CODE: Record<string, string> = {
  uint8: "u1",
  int8: "i1",
  uint16: "u2",
  int16: "i2",
  uint32: "u4",
  int32: "i4",
  uint64: "u8",
  int64: "i8",
  float32: "f4",
  float64: "f8",
};

/** Writes an OME-Zarr group by hand: metadata as the two specifications print it, chunks as plain or gzipped bytes. */
async function writeZarr(zarr: HandZarr): Promise<string> {
  const folder = join(await scratchFolder(), "scan.zarr");
  const { version, shape, chunks, dtype } = zarr;
  const little = zarr.little ?? true;
  const put = async (path: string, content: string | Uint8Array) => {
    await mkdir(dirname(join(folder, path)), { recursive: true });
    await writeFile(join(folder, path), content);
  };
  const image = {
    axes: zarr.axes ?? ZYX,
    datasets: [
      { path: "s0", coordinateTransformations: zarr.transforms ?? [{ type: "scale", scale: shape.map(() => 40) }] },
      { path: "s1", coordinateTransformations: [{ type: "scale", scale: shape.map(() => 80) }] },
    ],
    ...(zarr.outer === undefined ? {} : { coordinateTransformations: zarr.outer }),
  };
  if (version === "0.4") {
    await put(".zgroup", JSON.stringify({ zarr_format: 2 }));
    await put(".zattrs", JSON.stringify({ multiscales: [{ version: "0.4", ...image }] }));
    const order = dtype.endsWith("8") && !dtype.includes("6") ? "|" : little ? "<" : ">";
    const array = {
      zarr_format: 2,
      shape,
      chunks,
      dtype: `${order}${CODE[dtype]}`,
      compressor: zarr.gzip ? { id: "gzip", level: 5 } : null,
    };
    await put(
      "s0/.zarray",
      JSON.stringify({ ...array, fill_value: 0, order: zarr.fortran ? "F" : "C", filters: null, dimension_separator: "/" }),
    );
  } else {
    await put(
      "zarr.json",
      JSON.stringify({ zarr_format: 3, node_type: "group", attributes: { ome: { version: "0.5", multiscales: [image] } } }),
    );
    const codecs = [
      { name: "bytes", configuration: { endian: little ? "little" : "big" } },
      ...(zarr.gzip ? [{ name: "gzip", configuration: { level: 5 } }] : []),
    ];
    const grid = { name: "regular", configuration: { chunk_shape: chunks } };
    const key = { name: "default", configuration: { separator: "/" } };
    await put(
      "s0/zarr.json",
      JSON.stringify({
        zarr_format: 3,
        node_type: "array",
        shape,
        data_type: dtype,
        chunk_grid: grid,
        chunk_key_encoding: key,
        fill_value: 0,
        codecs,
      }),
    );
  }
  const walk = async (prefix: number[]): Promise<void> => {
    if (prefix.length < shape.length) {
      for (let k = 0; k * chunks[prefix.length]! < shape[prefix.length]!; k++) await walk([...prefix, k]);
      return;
    }
    const cell: number[] = [];
    const visit = (at: number[]): void => {
      if (at.length < shape.length) {
        for (let k = 0; k < chunks[at.length]!; k++) visit([...at, k]);
        return;
      }
      const local = zarr.fortran ? [...at].reverse() : at;
      const place = local.map((v, k) => v + prefix[k]! * chunks[k]!);
      const inside = place.every((v, k) => v < shape[k]!);
      cell.push(inside ? zarr.values[place.reduce((sum, v, k) => sum * shape[k]! + v, 0)]! : 0);
    };
    // For column-major chunks the first axis runs fastest: walk the reversed box and reverse each place.
    if (zarr.fortran && new Set(chunks).size > 1) throw new Error("column-major fixtures use cubes");
    visit([]);
    const bytes = bytesOf(cell, dtype, little);
    await put(`s0/${version === "0.5" ? "c/" : ""}${prefix.join("/")}`, zarr.gzip ? gzipSync(bytes) : bytes);
  };
  await walk([]);
  return folder;
}

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
