import type { CrashPoint } from "#main/intake/crash-points.ts";
import type { WriteFiles, WriteHandle } from "#main/intake/store/write-files.ts";
import type { StoredDtype } from "#shared/volume/dtype.ts";
import { encodeShardIndex, plainShardIndex, type ShardIndex, shardPath } from "#shared/volume/store/layout.ts";

/** What all writers of one store share. */
export interface StoreSink {
  readonly files: WriteFiles;
  /** Folder of the store. */
  readonly folder: string;
  readonly dtype: StoredDtype;
  /** Called at the named moments. */
  at(point: CrashPoint): void | Promise<void>;
  /** Bytes that went to disk. */
  count(bytes: number): void;
  /** Remembers folders made, so that their names can be synced at the end. */
  readonly folders: Set<string>;
}

/** One shard file under way. */
export class ShardWriter {
  readonly index: ShardIndex;
  readonly #sink: StoreSink;
  readonly #handle: WriteHandle;
  readonly #end: number;

  private constructor(sink: StoreSink, handle: WriteHandle, index: ShardIndex) {
    this.#sink = sink;
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
    const handle = await sink.files.create(`${folder}/${parts.at(-1)}`);
    await sink.at("shard-opened");
    return new ShardWriter(sink, handle, plainShardIndex(size, sink.dtype, shard));
  }

  /** Writes bytes of bricks at a place of the file. */
  async write(bytes: Uint8Array, at: number): Promise<void> {
    await this.#handle.write(bytes, at);
    this.#sink.count(bytes.byteLength);
  }

  /** Adds the index, syncs and closes. Brick bytes never written (beyond the array) are zeros. */
  async finish(): Promise<void> {
    await this.write(encodeShardIndex(this.index), this.#end);
    await this.#sink.at("shard-written");
    await this.#handle.sync();
    await this.#sink.at("shard-synced");
    await this.#handle.close();
  }

  /** Closes without finishing. */
  async abandon(): Promise<void> {
    await this.#handle.close().catch(() => {});
  }
}
