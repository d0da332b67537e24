import { unreadable } from "#shared/errors.ts";

/** How a TIFF file writes its numbers. */
export interface TiffForm {
  readonly littleEndian: boolean;
  /** BigTIFF: 64-bit offsets and counts. */
  readonly big: boolean;
  /** Place of the first image file directory. */
  readonly first: number;
}

/** One entry of an image file directory: `bytes` when its values stand in the entry, else where they are. */
export interface TiffEntry {
  readonly type: number;
  readonly count: number;
  readonly inline: Uint8Array | null;
  readonly offset: number;
}

/** Bytes of one value of each field type; types of BigTIFF included. @source TIFF 6.0, section 2; BigTIFF design. */
const TYPE_BYTES: Readonly<Record<number, number>> = {
  1: 1,
  2: 1,
  3: 2,
  4: 4,
  5: 8,
  6: 1,
  7: 1,
  8: 2,
  9: 4,
  10: 8,
  11: 4,
  12: 8,
  13: 4,
  16: 8,
  17: 8,
  18: 8,
};

/** True when the bytes begin as a TIFF or BigTIFF file does. */
export function isTiff(head: Uint8Array): boolean {
  const text = String.fromCharCode(...head.subarray(0, 4));
  return text === "II*\0" || text === "MM\0*" || text === "II+\0" || text === "MM\0+";
}

/** The form of a TIFF file from its first 16 bytes. @throws unreadable-input when they are no TIFF header or cut short. */
export function tiffForm(head: Uint8Array, file: string): TiffForm {
  if (!isTiff(head)) throw unreadable(file, "a TIFF header", "other bytes");
  const littleEndian = head[0] === 0x49;
  const big = head[littleEndian ? 2 : 3] === 43;
  if (head.length < (big ? 16 : 8)) throw unreadable(file, "a whole TIFF header", `${head.length} bytes`);
  const view = new DataView(head.buffer, head.byteOffset, head.byteLength);
  if (!big) return { littleEndian, big, first: view.getUint32(4, littleEndian) };
  const offsetBytes = view.getUint16(4, littleEndian);
  if (offsetBytes !== 8) throw unreadable(file, "BigTIFF with offsets of 8 bytes", `${offsetBytes}`, "header");
  return { littleEndian, big, first: Number(view.getBigUint64(8, littleEndian)) };
}

/** Bytes of a directory's leading count. */
export function countBytes(form: TiffForm): number {
  return form.big ? 8 : 2;
}

/** Bytes of a directory after its count, the next directory's offset included. */
export function bodyBytes(form: TiffForm, entries: number): number {
  return form.big ? entries * 20 + 8 : entries * 12 + 4;
}

/** A directory's number of entries. */
export function entryCount(bytes: Uint8Array, form: TiffForm): number {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  return form.big ? Number(view.getBigUint64(0, form.littleEndian)) : view.getUint16(0, form.littleEndian);
}

/**
 * The entries of a directory and the place of the next one (0: none).
 * @param body exactly {@link bodyBytes} bytes. Entries of unknown types are left out, as the standard asks of readers.
 */
export function parseEntries(body: Uint8Array, entries: number, form: TiffForm): { tags: Map<number, TiffEntry>; next: number } {
  const view = new DataView(body.buffer, body.byteOffset, body.byteLength);
  const { littleEndian: little, big } = form;
  const tags = new Map<number, TiffEntry>();
  const step = big ? 20 : 12;
  const room = big ? 8 : 4;
  for (let k = 0; k < entries; k++) {
    const at = k * step;
    const type = view.getUint16(at + 2, little);
    const width = TYPE_BYTES[type];
    if (width === undefined) continue;
    const count = big ? Number(view.getBigUint64(at + 4, little)) : view.getUint32(at + 4, little);
    const value = at + (big ? 12 : 8);
    const inline = count * width <= room ? body.slice(value, value + count * width) : null;
    const offset = big ? Number(view.getBigUint64(value, little)) : view.getUint32(value, little);
    tags.set(view.getUint16(at, little), { type, count, inline, offset });
  }
  const end = entries * step;
  const next = big ? Number(view.getBigUint64(end, little)) : view.getUint32(end, little);
  return { tags, next };
}

/** Bytes that an entry's values take. */
export function valueBytes(entry: TiffEntry): number {
  return entry.count * TYPE_BYTES[entry.type]!;
}

/** An entry's values as numbers; a fraction becomes its quotient. @param bytes of {@link valueBytes} length. */
export function valuesOf(entry: TiffEntry, bytes: Uint8Array, littleEndian: boolean): Float64Array {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const out = new Float64Array(entry.count);
  const width = TYPE_BYTES[entry.type]!;
  for (let k = 0; k < entry.count; k++) out[k] = oneValue(view, k * width, entry.type, littleEndian);
  return out;
}

function oneValue(view: DataView, at: number, type: number, little: boolean): number {
  switch (type) {
    case 3:
      return view.getUint16(at, little);
    case 4:
    case 13:
      return view.getUint32(at, little);
    case 5:
      return view.getUint32(at, little) / view.getUint32(at + 4, little);
    case 6:
      return view.getInt8(at);
    case 8:
      return view.getInt16(at, little);
    case 9:
      return view.getInt32(at, little);
    case 10:
      return view.getInt32(at, little) / view.getInt32(at + 4, little);
    case 11:
      return view.getFloat32(at, little);
    case 12:
      return view.getFloat64(at, little);
    case 16:
    case 18:
      return Number(view.getBigUint64(at, little));
    case 17:
      return Number(view.getBigInt64(at, little));
    default:
      return view.getUint8(at);
  }
}
