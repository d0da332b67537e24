import { basename } from "node:path";
import { pipeline, Readable } from "node:stream";
import { createInflateRaw } from "node:zlib";
import type { FilePort } from "#main/node/file-port.ts";
import { crcAfter } from "#main/node/packet/crc.ts";
import { type PacketSource, PIECE_BYTES } from "#main/node/packet/packet-source.ts";
import { type ReadRange, readZipDirectory, type ZipEntry } from "#main/node/packet/zip-directory.ts";
import { unreadable } from "#shared/errors.ts";
import { checkBagPath } from "#shared/formats/bagit/bag-texts.ts";

const LOCAL = 0x04034b50;
const DAMAGED = "The packet was changed or damaged on its way; ask for it again.";
/** Unpacked bytes beyond which a zip may be at most this many times its own size. */
const FREE_BYTES = 256 * 1024 * 1024;
const MOST_EXPANSION = 200;

/**
 * A packet that is a zip file with one folder in it. Files are read one by one, never the whole zip.
 * @throws unreadable-input for anything but a well-formed zip of plain files inside one folder
 */
export async function openPacketZip(files: FilePort, path: string): Promise<PacketSource> {
  const name = basename(path);
  const size = (await files.facts(path))?.bytes ?? 0;
  const read: ReadRange = async (start, end) => {
    const bytes = await files.read(path, start, end);
    if (bytes?.length !== end - start)
      throw unreadable(name, `${end} bytes or more`, `${start + (bytes?.length ?? 0)}`, undefined, DAMAGED);
    return bytes;
  };
  const directory = await readZipDirectory(name, size, read);
  const unpacked = directory.reduce((sum, { bytes }) => sum + bytes, 0);
  if (unpacked > FREE_BYTES && unpacked > size * MOST_EXPANSION)
    throw unreadable(name, `at most ${MOST_EXPANSION} times the ${size} bytes of the zip`, `${unpacked} bytes unpacked`);
  const byPath = new Map<string, ZipEntry>();
  const tops = new Set<string>();
  for (const entry of directory) {
    const [top, ...rest] = entry.name.split("/");
    checkBagPath(entry.name, name, entry.name.slice(0, 80));
    tops.add(top!);
    byPath.set(rest.join("/"), entry);
  }
  if (tops.size !== 1 || byPath.has(""))
    throw unreadable(name, "one folder with the packet in it", `${tops.size} names at the top`);
  const entries = [...byPath].map(([inside, { bytes }]) => ({ path: inside, bytes })).sort((a, b) => (a.path < b.path ? -1 : 1));
  return {
    name,
    entries,
    pieces(inside) {
      const entry = byPath.get(inside);
      if (!entry) throw unreadable(name, "a file", "none", inside);
      return checkedPieces(entry, name, inside, read);
    },
  };
}

async function* checkedPieces(
  entry: ZipEntry,
  name: string,
  path: string,
  read: ReadRange,
): AsyncGenerator<Uint8Array, void, void> {
  let bytes = 0;
  let crc = 0;
  for await (const piece of rawPieces(entry, name, path, read)) {
    bytes += piece.length;
    if (bytes > entry.bytes) throw unreadable(name, `${entry.bytes} bytes`, "more", path, DAMAGED);
    crc = crcAfter(crc, piece);
    yield piece;
  }
  if (bytes !== entry.bytes) throw unreadable(name, `${entry.bytes} bytes`, `${bytes}`, path, DAMAGED);
  if (crc !== entry.crc32) throw unreadable(name, `the zip's checksum ${hex(entry.crc32)}`, hex(crc), path, DAMAGED);
}

async function* rawPieces(entry: ZipEntry, name: string, path: string, read: ReadRange): AsyncGenerator<Uint8Array, void, void> {
  const start = await dataStart(entry, name, path, read);
  const packed = async function* () {
    for (let at = 0; at < entry.packedBytes; at += PIECE_BYTES)
      yield await read(start + at, start + Math.min(entry.packedBytes, at + PIECE_BYTES));
  };
  if (entry.method === "stored") return yield* packed();
  const inflated = createInflateRaw({ chunkSize: 256 * 1024 });
  // A failed read ends the inflating with its error, which the loop below throws.
  pipeline(Readable.from(packed()), inflated, () => {});
  try {
    for await (const piece of inflated) yield piece as Uint8Array;
  } catch (error) {
    const { code } = error as { code?: unknown };
    if (typeof code === "string" && code.startsWith("Z_")) throw unreadable(name, "deflated bytes", "others", path, DAMAGED);
    throw error;
  } finally {
    inflated.destroy();
  }
}

/** Where an entry's bytes begin; its own header must say the same name as the directory. */
async function dataStart(entry: ZipEntry, name: string, path: string, read: ReadRange): Promise<number> {
  const header = await read(entry.offset, entry.offset + 30);
  const view = new DataView(header.buffer, header.byteOffset, header.byteLength);
  if (view.getUint32(0, true) !== LOCAL) throw unreadable(name, "a file's header", "none", path, DAMAGED);
  const nameBytes = view.getUint16(26, true);
  const own = await read(entry.offset + 30, entry.offset + 30 + nameBytes);
  if (Buffer.from(own).compare(Buffer.from(entry.name, "utf8")) !== 0)
    throw unreadable(name, `a file named '${entry.name.slice(0, 80)}'`, "another name", path, DAMAGED);
  return entry.offset + 30 + nameBytes + view.getUint16(28, true);
}

function hex(value: number): string {
  return value.toString(16).padStart(8, "0");
}
