import { unreadable } from "#shared/errors.ts";
import { crc32 } from "#shared/volume/png/crc32.ts";

/** What a PNG file says of its picture: one grey value per pixel. */
export interface PngHeader {
  readonly width: number;
  readonly height: number;
  readonly bits: 8 | 16;
}

const SIGNATURE = [0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a];
const COLOURS: Readonly<Record<number, string>> = {
  2: "colours",
  3: "a colour palette",
  4: "grey with transparency",
  6: "colours with transparency",
};
/** Signature and the first chunk. */
export const PNG_HEADER_BYTES = 33;

/** True when the bytes begin as a PNG file does. */
export function isPng(head: Uint8Array): boolean {
  return SIGNATURE.every((byte, k) => head[k] === byte);
}

/**
 * The header of a PNG file.
 * @param bytes at least the first {@link PNG_HEADER_BYTES}.
 * @throws unreadable-input for colours, other depths than 8 and 16 bits, interlacing, and damaged headers.
 * @source PNG specification (W3C), sections 5.2, 11.2.1 (memory); checked against files that ITK writes.
 */
export function pngHeader(bytes: Uint8Array, file: string): PngHeader {
  if (!isPng(bytes)) throw unreadable(file, "a PNG picture", "other bytes");
  if (bytes.length < PNG_HEADER_BYTES) throw unreadable(file, "a whole PNG header", `${bytes.length} bytes`);
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const kind = String.fromCharCode(...bytes.subarray(12, 16));
  if (view.getUint32(8) !== 13 || kind !== "IHDR") throw unreadable(file, "a PNG header chunk", "another chunk");
  if (crc32(bytes.subarray(12, 29)) !== view.getUint32(29))
    throw unreadable(file, "a header with its check sum", "damaged bytes", "PNG header", "Copy the file again.");
  const [width, height] = [view.getUint32(16), view.getUint32(20)];
  const isSide = (n: number) => n >= 1 && n < 2 ** 31;
  if (!isSide(width) || !isSide(height))
    throw unreadable(file, "a width and height from 1 to 2147483647", `${width} x ${height}`);
  const [bits, colour, compression, filter, interlace] = bytes.subarray(24, 29);
  if (colour !== 0)
    throw unreadable(
      file,
      "one grey value per voxel",
      COLOURS[colour!] ?? `colour type ${colour}`,
      undefined,
      "Save the slices as grey values.",
    );
  if (bits !== 8 && bits !== 16) throw unreadable(file, "8 or 16 bits a voxel", `${bits}`);
  if (compression !== 0 || filter !== 0) throw unreadable(file, "compression and filter method 0", `${compression}, ${filter}`);
  if (interlace !== 0)
    throw unreadable(file, "rows in order", "an interlaced picture", undefined, "Save the slices without interlacing.");
  return { width, height, bits };
}

/** Millimetres per pixel from the chunk `pHYs` (pixels per metre); null when it gives none. @param body the chunk's nine bytes. */
export function pngResolution(body: Uint8Array): { x: number; y: number } | null {
  if (body.length !== 9 || body[8] !== 1) return null;
  const view = new DataView(body.buffer, body.byteOffset, body.byteLength);
  const [x, y] = [view.getUint32(0), view.getUint32(4)];
  return x > 0 && y > 0 ? { x: 1000 / x, y: 1000 / y } : null;
}
