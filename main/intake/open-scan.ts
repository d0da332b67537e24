import { stat } from "node:fs/promises";
import { basename, join } from "node:path";
import { openMetaImage } from "#main/intake/meta-image/meta-image-source.ts";
import { openNrrd } from "#main/intake/nrrd/nrrd-source.ts";
import { openOmeZarr, zarrFolderOf } from "#main/intake/ome-zarr/ome-zarr-source.ts";
import { asUnreadable, ReadFile } from "#main/intake/read-file.ts";
import type { ScanChoice, SliceSource } from "#main/intake/slice-source.ts";
import { openTiff } from "#main/intake/tiff/tiff-source.ts";
import { unreadable } from "#shared/errors.ts";
import { isMetaImage } from "#shared/volume/meta-image/meta-image-fields.ts";
import { isNrrd, latin1, quote } from "#shared/volume/nrrd/nrrd-fields.ts";
import { isTiff } from "#shared/volume/tiff/tiff-entries.ts";

/** What can be read, for messages. */
export const READABLE = "an NRRD file (.nrrd, .nhdr), a multi-page TIFF file or an OME-Zarr folder";

/**
 * A slice source over a scan's file or folder; the first bytes decide what it is, never its name. A specimen's folder of a
 * library stands for its stored scan. The caller closes it.
 * @throws unreadable-input for anything that is not a whole scan of a family in {@link READABLE}.
 */
export async function openScan(path: string, choice: ScanChoice = {}): Promise<SliceSource> {
  const folder = await isFolder(path);
  if (folder) {
    const zarr = await zarrFolderOf(path);
    if (!zarr)
      throw unreadable(
        basename(path),
        READABLE,
        "a folder without Zarr metadata",
        undefined,
        "Choose the scan's file, or the folder that holds zarr.json, .zgroup or .zattrs.",
      );
    return openOmeZarr(zarr, choice);
  }
  const file = await ReadFile.open(path);
  let head: Uint8Array;
  try {
    head = await file.readUpTo(0, 512);
  } finally {
    await file.close();
  }
  if (head.length === 0) throw unreadable(basename(path), READABLE, "an empty file");
  if (isNrrd(head)) return openNrrd(path);
  if (isTiff(head)) return openTiff(path);
  if (isMetaImage(head)) return openMetaImage(path);
  const name = basename(path);
  if (name === "zarr.json" || name === ".zattrs" || name === ".zgroup") return openScan(join(path, ".."), choice);
  throw unreadable(name, READABLE, familyByMagic(head) ?? `a file that begins with ${quote(latin1(head.subarray(0, 16)))}`);
}

async function isFolder(path: string): Promise<boolean> {
  try {
    return (await stat(path)).isDirectory();
  } catch (error) {
    throw asUnreadable(path, error);
  }
}

/** Well-known beginnings of files that are no scan this program reads, so that the message can say what the file is. */
function familyByMagic(head: Uint8Array): string | null {
  const text = latin1(head);
  if (head.length >= 132 && text.slice(128, 132) === "DICM") return "a DICOM file";
  if (head.length >= 348 && /^(n\+1|ni1)\0$/.test(text.slice(344, 348))) return "a NIfTI-1 file";
  if (head[0] === 0x1f && head[1] === 0x8b) return "a gzip file";
  if (text.startsWith("\x89PNG")) return "a PNG picture";
  if (text.startsWith("BM")) return "a BMP picture";
  if (text.startsWith("\xff\xd8\xff")) return "a JPEG picture";
  if (text.startsWith("PK\x03\x04")) return "a zip file";
  return null;
}
