import { basename } from "node:path";
import { promisify } from "node:util";
import { inflate } from "node:zlib";
import { getDecoder } from "geotiff";
import type { ReadFile } from "#main/intake/read-file.ts";
import { swapBytes } from "#main/intake/slice-source.ts";
import { TautlineError, unreadable } from "#shared/errors.ts";
import { BYTES_OF_DTYPE } from "#shared/volume/dtype.ts";
import { blockRows, type TiffPage } from "#shared/volume/tiff/tiff-page.ts";
import { undoDifferencing, undoFloatPredictor } from "#shared/volume/tiff/tiff-predictor.ts";

const inflateAsync = promisify(inflate);

/**
 * Reads one page's voxels into `out` (little-endian bytes, rows from the top).
 * @throws unreadable-input when a block is damaged or too short.
 */
export async function readPage(
  file: ReadFile,
  page: TiffPage,
  littleEndian: boolean,
  out: Uint8Array,
  where: string,
): Promise<void> {
  const bytesPerVoxel = BYTES_OF_DTYPE[page.dtype];
  const pitch = page.width * bytesPerVoxel;
  if (page.compression === 1 && page.predictor === 1 && isContiguous(page, pitch)) {
    await file.readInto(out, page.offsets[0]!, where);
    if (!littleEndian) swapBytes(Buffer.from(out.buffer, out.byteOffset, out.byteLength), bytesPerVoxel);
    return;
  }
  const across = Math.ceil(page.width / page.blockWidth);
  const blockPitch = page.blockWidth * bytesPerVoxel;
  for (let k = 0; k < page.offsets.length; k++) {
    const block = await readBlock(file, page, k, littleEndian, where);
    const top = Math.floor(k / across) * page.blockHeight;
    const left = (k % across) * page.blockWidth;
    const rows = Math.min(page.blockHeight, page.height - top);
    const length = Math.min(page.blockWidth, page.width - left) * bytesPerVoxel;
    for (let y = 0; y < rows; y++) {
      out.set(block.subarray(y * blockPitch, y * blockPitch + length), (top + y) * pitch + left * bytesPerVoxel);
    }
  }
}

/** True when the strips of an uncompressed page follow each other, so that one read takes them all. */
function isContiguous(page: TiffPage, pitch: number): boolean {
  if (page.tiled) return false;
  for (let k = 1; k < page.offsets.length; k++) {
    const exact = page.byteCounts[k - 1] === page.blockHeight * pitch;
    if (!exact || page.offsets[k] !== page.offsets[k - 1]! + page.byteCounts[k - 1]!) return false;
  }
  return true;
}

async function readBlock(file: ReadFile, page: TiffPage, k: number, littleEndian: boolean, where: string): Promise<Uint8Array> {
  const bytesPerVoxel = BYTES_OF_DTYPE[page.dtype];
  const needed = blockRows(page, k) * page.blockWidth * bytesPerVoxel;
  const name = basename(file.path);
  // No compression makes a block much longer; a longer one would only serve to unpack beyond all bounds.
  const most = page.compression === 1 ? needed : needed * 2 + 4096;
  if (page.compression !== 1 && page.byteCounts[k]! > most)
    throw unreadable(name, `a compressed block of at most ${most} bytes`, `${page.byteCounts[k]} bytes`, where);
  const stored = new Uint8Array(page.compression === 1 ? needed : page.byteCounts[k]!);
  await file.readInto(stored, page.offsets[k]!, where);
  let bytes: Uint8Array = stored;
  if (page.compression !== 1) {
    try {
      bytes = await unpack(stored, page, needed);
    } catch (error) {
      if (error instanceof TautlineError) throw error;
      const text = error instanceof Error ? error.message : String(error);
      throw unreadable(name, "a block that can be unpacked", text.split("\n")[0]!.slice(0, 100), where);
    }
  }
  if (bytes.length < needed) throw unreadable(name, `a block of ${needed} bytes`, `${bytes.length} bytes`, where);
  return toNative(bytes.slice(0, needed), page, littleEndian);
}

async function unpack(stored: Uint8Array<ArrayBuffer>, page: TiffPage, needed: number): Promise<Uint8Array> {
  if (page.compression === 8 || page.compression === 32946) return inflateAsync(stored, { maxOutputLength: needed + 65536 });
  // Predictors are undone here afterwards, since they depend on the byte order.
  const decoder = await getDecoder(page.compression, {
    tileWidth: page.blockWidth,
    tileHeight: page.blockHeight,
    planarConfiguration: 1,
    bitsPerSample: BYTES_OF_DTYPE[page.dtype] * 8,
    predictor: 1,
  });
  return new Uint8Array(await decoder.decode(stored.buffer));
}

function toNative(bytes: Uint8Array<ArrayBuffer>, page: TiffPage, littleEndian: boolean): Uint8Array {
  const bytesPerVoxel = BYTES_OF_DTYPE[page.dtype];
  if (page.predictor === 3) return undoFloatPredictor(bytes, page.blockWidth, bytesPerVoxel);
  if (!littleEndian) swapBytes(Buffer.from(bytes.buffer), bytesPerVoxel);
  if (page.predictor === 2) {
    const Words = [Uint8Array, Uint16Array, Uint32Array, BigUint64Array][Math.log2(bytesPerVoxel)]!;
    undoDifferencing(new Words(bytes.buffer), page.blockWidth);
  }
  return bytes;
}
