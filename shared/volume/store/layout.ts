import { unreadable } from "#shared/errors.ts";
import { BYTES_OF_DTYPE, type StoredDtype } from "#shared/volume/dtype.ts";
import { crc32c } from "#shared/volume/store/crc32c.ts";

// The store of a specimen: an OME-Zarr 0.5 group (Zarr v3). Each pyramid level is one array named by its number; a shard is
// one file of that array; a shard's inner chunks are the bricks of the engine. Writer (intake) and reader (engine) share this.

/** Name of the store inside a specimen's folder. */
export const STORE_NAME = "scan.ome.zarr";
/** Voxels of a shard, order z, y, x; the same at every level, also where the array is smaller. */
export const SHARD_ZYX = [64, 512, 512] as const;
/** Voxels along each side of an inner chunk. */
export const CHUNK_SIDE = 32;
/** Voxels of an inner chunk. */
export const CHUNK_VOXELS = CHUNK_SIDE ** 3;
/** Inner chunks of a shard, order z, y, x. */
export const CHUNKS_ZYX = [2, 16, 16] as const;
/** Inner chunks of a shard. */
export const CHUNKS_PER_SHARD = 512;
/** Bytes of a shard's index with its checksum; it stands at the end of the shard file. */
export const INDEX_BYTES = CHUNKS_PER_SHARD * 16 + 4;
/** Offset of an inner chunk that is not there, in a parsed index. Only chunks wholly outside the array are absent. */
export const ABSENT = -1;

/** Folder of a level's array under the store, also its Zarr path: `0`, `1` ... */
export function levelFolder(level: number): string {
  return String(level);
}

/** Path of a shard file under the store, `/` between parts (Zarr v3 default chunk keys): `<level>/c/<z>/<y>/<x>`. */
export function shardPath(level: number, z: number, y: number, x: number): string {
  return `${levelFolder(level)}/c/${z}/${y}/${x}`;
}

/** Bytes of one inner chunk. Chunks at the array's far edges are whole; voxels beyond the array are 0 in them. */
export function chunkBytes(dtype: StoredDtype): number {
  return CHUNK_VOXELS * BYTES_OF_DTYPE[dtype];
}

/** Numbers of shards along z, y, x of an array of `size` voxels (order xyz). */
export function shardGrid(size: readonly [number, number, number]): [number, number, number] {
  return [Math.ceil(size[2] / SHARD_ZYX[0]), Math.ceil(size[1] / SHARD_ZYX[1]), Math.ceil(size[0] / SHARD_ZYX[2])];
}

/** Numbers of inner chunks along z, y, x of an array of `size` voxels (order xyz). */
export function chunkGrid(size: readonly [number, number, number]): [number, number, number] {
  return [Math.ceil(size[2] / CHUNK_SIDE), Math.ceil(size[1] / CHUNK_SIDE), Math.ceil(size[0] / CHUNK_SIDE)];
}

/** Number of an inner chunk in its shard's index: C order, x fastest; `z`, `y`, `x` count chunks from the shard's corner. */
export function chunkNumber(z: number, y: number, x: number): number {
  return (z * CHUNKS_ZYX[1] + y) * CHUNKS_ZYX[2] + x;
}

/** Shard (z, y, x) and number in its index of the level's inner chunk that is `z`, `y`, `x`-th along the axes. */
export function locateChunk(z: number, y: number, x: number): { shard: [number, number, number]; number: number } {
  const [cz, cy, cx] = CHUNKS_ZYX;
  return {
    shard: [Math.floor(z / cz), Math.floor(y / cy), Math.floor(x / cx)],
    number: chunkNumber(z % cz, y % cy, x % cx),
  };
}

/** Where each inner chunk lies in its shard file. */
export interface ShardIndex {
  /** Bytes from the start of the file, shape [512], chunk numbers in order; {@link ABSENT} where there is no chunk. */
  readonly offsets: Float64Array;
  /** Bytes of each chunk, shape [512]; 0 where there is none. */
  readonly lengths: Float64Array;
}

/**
 * The index held by the last {@link INDEX_BYTES} bytes of a shard file.
 * @param bytes exactly those bytes: uint64 little-endian pairs (offset, length), both 2^64 - 1 for a missing chunk, then crc32c.
 * @param file named in errors. @param shape of another writer's shards: how many chunks, and whether there is a checksum.
 * @throws unreadable-input when the length or the checksum is wrong.
 * @source Zarr v3 core, codec `sharding_indexed`, index codecs `bytes` (little) and `crc32c`, `index_location` "end".
 */
export function parseShardIndex(
  bytes: Uint8Array,
  file = "shard",
  shape: { readonly chunks: number; readonly isChecked: boolean } = { chunks: CHUNKS_PER_SHARD, isChecked: true },
): ShardIndex {
  const pairs = shape.chunks * 16;
  const length = pairs + (shape.isChecked ? 4 : 0);
  if (bytes.length !== length) throw unreadable(file, `a shard index of ${length} bytes`, `${bytes.length} bytes`);
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const expected = shape.isChecked ? view.getUint32(pairs, true) : 0;
  const found = shape.isChecked ? crc32c(bytes.subarray(0, pairs)) : 0;
  if (expected !== found) {
    throw unreadable(
      file,
      `a shard index with checksum ${expected.toString(16)}`,
      found.toString(16),
      "index at the end of the file",
      "The stored scan is damaged; take the scan in again.",
    );
  }
  const offsets = new Float64Array(shape.chunks).fill(ABSENT);
  const lengths = new Float64Array(shape.chunks);
  for (let n = 0; n < shape.chunks; n++) {
    const offset = view.getBigUint64(n * 16, true);
    if (offset === MISSING) continue;
    offsets[n] = Number(offset);
    lengths[n] = Number(view.getBigUint64(n * 16 + 8, true));
  }
  return { offsets, lengths };
}

/** Bytes of an index, checksum included; the exact inverse of {@link parseShardIndex}. */
export function encodeShardIndex(index: ShardIndex): Uint8Array<ArrayBuffer> {
  const bytes = new Uint8Array(INDEX_BYTES);
  const view = new DataView(bytes.buffer);
  for (let n = 0; n < CHUNKS_PER_SHARD; n++) {
    const there = index.offsets[n] !== ABSENT;
    view.setBigUint64(n * 16, there ? BigInt(index.offsets[n]!) : MISSING, true);
    view.setBigUint64(n * 16 + 8, there ? BigInt(index.lengths[n]!) : MISSING, true);
  }
  view.setUint32(INDEX_BYTES - 4, crc32c(bytes.subarray(0, INDEX_BYTES - 4)), true);
  return bytes;
}

const MISSING = 0xffff_ffff_ffff_ffffn;

/**
 * The index of shard (`z`, `y`, `x`) of an array of `size` voxels (order xyz), as intake writes it: chunks that hold at least
 * one voxel of the array follow each other in the order of their numbers from byte 0, nothing between them.
 */
export function plainShardIndex(
  size: readonly [number, number, number],
  dtype: StoredDtype,
  shard: readonly [number, number, number],
): ShardIndex {
  const grid = chunkGrid(size);
  const offsets = new Float64Array(CHUNKS_PER_SHARD).fill(ABSENT);
  const lengths = new Float64Array(CHUNKS_PER_SHARD);
  const bytes = chunkBytes(dtype);
  let at = 0;
  for (let z = 0; z < CHUNKS_ZYX[0]; z++)
    for (let y = 0; y < CHUNKS_ZYX[1]; y++)
      for (let x = 0; x < CHUNKS_ZYX[2]; x++) {
        if (shard[0] * CHUNKS_ZYX[0] + z >= grid[0]) continue;
        if (shard[1] * CHUNKS_ZYX[1] + y >= grid[1]) continue;
        if (shard[2] * CHUNKS_ZYX[2] + x >= grid[2]) continue;
        offsets[chunkNumber(z, y, x)] = at;
        lengths[chunkNumber(z, y, x)] = bytes;
        at += bytes;
      }
  return { offsets, lengths };
}
