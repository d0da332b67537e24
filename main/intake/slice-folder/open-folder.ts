import { basename, join } from "node:path";
import { openDicomFolder } from "#main/intake/dicom/dicom-source.ts";
import { ReadFile } from "#main/intake/read-file.ts";
import { filesIn } from "#main/intake/slice-folder/files-in.ts";
import { openSliceFolder, PICTURE_KINDS } from "#main/intake/slice-folder/slice-folder-source.ts";
import type { SliceSource } from "#main/intake/slice-source.ts";
import { unreadable } from "#shared/errors.ts";
import { isDicom } from "#shared/volume/dicom/dicom-elements.ts";

/**
 * The scan whose slices are the files of a folder: a DICOM series, or TIFF, PNG or BMP pictures. The first bytes decide what a file
 * is; other files (logs, notes) are passed over, folders inside are not entered. Null when none is a slice.
 * @throws unreadable-input when there are slices of several kinds, or they do not make one scan.
 */
export async function openFolderOfSlices(folder: string): Promise<SliceSource | null> {
  const kinds = new Map<string, string[]>();
  for (const name of await filesIn(folder)) {
    const kind = await kindOf(join(folder, name));
    if (!kind) continue;
    const alike = kinds.get(kind);
    if (alike) alike.push(name);
    else kinds.set(kind, [name]);
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

async function kindOf(path: string): Promise<string | null> {
  const file = await ReadFile.open(path);
  try {
    const head = await file.readUpTo(0, 132);
    return isDicom(head) ? "DICOM" : (PICTURE_KINDS.find((kind) => kind.isOne(head))?.name ?? null);
  } finally {
    await file.close();
  }
}
