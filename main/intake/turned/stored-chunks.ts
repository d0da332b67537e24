import { join } from "node:path";
import { ReadFile } from "#main/intake/read-file.ts";
import { unreadable } from "#shared/errors.ts";
import type { StoredDtype } from "#shared/volume/dtype.ts";
import { type SourceArray, viewAs } from "#shared/volume/source-array.ts";
import {
  ABSENT,
  CHUNK_SIDE,
  CHUNK_VOXELS,
  chunkBytes,
  INDEX_BYTES,
  locateChunk,
  parseShardIndex,
  type ShardIndex,
  shardPath,
} from "#shared/volume/store/layout.ts";

/** Shard files kept open. */
const MOST_OPEN = 64;
const DAMAGED = "The stored scan is damaged; take the scan in again.";

/** Reads the inner chunks of a store's finest level, each 32 x 32 x 32 voxels, order z, y, x. */
export class StoredChunks {
  readonly #folder: string;
  readonly #dtype: StoredDtype;
  readonly #bytes: ArrayBuffer;
  /** Least recently used first. */
  readonly #open = new Map<string, { readonly file: ReadFile; readonly index: ShardIndex }>();
  #bytesRead = 0;

  /** Voxels of a chunk along x, y, z. */
  readonly sides: readonly [number, number, number] = [CHUNK_SIDE, CHUNK_SIDE, CHUNK_SIDE];

  /** @param folder the store itself (`scan.ome.zarr`). */
  constructor(folder: string, dtype: StoredDtype) {
    this.#folder = folder;
    this.#dtype = dtype;
    this.#bytes = new ArrayBuffer(chunkBytes(dtype));
  }

  get bytesRead(): number {
    return this.#bytesRead;
  }

  /**
   * The chunk that is `z`, `y`, `x`-th along the axes; borrowed until the next call.
   * @throws unreadable-input when its shard is missing, cut short or does not hold it
   */
  async read(z: number, y: number, x: number): Promise<SourceArray> {
    const { shard, number } = locateChunk(z, y, x);
    const path = shardPath(0, ...shard);
    const { file, index } = await this.#shard(path);
    const offset = index.offsets[number]!;
    if (offset === ABSENT || index.lengths[number] !== this.#bytes.byteLength)
      throw unreadable(path, `chunk ${number}`, "none", undefined, DAMAGED);
    await file.readInto(new Uint8Array(this.#bytes), offset, path);
    this.#bytesRead += this.#bytes.byteLength;
    return viewAs(this.#dtype, this.#bytes, 0, CHUNK_VOXELS);
  }

  async close(): Promise<void> {
    for (const { file } of this.#open.values()) await file.close();
    this.#open.clear();
  }

  async #shard(path: string) {
    const known = this.#open.get(path);
    if (known) {
      this.#open.delete(path);
      this.#open.set(path, known);
      return known;
    }
    const file = await ReadFile.open(join(this.#folder, ...path.split("/")));
    const index = parseShardIndex(await file.readUpTo(file.size - INDEX_BYTES, INDEX_BYTES), path);
    const opened = { file, index };
    this.#open.set(path, opened);
    for (const [oldest, one] of [...this.#open].slice(0, Math.max(0, this.#open.size - MOST_OPEN))) {
      this.#open.delete(oldest);
      await one.file.close();
    }
    return opened;
  }
}
