import { mkdir, writeFile } from "node:fs/promises";
import { dirname, join } from "node:path";
import { deflateSync, gzipSync } from "node:zlib";
import { bytesOf, scratchFolder } from "#test/main/intake/written-by-hand.ts";

/** What {@link writeZarr} writes. */
export interface HandZarr {
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
  /** Chunks packed with zlib (Zarr v2 only). */
  readonly zlib?: boolean;
  /** Chunks of zeros are left out. */
  readonly sparse?: boolean;
  /** Name of a packing that is written into the metadata only. */
  readonly named?: string;
  /** Column-major chunks (Zarr v2 only). */
  readonly fortran?: boolean;
}

/** Axes of space in micrometres, time and channels. */
export const AXES = {
  z: { name: "z", type: "space", unit: "micrometer" },
  y: { name: "y", type: "space", unit: "micrometer" },
  x: { name: "x", type: "space", unit: "micrometer" },
  t: { name: "t", type: "time", unit: "second" },
  c: { name: "c", type: "channel" },
};
/** The three axes of space in their order. */
export const ZYX = [AXES.z, AXES.y, AXES.x];
/** The two-letter codes of Zarr v2, by type. */
export const CODE: Record<string, string> = {
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
export async function writeZarr(zarr: HandZarr): Promise<string> {
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
      compressor: zarr.gzip || zarr.zlib || zarr.named ? { id: zarr.named ?? (zarr.gzip ? "gzip" : "zlib"), level: 5 } : null,
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
      ...(zarr.gzip || zarr.named ? [{ name: zarr.named ?? "gzip", configuration: { level: 5 } }] : []),
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
    if (zarr.sparse && cell.every((value) => value === 0)) return;
    const bytes = bytesOf(cell, dtype, little);
    await put(
      `s0/${version === "0.5" ? "c/" : ""}${prefix.join("/")}`,
      zarr.gzip ? gzipSync(bytes) : zarr.zlib ? deflateSync(bytes) : bytes,
    );
  };
  await walk([]);
  return folder;
}
