import { MOST_FILES } from "#main/node/packet/packet-source.ts";
import { unreadable } from "#shared/errors.ts";
import { spelling } from "#shared/formats/bagit/bag-texts.ts";

/** An entry of a zip file's directory. */
export interface ZipEntry {
  readonly name: string;
  readonly method: "stored" | "deflated";
  readonly crc32: number;
  readonly packedBytes: number;
  readonly bytes: number;
  /** Of the local header, from the start of the file. */
  readonly offset: number;
}

/** Reads bytes [start, end) of the zip file. */
export type ReadRange = (start: number, end: number) => Promise<Uint8Array>;

const END = 0x06054b50;
const END64_LOCATOR = 0x07064b50;
const END64 = 0x06064b50;
const CENTRAL = 0x02014b50;
const MOST_COMMENT = 65535;
const MOST_DIRECTORY_BYTES = 64 * 1024 * 1024;
/** Deflate makes of one byte at most 1032; more is no honest file. */
const MOST_EXPANSION = 1100;

/**
 * The files of a zip, from its directory at the end. Everything the directory claims is held against the file's size before
 * anything is read by it; links, encryption, other packings, several disks and files named twice are refused. Folders' own
 * entries are left out.
 * @throws unreadable-input
 * @source APPNOTE.TXT 6.3.10 (zip file format), with zip64
 */
export async function readZipDirectory(name: string, size: number, read: ReadRange): Promise<ZipEntry[]> {
  const { start, bytes, count } = await findDirectory(name, size, read);
  const directory = await read(start, start + bytes);
  const view = new DataView(directory.buffer, directory.byteOffset, directory.byteLength);
  const entries: ZipEntry[] = [];
  const names = new Set<string>();
  let at = 0;
  for (let k = 0; k < count; k += 1) {
    const where = `entry ${k + 1} of the zip's directory`;
    if (at + 46 > bytes || view.getUint32(at, true) !== CENTRAL) throw unreadable(name, "an entry", "none", where, TORN);
    const [nameBytes, extraBytes, commentBytes] = [28, 30, 32].map((o) => view.getUint16(at + o, true)) as [
      number,
      number,
      number,
    ];
    const next = at + 46 + nameBytes + extraBytes + commentBytes;
    if (next > bytes) throw unreadable(name, `${next} bytes of directory`, `${bytes}`, where, TORN);
    const entry = entryAt(view, at, nameBytes, extraBytes, name, where);
    at = next;
    if (entry === null) continue;
    const known = spelling(entry.name);
    if (names.has(known)) throw unreadable(name, "every file once", `'${entry.name.slice(0, 80)}' twice`, where);
    names.add(known);
    if (entry.offset + 30 + entry.packedBytes > start)
      throw unreadable(name, `${entry.packedBytes} bytes before the directory`, "fewer", entry.name.slice(0, 80), TORN);
    if (entry.bytes > entry.packedBytes * MOST_EXPANSION + 64)
      throw unreadable(
        name,
        `at most ${MOST_EXPANSION} times the packed bytes`,
        `${entry.bytes} of ${entry.packedBytes}`,
        entry.name.slice(0, 80),
      );
    entries.push(entry);
  }
  refuseOverlaps(name, entries);
  return entries;
}

const TORN = "The packet was cut short or damaged on its way; copy it again.";

async function findDirectory(name: string, size: number, read: ReadRange) {
  const from = Math.max(0, size - 22 - MOST_COMMENT);
  const tail = await read(from, size);
  const view = new DataView(tail.buffer, tail.byteOffset, tail.byteLength);
  let end = tail.length - 22;
  while (end >= 0 && !(view.getUint32(end, true) === END && end + 22 + view.getUint16(end + 20, true) === tail.length)) end -= 1;
  if (end < 0) throw unreadable(name, "a zip file", size === 0 ? "an empty file" : "a file without a zip's end", undefined, TORN);
  let count = view.getUint16(end + 10, true);
  let bytes = view.getUint32(end + 12, true);
  let start = view.getUint32(end + 16, true);
  let limit = from + end;
  if (view.getUint16(end + 4, true) !== 0 && view.getUint16(end + 4, true) !== 0xffff)
    throw unreadable(name, "a zip in one piece", "one of several pieces");
  if (count === 0xffff || bytes === 0xffffffff || start === 0xffffffff) {
    if (end < 20 || view.getUint32(end - 20, true) !== END64_LOCATOR)
      throw unreadable(name, "a zip64 locator", "none", undefined, TORN);
    const at = whole(view, end - 12, name);
    if (at + 56 > limit - 20) throw unreadable(name, `a zip64 end before byte ${limit}`, `one at ${at}`, undefined, TORN);
    const record = await read(at, at + 56);
    const end64 = new DataView(record.buffer, record.byteOffset, record.byteLength);
    if (end64.getUint32(0, true) !== END64) throw unreadable(name, "a zip64 end", "none", `byte ${at}`, TORN);
    [count, bytes, start] = [whole(end64, 32, name), whole(end64, 40, name), whole(end64, 48, name)];
    limit = at;
  }
  if (start + bytes > limit)
    throw unreadable(name, `a directory of ${bytes} bytes before byte ${limit}`, `one at ${start}`, undefined, TORN);
  if (bytes > MOST_DIRECTORY_BYTES || count > MOST_FILES) throw unreadable(name, `at most ${MOST_FILES} files`, `${count}`);
  if (count * 46 > bytes) throw unreadable(name, `a directory of ${count} entries`, `${bytes} bytes`, undefined, TORN);
  return { start, bytes, count };
}

/** The entry at byte `at` of the directory; null for a folder's own. */
function entryAt(view: DataView, at: number, nameBytes: number, extraBytes: number, zip: string, where: string): ZipEntry | null {
  const flags = view.getUint16(at + 8, true);
  const method = view.getUint16(at + 10, true);
  const bytesOfName = new Uint8Array(view.buffer, view.byteOffset + at + 46, nameBytes);
  let name: string;
  try {
    name = new TextDecoder("utf-8", { fatal: true }).decode(bytesOfName);
  } catch {
    throw unreadable(zip, "names in UTF-8", "others", where);
  }
  // Upper half of the attributes: the file's kind on systems that have links.
  const kind = (view.getUint32(at + 38, true) >>> 28) & 15;
  if (kind === 10) throw unreadable(zip, "plain files", "a link", name.slice(0, 80));
  if (kind !== 0 && kind !== 8 && kind !== 4) throw unreadable(zip, "plain files", "something else", name.slice(0, 80));
  if (flags & 1 || flags & 64) throw unreadable(zip, "files that are not encrypted", "an encrypted one", name.slice(0, 80));
  let [packedBytes, bytes, offset] = [20, 24, 42].map((o) => view.getUint32(at + o, true)) as [number, number, number];
  const extraStart = at + 46 + nameBytes;
  for (let e = extraStart; e + 4 <= extraStart + extraBytes; ) {
    const [id, length] = [view.getUint16(e, true), view.getUint16(e + 2, true)];
    if (e + 4 + length > extraStart + extraBytes) throw unreadable(zip, "a whole extra field", "a part", where, TORN);
    if (id === 1) {
      let f = e + 4;
      const wide = (value: number) => {
        if (value !== 0xffffffff) return value;
        if (f + 8 > e + 4 + length) throw unreadable(zip, "zip64 sizes", "none", where, TORN);
        f += 8;
        return whole(view, f - 8, zip);
      };
      bytes = wide(bytes);
      packedBytes = wide(packedBytes);
      offset = wide(offset);
    }
    e += 4 + length;
  }
  if (name.endsWith("/")) {
    if (bytes > 0) throw unreadable(zip, "an empty folder entry", `${bytes} bytes`, name.slice(0, 80));
    return null;
  }
  if (method !== 0 && method !== 8) throw unreadable(zip, "stored or deflated files", `packing ${method}`, name.slice(0, 80));
  if (method === 0 && bytes !== packedBytes)
    throw unreadable(zip, `${bytes} bytes stored`, `${packedBytes}`, name.slice(0, 80), TORN);
  return { name, method: method === 0 ? "stored" : "deflated", crc32: view.getUint32(at + 16, true), packedBytes, bytes, offset };
}

/** Files that share bytes would expand without a bound. */
function refuseOverlaps(name: string, entries: readonly ZipEntry[]): void {
  const sorted = [...entries].sort((a, b) => a.offset - b.offset);
  for (const [k, entry] of sorted.slice(1).entries()) {
    const before = sorted[k]!;
    if (before.offset + 30 + before.packedBytes > entry.offset)
      throw unreadable(name, "files beside each other", "files that share bytes", entry.name.slice(0, 80));
  }
}

function whole(view: DataView, at: number, name: string): number {
  const value = view.getBigUint64(at, true);
  if (value > BigInt(Number.MAX_SAFE_INTEGER)) throw unreadable(name, "sizes below 2^53", value.toString(), undefined, TORN);
  return Number(value);
}
