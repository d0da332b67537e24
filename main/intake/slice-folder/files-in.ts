import type { Dirent } from "node:fs";
import { readdir, stat } from "node:fs/promises";
import { basename, join } from "node:path";
import { asUnreadable } from "#main/intake/read-file.ts";
import { unreadable } from "#shared/errors.ts";

const MOST_FILES = 200_000;

/** Names of a folder's plain files, and links to such, but hidden ones; sorted. @throws unreadable-input */
export async function filesIn(folder: string): Promise<string[]> {
  let entries: Dirent[];
  try {
    entries = await readdir(folder, { withFileTypes: true });
  } catch (error) {
    throw asUnreadable(folder, error);
  }
  const names: string[] = [];
  for (const entry of entries) {
    if (entry.name.startsWith(".")) continue;
    if (entry.isFile() || (entry.isSymbolicLink() && (await leadsToFile(join(folder, entry.name))))) names.push(entry.name);
  }
  if (names.length > MOST_FILES) throw unreadable(basename(folder), `at most ${MOST_FILES} files`, `${names.length}`);
  return names.sort();
}

async function leadsToFile(link: string): Promise<boolean> {
  try {
    return (await stat(link)).isFile();
  } catch {
    return false; // a link to nothing
  }
}
