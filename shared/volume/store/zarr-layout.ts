import { BYTES_OF_DTYPE, type StoredDtype } from "#shared/volume/dtype.ts";
import type { ChunkedArray, Packing } from "#shared/volume/store/chunked-array.ts";

/** Most voxels of a packed chunk: one has to be unpacked whole for any brick in it. */
export const MOST_PACKED_VOXELS = 64 ** 3;
/** Most bytes of a plain chunk, of which only rows are read. */
export const MOST_PLAIN_BYTES = 8 * 1024 * 1024;
/** Most chunks of a shard: the index of every open one is kept. */
const MOST_IN_SHARD = 65_536;
/** Least side of a chunk, unless the array itself is thinner: thinner ones make a brick of too many pieces. */
export const LEAST_SIDE = 8;

/** What stores can be read where they lie, for messages and help. */
export const FITS_IN_PLACE =
  "voxels of uint8, uint16, int16 or float32, little-endian; chunks of 8 voxels a side or more, plain (to 8 MB) or packed with gzip, zlib or blosc with LZ4 inside (to 64 x 64 x 64 voxels), single or in shards";

export type LayoutVerdict = { readonly array: ChunkedArray } | { readonly why: string };

type Json = Record<string, unknown>;
const isObject = (value: unknown): value is Json => typeof value === "object" && value !== null && !Array.isArray(value);
const DTYPES: readonly string[] = ["uint8", "uint16", "int16", "float32"];

/** A fault of the metadata, or a way of storing that cannot be read brick by brick. */
class Unfit extends Error {}
const unfit = (why: string): never => {
  throw new Unfit(why);
};

/**
 * How an array's chunks lie in files, or why it cannot be read brick by brick, as the rest of a sentence.
 * @param metadata the parsed `zarr.json` (Zarr v3) or `.zarray` (v2) of the array.
 * @param selection per array axis: `space` (three of them, in the order z, y, x), or the one index that is read.
 * @source Zarr v3 core, codecs `bytes`, `gzip`, `sharding_indexed`, `crc32c`; Zarr v2 storage specification.
 */
export function layoutOfArray(metadata: unknown, selection: readonly ("space" | number)[]): LayoutVerdict {
  try {
    if (!isObject(metadata)) return { why: "its metadata is not a JSON object." };
    const array = metadata.zarr_format === 2 ? layoutOfV2(metadata, selection) : layoutOfV3(metadata, selection);
    refuseSlow(array);
    return { array };
  } catch (error) {
    if (error instanceof Unfit) return { why: error.message };
    throw error;
  }
}

function layoutOfV3(metadata: Json, selection: readonly ("space" | number)[]): ChunkedArray {
  if (metadata.zarr_format !== 3 || metadata.node_type !== "array") unfit("its metadata is not that of a Zarr v2 or v3 array.");
  const dtype = dtypeOf(metadata.data_type);
  const grid = named(metadata.chunk_grid);
  if (grid.name !== "regular") unfit(`its chunk grid is '${short(grid.name)}'; regular ones can be read.`);
  if (Array.isArray(metadata.storage_transformers) && metadata.storage_transformers.length > 0)
    unfit("it has storage transformers.");
  const shape = sides(metadata.shape, selection.length);
  const outer = sides(grid.configuration.chunk_shape, selection.length);
  const encoding = named(metadata.chunk_key_encoding);
  const isDefault = encoding.name === "default";
  if (!isDefault && encoding.name !== "v2") unfit(`its chunk keys are '${short(encoding.name)}'.`);
  const separator = encoding.configuration.separator ?? (isDefault ? "/" : ".");
  const codecs = codecsOf(metadata.codecs);
  const path = keysOf(selection, outer, separator, isDefault ? "c" : null);
  const common = { dtype, shape: zyxOf(shape, selection), fill: fillOf(metadata.fill_value), path };
  if (codecs[0]?.name !== "sharding_indexed") {
    return { ...common, chunk: zyxOf(outer, selection), packing: packingOf(codecs, dtype), shard: null };
  }
  if (codecs.length > 1) unfit("its shards are packed as a whole.");
  const { configuration } = codecs[0];
  const inner = sides(configuration.chunk_shape, selection.length);
  if (inner.some((side, k) => outer[k]! % side !== 0)) unfit("its shards do not hold whole chunks.");
  const index = codecsOf(configuration.index_codecs);
  const isChecked = index[1]?.name === "crc32c";
  if (index[0]?.name !== "bytes" || index[0].configuration.endian === "big" || index.length > (isChecked ? 2 : 1))
    unfit("the indices of its shards are packed in another way.");
  const indexAt = configuration.index_location ?? "end";
  if (indexAt !== "end" && indexAt !== "start") unfit("the place of its shards' indices is not known.");
  const [z, y, x] = zyxOf(outer, selection);
  const chunk = zyxOf(inner, selection);
  if ((z * y * x) / (chunk[0] * chunk[1] * chunk[2]) > MOST_IN_SHARD) unfit(`its shards hold more than ${MOST_IN_SHARD} chunks.`);
  return {
    ...common,
    chunk,
    packing: packingOf(codecsOf(configuration.codecs), dtype),
    shard: { chunks: [z / chunk[0], y / chunk[1], x / chunk[2]], indexAt: indexAt as "start" | "end", isChecked },
  };
}

function layoutOfV2(metadata: Json, selection: readonly ("space" | number)[]): ChunkedArray {
  const types: Record<string, StoredDtype> = {
    "|u1": "uint8",
    "<u1": "uint8",
    "<u2": "uint16",
    "<i2": "int16",
    "<f4": "float32",
  };
  const dtype = types[String(metadata.dtype)] ?? unfit(`its voxels are of type '${short(metadata.dtype)}'.`);
  if (metadata.order !== "C") unfit("its chunks are stored x-slowest ('order' is not C).");
  if (Array.isArray(metadata.filters) && metadata.filters.length > 0) unfit("its chunks go through filters.");
  const id = metadata.compressor == null ? null : isObject(metadata.compressor) ? metadata.compressor.id : "?";
  if (id === "blosc") refuseOtherBlosc(metadata.compressor as Json, dtype);
  else if (id !== null && id !== "gzip" && id !== "zlib") unfit(packedWith(id));
  const shape = sides(metadata.shape, selection.length);
  const chunks = sides(metadata.chunks, selection.length);
  return {
    dtype,
    shape: zyxOf(shape, selection),
    chunk: zyxOf(chunks, selection),
    packing: (id ?? "plain") as Packing,
    shard: null,
    fill: fillOf(metadata.fill_value),
    path: keysOf(selection, chunks, metadata.dimension_separator ?? ".", null),
  };
}

/** Bricks have to come quickly, so chunks may be neither large nor thin. */
function refuseSlow({ chunk, shape, packing, dtype }: ChunkedArray): void {
  const voxels = chunk[0] * chunk[1] * chunk[2];
  const words = `its chunks are ${chunk[2]} x ${chunk[1]} x ${chunk[0]} voxels`;
  if (chunk.some((side, axis) => side < Math.min(LEAST_SIDE, shape[axis]!)))
    unfit(`${words}; those thinner than ${LEAST_SIDE} voxels make a plane of too many pieces.`);
  if (packing !== "plain" && voxels > MOST_PACKED_VOXELS)
    unfit(`${words}, packed; up to 64 x 64 x 64 can be unpacked quickly enough.`);
  if (voxels * BYTES_OF_DTYPE[dtype] > MOST_PLAIN_BYTES)
    unfit(`${words}; up to ${MOST_PLAIN_BYTES / 2 ** 20} MB each can be read.`);
}

function packingOf(codecs: readonly Named[], dtype: StoredDtype): Packing {
  const [first, second] = codecs;
  if (!first) unfit("its metadata does not say how its voxels are written.");
  if (first?.name !== "bytes")
    unfit(first?.name === "transpose" ? "its axes are stored in another order." : packedWith(first?.name));
  if (first!.configuration.endian === "big" && BYTES_OF_DTYPE[dtype] > 1) unfit("its voxels are big-endian.");
  if (!second) return "plain";
  if (second.name === "blosc") refuseOtherBlosc(second.configuration, dtype);
  else if (second.name !== "gzip") unfit(packedWith(second.name));
  if (codecs.length > 2) unfit(packedWith(codecs[2]!.name));
  return second.name as "gzip" | "blosc";
}

/** Of what blosc can hold, LZ4 is read, with bytes shuffled or not; -1 leaves it to the writer, which shuffles bits of bytes alone. */
function refuseOtherBlosc({ cname, shuffle }: Json, dtype: StoredDtype): void {
  if (cname !== "lz4" && cname !== "lz4hc") unfit(packedWith(`blosc (${short(cname)})`));
  if (shuffle === 2 || shuffle === "bitshuffle" || (shuffle === -1 && dtype === "uint8"))
    unfit(packedWith("blosc (shuffled bits)"));
}

const packedWith = (name: unknown) =>
  `its chunks are packed with ${short(name)}; plain ones, gzip, zlib and blosc with LZ4 can be read.`;

function dtypeOf(value: unknown): StoredDtype {
  if (!DTYPES.includes(String(value))) unfit(`its voxels are of type '${short(value)}'; ${DTYPES.join(", ")} can be read.`);
  return value as StoredDtype;
}

function fillOf(value: unknown): number {
  if (typeof value === "number") return value;
  if (value === null || value === undefined) return 0;
  return value === "NaN" ? Number.NaN : unfit("its fill value is no plain number.");
}

function sides(value: unknown, count: number): number[] {
  const good = Array.isArray(value) && value.length === count && value.every((n) => Number.isSafeInteger(n) && n > 0);
  return good ? (value as number[]) : unfit("its shape or chunks are not positive whole numbers.");
}

/** Sides along z, y and x; along other axes chunks must be single, so that no voxel of another volume is read. */
function zyxOf(all: readonly number[], selection: readonly ("space" | number)[]): [number, number, number] {
  const [z, y, x] = all.filter((_, k) => selection[k] === "space");
  return [z!, y!, x!];
}

function keysOf(
  selection: readonly ("space" | number)[],
  outer: readonly number[],
  separator: unknown,
  prefix: string | null,
): ChunkedArray["path"] {
  if (separator !== "/" && separator !== ".") unfit("the separator in its chunk keys is not known.");
  if (outer.some((side, k) => selection[k] !== "space" && side !== 1))
    unfit("its chunks hold several channels or time points together.");
  return (z, y, x) => {
    const space = [z, y, x];
    const parts = selection.map((kind) => (kind === "space" ? space.shift()! : kind));
    return (prefix === null ? parts : [prefix, ...parts]).join(separator as string);
  };
}

interface Named {
  readonly name: string;
  readonly configuration: Json;
}

function named(value: unknown): Named {
  if (typeof value === "string") return { name: value, configuration: {} };
  if (!isObject(value) || typeof value.name !== "string") return unfit("its metadata lacks a name where one is due.");
  return { name: value.name, configuration: isObject(value.configuration) ? value.configuration : {} };
}

function codecsOf(value: unknown): Named[] {
  return Array.isArray(value) ? value.map(named) : unfit("its metadata lists no codecs.");
}

function short(value: unknown): string {
  return (isObject(value) ? JSON.stringify(value) : String(value)).slice(0, 40);
}
