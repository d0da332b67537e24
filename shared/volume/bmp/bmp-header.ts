import { unreadable } from "#shared/errors.ts";

/** How an 8-bit BMP picture keeps its grey values. */
export interface BmpHeader {
  readonly width: number;
  readonly height: number;
  /** Rows from the bottom up, the usual way. */
  readonly bottomUp: boolean;
  /** Byte of the first stored row; each takes `pitch` bytes. */
  readonly offset: number;
  readonly pitch: number;
  /** Grey value of each stored number. */
  readonly greys: Uint8Array;
  /** Numbers from here on have no grey value. */
  readonly colours: number;
  /** Millimetres per pixel; null when not said. */
  readonly resolution: { readonly x: number; readonly y: number } | null;
}

/** Bytes that hold file header, picture header and palette of every BMP that is read. */
export const BMP_HEADER_BYTES = 14 + 124 + 12 + 1024;

/** True when the bytes begin as a BMP file does. */
export function isBmp(head: Uint8Array): boolean {
  if (head.length < 18 || head[0] !== 0x42 || head[1] !== 0x4d) return false;
  const size = new DataView(head.buffer, head.byteOffset, head.byteLength).getUint32(14, true);
  return [12, 40, 52, 56, 64, 108, 124].includes(size);
}

/**
 * The header of an 8-bit BMP picture whose palette holds greys only.
 * @param bytes the beginning of the file, {@link BMP_HEADER_BYTES} where it has so many. @param fileBytes size of the file.
 * @throws unreadable-input for colours, compression, other depths, and rows outside the file.
 * @source Microsoft's description of BITMAPFILEHEADER, BITMAPCOREHEADER and BITMAPINFOHEADER (memory).
 */
export function bmpHeader(bytes: Uint8Array, fileBytes: number, file: string): BmpHeader {
  if (!isBmp(bytes)) throw unreadable(file, "a BMP picture", "other bytes");
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const size = view.getUint32(14, true);
  if (bytes.length < 14 + size) throw unreadable(file, "a whole BMP header", `${bytes.length} bytes`);
  const core = size === 12;
  const width = core ? view.getUint16(18, true) : view.getInt32(18, true);
  const signedHeight = core ? view.getUint16(20, true) : view.getInt32(22, true);
  const height = Math.abs(signedHeight);
  if (!(width >= 1 && height >= 1)) throw unreadable(file, "a width and height of 1 or more", `${width} x ${signedHeight}`);
  const bits = view.getUint16(core ? 24 : 28, true);
  if (bits !== 8)
    throw unreadable(file, "8 bits a voxel", `${bits}`, undefined, "Save the slices as 8-bit grey values, or as TIFF.");
  const compression = core ? 0 : view.getUint32(30, true);
  if (compression !== 0)
    throw unreadable(file, "no compression", `compression ${compression}`, undefined, "Save the slices without compression.");
  const offset = view.getUint32(10, true);
  const pitch = Math.ceil(width / 4) * 4;
  const used = core ? 0 : view.getUint32(46, true);
  const entry = core ? 3 : 4;
  const paletteAt = 14 + size;
  // A palette whose length is not given is whole, or ends where the voxels begin.
  const colours = used === 0 ? Math.max(1, Math.min(256, Math.floor((offset - paletteAt) / entry))) : used;
  if (colours > 256) throw unreadable(file, "a palette of at most 256 greys", `${colours}`);
  if (offset < paletteAt + colours * entry || offset + pitch * height > fileBytes)
    throw unreadable(
      file,
      `${pitch * height} bytes of voxels after a palette of ${colours} greys`,
      `voxels from byte ${offset} of ${fileBytes}`,
      undefined,
      "The file was cut short; copy it again.",
    );
  if (bytes.length < paletteAt + colours * entry) throw unreadable(file, "a whole palette", `${bytes.length} bytes`);
  const greys = new Uint8Array(256);
  for (let k = 0; k < colours; k++) {
    const [blue, green, red] = bytes.subarray(paletteAt + k * entry, paletteAt + k * entry + 3);
    if (blue !== green || green !== red)
      throw unreadable(
        file,
        "a palette of greys",
        `the colour ${red}, ${green}, ${blue} as number ${k}`,
        undefined,
        "Save the slices as grey values.",
      );
    greys[k] = blue!;
  }
  const [x, y] = core ? [0, 0] : [view.getInt32(38, true), view.getInt32(42, true)];
  const resolution = x > 0 && y > 0 ? { x: 1000 / x, y: 1000 / y } : null;
  return { width, height, bottomUp: signedHeight > 0, offset, pitch, greys, colours, resolution };
}
