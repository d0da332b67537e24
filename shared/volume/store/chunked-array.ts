import type { StoredDtype } from "#shared/volume/dtype.ts";
import { CHUNK_SIDE, CHUNKS_ZYX, levelFolder, shardPath } from "#shared/volume/store/layout.ts";

/** How a chunk's bytes are packed: not at all, as gzip (RFC 1952), as zlib (RFC 1950), or as a Blosc frame with LZ4 inside. */
export type Packing = "plain" | "gzip" | "zlib" | "blosc";

type Zyx = readonly [number, number, number];

/**
 * Where the voxels of a Zarr array lie in files, as far as it can be read brick by brick: little-endian chunks in C order, one a
 * file or many in a shard. Orders are z, y, x.
 */
export interface ChunkedArray {
  readonly dtype: StoredDtype;
  readonly shape: Zyx;
  /** Voxels of a chunk (of an inner chunk where there are shards); chunks at the far edges are whole. */
  readonly chunk: Zyx;
  readonly packing: Packing;
  /** Null: each chunk is a file. */
  readonly shard: {
    /** Chunks of a shard along each axis. */
    readonly chunks: Zyx;
    readonly indexAt: "start" | "end";
    /** The index ends with its crc32c. */
    readonly isChecked: boolean;
  } | null;
  /** Value of chunks that are not there; null: every chunk that holds voxels has to be there. */
  readonly fill: number | null;
  /** Path of the z, y, x-th file (shard or chunk) under the array's folder, `/` between parts. */
  path(z: number, y: number, x: number): string;
}

/** The array of one level of a store that intake wrote. */
export function ownArray(
  level: number,
  size: readonly [number, number, number],
  dtype: StoredDtype,
  packing: Packing,
): ChunkedArray {
  return {
    dtype,
    shape: [size[2], size[1], size[0]],
    chunk: [CHUNK_SIDE, CHUNK_SIDE, CHUNK_SIDE],
    packing,
    shard: { chunks: CHUNKS_ZYX, indexAt: "end", isChecked: true },
    fill: null,
    path: (z, y, x) => shardPath(level, z, y, x).slice(levelFolder(level).length + 1),
  };
}

/** Bytes of a shard's index, its checksum included. */
export function indexBytes(shard: NonNullable<ChunkedArray["shard"]>): number {
  const [z, y, x] = shard.chunks;
  return z * y * x * 16 + (shard.isChecked ? 4 : 0);
}
