// PNG and BMP files put together byte by byte from the PNG specification (W3C) and Microsoft's description of bitmap files
// (from memory); nothing here is shared with the readers.
import { deflateSync } from "node:zlib";

export interface HandPng {
  readonly width: number;
  readonly height: number;
  readonly bits?: number;
  readonly colour?: number;
  readonly interlace?: number;
  readonly values: readonly number[];
  /** Filter of each row, used in turn. */
  readonly filters?: readonly number[];
  /** Bytes of compressed data in each chunk; all in one when absent. */
  readonly chunk?: number;
  /** Pixels per metre. */
  readonly perMetre?: readonly [number, number];
}

/** CRC-32 bit by bit (PNG specification, annex D). */
export function crcOf(bytes: Uint8Array): number {
  let c = 0xffffffff;
  for (const byte of bytes) {
    c ^= byte;
    for (let k = 0; k < 8; k++) c = c & 1 ? (c >>> 1) ^ 0xedb88320 : c >>> 1;
  }
  return ~c >>> 0;
}

function chunk(kind: string, body: Uint8Array): Buffer {
  const out = Buffer.alloc(12 + body.length);
  out.writeUInt32BE(body.length, 0);
  out.write(kind, 4, "latin1");
  out.set(body, 8);
  out.writeUInt32BE(crcOf(out.subarray(4, 8 + body.length)), 8 + body.length);
  return out;
}

export function pngBytes(png: HandPng): Buffer {
  const bits = png.bits ?? 8;
  const step = bits / 8;
  const pitch = png.width * step;
  const rows: number[][] = [];
  for (let y = 0; y < png.height; y++) {
    const row: number[] = [];
    for (const v of png.values.slice(y * png.width, (y + 1) * png.width)) row.push(...(bits === 16 ? [v >> 8, v & 255] : [v]));
    rows.push(row);
  }
  const packed: number[] = [];
  rows.forEach((row, y) => {
    const filter = png.filters?.[y % png.filters.length] ?? 0;
    packed.push(filter);
    for (let k = 0; k < pitch; k++) {
      const a = row[k - step] ?? 0;
      const b = rows[y - 1]?.[k] ?? 0;
      const c = k < step ? 0 : (rows[y - 1]?.[k - step] ?? 0);
      const [pa, pb, pc] = [Math.abs(b - c), Math.abs(a - c), Math.abs(a + b - 2 * c)];
      const paeth = pa <= pb && pa <= pc ? a : pb <= pc ? b : c;
      const predicted = [0, a, b, Math.floor((a + b) / 2), paeth][filter] ?? 0;
      packed.push((row[k]! - predicted) & 255);
    }
  });
  const header = Buffer.alloc(13);
  header.writeUInt32BE(png.width, 0);
  header.writeUInt32BE(png.height, 4);
  header.set([bits, png.colour ?? 0, 0, 0, png.interlace ?? 0], 8);
  const stream = deflateSync(Uint8Array.from(packed));
  const pieces: Buffer[] = [];
  for (let at = 0; at < stream.length; at += png.chunk ?? stream.length)
    pieces.push(chunk("IDAT", stream.subarray(at, at + (png.chunk ?? stream.length))));
  const phys = Buffer.alloc(9);
  if (png.perMetre) {
    phys.writeUInt32BE(png.perMetre[0], 0);
    phys.writeUInt32BE(png.perMetre[1], 4);
    phys[8] = 1;
  }
  return Buffer.concat([
    Buffer.from([0x89, 0x50, 0x4e, 0x47, 13, 10, 26, 10]),
    chunk("IHDR", header),
    ...(png.perMetre ? [chunk("pHYs", phys)] : []),
    chunk("tEXt", Buffer.from("Comment\0by hand")),
    ...pieces,
    chunk("IEND", new Uint8Array(0)),
  ]);
}

export interface HandBmp {
  readonly width: number;
  readonly height: number;
  /** Stored numbers, rows from the top. */
  readonly values: readonly number[];
  readonly topDown?: boolean;
  /** Red, green, blue of each number; greys in order when absent. */
  readonly palette?: readonly (readonly [number, number, number])[];
  readonly bits?: number;
  readonly compression?: number;
  readonly core?: boolean;
  readonly perMetre?: readonly [number, number];
}

export function bmpBytes(bmp: HandBmp): Buffer {
  const palette = bmp.palette ?? Array.from({ length: 256 }, (_, k) => [k, k, k] as const);
  const entry = bmp.core ? 3 : 4;
  const size = bmp.core ? 12 : 40;
  const offset = 14 + size + palette.length * entry;
  const pitch = bmp.width + ((4 - (bmp.width % 4)) % 4);
  const out = Buffer.alloc(offset + pitch * bmp.height);
  out.write("BM", 0, "latin1");
  out.writeUInt32LE(out.length, 2);
  out.writeUInt32LE(offset, 10);
  out.writeUInt32LE(size, 14);
  if (bmp.core) {
    out.writeUInt16LE(bmp.width, 18);
    out.writeUInt16LE(bmp.height, 20);
    out.writeUInt16LE(1, 22);
    out.writeUInt16LE(bmp.bits ?? 8, 24);
  } else {
    out.writeInt32LE(bmp.width, 18);
    out.writeInt32LE(bmp.topDown ? -bmp.height : bmp.height, 22);
    out.writeUInt16LE(1, 26);
    out.writeUInt16LE(bmp.bits ?? 8, 28);
    out.writeUInt32LE(bmp.compression ?? 0, 30);
    out.writeInt32LE(bmp.perMetre?.[0] ?? 0, 38);
    out.writeInt32LE(bmp.perMetre?.[1] ?? 0, 42);
    out.writeUInt32LE(palette.length === 256 ? 0 : palette.length, 46);
  }
  palette.forEach(([red, green, blue], k) => {
    out.set([blue, green, red], 14 + size + k * entry);
  });
  for (let y = 0; y < bmp.height; y++) {
    const row = bmp.topDown ? y : bmp.height - 1 - y;
    out.set(bmp.values.slice(y * bmp.width, (y + 1) * bmp.width), offset + row * pitch);
  }
  return out;
}
