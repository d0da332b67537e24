import { stat } from "node:fs/promises";
import { basename, join } from "node:path";
import { openDicomFile } from "#main/intake/dicom/dicom-source.ts";
import { openSpecimenInPlace } from "#main/intake/in-place/specimen-in-place.ts";
import { openMetaImage } from "#main/intake/meta-image/meta-image-source.ts";
import { isGzippedNifti, openNifti } from "#main/intake/nifti/nifti-source.ts";
import { openNrrd } from "#main/intake/nrrd/nrrd-source.ts";
import { openOmeZarr, zarrFolderOf } from "#main/intake/ome-zarr/ome-zarr-source.ts";
import { openBesideSidecar, openRaw, openSidecar } from "#main/intake/raw/raw-source.ts";
import { asUnreadable, ReadFile } from "#main/intake/read-file.ts";
import { openFolderOfSlices } from "#main/intake/slice-folder/open-folder.ts";
import type { ScanChoice, SliceSource } from "#main/intake/slice-source.ts";
import { openTiff } from "#main/intake/tiff/tiff-source.ts";
import { unreadable } from "#shared/errors.ts";
import { isDicom } from "#shared/volume/dicom/dicom-elements.ts";
import { isMetaImage } from "#shared/volume/meta-image/meta-image-fields.ts";
import { niftiMagic } from "#shared/volume/nifti/nifti-header.ts";
import { isNrrd, latin1, quote } from "#shared/volume/nrrd/nrrd-fields.ts";
import { isTiff } from "#shared/volume/tiff/tiff-entries.ts";

/** What can be read, for messages. */
export const READABLE =
  "an NRRD file (.nrrd, .nhdr), a MetaImage (.mha, .mhd), a NIfTI-1 scan (.nii, .nii.gz, .hdr), a multi-page TIFF file, a DICOM series, a folder of TIFF, PNG or BMP slices, an OME-Zarr folder, or raw voxels with a sidecar or flags";

const NO_HEADER = "Voxels without a header need a sidecar that says how they lie; 'tautline help info' shows one.";

/**
 * A slice source over a scan's file or folder; the first bytes decide what it is, never its name. A specimen's folder of a
 * library stands for its stored scan. The caller closes it.
 * @throws unreadable-input for anything that is not a whole scan of a family in {@link READABLE}.
 */
export async function openScan(path: string, choice: ScanChoice = {}): Promise<SliceSource> {
  if (choice.raw) return openRaw(path, choice.raw);
  if (await isFolder(path)) return openFolder(path, choice);
  const file = await ReadFile.open(path);
  let head: Uint8Array;
  let gzipNifti = false;
  try {
    head = await file.readUpTo(0, 512);
    if (head[0] === 0x1f && head[1] === 0x8b) gzipNifti = await isGzippedNifti(file);
  } finally {
    await file.close();
  }
  // A sidecar was put there on purpose, and voxels may begin with any bytes.
  const raw = await openBesideSidecar(path);
  if (raw) return raw;
  if (head.length === 0) throw unreadable(basename(path), READABLE, "an empty file");
  if (isNrrd(head)) return openNrrd(path);
  if (isTiff(head)) return openTiff(path);
  if (isMetaImage(head)) return openMetaImage(path);
  if (gzipNifti || niftiMagic(head) !== null) return openNifti(path, choice);
  if (isDicom(head)) return openDicomFile(path);
  const name = basename(path);
  if (name === "zarr.json" || name === ".zattrs" || name === ".zgroup") return openScan(join(path, ".."), choice);
  const described = /^\s*\{/.test(latin1(head)) ? await openSidecar(path) : null;
  if (described) return described;
  const known = familyByMagic(head);
  const next = known === null ? NO_HEADER : /^a (PNG|BMP)/.test(known) ? "Choose the folder that holds the slices." : undefined;
  throw unreadable(name, READABLE, known ?? `a file that begins with ${quote(latin1(head.subarray(0, 16)))}`, undefined, next);
}

async function openFolder(path: string, choice: ScanChoice): Promise<SliceSource> {
  const elsewhere = await openSpecimenInPlace(path);
  if (elsewhere) return elsewhere;
  const zarr = await zarrFolderOf(path);
  if (zarr) return openOmeZarr(zarr, choice);
  const slices = await openFolderOfSlices(path);
  if (slices) return slices;
  throw unreadable(
    basename(path),
    READABLE,
    "a folder without Zarr metadata and without slices",
    undefined,
    "Choose the scan's file, the folder of its slices, or the folder that holds zarr.json, .zgroup or .zattrs.",
  );
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
  if (head[0] === 0x1f && head[1] === 0x8b) return "a gzip file";
  if (text.startsWith("\x89PNG")) return "a PNG picture";
  if (text.startsWith("BM")) return "a BMP picture";
  if (text.startsWith("\xff\xd8\xff")) return "a JPEG picture";
  if (text.startsWith("PK\x03\x04")) return "a zip file";
  return null;
}
