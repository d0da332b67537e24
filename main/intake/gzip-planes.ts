import { createReadStream } from "node:fs";
import { basename } from "node:path";
import { createGunzip, createUnzip } from "node:zlib";
import { asUnreadable, stopIfAborted } from "#main/intake/read-file.ts";
import { type PlaneRun, planesPerRun, swapBytes } from "#main/intake/slice-source.ts";
import { TautlineError, unreadable } from "#shared/errors.ts";
import { BYTES_OF_DTYPE, type SourceDtype } from "#shared/volume/dtype.ts";
import { viewAs } from "#shared/volume/source-array.ts";

/** Gzip streams that hold slices one after another, in one file or in several equal shares. */
export interface GzipLayout {
  /** `offset`: where the stream begins in the file; `skip`: bytes to drop after decompression. */
  readonly parts: readonly { readonly path: string; readonly offset: number; readonly skip: number }[];
  readonly slicesPerPart: number;
  readonly dtype: SourceDtype;
  readonly littleEndian: boolean;
  readonly sliceVoxels: number;
  /** True: a zlib stream is taken as well. */
  readonly zlib?: boolean;
}

/**
 * A gzip stream cannot grow by more than this (deflate's bound is 1032), so that a declared size far beyond the file is a lie
 * that is found before anything is allocated.
 */
export const MOST_EXPANSION = 1040;

/** Reads slices of a {@link GzipLayout} from the first one on; decompression stops at the declared size whatever follows. */
export class GzipPlanes {
  readonly layout: GzipLayout;
  #bytesRead = 0;

  constructor(layout: GzipLayout) {
    this.layout = layout;
  }

  bytesRead(): number {
    return this.#bytesRead;
  }

  async *read(z0: number, z1: number, signal?: AbortSignal): AsyncGenerator<PlaneRun, void, void> {
    const { dtype, sliceVoxels, slicesPerPart, littleEndian, parts } = this.layout;
    const voxelBytes = BYTES_OF_DTYPE[dtype];
    const planeBytes = sliceVoxels * voxelBytes;
    const most = Math.max(1, Math.min(planesPerRun(planeBytes), z1 - z0, slicesPerPart));
    const buffer = new ArrayBuffer(most * planeBytes);
    for (let p = Math.floor(z0 / slicesPerPart); p < parts.length && p * slicesPerPart < z1; p++) {
      const first = p * slicesPerPart;
      const last = Math.min(first + slicesPerPart, z1);
      let z = Math.max(first, z0);
      let drop = parts[p]!.skip + (z - first) * planeBytes;
      let filled = 0;
      let seen = 0;
      const target = () => Math.min(most, last - z) * planeBytes;
      for await (const chunk of this.#inflate(p, signal)) {
        stopIfAborted(signal, "reading the scan");
        let at = Math.min(drop, chunk.length);
        drop -= at;
        seen += chunk.length;
        while (at < chunk.length && z < last) {
          const take = Math.min(chunk.length - at, target() - filled);
          new Uint8Array(buffer, filled, take).set(chunk.subarray(at, at + take));
          filled += take;
          at += take;
          if (filled < target()) continue;
          const count = filled / planeBytes;
          if (!littleEndian) swapBytes(Buffer.from(buffer, 0, filled), voxelBytes);
          yield { z, count, data: viewAs(dtype, buffer, 0, count * sliceVoxels) };
          z += count;
          filled = 0;
        }
        if (z >= last) break;
      }
      if (z < last) {
        const needed = parts[p]!.skip + (last - first) * planeBytes;
        throw unreadable(
          basename(parts[p]!.path),
          `${needed} bytes of voxels after decompression`,
          `${seen} bytes`,
          `slice ${z + 1}`,
        );
      }
    }
  }

  async *#inflate(part: number, signal?: AbortSignal): AsyncGenerator<Buffer, void, void> {
    const { path, offset } = this.layout.parts[part]!;
    const file = createReadStream(path, { start: offset, highWaterMark: 1024 * 1024 });
    const gunzip = (this.layout.zlib ? createUnzip : createGunzip)({ chunkSize: 256 * 1024 });
    file.on("data", (chunk) => {
      this.#bytesRead += chunk.length;
    });
    file.on("error", (error) => gunzip.destroy(error));
    file.pipe(gunzip);
    try {
      for await (const chunk of gunzip) yield chunk as Buffer;
    } catch (error) {
      if (error instanceof TautlineError) throw error;
      stopIfAborted(signal, "reading the scan");
      const code = String((error as { code?: unknown }).code ?? "");
      if (!code.startsWith("Z_")) throw asUnreadable(path, error);
      const found = code === "Z_BUF_ERROR" ? "one that ends early" : "damaged data";
      throw unreadable(
        basename(path),
        this.layout.zlib ? "a whole zlib or gzip stream" : "a whole gzip stream",
        found,
        "compressed voxels",
        "The file was cut short or changed on the way; copy it again.",
      );
    } finally {
      file.destroy();
      gunzip.destroy();
    }
  }
}
