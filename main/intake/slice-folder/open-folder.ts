import type { Dirent } from "node:fs";
import { readdir, stat } from "node:fs/promises";
import { basename, join } from "node:path";
import { openDicomFolder } from "#main/intake/dicom/dicom-source.ts";
import { asUnreadable, ReadFile } from "#main/intake/read-file.ts";
import { openSliceFolder, PICTURE_KINDS } from "#main/intake/slice-folder/slice-folder-source.ts";
import type { SliceSource } from "#main/intake/slice-source.ts";
import { unreadable } from "#shared/errors.ts";
import { isDicom } from "#shared/volume/dicom/dicom-elements.ts";

const MOST_FILES = 200_000;

/**
 * The scan whose slices are the files of a folder: a DICOM series, or TIFF, PNG or BMP pictures. The first bytes decide what a file
 * is; other files (logs, notes) are passed over, folders inside are not entered. Null when none is a slice.
 * @throws unreadable-input when there are slices of several kinds, or they do not make one scan.
 */
export async function openFolderOfSlices(folder: string): Promise<SliceSource | null> {
  const kinds = new Map<string, string[]>();
  for (const name of await filesIn(folder)) {
    const kind = await kindOf(join(folder, name));
    if (kind) kinds.set(kind, [...(kinds.get(kind) ?? []), name]);
  }
  if (kinds.size > 1) {
    const each = [...kinds].map(([kind, names]) => `${names.length} ${kind} (${names[0]} ...)`);
    const next = "Move what is no slice to another folder.";
    throw unreadable(basename(folder), "one kind of slices", each.join(", "), undefined, next);
  }
  const [found] = kinds;
  if (!found) return null;
  const [kind, names] = found;
  if (kind === "DICOM")
    return openDicomFolder(
      folder,
      names.map((name) => join(folder, name)),
    );
  return openSliceFolder(folder, PICTURE_KINDS.find((one) => one.name === kind)!, names);
}

/** Plain files of a folder but hidden ones, sorted by name. */
async function filesIn(folder: string): Promise<string[]> {
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

async function kindOf(path: string): Promise<string | null> {
  const file = await ReadFile.open(path);
  try {
    const head = await file.readUpTo(0, 132);
    return isDicom(head) ? "DICOM" : (PICTURE_KINDS.find((kind) => kind.isOne(head))?.name ?? null);
  } finally {
    await file.close();
  }
}
