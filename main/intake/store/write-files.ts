import { mkdir, open, rename, rm, statfs } from "node:fs/promises";
import { basename } from "node:path";
import { TautlineError } from "#shared/errors.ts";

/** An open file of the store, written at places. */
export interface WriteHandle {
  write(bytes: Uint8Array, at: number): Promise<void>;
  /** Fills `into` with what was written at a place; beyond the end `into` stays as it is. */
  read(into: Uint8Array, at: number): Promise<void>;
  /** Resolves once everything written is on the disk. */
  sync(): Promise<void>;
  close(): Promise<void>;
}

/** All that intake does to the disk; tests put a disk that forgets or fills up in its place. Paths are absolute. */
export interface WriteFiles {
  /** Makes one folder; its parent exists. An existing folder is fine. */
  makeFolder(path: string): Promise<void>;
  /** A new empty file. Fails when the name is taken. */
  create(path: string): Promise<WriteHandle>;
  /** Renames a file or folder on the same disk. */
  rename(from: string, to: string): Promise<void>;
  /** Resolves once the names in a folder are on the disk. */
  syncFolder(path: string): Promise<void>;
  /** Removes a file or a whole folder; nothing there is fine. */
  remove(path: string): Promise<void>;
  /** Bytes that may still be written at `path`. */
  freeBytes(path: string): Promise<number>;
}

/** The real disk. Failures are tagged `disk-full` or `write-failed`. */
export const diskFiles: WriteFiles = {
  makeFolder: (path) =>
    tagged(path, async () => {
      await mkdir(path, { recursive: true });
    }),
  create: (path) =>
    tagged(path, async () => {
      const handle = await open(path, "wx+");
      return {
        write: (bytes: Uint8Array, at: number) =>
          tagged(path, async () => {
            let done = 0;
            while (done < bytes.byteLength) {
              const { bytesWritten } = await handle.write(bytes, done, bytes.byteLength - done, at + done);
              done += bytesWritten;
            }
          }),
        read: (into: Uint8Array, at: number) =>
          tagged(path, async () => {
            for (let done = 0; done < into.byteLength; ) {
              const { bytesRead } = await handle.read(into, done, into.byteLength - done, at + done);
              if (bytesRead === 0) return;
              done += bytesRead;
            }
          }),
        sync: () => tagged(path, () => handle.datasync()),
        close: () => tagged(path, () => handle.close()),
      };
    }),
  rename: (from, to) => tagged(to, () => renamePatiently(from, to)),
  syncFolder: (path) => tagged(path, () => syncFolderIfPossible(path)),
  remove: (path) => tagged(path, () => rm(path, { recursive: true, force: true, maxRetries: 5, retryDelay: 100 })),
  freeBytes: async (path) => {
    const facts = await statfs(path, { bigint: true });
    return Number(facts.bavail * facts.bsize);
  },
};

/** Some systems hold a fresh file for a moment (scanners of all kinds): a few tries, then the error. */
async function renamePatiently(from: string, to: string): Promise<void> {
  for (let turn = 1; ; turn++) {
    try {
      return await rename(from, to);
    } catch (error) {
      const code = (error as { code?: unknown }).code;
      if (turn >= 6 || (code !== "EPERM" && code !== "EACCES" && code !== "EBUSY")) throw error;
      await new Promise((resolve) => setTimeout(resolve, 50 * turn));
    }
  }
}

async function syncFolderIfPossible(path: string): Promise<void> {
  if (process.platform === "win32") return; // folders cannot be opened there; NTFS journals names itself
  const handle = await open(path, "r");
  try {
    await handle.sync();
  } finally {
    await handle.close();
  }
}

async function tagged<T>(path: string, act: () => Promise<T>): Promise<T> {
  try {
    return await act();
  } catch (error) {
    throw asWriteError(path, error);
  }
}

/** The typed error for a failed write (it names the file, not the path: it may go to a page); errors that are typed already pass through. */
export function asWriteError(path: string, error: unknown): unknown {
  if (error instanceof TautlineError) return error;
  const code = (error as { code?: unknown } | null)?.code;
  if (typeof code !== "string") return error;
  const file = basename(path);
  if (code === "ENOSPC" || code === "EDQUOT") {
    const message = `The disk became full while '${file}' was written. Nothing half-made was left; free some space and try again.`;
    return new TautlineError("disk-full", message, { file, needed: 0, free: 0 }, error);
  }
  const refused = code === "EACCES" || code === "EPERM" || code === "EROFS";
  const reason = refused ? "the library may not be written to" : `the system's error ${code}`;
  const next = "Check the library's folder and its disk.";
  return new TautlineError("write-failed", `'${file}' could not be written: ${reason}. ${next}`, { file, reason, next }, error);
}
