import { unreadable } from "#shared/errors.ts";
import { unpackBlosc } from "#shared/volume/store/blosc.ts";
import type { ChunkFile, ChunkSource } from "#shared/volume/store/chunk-files.ts";

/** The blocking calls that reading a store takes, as Node's `fs` and `zlib` have them. */
export interface SyncDisk {
  readonly fs: {
    openSync(path: string, flags: "r"): number;
    fstatSync(descriptor: number): { readonly size: number; readonly mtimeMs: number };
    readSync(descriptor: number, into: Uint8Array, offset: number, length: number, at: number): number;
    closeSync(descriptor: number): void;
  };
  readonly zlib: {
    gunzipSync(bytes: Uint8Array, options: { maxOutputLength: number; chunkSize: number }): Uint8Array;
    inflateSync(bytes: Uint8Array, options: { maxOutputLength: number; chunkSize: number }): Uint8Array;
  };
}

export interface ChunkFolderRules {
  /** What a person can do about a damaged or missing file. */
  readonly advice: string;
  /** Called for a file that is not there: throws, or lets it stand for the fill value. */
  missing?(path: string): void;
  /** Called with a file's time of change, UTC milliseconds, and its name; throws when it must not be that one. */
  opened?(changedMs: number, file: string): void;
}

/** The files of an array's folder as a source of chunks. */
export function chunkFolder({ fs, zlib }: SyncDisk, folder: string, rules: ChunkFolderRules): ChunkSource {
  return {
    advice: rules.advice,
    unpack(packing, bytes, most) {
      if (packing === "blosc") return unpackBlosc(bytes, most);
      // One buffer of the right size instead of many small ones that are joined; a byte more tells a chunk that is too long.
      const options = { maxOutputLength: most, chunkSize: most + 1 };
      return packing === "gzip" ? zlib.gunzipSync(bytes, options) : zlib.inflateSync(bytes, options);
    },
    open(path) {
      const name = `${folder}/${path}`;
      let descriptor: number;
      try {
        descriptor = fs.openSync(name, "r");
      } catch (error) {
        const code = (error as { code?: unknown }).code;
        if (rules.missing && (code === "ENOENT" || code === "ENOTDIR")) {
          rules.missing(path);
          return null;
        }
        throw unreadable(name, "a shard of the stored scan", (error as Error).message, undefined, rules.advice);
      }
      try {
        const { size, mtimeMs } = fs.fstatSync(descriptor);
        rules.opened?.(mtimeMs, name);
        return openFile(fs, descriptor, name, size, rules.advice);
      } catch (error) {
        fs.closeSync(descriptor);
        throw error;
      }
    },
  };
}

function openFile(fs: SyncDisk["fs"], descriptor: number, name: string, bytes: number, advice: string): ChunkFile {
  return {
    name,
    bytes,
    readInto(into, at) {
      for (let done = 0; done < into.length; ) {
        const read = fs.readSync(descriptor, into, done, into.length - done, at + done);
        if (read === 0) throw unreadable(name, `${into.length} bytes at ${at}`, `${done} bytes`, undefined, advice);
        done += read;
      }
    },
    close: () => fs.closeSync(descriptor),
  };
}

/** A whole text file, at most 1 MB. @throws as `fs` does */
export function readText({ fs }: SyncDisk, path: string): string {
  const descriptor = fs.openSync(path, "r");
  try {
    const { size } = fs.fstatSync(descriptor);
    const bytes = new Uint8Array(Math.min(size, 1 << 20));
    for (let done = 0; done < bytes.length; ) {
      const read = fs.readSync(descriptor, bytes, done, bytes.length - done, done);
      if (read === 0) break;
      done += read;
    }
    return new TextDecoder().decode(bytes);
  } finally {
    fs.closeSync(descriptor);
  }
}
