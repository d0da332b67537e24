import { basename, dirname } from "node:path";
import type { FilePort } from "#main/node/file-port.ts";
import { isTautlineError, TautlineError, unreadable } from "#shared/errors.ts";

/**
 * The typed error for a failed write. Messages name the file, never the whole path, since they cross to pages.
 * @param needed bytes that were to be written.
 */
export async function writeFault(files: FilePort, path: string, error: unknown, needed = 0): Promise<TautlineError> {
  if (isTautlineError(error)) return error;
  const code = (error as { code?: unknown } | null)?.code;
  // A fault of the program is not dressed up as one of the disk.
  if (typeof code !== "string") return error as TautlineError;
  const file = basename(path);
  if (code === "ENOSPC" || code === "EDQUOT") {
    const free = await files.freeBytes(dirname(path)).catch(() => 0);
    return new TautlineError(
      "disk-full",
      `The disk is full: ${file} needs ${needed} bytes, ${free} are free. Nothing saved before is lost; free some space and go on.`,
      { file, needed, free },
      error,
    );
  }
  const next = "Check that the library's disk is there and may be written, then try again.";
  return new TautlineError(
    "write-failed",
    `${file} could not be written (${code}). Nothing saved before is lost. ${next}`,
    { file, reason: code, next },
    error,
  );
}

/** Makes a folder. @throws disk-full, write-failed */
export async function makeFolder(files: FilePort, folder: string): Promise<void> {
  try {
    await files.makeFolder(folder);
  } catch (error) {
    throw await writeFault(files, folder, error);
  }
}

/** Bytes of a file; undefined when there is none. @param name for the message @throws unreadable-input when the system refuses */
export async function readOrTell(
  files: FilePort,
  path: string,
  name: string,
  start?: number,
  end?: number,
): Promise<Uint8Array | undefined> {
  try {
    return await files.read(path, start, end);
  } catch (error) {
    const { code } = error as { code?: unknown };
    if (typeof code !== "string") throw error;
    throw unreadable(
      name,
      "a file that can be read",
      `that the system refuses (${code})`,
      undefined,
      "Check the library's disk.",
    );
  }
}
