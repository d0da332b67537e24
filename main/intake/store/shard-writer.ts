import type { CrashPoint } from "#main/intake/crash-points.ts";
import { packed } from "#main/intake/packing/pack.ts";
import type { WriteFiles, WriteHandle } from "#main/intake/store/write-files.ts";
import type { StoredDtype } from "#shared/volume/dtype.ts";
import {
  ABSENT,
  encodeShardIndex,
  INDEX_BYTES,
  plainShardIndex,
  type ShardIndex,
  shardPath,
} from "#shared/volume/store/layout.ts";

/** What all writers of one store share. */
export interface StoreSink {
  readonly files: WriteFiles;
  /** Folder of the store. */
  readonly folder: string;
  readonly dtype: StoredDtype;
  readonly packing: "plain" | "gzip";
  /** Levels before this one are not written: the scan's own store holds them. */
  readonly firstLevel: number;
  /** Called at the named moments. */
  at(point: CrashPoint): void | Promise<void>;
  /** Bytes that went to disk. */
  count(bytes: number): void;
  /** Bytes of a file that stays in the store. */
  keep(bytes: number): void;
  /** Remembers folders made, so that their names can be synced at the end. */
  readonly folders: Set<string>;
}

/** Chunks packed at once: as many as the system's threads for such work. */
const PACKED_AT_ONCE = 4;

/**
 * One shard file under way. Where chunks are packed, they first gather plain in a passing file beside it: their parts come slab
 * by slab, and packed ones could not be completed.
 */
export class ShardWriter {
  readonly index: ShardIndex;
  readonly #sink: StoreSink;
  readonly #path: string;
  readonly #handle: WriteHandle;
  readonly #end: number;
  #packed: WriteHandle | null = null;

  private constructor(sink: StoreSink, path: string, handle: WriteHandle, index: ShardIndex) {
    this.#sink = sink;
    this.#path = path;
    this.#handle = handle;
    this.index = index;
    this.#end = index.lengths.reduce((sum, length) => sum + length, 0);
  }

  static async open(
    sink: StoreSink,
    level: number,
    size: readonly [number, number, number],
    shard: readonly [number, number, number],
  ): Promise<ShardWriter> {
    const parts = shardPath(level, ...shard).split("/");
    let folder = sink.folder;
    for (const part of parts.slice(0, -1)) {
      folder = `${folder}/${part}`;
      if (sink.folders.has(folder)) continue;
      await sink.files.makeFolder(folder);
      sink.folders.add(folder);
    }
    const path = `${folder}/${parts.at(-1)}`;
    const handle = await sink.files.create(sink.packing === "plain" ? path : plainPath(path));
    await sink.at("shard-opened");
    return new ShardWriter(sink, path, handle, plainShardIndex(size, sink.dtype, shard));
  }

  /** Writes bytes of bricks at a place of the file. */
  async write(bytes: Uint8Array, at: number): Promise<void> {
    await this.#handle.write(bytes, at);
    this.#sink.count(bytes.byteLength);
  }

  /** Adds the index, syncs and closes. Brick bytes never written (beyond the array) are zeros. */
  async finish(): Promise<void> {
    if (this.#sink.packing !== "plain") return this.#finishPacked();
    await this.write(encodeShardIndex(this.index), this.#end);
    await this.#sink.at("shard-written");
    await this.#handle.sync();
    await this.#sink.at("shard-synced");
    await this.#handle.close();
    this.#sink.keep(this.#end + INDEX_BYTES);
  }

  /** Closes without finishing. */
  async abandon(): Promise<void> {
    await this.#handle.close().catch(() => {});
    await this.#packed?.close().catch(() => {});
  }

  async #finishPacked(): Promise<void> {
    const out = await this.#sink.files.create(this.#path);
    this.#packed = out;
    const { offsets, lengths } = this.index;
    const there = Array.from(offsets.keys()).filter((n) => offsets[n] !== ABSENT);
    const index = { offsets: offsets.slice(), lengths: lengths.slice() };
    let end = 0;
    for (let first = 0; first < there.length; first += PACKED_AT_ONCE) {
      const some = there.slice(first, first + PACKED_AT_ONCE);
      const chunks = await Promise.all(
        some.map(async (n) => {
          const plain = new Uint8Array(lengths[n]!);
          await this.#handle.read(plain, offsets[n]!);
          return packed(plain);
        }),
      );
      for (const [k, bytes] of chunks.entries()) {
        index.offsets[some[k]!] = end;
        index.lengths[some[k]!] = bytes.byteLength;
        await out.write(bytes, end);
        end += bytes.byteLength;
      }
    }
    await out.write(encodeShardIndex(index), end);
    this.#sink.count(end + INDEX_BYTES);
    await this.#sink.at("shard-written");
    await out.sync();
    await this.#sink.at("shard-synced");
    await out.close();
    await this.#handle.close();
    await this.#sink.files.remove(plainPath(this.#path));
    this.#sink.keep(end + INDEX_BYTES);
  }
}

function plainPath(path: string): string {
  return `${path}.plain`;
}
