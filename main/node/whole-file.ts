import { dirname } from "node:path";
import { readOrTell, writeFault } from "#main/node/disk-fault.ts";
import type { FilePort } from "#main/node/file-port.ts";
import { unreadable } from "#shared/errors.ts";

/** Ending of files that are being written; leftovers of a killed process carry it and may be removed. */
export const UNFINISHED = ".unfinished";

/**
 * Writes a file whole: temporary name in the same folder, synced, renamed, folder synced. A reader, also after a power cut,
 * sees the old file or the new one.
 * @param secret only the person who runs the program may read it.
 * @throws disk-full, write-failed
 */
export async function writeWhole(files: FilePort, path: string, bytes: Uint8Array, secret = false): Promise<void> {
  const temporary = `${path}${UNFINISHED}`;
  try {
    files.reach("whole-file:before-write");
    await files.remove(temporary);
    await files.create(temporary, bytes, secret);
    files.reach("whole-file:after-write");
    await files.syncFile(temporary);
    files.reach("whole-file:after-sync");
    await files.rename(temporary, path);
    files.reach("whole-file:after-rename");
    await files.syncFolder(dirname(path));
    files.reach("whole-file:after-folder-sync");
  } catch (error) {
    const fault = await writeFault(files, path, error, bytes.length);
    await files.remove(temporary).catch(() => undefined);
    throw fault;
  }
}

/** Writes a value as indented JSON, whole. */
export function writeJson(files: FilePort, path: string, value: unknown): Promise<void> {
  return writeWhole(files, path, new TextEncoder().encode(`${JSON.stringify(value, null, 2)}\n`));
}

/** The JSON value in a file; undefined when there is no such file. @throws unreadable-input */
export async function readJsonFile(files: FilePort, path: string, name: string): Promise<unknown> {
  const bytes = await readOrTell(files, path, name);
  if (!bytes) return undefined;
  try {
    return JSON.parse(new TextDecoder("utf-8", { fatal: true }).decode(bytes));
  } catch {
    throw unreadable(name, "JSON in UTF-8", `${bytes.length} bytes that are not`, undefined, "Put the file back from a copy.");
  }
}
