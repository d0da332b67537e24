import { type FileHandle, open, stat } from "node:fs/promises";
import { basename } from "node:path";
import { TautlineError, unreadable } from "#shared/errors.ts";

/** A file open for reading whose reads are counted and never come back short. */
export class ReadFile {
  readonly path: string;
  readonly size: number;
  #handle: FileHandle;
  #bytesRead = 0;

  private constructor(path: string, size: number, handle: FileHandle) {
    this.path = path;
    this.size = size;
    this.#handle = handle;
  }

  /** @throws unreadable-input when there is no such file, it is no plain file, or it may not be read. */
  static async open(path: string): Promise<ReadFile> {
    let handle: FileHandle | undefined;
    try {
      handle = await open(path, "r");
      const facts = await handle.stat();
      if (!facts.isFile()) throw unreadable(basename(path), "a file", facts.isDirectory() ? "a folder" : "no plain file");
      return new ReadFile(path, facts.size, handle);
    } catch (error) {
      await handle?.close();
      throw asUnreadable(path, error);
    }
  }

  get bytesRead(): number {
    return this.#bytesRead;
  }

  /** Fills `into` from byte `at` on. @throws unreadable-input when the file ends before. */
  async readInto(into: Uint8Array, at: number, where?: string): Promise<void> {
    let done = 0;
    while (done < into.byteLength) {
      const { bytesRead } = await this.#handle.read(into, done, into.byteLength - done, at + done);
      if (bytesRead === 0)
        throw unreadable(basename(this.path), `${at + into.byteLength} bytes or more`, `${at + done} bytes`, where);
      done += bytesRead;
      this.#bytesRead += bytesRead;
    }
  }

  /** Bytes [at, at + length), fewer only where the file ends. */
  async readUpTo(at: number, length: number): Promise<Uint8Array<ArrayBuffer>> {
    const bytes = new Uint8Array(Math.max(0, Math.min(length, this.size - at)));
    await this.readInto(bytes, at);
    return bytes;
  }

  async close(): Promise<void> {
    await this.#handle.close();
  }
}

/** Sizes and times of change of files, so that a change during intake is found. */
export async function fingerprintOf(paths: readonly string[]): Promise<string> {
  const parts: string[] = [];
  for (const path of paths) {
    try {
      const facts = await stat(path, { bigint: true });
      parts.push(`${path}:${facts.size}:${facts.mtimeNs}:${facts.ino}`);
    } catch (error) {
      throw asUnreadable(path, error);
    }
  }
  return parts.join("\n");
}

/** A refused or missing file as the sentence to show (it names the file, not the path: it may go to a page); other errors as they are. */
export function asUnreadable(path: string, error: unknown): unknown {
  const file = basename(path);
  if (error instanceof TautlineError) return error;
  const code = (error as { code?: unknown } | null)?.code;
  if (code === "ENOENT" || code === "ENOTDIR") return unreadable(file, "a scan", "nothing under this name");
  if (code === "EACCES" || code === "EPERM")
    return unreadable(file, "a readable file", "one that the system does not let you read");
  if (code === "EISDIR") return unreadable(file, "a file", "a folder");
  if (typeof code === "string") return unreadable(file, "a readable file", `the system's error ${code}`);
  return error;
}

/** Throws the typed error when the person stopped the work. */
export function stopIfAborted(signal: AbortSignal | undefined, what: string): void {
  if (signal?.aborted) throw new TautlineError("cancelled", "Stopped.", { what });
}
