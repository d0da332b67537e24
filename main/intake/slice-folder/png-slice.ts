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
const CUT_SHORT = "The file was cut short; copy it again.";
/** Bytes of a file besides its compressed voxels that are put up with: text, colour profiles. */
const OTHER_BYTES = 4 * 1024 * 1024;

/** Grey PNG pictures of 8 or 16 bits. */
export const PNG_SLICE: PictureKind = {
  name: "PNG",
  isOne: isPng,
  async open(file) {
    const { width, height, bits } = await headerOf(file);
    const resolution = perMetre(await resolutionOf(file));
    return { width, height, dtype: bits === 8 ? "uint8" : "uint16", resolution, notes: [] };
  },
  async read(file, out) {
    const name = basename(file.path);
    const header = await headerOf(file);
    const pitch = (header.width * header.bits) / 8;
    const needed = (pitch + 1) * header.height;
    const rows = await unpack(packedOf(await file.readUpTo(0, file.size), name), needed, name);
    const wrong = undoPngFilters(rows, pitch, header.bits / 8, out);
    if (wrong >= 0) throw unreadable(name, "a row filter from 0 to 4", "another", `row ${wrong + 1}`);
    if (header.bits === 16) swapBytes(Buffer.from(out.buffer, out.byteOffset, out.byteLength), 2);
  },
};

/** The header; what it declares is checked against the file's size, so that nothing is read or allocated for a lie. */
async function headerOf(file: ReadFile): Promise<PngHeader> {
  const name = basename(file.path);
  const header = pngHeader(await file.readUpTo(0, PNG_HEADER_BYTES), name);
  const needed = ((header.width * header.bits) / 8 + 1) * header.height;
  if (file.size * MOST_EXPANSION < needed)
    throw unreadable(
      name,
      `${needed} bytes of rows`,
      `a file of ${file.size} bytes, which cannot hold them`,
      "voxels",
      CUT_SHORT,
    );
  if (file.size > needed * 2 + OTHER_BYTES)
    throw unreadable(name, `a file of at most ${needed * 2 + OTHER_BYTES} bytes`, `${file.size} bytes`);
  return header;
}

/** The resolution stands before the voxels, if at all. */
async function resolutionOf(file: ReadFile): Promise<{ x: number; y: number } | null> {
  const bytes = await file.readUpTo(0, 4096);
  for (const { kind, body } of chunksOf(bytes)) {
    if (kind === "pHYs") return pngResolution(body);
    if (kind === "IDAT") break;
  }
  return null;
}

/** The compressed voxels of a whole file. */
function packedOf(bytes: Uint8Array, name: string): Uint8Array {
  const parts: Uint8Array[] = [];
  for (const { kind, body } of chunksOf(bytes)) {
    if (kind === "IDAT") parts.push(body);
    if (kind === "IEND") return Buffer.concat(parts);
  }
  throw unreadable(name, "an end chunk", "the end of the file", undefined, CUT_SHORT);
}

/** Chunks after the header, as far as they are whole. */
function* chunksOf(bytes: Uint8Array): Generator<{ kind: string; body: Uint8Array }> {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  for (let at = PNG_HEADER_BYTES; at + 12 <= bytes.length; ) {
    const length = view.getUint32(at);
    if (at + 12 + length > bytes.length) return;
    const kind = String.fromCharCode(...bytes.subarray(at + 4, at + 8));
    yield { kind, body: bytes.subarray(at + 8, at + 8 + length) };
    at += 12 + length;
  }
}

async function unpack(packed: Uint8Array, needed: number, name: string): Promise<Uint8Array> {
  let rows: Uint8Array;
  try {
    rows = await inflateAsync(packed, {
      chunkSize: Math.max(1024, Math.min(needed, 1024 * 1024)),
      maxOutputLength: needed + 65536,
    });
  } catch (error) {
    const code = String((error as { code?: unknown }).code ?? "");
    const found = code === "Z_BUF_ERROR" ? "ones that end early" : "damaged data";
    throw unreadable(name, "whole compressed voxels", found, "voxels", "The file was cut short or changed; copy it again.");
  }
  if (rows.length < needed) throw unreadable(name, `${needed} bytes of rows`, `${rows.length} bytes`, "voxels", CUT_SHORT);
  return rows;
}
