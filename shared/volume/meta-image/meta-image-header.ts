import { unreadable } from "#shared/errors.ts";
import { sizeXyz } from "#shared/geometry/types.ts";
import { BYTES_OF_DTYPE, type SourceDtype } from "#shared/volume/dtype.ts";
import type { MetaImageFields } from "#shared/volume/meta-image/meta-image-fields.ts";
import { placeOfMetaImage } from "#shared/volume/meta-image/meta-image-place.ts";
import { quote } from "#shared/volume/nrrd/nrrd-fields.ts";
import type { ScanHeader } from "#shared/volume/scan-header.ts";

/** Where the voxels of a MetaImage are and how they are kept. */
export interface MetaImageData {
  readonly compressed: boolean;
  readonly littleEndian: boolean;
  /** Bytes before the voxels, from the beginning of the file that holds them; 0: none given; -1: the voxels are its last bytes. */
  readonly headerSize: number;
  /** Bytes that the compressed voxels take; null when not said. */
  readonly compressedBytes: number | null;
  /** Names of the files that hold the voxels, in slice order; null when they follow the header. */
  readonly files: readonly string[] | null;
}

const TYPES: Readonly<Record<string, SourceDtype>> = {
  MET_CHAR: "int8",
  MET_UCHAR: "uint8",
  MET_SHORT: "int16",
  MET_USHORT: "uint16",
  MET_INT: "int32",
  MET_UINT: "uint32",
  MET_LONG_LONG: "int64",
  MET_ULONG_LONG: "uint64",
  MET_FLOAT: "float32",
  MET_DOUBLE: "float64",
};

/**
 * What a MetaImage header says of a three-axis scan.
 * @throws unreadable-input when a needed field is missing, ill-formed, or asks for what this program does not read.
 * @source MetaIO's description of its headers (memory); checked against files that ITK writes.
 */
export function parseMetaImage(split: MetaImageFields, file: string): { scan: ScanHeader; data: MetaImageData } {
  const { fields } = split;
  const need = (name: string): string => {
    const value = fields.get(name.toLowerCase());
    if (value === undefined) throw unreadable(file, `a line '${name} = ...' in the header`, "none");
    return value;
  };
  const kind = fields.get("objecttype");
  if (kind !== undefined && !/^image$/i.test(kind)) throw unreadable(file, "an image", quote(kind), "ObjectType");
  const axes = whole(need("NDims"), file, "NDims", 1, 10);
  const counts = need("DimSize").split(/\s+/);
  if (counts.length !== axes) throw unreadable(file, `${axes} sizes`, `${counts.length}`, "DimSize");
  const sizes = counts.map((word) => whole(word, file, "DimSize", 1, 2 ** 31 - 1));
  if (axes < 3 || sizes.slice(3).some((n) => n !== 1))
    throw unreadable(file, "three axes of space", sizes.join(" x "), "DimSize", "Save one time point to a file of its own.");
  const channels = whole(fields.get("elementnumberofchannels") ?? "1", file, "ElementNumberOfChannels", 1, 1e6);
  if (channels !== 1)
    throw unreadable(
      file,
      "one value per voxel",
      `${channels}`,
      "ElementNumberOfChannels",
      "Save one channel to a file of its own.",
    );
  const word = need("ElementType").toUpperCase();
  const dtype = Object.hasOwn(TYPES, word) ? TYPES[word] : undefined;
  if (!dtype) {
    const next = /LONG/.test(word)
      ? "Its width differs between computers; save the scan as MET_INT or MET_LONG_LONG."
      : undefined;
    throw unreadable(file, "an integer or float type of a known width", quote(word), "ElementType", next);
  }
  const size = sizeXyz(sizes[0]!, sizes[1]!, sizes[2]!);
  if (size[0] * size[1] * size[2] * BYTES_OF_DTYPE[dtype] > Number.MAX_SAFE_INTEGER)
    throw unreadable(file, "sizes whose product can be counted", sizes.join(" x "), "DimSize");
  const order = byteOrder(fields, dtype, file);
  const place = placeOfMetaImage(fields, axes, file);
  const notes = order.note ? [...place.notes, order.note] : place.notes;
  const scan: ScanHeader = { family: "MetaImage", dtype, size, ...place, notes };
  return { scan, data: dataOf(split, order.littleEndian, size[2], axes, file) };
}

function byteOrder(
  fields: MetaImageFields["fields"],
  dtype: SourceDtype,
  file: string,
): { littleEndian: boolean; note?: string } {
  const first = truth(fields, "binarydatabyteordermsb", file);
  const second = truth(fields, "elementbyteordermsb", file);
  if (first !== null && second !== null && first !== second)
    throw unreadable(file, "one byte order", "two that differ", "BinaryDataByteOrderMSB, ElementByteOrderMSB");
  const big = first ?? second;
  if (big !== null || BYTES_OF_DTYPE[dtype] === 1) return { littleEndian: big !== true };
  return {
    littleEndian: true,
    note: "The header names no byte order; little-endian is taken. Check that the image is no noise.",
  };
}

function dataOf(split: MetaImageFields, littleEndian: boolean, nz: number, axes: number, file: string): MetaImageData {
  const { fields } = split;
  if (truth(fields, "binarydata", file) === false)
    throw unreadable(file, "binary voxels", "voxels as text", "BinaryData", "Save the scan again as binary.");
  const compressed = truth(fields, "compresseddata", file) ?? false;
  const headerSize = whole(fields.get("headersize") ?? "0", file, "HeaderSize", -1, Number.MAX_SAFE_INTEGER);
  if (compressed && headerSize !== 0)
    throw unreadable(file, "no HeaderSize beside compressed voxels", `${headerSize}`, "HeaderSize");
  const said = fields.get("compresseddatasize");
  const compressedBytes = compressed && said ? whole(said, file, "CompressedDataSize", 1, Number.MAX_SAFE_INTEGER) : null;
  const files = dataFiles(split, nz, axes, file);
  if (compressed && files && files.length > 1)
    throw unreadable(
      file,
      "compressed voxels in one file",
      `${files.length} files`,
      "ElementDataFile",
      "Save the scan without compression.",
    );
  return { compressed, littleEndian, headerSize, compressedBytes, files };
}

/** `LOCAL`, one name, a `LIST` of slices, or a printf pattern with first, last and step. */
function dataFiles(split: MetaImageFields, nz: number, axes: number, file: string): readonly string[] | null {
  const where = "ElementDataFile";
  const text = split.fields.get("elementdatafile")!;
  if (text === "" || text.length > 4096) throw unreadable(file, "a name of 1 to 4096 characters, or LOCAL", quote(text), where);
  if (/^local$/i.test(text)) return null;
  let names = [text];
  const list = /^LIST(?:\s+(\d+)D?)?$/i.exec(text);
  const pattern = /^(.*%0?(\d{0,2})d.*?)\s+(-?\d{1,9})\s+(-?\d{1,9})(?:\s+(-?\d{1,9}))?$/.exec(text);
  if (list) {
    const share = Number(list[1] ?? axes - 1);
    if (share < 2) throw unreadable(file, "data files that hold whole slices", `files of ${share} axes`, where);
    names = [...split.listed];
  } else if (pattern) {
    const [first, last, step] = [Number(pattern[3]), Number(pattern[4]), Number(pattern[5] ?? 1)];
    const count = step === 0 ? 0 : Math.floor((last - first) / step) + 1;
    if (!(count >= 1 && count <= nz)) throw unreadable(file, `1 to ${nz} data files`, `${count}`, where);
    names = Array.from({ length: count }, (_, k) => printf(pattern[1]!, first + k * step));
  }
  if (names.length === 0 || nz % names.length !== 0)
    throw unreadable(file, `data files that share ${nz} slices equally`, `${names.length} files`, where);
  if (names.some((name) => name.includes("\0"))) throw unreadable(file, "names of files", quote(names.join(" ")), where);
  return names;
}

function printf(pattern: string, value: number): string {
  return pattern.replace(/%(0?)(\d{0,2})d/, (_, zero: string, width: string) => {
    const digits = String(Math.abs(value)).padStart(Number(width || 0) - (value < 0 ? 1 : 0), zero === "0" ? "0" : " ");
    return value < 0 ? `-${digits}` : digits;
  });
}

function truth(fields: MetaImageFields["fields"], name: string, file: string): boolean | null {
  const word = fields.get(name);
  if (word === undefined) return null;
  if (/^(true|t|1|yes)$/i.test(word)) return true;
  if (/^(false|f|0|no)$/i.test(word)) return false;
  throw unreadable(file, "True or False", quote(word), name);
}

function whole(word: string, file: string, where: string, least: number, most: number): number {
  const value = /^[+-]?\d{1,16}$/.test(word.trim()) ? Number(word) : Number.NaN;
  if (!(value >= least && value <= most)) throw unreadable(file, `whole numbers from ${least} to ${most}`, quote(word), where);
  return value;
}
