import { unreadable } from "#shared/errors.ts";
import { type ChunkedArray, indexBytes, type Packing } from "#shared/volume/store/chunked-array.ts";
import { parseShardIndex, type ShardIndex } from "#shared/volume/store/layout.ts";

/** A file that holds chunks, open for reading. Calls block. */
export interface ChunkFile {
  /** For messages. */
  readonly name: string;
  readonly bytes: number;
  /** Fills `into` from byte `at` on. @throws unreadable-input when the file ends before */
  readInto(into: Uint8Array, at: number): void;
  close(): void;
}

/** What reading chunks needs of its surroundings. */
export interface ChunkSource {
  /** The file under this path of the array; null when there is none. @throws unreadable-input */
  open(path: string): ChunkFile | null;
  /** @throws when the bytes are damaged, or more than `most` come out. */
  unpack(packing: Exclude<Packing, "plain">, bytes: Uint8Array, most: number): Uint8Array;
  /** What a person can do about a damaged or missing file. */
  readonly advice: string;
}

export interface OpenChunkFile {
  readonly file: ChunkFile;
  /** Null where each chunk is a file. */
  readonly index: ShardIndex | null;
}

/** Files of a store that are kept open, the most recently used ones, with the indices of their shards. */
export class ChunkFiles {
  readonly #most: number;
  /** Least recently used first. */
  readonly #open = new Map<string, OpenChunkFile>();

  /** @param most files kept open at once. */
  constructor(most: number) {
    this.#most = most;
  }

  /** @param folder tells arrays apart whose files have equal paths. @throws unreadable-input when a shard's index is damaged */
  get(folder: string, path: string, array: ChunkedArray, source: ChunkSource): OpenChunkFile | null {
    const key = `${folder}/${path}`;
    const known = this.#open.get(key);
    if (known) {
      this.#open.delete(key);
      this.#open.set(key, known);
      return known;
    }
    const file = source.open(path);
    if (!file) return null;
    let opened: OpenChunkFile;
    try {
      opened = { file, index: array.shard ? indexOf(file, array.shard, source.advice) : null };
    } catch (error) {
      file.close();
      throw error;
    }
    this.#open.set(key, opened);
    if (this.#open.size > this.#most) {
      const [oldest, { file: left }] = this.#open.entries().next().value!;
      this.#open.delete(oldest);
      left.close();
    }
    return opened;
  }

  close(): void {
    for (const { file } of this.#open.values()) file.close();
    this.#open.clear();
  }
}

function indexOf(file: ChunkFile, shard: NonNullable<ChunkedArray["shard"]>, advice: string): ShardIndex {
  const length = indexBytes(shard);
  if (file.bytes < length) throw unreadable(file.name, `at least ${length} bytes`, `${file.bytes} bytes`, undefined, advice);
  const bytes = new Uint8Array(length);
  file.readInto(bytes, shard.indexAt === "end" ? file.bytes - length : 0);
  const [z, y, x] = shard.chunks;
  return parseShardIndex(bytes, file.name, { chunks: z * y * x, isChecked: shard.isChecked });
}
