import type { AppendFile } from "#main/node/file-port.ts";

/** A file that goes into a zip; its size and checksum are known before. */
export interface ZipFile {
  readonly name: string;
  readonly bytes: number;
  readonly crc32: number;
  pieces(): AsyncIterable<Uint8Array>;
}

/** 1 January 1980, the format's first day: the same files give the same bytes. */
const DATE = 0x21;
const WIDE = 0xffffffff;

/**
 * Writes files into a zip, stored as they are, with zip64 where a size or place needs it; nothing is held but one piece.
 * @source APPNOTE.TXT 6.3.10
 */
export async function writeZip(to: AppendFile, files: readonly ZipFile[]): Promise<number> {
  const central: Buffer[] = [];
  let at = 0;
  const put = async (bytes: Uint8Array) => {
    await to.append(bytes);
    at += bytes.length;
  };
  for (const file of files) {
    const start = at;
    await put(localHeader(file));
    const data = at;
    for await (const piece of file.pieces()) await put(piece);
    if (at - data !== file.bytes) throw new Error(`${file.name}: ${file.bytes} bytes were announced, ${at - data} came`);
    central.push(centralHeader(file, start));
  }
  const start = at;
  for (const header of central) await put(header);
  await put(endOf(files.length, at - start, start));
  return at;
}

function localHeader({ name, bytes, crc32 }: ZipFile): Buffer {
  const wide = bytes >= WIDE;
  const text = Buffer.from(name, "utf8");
  const extra = wide ? wideFields([bytes, bytes]) : Buffer.alloc(0);
  const header = Buffer.alloc(30);
  header.writeUInt32LE(0x04034b50, 0);
  header.writeUInt16LE(wide ? 45 : 20, 4);
  header.writeUInt16LE(0x0800, 6);
  header.writeUInt16LE(DATE, 12);
  header.writeUInt32LE(crc32, 14);
  header.writeUInt32LE(Math.min(bytes, WIDE), 18);
  header.writeUInt32LE(Math.min(bytes, WIDE), 22);
  header.writeUInt16LE(text.length, 26);
  header.writeUInt16LE(extra.length, 28);
  return Buffer.concat([header, text, extra]);
}

function centralHeader({ name, bytes, crc32 }: ZipFile, offset: number): Buffer {
  const values = [...(bytes >= WIDE ? [bytes, bytes] : []), ...(offset >= WIDE ? [offset] : [])];
  const extra = values.length > 0 ? wideFields(values) : Buffer.alloc(0);
  const text = Buffer.from(name, "utf8");
  const header = Buffer.alloc(46);
  header.writeUInt32LE(0x02014b50, 0);
  header.writeUInt16LE((3 << 8) | 45, 4);
  header.writeUInt16LE(values.length > 0 ? 45 : 20, 6);
  header.writeUInt16LE(0x0800, 8);
  header.writeUInt16LE(DATE, 14);
  header.writeUInt32LE(crc32, 16);
  header.writeUInt32LE(Math.min(bytes, WIDE), 20);
  header.writeUInt32LE(Math.min(bytes, WIDE), 24);
  header.writeUInt16LE(text.length, 28);
  header.writeUInt16LE(extra.length, 30);
  // A plain file that everyone may read.
  header.writeUInt32LE((0o100644 << 16) >>> 0, 38);
  header.writeUInt32LE(Math.min(offset, WIDE), 42);
  return Buffer.concat([header, text, extra]);
}

/** The zip64 extra field with these values. */
function wideFields(values: readonly number[]): Buffer {
  const field = Buffer.alloc(4 + 8 * values.length);
  field.writeUInt16LE(1, 0);
  field.writeUInt16LE(8 * values.length, 2);
  values.forEach((value, k) => {
    field.writeBigUInt64LE(BigInt(value), 4 + 8 * k);
  });
  return field;
}

function endOf(count: number, bytes: number, start: number): Buffer {
  const end = Buffer.alloc(22);
  end.writeUInt32LE(0x06054b50, 0);
  end.writeUInt16LE(Math.min(count, 0xffff), 8);
  end.writeUInt16LE(Math.min(count, 0xffff), 10);
  end.writeUInt32LE(Math.min(bytes, WIDE), 12);
  end.writeUInt32LE(Math.min(start, WIDE), 16);
  if (count < 0xffff && bytes < WIDE && start < WIDE) return end;
  const end64 = Buffer.alloc(56);
  end64.writeUInt32LE(0x06064b50, 0);
  end64.writeBigUInt64LE(44n, 4);
  end64.writeUInt16LE((3 << 8) | 45, 12);
  end64.writeUInt16LE(45, 14);
  for (const [at, value] of [
    [24, count],
    [32, count],
    [40, bytes],
    [48, start],
  ] as const)
    end64.writeBigUInt64LE(BigInt(value), at);
  const locator = Buffer.alloc(20);
  locator.writeUInt32LE(0x07064b50, 0);
  locator.writeBigUInt64LE(BigInt(start + bytes), 8);
  locator.writeUInt32LE(1, 16);
  return Buffer.concat([end64, locator, end]);
}
