import { closeSync, fstatSync, openSync, readSync } from "node:fs";
import { join } from "node:path";
import { unreadable } from "#shared/errors.ts";
import { BRICK_BYTES, brickDepthShift, brickGrid } from "#shared/volume/bricks.ts";
import type { StoredDtype } from "#shared/volume/dtype.ts";
import type { PyramidLevel } from "#shared/volume/pyramid.ts";
import {
  ABSENT,
  CHUNK_SIDE,
  chunkBytes,
  INDEX_BYTES,
  locateChunk,
  parseShardIndex,
  type ShardIndex,
  shardPath,
} from "#shared/volume/store/layout.ts";

/** Shard files kept open by one reader. */
const MOST_OPEN = 48;
const DAMAGED = "The stored scan is damaged; take the scan in again.";

interface OpenShard {
  readonly file: string;
  readonly descriptor: number;
  readonly bytes: number;
  readonly index: ShardIndex;
}

/** Reads bricks straight out of a store's shard files. Blocking: for worker threads and the command line. */
export class StoreFiles {
  readonly #folder: string;
  readonly #dtype: StoredDtype;
  readonly #levels: readonly PyramidLevel[];
  readonly #depthShift: number;
  /** Least recently used first. */
  readonly #open = new Map<string, OpenShard>();

  /** @param folder the store itself (`scan.ome.zarr`). */
  constructor(folder: string, dtype: StoredDtype, levels: readonly PyramidLevel[]) {
    this.#folder = folder;
    this.#dtype = dtype;
    this.#levels = levels;
    this.#depthShift = brickDepthShift(dtype);
  }

  /**
   * Fills the start of `into` with one brick (see `brickGrid` for its number).
   * @throws unreadable-input when a shard is missing, cut short or does not hold the brick.
   */
  readBrick(level: number, brick: number, into: Uint8Array): void {
    const [gx, gy] = brickGrid(this.#levels[level]!.size, this.#depthShift);
    const bricksPerChunk = CHUNK_SIDE >> this.#depthShift;
    const z = Math.floor(brick / (gx * gy));
    const { shard, number } = locateChunk(Math.floor(z / bricksPerChunk), Math.floor(brick / gx) % gy, brick % gx);
    const from = this.#shard(shardPath(level, ...shard));
    const whole = chunkBytes(this.#dtype);
    const offset = from.index.offsets[number]!;
    if (offset === ABSENT || from.index.lengths[number] !== whole || offset + whole > from.bytes - INDEX_BYTES) {
      const found = offset === ABSENT ? "none" : `${from.index.lengths[number]} bytes at ${offset} of ${from.bytes}`;
      throw unreadable(from.file, `a chunk of ${whole} bytes`, found, `chunk ${number}`, DAMAGED);
    }
    const bytes = Math.min(whole, BRICK_BYTES);
    readFully(from, into.subarray(0, bytes), offset + (z % bricksPerChunk) * bytes);
  }

  close(): void {
    for (const shard of this.#open.values()) closeSync(shard.descriptor);
    this.#open.clear();
  }

  #shard(path: string): OpenShard {
    const known = this.#open.get(path);
    if (known) {
      this.#open.delete(path);
      this.#open.set(path, known);
      return known;
    }
    const opened = openShard(join(this.#folder, ...path.split("/")));
    this.#open.set(path, opened);
    if (this.#open.size > MOST_OPEN) {
      const [oldest, shard] = this.#open.entries().next().value!;
      this.#open.delete(oldest);
      closeSync(shard.descriptor);
    }
    return opened;
  }
}

function openShard(file: string): OpenShard {
  let descriptor: number;
  try {
    descriptor = openSync(file, "r");
  } catch (error) {
    throw unreadable(file, "a shard of the stored scan", (error as Error).message, undefined, DAMAGED);
  }
  try {
    const bytes = fstatSync(descriptor).size;
    if (bytes < INDEX_BYTES) throw unreadable(file, `at least ${INDEX_BYTES} bytes`, `${bytes} bytes`, undefined, DAMAGED);
    const tail = new Uint8Array(INDEX_BYTES);
    readFully({ file, descriptor }, tail, bytes - INDEX_BYTES);
    return { file, descriptor, bytes, index: parseShardIndex(tail, file) };
  } catch (error) {
    closeSync(descriptor);
    throw error;
  }
}

function readFully(shard: Pick<OpenShard, "file" | "descriptor">, into: Uint8Array, from: number): void {
  for (let done = 0; done < into.length; ) {
    const read = readSync(shard.descriptor, into, done, into.length - done, from + done);
    if (read === 0) {
      throw unreadable(shard.file, `${into.length} bytes at ${from}`, `${done} bytes`, undefined, DAMAGED);
    }
    done += read;
  }
}
