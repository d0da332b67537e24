import { unreadable } from "#shared/errors.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { dot, norm } from "#shared/geometry/vec3.ts";
import { DICOM_TAG, type DicomElements, dicomText, refusedSyntax } from "#shared/volume/dicom/dicom-elements.ts";
import { BYTES_OF_DTYPE, type SourceDtype } from "#shared/volume/dtype.ts";
import { quote } from "#shared/volume/nrrd/nrrd-fields.ts";

/** One slice of a DICOM series, understood. */
export interface DicomSlice {
  readonly file: string;
  readonly series: string;
  readonly columns: number;
  readonly rows: number;
  readonly dtype: SourceDtype;
  /** Bits of a voxel that count; the others may hold anything. */
  readonly bitsStored: number;
  readonly littleEndian: boolean;
  /** Bytes of each 16-bit word are exchanged although voxels have one byte (big-endian words of two voxels). */
  readonly swappedPairs: boolean;
  /** Byte of the first voxel. */
  readonly offset: number;
  /** Centre of the first voxel, LPS, millimetres; null when the header does not say. */
  readonly position: Vec3 | null;
  /** Unit directions along a row (x) and along a column (y); null when the header does not say. */
  readonly alongRow: Vec3 | null;
  readonly alongColumn: Vec3 | null;
  /** Distance of columns (x) and of rows (y), millimetres; null when not said. */
  readonly spacing: readonly [number, number] | null;
  /** Spacing Between Slices as written; never used as a distance. */
  readonly betweenSlices: number | null;
  /** Rescale slope and intercept where they would change values. */
  readonly rescale: readonly [number, number] | null;
  /** The least value is shown white. */
  readonly inverted: boolean;
}

const UNCOMPRESSED = ["1.2.840.10008.1.2", "1.2.840.10008.1.2.1", "1.2.840.10008.1.2.2"];
/** Storage of a directory of files, which holds no image. */
const DIRECTORY_SOP = "1.2.840.10008.1.3.10";

/**
 * A slice from a file's elements; null for a DICOM file that is no image (a directory, a report).
 * @throws unreadable-input for compressed voxels, several frames, colours, and sizes that the file cannot hold.
 * @source DICOM PS3.3 C.7.6.2 (image plane) and C.7.6.3 (image pixel): Pixel Spacing gives the distance of rows first, then of columns;
 * Image Orientation the direction of a row first, then of a column.
 */
export function dicomSlice(elements: DicomElements, fileBytes: number, file: string): DicomSlice | null {
  const { values, pixels, littleEndian, transferSyntax } = elements;
  const text = (tag: number): string | null => {
    const bytes = values.get(tag);
    return bytes === undefined ? null : dicomText(bytes);
  };
  if (!values.has(DICOM_TAG.rows) && !pixels) return null;
  if (text(DICOM_TAG.sopClass) === DIRECTORY_SOP) return null;
  if (!UNCOMPRESSED.includes(transferSyntax)) throw refusedSyntax(transferSyntax, file);
  const short = (tag: number, title: string, missing?: number): number => {
    const bytes = values.get(tag);
    if (bytes === undefined || bytes.length < 2) {
      if (missing !== undefined) return missing;
      throw unreadable(file, `an element '${title}'`, "none");
    }
    return new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength).getUint16(0, littleEndian);
  };
  const numbers = (tag: number, count: number, title: string): number[] | null => {
    const found = text(tag);
    if (found === null || found === "") return null;
    const list = found
      .split("\\")
      .map((word) =>
        word.length <= 64 && /^\s*[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d+)?\s*$/.test(word) ? Number(word) : Number.NaN,
      );
    if (list.length !== count || !list.every(Number.isFinite)) throw unreadable(file, `${count} numbers`, quote(found), title);
    return list;
  };
  if (!pixels)
    throw unreadable(file, "voxels", "a header without pixel data", undefined, "The file was cut short; copy it again.");
  const frames = numbers(DICOM_TAG.frames, 1, "Number of Frames")?.[0] ?? 1;
  if (frames !== 1)
    throw unreadable(
      file,
      "one slice a file",
      `${frames} frames`,
      "Number of Frames",
      "Save the scan as a series of single slices.",
    );
  const samples = short(DICOM_TAG.samples, "Samples per Pixel", 1);
  const photometric = text(DICOM_TAG.photometric) ?? "MONOCHROME2";
  if (samples !== 1 || !/^MONOCHROME[12]$/.test(photometric))
    throw unreadable(file, "one grey value per voxel", `${samples} samples, ${quote(photometric)}`, "Photometric Interpretation");
  const [rows, columns] = [short(DICOM_TAG.rows, "Rows"), short(DICOM_TAG.columns, "Columns")];
  if (rows === 0 || columns === 0) throw unreadable(file, "rows and columns from 1 to 65535", `${rows} x ${columns}`);
  const allocated = short(DICOM_TAG.bitsAllocated, "Bits Allocated");
  const signed = short(DICOM_TAG.signed, "Pixel Representation", 0);
  const dtype = dtypeOf(pixels.kind, allocated, signed);
  if (!dtype)
    throw unreadable(file, "voxels of 8, 16, 32 or 64 bits", `${allocated} bits, representation ${signed}`, "Bits Allocated");
  const bitsStored = pixels.kind === "integer" ? short(DICOM_TAG.bitsStored, "Bits Stored", allocated) : allocated;
  const highBit = pixels.kind === "integer" ? short(DICOM_TAG.highBit, "High Bit", bitsStored - 1) : allocated - 1;
  if (bitsStored < 1 || bitsStored > allocated || highBit !== bitsStored - 1)
    throw unreadable(
      file,
      "the bits of a voxel at its low end",
      `${bitsStored} of ${allocated} bits, the highest at ${highBit}`,
      "High Bit",
    );
  const bytes = rows * columns * BYTES_OF_DTYPE[dtype];
  if (pixels.length === 0xffffffff) throw unreadable(file, "uncompressed voxels", "compressed fragments");
  if (pixels.length < bytes || pixels.offset + bytes > fileBytes) {
    const found = `${Math.max(0, Math.min(pixels.length, fileBytes - pixels.offset))} bytes`;
    throw unreadable(
      file,
      `${bytes} bytes of voxels as the header says`,
      found,
      "pixel data",
      "The file was cut short; copy it again.",
    );
  }
  const pairs = !littleEndian && allocated === 8 && pixels.vr === "OW";
  if (pairs && bytes % 2 !== 0) throw unreadable(file, "an even number of voxels in words of two", `${bytes}`, "pixel data");
  const orientation = numbers(DICOM_TAG.orientation, 6, "Image Orientation (Patient)");
  const position = numbers(DICOM_TAG.position, 3, "Image Position (Patient)");
  const spacing = numbers(DICOM_TAG.pixelSpacing, 2, "Pixel Spacing");
  const slope = numbers(DICOM_TAG.slope, 1, "Rescale Slope")?.[0] ?? 1;
  const intercept = numbers(DICOM_TAG.intercept, 1, "Rescale Intercept")?.[0] ?? 0;
  return {
    file,
    series: text(DICOM_TAG.series) ?? "",
    columns,
    rows,
    dtype,
    bitsStored,
    littleEndian,
    swappedPairs: pairs,
    offset: pixels.offset,
    position: position ? [position[0]!, position[1]!, position[2]!] : null,
    ...directionsOf(orientation, file),
    spacing: spacing ? [spacing[1]!, spacing[0]!] : null,
    betweenSlices: numbers(DICOM_TAG.betweenSlices, 1, "Spacing Between Slices")?.[0] ?? null,
    rescale: slope === 1 && intercept === 0 ? null : [slope, intercept],
    inverted: photometric === "MONOCHROME1",
  };
}

function directionsOf(o: readonly number[] | null, file: string): Pick<DicomSlice, "alongRow" | "alongColumn"> {
  if (!o) return { alongRow: null, alongColumn: null };
  const alongRow: Vec3 = [o[0]!, o[1]!, o[2]!];
  const alongColumn: Vec3 = [o[3]!, o[4]!, o[5]!];
  const good = Math.abs(norm(alongRow) - 1) < 1e-3 && Math.abs(norm(alongColumn) - 1) < 1e-3;
  if (!good || Math.abs(dot(alongRow, alongColumn)) > 1e-3)
    throw unreadable(file, "two directions of length 1 at right angles", o.join("\\"), "Image Orientation (Patient)");
  return { alongRow, alongColumn };
}

function dtypeOf(kind: "integer" | "float32" | "float64", bits: number, signed: number): SourceDtype | null {
  if (kind !== "integer") return bits === (kind === "float32" ? 32 : 64) ? kind : null;
  if (signed !== 0 && signed !== 1) return null;
  const name = `${signed === 1 ? "int" : "uint"}${bits}`;
  return Object.hasOwn(BYTES_OF_DTYPE, name) && bits <= 32 ? (name as SourceDtype) : null;
}
