import { unreadable } from "#shared/errors.ts";
import { sizeXyz } from "#shared/geometry/types.ts";
import { BYTES_OF_DTYPE, type SourceDtype } from "#shared/volume/dtype.ts";
import { type NrrdFields, quote } from "#shared/volume/nrrd/nrrd-fields.ts";
import { placeOfNrrd } from "#shared/volume/nrrd/nrrd-place.ts";
import type { ScanHeader } from "#shared/volume/scan-header.ts";

/** Where the voxels of an NRRD scan are and how they are kept. */
export interface NrrdData {
  readonly encoding: "raw" | "gzip";
  readonly littleEndian: boolean;
  readonly lineSkip: number;
  /** -1 = the voxels are the last bytes of the file (raw only). */
  readonly byteSkip: number;
  /** Names of detached data files in slice order; null when the voxels follow the header. */
  readonly files: readonly string[] | null;
}

export interface NrrdHeader {
  readonly scan: ScanHeader;
  readonly data: NrrdData;
}

const TYPES: Readonly<Record<string, SourceDtype>> = Object.fromEntries(
  (
    [
      ["int8", "signed char|int8|int8_t"],
      ["uint8", "uchar|unsigned char|uint8|uint8_t"],
      ["int16", "short|short int|signed short|signed short int|int16|int16_t"],
      ["uint16", "ushort|unsigned short|unsigned short int|uint16|uint16_t"],
      ["int32", "int|signed int|int32|int32_t"],
      ["uint32", "uint|unsigned int|uint32|uint32_t"],
      ["int64", "longlong|long long|long long int|signed long long|signed long long int|int64|int64_t"],
      ["uint64", "ulonglong|unsigned long long|unsigned long long int|uint64|uint64_t"],
      ["float32", "float"],
      ["float64", "double"],
    ] as const
  ).flatMap(([dtype, words]) => words.split("|").map((word) => [word, dtype])),
);

/**
 * What an NRRD header says of a three-axis scan.
 * @throws unreadable-input when a needed field is missing, ill-formed, or asks for what this program does not read.
 * @source NRRD file format definition, sections 4-6.
 */
export function parseNrrdHeader(split: NrrdFields, file: string): NrrdHeader {
  const need = (name: string, title: string): string => {
    const value = split.fields.get(name);
    if (value === undefined) throw unreadable(file, `a line '${title}: ...' in the header`, "none");
    return value;
  };
  const typeWord = need("type", "type").toLowerCase();
  const dtype = Object.hasOwn(TYPES, typeWord) ? TYPES[typeWord] : undefined;
  if (!dtype) throw unreadable(file, "an integer or float type", quote(typeWord), "type");
  const dimension = wholeNumber(need("dimension", "dimension"), file, "dimension", 1, 16);
  const sizes = need("sizes", "sizes").split(/\s+/);
  if (sizes.length !== dimension) throw unreadable(file, `${dimension} sizes`, `${sizes.length}`, "sizes");
  const counts = sizes.map((word) => wholeNumber(word, file, "sizes", 1, 2 ** 31 - 1));
  const place = placeOfNrrd(split.fields, dimension, file);
  const [x, y, z] = place.axes;
  for (let axis = 0; axis < dimension; axis++) {
    if (counts[axis] === 1 || axis === x || axis === y || axis === z) continue;
    throw unreadable(
      file,
      "one value per voxel",
      `${counts[axis]} along axis ${axis + 1}`,
      "sizes",
      "Save one channel or time point to a file of its own.",
    );
  }
  const size = sizeXyz(counts[x]!, counts[y]!, counts[z]!);
  if (size[0] * size[1] * size[2] * BYTES_OF_DTYPE[dtype] > Number.MAX_SAFE_INTEGER) {
    throw unreadable(file, "sizes whose product can be counted", sizes.join(" x "), "sizes");
  }
  const scan: ScanHeader = { family: "NRRD", dtype, size, ...place.scan };
  return { scan, data: dataOf(split, dtype, size[2], dimension, file) };
}

function dataOf(split: NrrdFields, dtype: SourceDtype, nz: number, dimension: number, file: string): NrrdData {
  const { fields } = split;
  const word = (fields.get("encoding") ?? "").toLowerCase();
  const encoding = word === "raw" ? "raw" : word === "gzip" || word === "gz" ? "gzip" : null;
  if (!encoding) {
    const found = word === "" ? "no line 'encoding: ...'" : quote(word);
    throw unreadable(file, "encoding raw or gzip", found, "encoding", "Save the scan again with one of these.");
  }
  const endian = fields.get("endian")?.toLowerCase();
  if (endian !== undefined && endian !== "little" && endian !== "big")
    throw unreadable(file, "endian little or big", quote(endian), "endian");
  if (endian === undefined && BYTES_OF_DTYPE[dtype] > 1)
    throw unreadable(file, "a line 'endian: little' or 'endian: big'", "none", "endian");
  const lineSkip = wholeNumber(fields.get("lineskip") ?? "0", file, "line skip", 0, 1e6);
  const byteSkip = wholeNumber(fields.get("byteskip") ?? "0", file, "byte skip", -1, Number.MAX_SAFE_INTEGER);
  if (byteSkip === -1 && encoding !== "raw") throw unreadable(file, "byte skip -1 with encoding raw only", word, "byte skip");
  const files = dataFiles(split, nz, dimension, file);
  if (!files && !split.ended) throw unreadable(file, "a blank line between header and voxels", "the end of the file");
  return { encoding, littleEndian: endian !== "big", lineSkip, byteSkip, files };
}

/** One file, a `LIST`, or a printf pattern with first, last and step; each of several files holds an equal number of slices. */
function dataFiles(split: NrrdFields, nz: number, dimension: number, file: string): readonly string[] | null {
  const text = split.fields.get("datafile");
  if (text === undefined) return null;
  if (text === "" || text.length > 4096)
    throw unreadable(file, "a name of 1 to 4096 characters after 'data file:'", quote(text), "data file");
  let names: string[] = [text];
  const list = /^LIST(?:\s+(\d+))?$/.exec(text);
  const pattern = /^(\S*%0?(\d{0,2})d\S*)\s+(-?\d+)\s+(-?\d+)\s+(-?\d+)(?:\s+(\d+))?$/.exec(text);
  const subDimension = list?.[1] ?? pattern?.[6];
  if (subDimension !== undefined && Number(subDimension) < dimension - 1)
    throw unreadable(file, "data files that hold whole slices", `sub-dimension ${subDimension}`, "data file");
  if (list) names = [...split.listed];
  if (pattern) {
    const [first, last, step] = [Number(pattern[3]), Number(pattern[4]), Number(pattern[5])];
    const count = step === 0 ? 0 : Math.floor((last - first) / step) + 1;
    if (!(count >= 1 && count <= nz)) throw unreadable(file, `1 to ${nz} data files`, `${count}`, "data file");
    names = Array.from({ length: count }, (_, n) => printf(pattern[1]!, first + n * step));
  }
  if (names.length === 0 || nz % names.length !== 0)
    throw unreadable(file, `data files that share ${nz} slices equally`, `${names.length} files`, "data file");
  if (names.some((name) => name === "" || name.includes("\0")))
    throw unreadable(file, "names of data files", "an empty one", "data file");
  return names;
}

function printf(pattern: string, value: number): string {
  return pattern.replace(/%(0?)(\d{0,2})d/, (_, zero: string, width: string) => {
    const digits = String(Math.abs(value)).padStart(Number(width || 0) - (value < 0 ? 1 : 0), zero === "0" ? "0" : " ");
    return value < 0 ? `-${digits}` : digits;
  });
}

function wholeNumber(word: string, file: string, where: string, least: number, most: number): number {
  const value = /^[+-]?\d{1,16}$/.test(word.trim()) ? Number(word) : Number.NaN;
  if (!(value >= least && value <= most)) throw unreadable(file, `whole numbers from ${least} to ${most}`, quote(word), where);
  return value;
}
