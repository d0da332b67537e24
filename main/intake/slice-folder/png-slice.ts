import { basename } from "node:path";
import { promisify } from "node:util";
import { inflate } from "node:zlib";
import { MOST_EXPANSION } from "#main/intake/gzip-planes.ts";
import type { ReadFile } from "#main/intake/read-file.ts";
import { type PictureKind, perMetre } from "#main/intake/slice-folder/picture-slice.ts";
import { swapBytes } from "#main/intake/slice-source.ts";
import { unreadable } from "#shared/errors.ts";
import { undoPngFilters } from "#shared/volume/png/png-filters.ts";
import { isPng, PNG_HEADER_BYTES, type PngHeader, pngHeader, pngResolution } from "#shared/volume/png/png-header.ts";

const inflateAsync = promisify(inflate);
const MOST_CHUNKS = 1_000_000;
const CUT_SHORT = "The file was cut short; copy it again.";

interface PngLayout {
  readonly header: PngHeader;
  readonly resolution: { x: number; y: number } | null;
  readonly packed: readonly { readonly at: number; readonly length: number }[];
  readonly packedBytes: number;
}

/** Grey PNG pictures of 8 or 16 bits. */
export const PNG_SLICE: PictureKind = {
  name: "PNG",
  isOne: isPng,
  async open(file) {
    const { header, resolution } = await layoutOf(file);
    const { width, height, bits } = header;
    return { width, height, dtype: bits === 8 ? "uint8" : "uint16", resolution: perMetre(resolution), notes: [] };
  },
  async read(file, out) {
    const name = basename(file.path);
    const { header, packed, packedBytes } = await layoutOf(file);
    const pitch = (header.width * header.bits) / 8;
    const needed = (pitch + 1) * header.height;
    const stream = new Uint8Array(packedBytes);
    let at = 0;
    for (const chunk of packed) {
      await file.readInto(stream.subarray(at, at + chunk.length), chunk.at, "voxels");
      at += chunk.length;
    }
    let rows: Uint8Array;
    try {
      rows = await inflateAsync(stream, { maxOutputLength: needed + 65536 });
    } catch (error) {
      const code = String((error as { code?: unknown }).code ?? "");
      const found = code === "Z_BUF_ERROR" ? "ones that end early" : "damaged data";
      throw unreadable(name, "whole compressed voxels", found, "voxels", "The file was cut short or changed; copy it again.");
    }
    if (rows.length < needed) throw unreadable(name, `${needed} bytes of rows`, `${rows.length} bytes`, "voxels", CUT_SHORT);
    const wrong = undoPngFilters(rows, pitch, header.bits / 8, out);
    if (wrong >= 0) throw unreadable(name, "a row filter from 0 to 4", "another", `row ${wrong + 1}`);
    if (header.bits === 16) swapBytes(Buffer.from(out.buffer, out.byteOffset, out.byteLength), 2);
  },
};

/** Header and places of the compressed voxels; the sizes are checked against the file before anything is allocated. */
async function layoutOf(file: ReadFile): Promise<PngLayout> {
  const name = basename(file.path);
  const header = pngHeader(await file.readUpTo(0, PNG_HEADER_BYTES), name);
  const needed = ((header.width * header.bits) / 8 + 1) * header.height;
  const packed: { at: number; length: number }[] = [];
  let packedBytes = 0;
  let resolution: PngLayout["resolution"] = null;
  let at = PNG_HEADER_BYTES;
  for (let count = 0; ; count++) {
    const bytes = await file.readUpTo(at, 8);
    if (bytes.length < 8 || count > MOST_CHUNKS)
      throw unreadable(name, "an end chunk", "the end of the file", undefined, CUT_SHORT);
    const length = new DataView(bytes.buffer).getUint32(0);
    const kind = String.fromCharCode(...bytes.subarray(4, 8));
    if (at + 12 + length > file.size)
      throw unreadable(name, `${at + 12 + length} bytes or more`, `${file.size} bytes`, "chunk", CUT_SHORT);
    if (kind === "IDAT") {
      packed.push({ at: at + 8, length });
      packedBytes += length;
    } else if (kind === "pHYs" && length === 9) resolution = pngResolution(await file.readUpTo(at + 8, 9));
    else if (kind === "IEND") break;
    at += 12 + length;
  }
  if (packedBytes * MOST_EXPANSION < needed)
    throw unreadable(
      name,
      `${needed} bytes of rows`,
      `${packedBytes} compressed bytes, which cannot hold them`,
      "voxels",
      CUT_SHORT,
    );
  if (packedBytes > needed * 2 + 65536)
    throw unreadable(name, `at most ${needed * 2 + 65536} compressed bytes`, `${packedBytes}`, "voxels");
  return { header, resolution, packed, packedBytes };
}
