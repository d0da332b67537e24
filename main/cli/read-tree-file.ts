import { readFile, stat } from "node:fs/promises";
import { unreadable } from "#shared/errors.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { parseChordaeBytes } from "#shared/formats/chordae/read-chordae-file.ts";

/** Larger than any whole valve's trees by two orders; keeps a wrong file from filling the memory. */
export const LARGEST_TREE_FILE = 512 * 1024 * 1024;

/** The validated tree file at a path. @throws unreadable-input when it is missing, too large or malformed */
export async function readTreeFile(path: string): Promise<ChordaeFile> {
  const found = await stat(path).catch(() => undefined);
  if (!found) throw unreadable(path, "a tree file (.chordae.json)", "nothing there", undefined, "Check the name.");
  if (!found.isFile()) throw unreadable(path, "a tree file (.chordae.json)", "a folder", undefined, "Name the file itself.");
  if (found.size > LARGEST_TREE_FILE) throw unreadable(path, `at most ${LARGEST_TREE_FILE} bytes`, `${found.size} bytes`);
  return parseChordaeBytes(await readFile(path), path);
}
