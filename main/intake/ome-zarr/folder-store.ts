import { readdir, stat } from "node:fs/promises";
import { basename, join } from "node:path";
import type { AbsolutePath, AsyncReadable, RangeQuery } from "@zarrita/storage";
import { asUnreadable, ReadFile } from "#main/intake/read-file.ts";
import { unreadable } from "#shared/errors.ts";

/** A Zarr store over a folder: keys cannot leave it, a missing file is undefined, a short one is an error, reads are counted. */
export class FolderStore implements AsyncReadable {
  readonly root: string;
  /** Largest file taken whole; set once the chunk size is known. */
  mostBytes = 16 * 1024 * 1024;
  bytesRead = 0;

  constructor(root: string) {
    this.root = root;
  }

  async get(key: AbsolutePath): Promise<Uint8Array | undefined> {
    return this.#with(key, async (file) => {
      if (file.size > this.mostBytes)
        throw unreadable(basename(this.root), `at most ${this.mostBytes} bytes in '${key}'`, `${file.size} bytes`);
      return file.readUpTo(0, file.size);
    });
  }

  async getRange(key: AbsolutePath, range: RangeQuery): Promise<Uint8Array | undefined> {
    return this.#with(key, async (file) => {
      const length = "suffixLength" in range ? range.suffixLength : range.length;
      const at = "suffixLength" in range ? file.size - range.suffixLength : range.offset;
      if (at < 0 || length < 0 || at + length > file.size || length > this.mostBytes)
        throw unreadable(basename(this.root), `${length} bytes at ${at} in '${key}'`, `a file of ${file.size} bytes`);
      return file.readUpTo(at, length);
    });
  }

  async #with(key: AbsolutePath, read: (file: ReadFile) => Promise<Uint8Array>): Promise<Uint8Array | undefined> {
    const parts = key.split("/").filter((part) => part !== "");
    if (parts.some((part) => part === ".." || part === "." || part.includes("\\") || part.includes("\0")))
      throw unreadable(basename(this.root), "keys inside the store", `'${key.slice(0, 60)}'`);
    const path = join(this.root, ...parts);
    if (!(await isFile(path))) return undefined;
    const file = await ReadFile.open(path);
    try {
      const bytes = await read(file);
      this.bytesRead += bytes.length;
      return bytes;
    } finally {
      await file.close();
    }
  }
}

async function isFile(path: string): Promise<boolean> {
  try {
    return (await stat(path)).isFile();
  } catch (error) {
    const code = (error as { code?: unknown }).code;
    if (code === "ENOENT" || code === "ENOTDIR") return false;
    throw asUnreadable(path, error);
  }
}

/** Number, sizes and latest change (UTC milliseconds, and exact within `print`) of all files under a folder. */
export async function folderFacts(folder: string): Promise<{ bytes: number; files: number; changed: number; print: string }> {
  let bytes = 0;
  let count = 0;
  let latest = 0n;
  const waiting = [folder];
  while (waiting.length > 0) {
    const here = waiting.pop()!;
    for (const entry of await readdir(here, { withFileTypes: true })) {
      const path = join(here, entry.name);
      if (entry.isDirectory()) waiting.push(path);
      else if (entry.isFile()) {
        const facts = await stat(path, { bigint: true });
        bytes += Number(facts.size);
        count++;
        if (facts.mtimeNs > latest) latest = facts.mtimeNs;
      }
    }
  }
  const changed = Number(latest / 1_000_000n);
  return { bytes, files: count, changed, print: `${folder}:${count}:${bytes}:${latest}` };
}

/** The first of the named files that a folder holds; null when none. */
export async function firstFile(folder: string, names: readonly string[]): Promise<string | null> {
  for (const name of names) if (await isFile(join(folder, name))) return name;
  return null;
}
