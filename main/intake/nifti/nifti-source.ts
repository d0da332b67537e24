import { basename } from "node:path";
import { gzipBeginning } from "#main/intake/nifti/gzip-beginning.ts";
import { voxelFilesSource } from "#main/intake/raw/voxel-files.ts";
import { ReadFile } from "#main/intake/read-file.ts";
import type { ScanChoice, SliceSource } from "#main/intake/slice-source.ts";
import { unreadable } from "#shared/errors.ts";
import { BYTES_OF_DTYPE } from "#shared/volume/dtype.ts";
import { NIFTI_HEADER_BYTES, niftiMagic, parseNifti } from "#shared/volume/nifti/nifti-header.ts";

/** True when a gzip file holds a NIfTI-1 (or NIfTI-2) scan. */
export async function isGzippedNifti(file: ReadFile): Promise<boolean> {
  return niftiMagic(await gzipBeginning(file, NIFTI_HEADER_BYTES)) !== null;
}

/** A slice source over a NIfTI-1 scan: one file, or header and `.img`; plain or gzip. @throws unreadable-input when it is not whole. */
export async function openNifti(path: string, choice: ScanChoice): Promise<SliceSource> {
  const name = basename(path);
  const file = await ReadFile.open(path);
  let head: Uint8Array;
  let gzip: boolean;
  try {
    head = await file.readUpTo(0, NIFTI_HEADER_BYTES);
    gzip = head[0] === 0x1f && head[1] === 0x8b;
    if (gzip) head = await gzipBeginning(file, NIFTI_HEADER_BYTES);
  } finally {
    await file.close();
  }
  const header = parseNifti(head, name, choice);
  const voxels = header.attached ? { path, size: file.size, gzip } : await imageBeside(path);
  const [nx, ny, nz] = header.scan.size;
  const at = header.offset + header.volume * nx * ny * nz * BYTES_OF_DTYPE[header.scan.dtype];
  const place = voxels.gzip ? { offset: 0, skip: at } : { offset: at };
  return voxelFilesSource({
    path,
    header: header.scan,
    littleEndian: header.littleEndian,
    encoding: voxels.gzip ? "gzip" : "raw",
    parts: [{ path: voxels.path, size: voxels.size, ...place }],
  });
}

/** The `.img` or `.img.gz` file that belongs to a `.hdr` or `.hdr.gz` file. */
async function imageBeside(path: string): Promise<{ path: string; size: number; gzip: boolean }> {
  const stem = path.replace(/\.hdr(\.gz)?$/i, "");
  if (stem === path)
    throw unreadable(basename(path), "a name that ends with .hdr, for a header whose voxels stand in an .img file", "another");
  let refused: unknown;
  for (const candidate of [`${stem}.img`, `${stem}.img.gz`, `${stem}.IMG`]) {
    try {
      const file = await ReadFile.open(candidate);
      try {
        const head = await file.readUpTo(0, 2);
        // Voxels could begin with these two bytes by chance: only the name says that a file is compressed.
        const gzip = /\.gz$/i.test(candidate) && head[0] === 0x1f && head[1] === 0x8b;
        return { path: candidate, size: file.size, gzip };
      } finally {
        await file.close();
      }
    } catch (error) {
      refused ??= error;
    }
  }
  throw refused;
}
