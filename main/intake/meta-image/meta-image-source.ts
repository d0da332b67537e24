import { basename, dirname, resolve } from "node:path";
import { voxelFilesSource } from "#main/intake/raw/voxel-files.ts";
import { ReadFile } from "#main/intake/read-file.ts";
import type { SliceSource } from "#main/intake/slice-source.ts";
import { unreadable } from "#shared/errors.ts";
import { META_IMAGE_HEADER_LIMIT, splitMetaImage } from "#shared/volume/meta-image/meta-image-fields.ts";
import { parseMetaImage } from "#shared/volume/meta-image/meta-image-header.ts";

/** A slice source over a MetaImage, its voxels attached or in files of their own. @throws unreadable-input when it is not whole. */
export async function openMetaImage(path: string): Promise<SliceSource> {
  const name = basename(path);
  const file = await ReadFile.open(path);
  let split: ReturnType<typeof splitMetaImage>;
  try {
    split = splitMetaImage(await file.readUpTo(0, META_IMAGE_HEADER_LIMIT), name);
  } finally {
    await file.close();
  }
  const { scan, data } = parseMetaImage(split, name);
  const atEnd = data.headerSize === -1;
  const parts: { path: string; size: number; offset: number; atEnd: boolean }[] = [];
  if (!data.files) parts.push({ path, size: file.size, offset: data.headerSize > 0 ? data.headerSize : split.length, atEnd });
  for (const one of data.files ?? []) {
    const partPath = resolve(dirname(path), one);
    const size = await sizeOf(partPath);
    parts.push({ path: partPath, size, offset: Math.max(0, data.headerSize), atEnd });
  }
  const [first] = parts;
  if (data.compressedBytes !== null && data.compressedBytes > first!.size - first!.offset)
    throw unreadable(
      basename(first!.path),
      `${data.compressedBytes} compressed bytes`,
      `${first!.size - first!.offset} bytes`,
      "CompressedDataSize",
      "The file was cut short; copy it again.",
    );
  return voxelFilesSource({
    path,
    header: scan,
    littleEndian: data.littleEndian,
    encoding: data.compressed ? "zlib" : "raw",
    parts,
  });
}

async function sizeOf(path: string): Promise<number> {
  const file = await ReadFile.open(path);
  await file.close();
  return file.size;
}
