import { unzlibSync } from "fflate";
import { unreadable } from "#shared/errors.ts";
import { fromBase64 } from "#shared/formats/vtp/base64.ts";
import { textOf, type XmlElement } from "#shared/formats/xml/read-xml.ts";

/** Bytes of one number of each VTK type, and how to read it. */
const NUMBERS: Readonly<Record<string, readonly [number, (view: DataView, at: number, little: boolean) => number]>> = {
  Int8: [1, (v, at) => v.getInt8(at)],
  UInt8: [1, (v, at) => v.getUint8(at)],
  Int16: [2, (v, at, little) => v.getInt16(at, little)],
  UInt16: [2, (v, at, little) => v.getUint16(at, little)],
  Int32: [4, (v, at, little) => v.getInt32(at, little)],
  UInt32: [4, (v, at, little) => v.getUint32(at, little)],
  Int64: [8, (v, at, little) => Number(v.getBigInt64(at, little))],
  UInt64: [8, (v, at, little) => Number(v.getBigUint64(at, little))],
  Float32: [4, (v, at, little) => v.getFloat32(at, little)],
  Float64: [8, (v, at, little) => v.getFloat64(at, little)],
};

/** More than any valve's lines hold; sizes that a file declares are checked against it and against the bytes that are there. */
const MOST_BYTES = 512 * 1024 * 1024;

/** How a VTK XML file keeps its arrays. */
export interface VtkEncoding {
  readonly file: string;
  readonly littleEndian: boolean;
  readonly headerBytes: 4 | 8;
  readonly compressed: boolean;
  /** Bytes after the underscore of AppendedData; base64 is decoded array by array. Null without appended data. */
  readonly appended: { readonly bytes: Uint8Array; readonly base64: boolean } | null;
}

/** The numbers of a DataArray. @throws unreadable-input */
export function vtkNumbers(element: XmlElement, encoding: VtkEncoding): Float64Array {
  const { type = "", Name: name = "" } = element.attributes;
  const kind = Object.hasOwn(NUMBERS, type) ? NUMBERS[type] : undefined;
  if (!kind) throw unreadable(encoding.file, "a VTK number type", `'${type}'`, `array ${name}`);
  if ((element.attributes.format ?? "ascii") === "ascii") {
    const words = textOf(element).split(/\s+/).filter(Boolean);
    return Float64Array.from(words, (word) => {
      const value = /^[-+]?nan/i.test(word) ? Number.NaN : Number(word);
      if (Number.isNaN(value) && !/^[-+]?nan/i.test(word))
        throw unreadable(encoding.file, "numbers", `'${word.slice(0, 40)}'`, `array ${name}`);
      return value;
    });
  }
  const bytes = blockOf(element, encoding);
  const [size, read] = kind;
  if (bytes.length % size !== 0)
    throw unreadable(encoding.file, `whole ${type} numbers`, `${bytes.length} bytes`, `array ${name}`);
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.length);
  return Float64Array.from({ length: bytes.length / size }, (_, i) => read(view, i * size, encoding.littleEndian));
}

/** The texts of a String array. @throws unreadable-input */
export function vtkStrings(element: XmlElement, encoding: VtkEncoding): string[] {
  const bytes =
    (element.attributes.format ?? "ascii") === "ascii"
      ? Uint8Array.from(textOf(element).split(/\s+/).filter(Boolean), Number)
      : blockOf(element, encoding);
  const texts = new TextDecoder().decode(bytes).split("\0");
  return texts.slice(0, -1);
}

function blockOf(element: XmlElement, encoding: VtkEncoding): Uint8Array {
  const { format, offset, Name: name = "" } = element.attributes;
  const refuse = (expected: string, found: string) => unreadable(encoding.file, expected, found, `array ${name}`);
  if (format === "binary") return decodeText(textOf(element), encoding, refuse);
  if (format !== "appended") throw refuse("ascii, binary or appended data", `'${format}'`);
  const start = Number(offset);
  const { appended } = encoding;
  if (!appended) throw refuse("an AppendedData element", "none");
  if (!Number.isSafeInteger(start) || start < 0 || start > appended.bytes.length)
    throw refuse("an offset into the appended data", String(offset));
  const rest = appended.bytes.subarray(start);
  return appended.base64 ? decodeText(new TextDecoder().decode(rest), encoding, refuse) : decodeBytes(rest, encoding, refuse);
}

type Refuse = (expected: string, found: string) => Error;

/** Base64 pads after the header of compressed data and after the data; both parts are decoded on their own. */
function decodeText(text: string, encoding: VtkEncoding, refuse: Refuse): Uint8Array {
  const clean = text.replace(/\s+/g, "");
  const size = encoding.headerBytes;
  const decode = (part: string): Uint8Array => {
    const bytes = fromBase64(part);
    if (!bytes) throw refuse("base64 text", "other characters");
    return bytes;
  };
  const wordsOf = (bytes: number) => 4 * Math.ceil(bytes / 3);
  if (!encoding.compressed) {
    const head = decode(clean.slice(0, wordsOf(size)));
    const length = count(head, 0, encoding, refuse);
    return decodeBytes(decode(clean.slice(0, wordsOf(size + length))), encoding, refuse);
  }
  const first = decode(clean.slice(0, wordsOf(3 * size)));
  const blocks = count(first, 0, encoding, refuse);
  if (blocks > clean.length) throw refuse("as many blocks as the data hold", String(blocks));
  const headWords = wordsOf((3 + blocks) * size);
  const head = decode(clean.slice(0, headWords));
  let length = 0;
  for (let b = 0; b < blocks; b++) length += count(head, (3 + b) * size, encoding, refuse);
  const body = decode(clean.slice(headWords, headWords + wordsOf(length)));
  const all = new Uint8Array(head.length + body.length);
  all.set(head);
  all.set(body, head.length);
  return decodeBytes(all, encoding, refuse);
}

function decodeBytes(bytes: Uint8Array, encoding: VtkEncoding, refuse: Refuse): Uint8Array {
  const size = encoding.headerBytes;
  const first = count(bytes, 0, encoding, refuse);
  if (!encoding.compressed) {
    if (size + first > bytes.length) throw refuse(`${first} bytes`, String(Math.max(0, bytes.length - size)));
    return bytes.slice(size, size + first);
  }
  if (first === 0) return new Uint8Array(0);
  const blockSize = count(bytes, size, encoding, refuse);
  const lastSize = count(bytes, 2 * size, encoding, refuse);
  const total = lastSize === 0 ? first * blockSize : (first - 1) * blockSize + lastSize;
  if ((3 + first) * size > bytes.length) throw refuse(`${first} blocks`, `${bytes.length} bytes`);
  // zlib packs at most about a thousand to one; a greater claim is a lie.
  if (total > MOST_BYTES || total > 1100 * bytes.length) throw refuse("a size that the packed bytes can hold", `${total} bytes`);
  const out = new Uint8Array(total);
  let from = (3 + first) * size;
  for (let b = 0; b < first; b++) {
    const packed = count(bytes, (3 + b) * size, encoding, refuse);
    if (from + packed > bytes.length) throw refuse(`${packed} packed bytes`, String(bytes.length - from));
    const room = out.subarray(b * blockSize, Math.min(total, (b + 1) * blockSize));
    try {
      if (unzlibSync(bytes.subarray(from, from + packed), { out: room }).length !== room.length) throw new Error("short");
    } catch {
      throw refuse("zlib data", "bytes that do not unpack to their size");
    }
    from += packed;
  }
  return out;
}

function count(bytes: Uint8Array, at: number, encoding: VtkEncoding, refuse: Refuse): number {
  if (at + encoding.headerBytes > bytes.length) throw refuse("a size before the data", "the end");
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.length);
  const value =
    encoding.headerBytes === 8 ? Number(view.getBigUint64(at, encoding.littleEndian)) : view.getUint32(at, encoding.littleEndian);
  if (value > MOST_BYTES) throw refuse(`at most ${MOST_BYTES} bytes`, String(value));
  return value;
}
